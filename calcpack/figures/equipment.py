"""A piece of equipment on the sketch to its size, the ports where lines may meet it, and its outline.

Lengths are points, about the middle of the piece, y upwards.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from calcpack.figures import marks

Point = tuple[float, float]
LEVEL = 13.0
"""The two passes of an exchanger lie this far above and below its middle."""
OPPOSITE = {(1, 0): (-1, 0), (-1, 0): (1, 0), (0, 1): (0, -1), (0, -1): (0, 1)}


@dataclass(frozen=True, slots=True)
class Port:
    """A place on a piece's rim; a line leaves it straight along (``out_x``, ``out_y``) for ``run`` points."""

    x: float
    y: float
    out_x: int
    out_y: int
    run: float = 10.0

    @property
    def way(self) -> tuple[int, int]:
        """The direction in which a line leaves."""
        return (self.out_x, self.out_y)


@dataclass(frozen=True, slots=True)
class Shape:
    """How large a piece is, and whether its name stands in it or beside it."""

    half_width: float
    half_height: float
    named_inside: bool


def shape_of(shape: str, name: str) -> Shape:
    """The size of a piece of this ``shape``; a named box grows with its name."""
    room = marks.extent(name).width / 2.0
    match shape:
        case "exchanger" | "recuperator":
            return Shape(max(42.0, room + 12.0), 25.0, True)
        case "compressor" | "expander" | "turbine":
            return Shape(19.0, 18.0, False)
        case "pump" | "generator" | "motor":
            return Shape(13.0, 13.0, False)
        case "valve":
            return Shape(11.0, 11.0, False)
        case "engine" | "heat pump":
            return Shape(max(24.0, room + 7.0), max(24.0, room + 7.0), True)
        case "reservoir":
            return Shape(max(62.0, room + 14.0), 12.0, True)
    return Shape(max(28.0, room + 8.0), 13.0, True)


def four_sides(shape: Shape) -> tuple[Port, ...]:
    """The middles of the four sides."""
    wide, tall = shape.half_width, shape.half_height
    return (Port(wide, 0.0, 1, 0), Port(-wide, 0.0, -1, 0), Port(0.0, tall, 0, 1), Port(0.0, -tall, 0, -1))


def machine_ports(end: str, mirrored: bool) -> tuple[Port, ...]:
    """Ports of a compressor or expander at its 'wide' or 'narrow' end, or at its 'shaft'.

    The wide end is on the left unless ``mirrored``. The wide end may also be
    met straight from the side, at the level of an exchanger's pass.
    """
    turn = -1.0 if mirrored else 1.0
    if end == "shaft":
        return (Port(19.0, 0.0, 1, 0), Port(-19.0, 0.0, -1, 0))
    if end == "narrow":
        return _slanted(turn * 12.0, _slope(12.0))
    side = int(-turn)
    flat = (Port(side * 19.0, LEVEL, side, 0), Port(side * 19.0, -LEVEL, side, 0))
    return (*_slanted(-turn * 12.0, _slope(-12.0)), *flat)


def _slanted(x: float, y: float) -> tuple[Port, Port]:
    """Ports on the two slanted sides; a line clears the piece's whole height before it may turn."""
    run = 18.0 - y + 10.0
    return (Port(x, y, 0, 1, run), Port(x, -y, 0, -1, run))


def _slope(x: float) -> float:
    """Half the height of an unmirrored machine at ``x``: 18 at the wide end, 8 at the narrow one."""
    return 18.0 + (8.0 - 18.0) * (x + 19.0) / 38.0


def machine_outline(mirrored: bool) -> list[Point]:
    """The trapezoid of a compressor or expander, wide on the left unless mirrored."""
    turn = -1.0 if mirrored else 1.0
    return [(-turn * 19.0, 18.0), (turn * 19.0, 8.0), (turn * 19.0, -8.0), (-turn * 19.0, -18.0)]


def valve_outline(upright: bool) -> list[Point]:
    """The bow-tie of a valve, across or upright."""
    tie = [(-11.0, 6.5), (11.0, -6.5), (11.0, 6.5), (-11.0, -6.5)]
    return [(y, x) for x, y in tie] if upright else tie


def pump_triangle(way: tuple[int, int]) -> list[Point]:
    """The triangle in a pump's circle, its point towards the outlet."""
    flow, side = np.array(way, dtype=float), np.array([-way[1], way[0]], dtype=float)
    corners = (flow * 13.0, side * 13.0, -side * 13.0)
    return [(float(x), float(y)) for x, y in corners]


def pass_line(start: Port, end: Port, level: float, zigzag: bool) -> list[Point]:
    """A pass through an exchanger from port to port at ``level``, with a zigzag in its middle."""
    inner = [(port.x * (0.62 if port.out_x else 1.0), level) for port in (start, end)]
    points = [(start.x, start.y), inner[0]]
    if zigzag:
        points += _zigzag(inner[0], inner[1])
    return [*points, inner[1], (end.x, end.y)]


def _zigzag(start: Point, end: Point) -> Sequence[Point]:
    """Teeth between two points of one level, or at a single point none."""
    run = end[0] - start[0]
    if abs(run) < 8.0:
        return []
    teeth = 8
    return [
        (start[0] + run * (index + 0.5) / teeth, start[1] + (4.5 if index % 2 == 0 else -4.5))
        for index in range(teeth)
    ]
