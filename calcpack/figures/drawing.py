"""A record to the tuple of its figures, in the order they are printed."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from calcpack.errors import CommandError, Fault
from calcpack.figures.arrangement import arrangement
from calcpack.figures.exchanger_profile import exchanger_profile
from calcpack.figures.figure import Figure
from calcpack.figures.ladder import ladder_figure
from calcpack.figures.naming import diagram_ids
from calcpack.figures.property_diagram import property_diagram
from calcpack.figures.waterfall import waterfall

NARROWEST, WIDEST = 60.0, 250.0


def draw(
    record: Mapping[str, Any], width_mm: float, comparison: Mapping[str, Any] | None = None
) -> tuple[Figure, ...]:
    """The arrangement, the property diagrams, the exchangers' profiles, the ladder of losses, what moved results."""
    if not NARROWEST <= width_mm <= WIDEST:
        raise CommandError(
            Fault(
                "a figure cannot be drawn at this width",
                found=f"{width_mm:g} mm",
                expected=f"{NARROWEST:g} to {WIDEST:g} mm",
            )
        )
    drawn = [arrangement(record)] if record["sketch"]["nodes"] else []
    names = iter(diagram_ids(record))
    drawn += [property_diagram(record, one, next(names), width_mm) for one in record["diagrams"]]
    drawn += [exchanger_profile(record, one, next(names), width_mm) for one in record["exchangers"]]
    if record.get("ladder"):
        drawn.append(ladder_figure(record["ladder"], next(names)))
    moved = waterfall(comparison)
    return (*drawn, moved) if moved else tuple(drawn)
