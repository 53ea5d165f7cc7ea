"""Columns and points to numbers: what a column comes to, and linear interpolation in a table."""
from __future__ import annotations

import math
from collections.abc import Callable

from calcpack.errors import Fault, NoAnswerError

REDUCTIONS: dict[str, Callable[[list[float]], float]] = {
    "min": min, "max": max, "sum": math.fsum, "mean": lambda values: math.fsum(values) / len(values)}
"""What a column may come to, by the word that a spec writes for it."""

Points = list[tuple[float, float]]


def interpolated(points: Points, x: float, told: Callable[[float], str] = "{:.6g}".format) -> float:
    """Linear interpolation in ascending ``points``; ``told`` words a value of x for a message.

    Raises
    ------
    NoAnswerError
        Outside the points: that is an error, not a guess.
    """
    if not points[0][0] <= x <= points[-1][0]:
        raise NoAnswerError(Fault("the value looked up is outside the table", found=told(x),
                                  expected=f"from {told(points[0][0])} to {told(points[-1][0])}"))
    (x0, y0), (x1, y1) = neighbours(points, x)
    return y0 + (y1 - y0) * (x - x0) / (x1 - x0)


def neighbours(points: Points, x: float) -> tuple[tuple[float, float], tuple[float, float]]:
    """The two points of the table between which ``x`` lies."""
    index = next((i for i in range(1, len(points)) if x <= points[i][0]), len(points) - 1)
    return points[index - 1], points[index]
