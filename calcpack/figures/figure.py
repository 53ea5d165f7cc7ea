"""A drawn figure: its SVG text with the words that go with it."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Figure:
    """One figure of a sheet.

    ``id`` is unique within a record and fit for a file name; ``alt`` says in
    words what the picture shows; ``width_mm`` and ``height_mm`` are the
    printed size [mm] at which letters are 8 to 9 points high.
    """

    id: str
    title: str
    caption: str
    alt: str
    svg_text: str
    width_mm: float
    height_mm: float
