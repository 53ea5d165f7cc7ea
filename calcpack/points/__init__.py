"""A sheet as record and page to the list of points that a calculation sheet must satisfy, each with its verdict.

The 72 points are drawn from quality practice for engineering calculations
(10 CFR 50 Appendix B; ASME NQA-1 Requirement 3 and Subpart 2.7 and ISO 9001
clause 8.3, both from memory; DOE-STD-3007; DOE G 414.1-4; calculation
procedures of public agencies), in words of our own.
"""
from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from calcpack.points import judged_basis, judged_formal, judged_issue, judged_review, judged_working
from calcpack.points.catalogue import CATALOGUE
from calcpack.points.point import PERSON, UNMET, Point, View
from calcpack.render.pages import Extras
from calcpack.reread.from_print import Redone

__all__ = ["Point", "View", "points", "unmet"]

JUDGES = (judged_basis.JUDGES | judged_working.JUDGES | judged_formal.JUDGES | judged_issue.JUDGES
          | judged_review.JUDGES)
"""What decides each point that a program can decide."""


def points(record: Mapping[str, Any], html: str, redone: Redone, comparison: Mapping[str, Any] | None,
           extras: Extras) -> tuple[Point, ...]:
    """All points of a sheet in their order; those that are a person's to judge say so.

    ``html`` is the finished page, ``redone`` the page done again, ``extras``
    what is known of the sheet beside its record.
    """
    view = View.of(record, html, redone, comparison, extras)
    found = []
    for number, group, text in CATALOGUE:
        verdict, where = JUDGES[number](view) if number in JUDGES else (PERSON, "")
        found.append(Point(number, group, text, verdict, where))
    return tuple(found)


def unmet(found: tuple[Point, ...]) -> tuple[Point, ...]:
    """The points that are not met."""
    return tuple(one for one in found if one.verdict == UNMET)
