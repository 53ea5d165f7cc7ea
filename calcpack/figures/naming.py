"""A record to the ids of its figures, in the order they are drawn, without drawing any."""

from __future__ import annotations

import re
from collections.abc import Mapping
from typing import Any

ARRANGEMENT, LADDER = "arrangement", "ladder"


def diagram_ids(record: Mapping[str, Any]) -> tuple[str, ...]:
    """The ids of the property diagrams, then the exchangers' profiles, then the ladder where there is one.

    The arrangement is always called ``arrangement``; no other figure is.
    """
    words = [one["kind"] for one in record["diagrams"]]
    words += [f"profile {one['title']}" for one in record["exchangers"]]
    words += [LADDER] if record.get("ladder") else []
    given: list[str] = [ARRANGEMENT]
    for text in words:
        given.append(_fresh(text, given))
    return tuple(given[1:])


def _fresh(words: str, given: list[str]) -> str:
    """An id fit for a file name that is not given out yet."""
    # 'p-V' and 'p-v' are two diagrams, also on disks that fold case.
    plain = re.sub(r"[^a-z0-9]+", "-", words.casefold()).strip("-") or "figure"
    name, count = plain, 1
    while name in given:
        count += 1
        name = f"{plain}-{count}"
    return name
