"""A record to its figures: property diagrams, exchanger profiles, ladder and arrangement sketch, as SVG text.

Nothing is computed here but layout: every number that a figure shows stands in
the record, or in its comparison with the revision before. :mod:`canvas` holds
fonts, sizes and the way to SVG, :mod:`marks` the words and heads drawn on a
page, :mod:`placing` finds room for labels.
:mod:`property_diagram`, :mod:`exchanger_profile`, :mod:`ladder`, :mod:`waterfall` and :mod:`arrangement`
each draw one kind of figure; :mod:`equipment`, :mod:`layout`, :mod:`routing` and
:mod:`sketch_ink` hold the arrangement's pieces, their places, the lines between
them and the drawing of both.
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from calcpack.figures.figure import Figure

__all__ = ["Figure", "figures"]


def figures(record: Mapping[str, Any], width_mm: float = 80.0,
            comparison: Mapping[str, Any] | None = None) -> tuple[Figure, ...]:
    """Every figure that ``record`` has the lines for: arrangement, property diagrams, exchanger profiles, ladder.

    With the ``comparison`` of a record with the revision before, also what moved its results.

    ``width_mm`` is the printed width of a diagram [mm], 60 to 250; letters keep
    their printed size at any width, so a figure is drawn for the width it is
    shown at. The arrangement, the ladder and what moved the results have their own
    width. Equal records give equal bytes.

    Raises
    ------
    CommandError
        For a width outside the range.
    MissingPartError
        Where the fonts are not installed beside the package.
    """
    # matplotlib takes a third of a second to import, and most commands draw nothing.
    from calcpack.figures.drawing import draw

    return draw(record, width_mm, comparison)
