"""The register's facts of a fluid to the groups in which they are read."""
from __future__ import annotations

from collections.abc import Iterable, Mapping
from typing import Any

GROUPS: tuple[tuple[str, tuple[str, ...]], ...] = (
    ("Safety class", ("safety class (ISO 817 / ASHRAE 34)",)),
    ("Flammability", ("LFL", "autoignition temperature", "flash point")),
    ("Toxicity and limits of concentration", ("practical limit (EN 378)", "ATEL/ODL", "RCL", "QLMV", "QLAV")),
    ("Warming potential over 100 years, by edition", ("GWP100 AR4", "GWP100 AR5", "GWP100 AR6", "GWP100 other")),
    ("Ozone", ("ODP",)),
    ("Thermal stability", ("thermal-stability guide temperature",)),
    ("Pressure equipment", ("PED fluid group",)),
)
"""Headings with the quantities below them, in the order of print."""

OTHER = "Other facts"


def grouped(facts: Iterable[Mapping[str, Any]]) -> list[tuple[str, list[Mapping[str, Any]]]]:
    """The facts below their headings; what no group names stands last."""
    heading = {name: title for title, names in GROUPS for name in names}
    groups: dict[str, list[Mapping[str, Any]]] = {title: [] for title, _ in (*GROUPS, (OTHER, ()))}
    for fact in facts:
        groups[heading.get(fact["quantity"], OTHER)].append(fact)
    order = {name: at for _, names in GROUPS for at, name in enumerate(names)}
    return [(title, sorted(found, key=lambda one: order.get(one["quantity"], 0)))
            for title, found in groups.items() if found]


def absent(facts: Iterable[Mapping[str, Any]]) -> list[str]:
    """The headings below which the register has nothing of a fluid."""
    titles = {title for title, _ in grouped(facts)}
    return [title for title, _ in GROUPS if title not in titles]
