"""The laid-out arrangement to ink on a page."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from typing import TYPE_CHECKING

import numpy as np
from matplotlib.figure import Figure as Page
from matplotlib.lines import Line2D
from matplotlib.patches import Circle, FancyBboxPatch, Polygon, Rectangle
from matplotlib.transforms import IdentityTransform

from calcpack.figures import canvas, marks
from calcpack.figures.equipment import Point, machine_outline, pass_line, pump_triangle, valve_outline
from calcpack.figures.layout import EXCHANGERS, MACHINES, Line, Piece
from calcpack.figures.words import plain

if TYPE_CHECKING:
    from calcpack.figures.arrangement import Laid, Words

RIM = 1.0
LINES: dict[str, tuple[str, float, object]] = {
    "fluid": (canvas.ACCENT, 1.3, "-"),
    "stream": (canvas.INK, 1.1, canvas.STREAM_DASHES),
    "power": (canvas.INK, 1.3, (0, (1.0, 1.6))),
    "heat": (canvas.SOFT, 3.0, "-"),
}
"""Ink, width and dashes of each style of line."""


def draw(drawn: Page, laid: Laid, shift: Point) -> None:
    """Lines, then equipment over them, then numbers and words."""
    for line, route in laid.routes:
        _link(drawn, line, _moved(route.points, shift))
    for piece in laid.sketch.pieces:
        _piece(drawn, laid, piece, (piece.x + shift[0], piece.y + shift[1]))
    for one in laid.sketch.passes:
        at = (one.piece.x + shift[0], one.piece.y + shift[1])
        style = (one.inlet or one.outlet).style
        _path(
            drawn,
            _moved(pass_line(one.inlet_port, one.outlet_port, one.level, one.zigzag), at),
            style,
            solid=True,
        )
    for number in laid.numbers:
        marks.circle(drawn, number.box.x + shift[0], number.box.y + shift[1], number.lines[0])
    for words in laid.words:
        _words(drawn, words, shift)


def _moved(points: Iterable[Point], shift: Point) -> list[Point]:
    return [(x + shift[0], y + shift[1]) for x, y in points]


def _path(drawn: Page, points: Sequence[Point], style: str, *, solid: bool = False) -> None:
    ink, width, dashes = LINES.get(style, LINES["fluid"])
    xs, ys = zip(*points, strict=True)
    drawn.add_artist(
        Line2D(
            xs,
            ys,
            color=ink,
            linewidth=width,
            linestyle="-" if solid else dashes,
            solid_joinstyle="miter",
            solid_capstyle="butt",
            transform=IdentityTransform(),
            zorder=2,
        )
    )


def _link(drawn: Page, line: Line, points: list[Point]) -> None:
    """A line with a head at its end; a shaft between two pieces is a double line without one."""
    if line.style == "power" and line.start is not None and line.end is not None:
        xs, ys = zip(*points, strict=True)
        for width, ink, zorder in ((3.6, canvas.INK, 2.0), (2.0, "white", 2.1)):
            drawn.add_artist(
                Line2D(xs, ys, color=ink, linewidth=width, transform=IdentityTransform(), zorder=zorder)
            )
        return
    length = 10.0 if line.style == "heat" else 6.5
    before, tip = np.array(points[-2]), np.array(points[-1])
    way = (tip - before) / np.hypot(*(tip - before))
    short = tip - way * length * 0.7
    _path(drawn, [*points[:-1], (float(short[0]), float(short[1]))], line.style)
    ink = LINES.get(line.style, LINES["fluid"])[0]
    marks.arrow_head(drawn, points[-1], way, length=length, ink=ink)


def _piece(drawn: Page, laid: Laid, piece: Piece, at: Point) -> None:
    shape = piece.shape
    if piece.kind in MACHINES:
        _outline(drawn, _moved(machine_outline(laid.sketch.mirrored[piece.name]), at))
    elif piece.kind == "valve":
        used = laid.used.get(piece.name, [])
        _outline(drawn, _moved(valve_outline(bool(used) and used[0].out_x == 0), at))
    elif piece.kind in ("pump", "generator", "motor", "engine", "heat pump"):
        drawn.add_artist(
            Circle(
                at,
                shape.half_height,
                facecolor="white",
                edgecolor=canvas.INK,
                linewidth=RIM,
                transform=IdentityTransform(),
                zorder=3,
            )
        )
        _inside_circle(drawn, laid, piece, at)
    else:
        _box(drawn, piece, at)
    if shape.named_inside:
        marks.write(drawn, at[0], at[1], plain(piece.name))


def _outline(drawn: Page, points: Sequence[Point], face: str = "white") -> None:
    drawn.add_artist(
        Polygon(
            points,
            closed=True,
            facecolor=face,
            edgecolor=canvas.INK,
            linewidth=RIM,
            joinstyle="miter",
            transform=IdentityTransform(),
            zorder=3,
        )
    )


def _inside_circle(drawn: Page, laid: Laid, piece: Piece, at: Point) -> None:
    if piece.kind in ("generator", "motor"):
        marks.write(drawn, *at, piece.kind[0].upper(), size=11.0)
    if piece.kind != "pump":
        return
    outlet = next((route.start.port.way for line, route in laid.routes if line.start is piece), (0, 1))
    _outline(drawn, _moved(pump_triangle(outlet), at))


def _box(drawn: Page, piece: Piece, at: Point) -> None:
    corner = (at[0] - piece.shape.half_width, at[1] - piece.shape.half_height)
    wide, tall = 2 * piece.shape.half_width, 2 * piece.shape.half_height
    if piece.kind == "reservoir":
        drawn.add_artist(
            Rectangle(
                corner,
                wide,
                tall,
                facecolor=canvas.FAINT,
                edgecolor=canvas.INK,
                linewidth=RIM * 1.6,
                transform=IdentityTransform(),
                zorder=3,
            )
        )
        return
    rounded = 2.0 if piece.kind in EXCHANGERS else 4.0
    drawn.add_artist(
        FancyBboxPatch(
            corner,
            wide,
            tall,
            boxstyle=f"round,pad=0,rounding_size={rounded}",
            facecolor="white",
            edgecolor=canvas.INK,
            linewidth=RIM,
            transform=IdentityTransform(),
            zorder=1.5 if piece.kind in EXCHANGERS else 3,
        )
    )


def _words(drawn: Page, words: Words, shift: Point) -> None:
    """Lines of text, the first on top."""
    count = len(words.lines)
    for index, text in enumerate(words.lines):
        y = words.box.y + shift[1] + 10.0 * ((count - 1) / 2.0 - index)
        marks.write(drawn, words.box.x + shift[0], y, text)
