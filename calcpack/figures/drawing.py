"""A record to the tuple of its figures, in the order they are printed."""

from __future__ import annotations

import re
from collections.abc import Mapping
from typing import Any

from calcpack.errors import CommandError, Fault
from calcpack.figures.arrangement import arrangement
from calcpack.figures.exchanger_profile import exchanger_profile
from calcpack.figures.figure import Figure
from calcpack.figures.ladder import ladder_figure
from calcpack.figures.property_diagram import property_diagram

NARROWEST, WIDEST = 60.0, 250.0
LADDER = "ladder"


def draw(record: Mapping[str, Any], width_mm: float) -> tuple[Figure, ...]:
    """The arrangement, then the property diagrams, the exchangers' profiles and the ladder of losses."""
    if not NARROWEST <= width_mm <= WIDEST:
        raise CommandError(
            Fault(
                "a figure cannot be drawn at this width",
                found=f"{width_mm:g} mm",
                expected=f"{NARROWEST:g} to {WIDEST:g} mm",
            )
        )
    drawn = [arrangement(record)] if record["sketch"]["nodes"] else []
    names = _Names()
    drawn += [property_diagram(record, one, names.fresh(one["kind"]), width_mm) for one in record["diagrams"]]
    drawn += [
        exchanger_profile(record, one, names.fresh(f"profile {one['title']}"), width_mm)
        for one in record["exchangers"]
    ]
    if record.get("ladder"):
        drawn.append(ladder_figure(record["ladder"], names.fresh(LADDER)))
    return tuple(drawn)


class _Names:
    """Ids fit for file names, each given out once."""

    def __init__(self) -> None:
        self.given = {"arrangement"}

    def fresh(self, words: str) -> str:
        # 'p-V' and 'p-v' are two diagrams, also on disks that fold case.
        plain = re.sub(r"[^a-z0-9]+", "-", words.casefold()).strip("-") or "figure"
        name, count = plain, 1
        while name in self.given:
            count += 1
            name = f"{plain}-{count}"
        self.given.add(name)
        return name
