"""The record's sketch to the figure of the arrangement: equipment, lines, state numbers and streams."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field
from typing import Any

import numpy as np

from calcpack.figures import canvas, marks, sketch_ink
from calcpack.figures.equipment import Point, Port
from calcpack.figures.figure import Figure
from calcpack.figures.layout import MACHINES, Line, Piece, Sketch, lay_out, ports
from calcpack.figures.placing import Box, Candidate, Room
from calcpack.figures.routing import CLEAR, End, Route, Router
from calcpack.figures.words import known_quantity, plain, quantity_text, symbol_text

OPEN_RUN = 30.0
"""Length of a line that ends open [pt]."""
MARGIN = 6.0
WIDEST_MM = 165.0
EVERYWHERE = Box(0.0, 0.0, 1e6, 1e6)


@dataclass(frozen=True, slots=True)
class Words:
    """Lines of text about one middle [pt]."""

    box: Box
    lines: tuple[str, ...]


@dataclass(slots=True)
class Laid:
    """The sketch with every line and label at its place."""

    sketch: Sketch
    routes: list[tuple[Line, Route]] = field(default_factory=list)
    used: dict[str, list[Port]] = field(default_factory=dict)
    numbers: list[Words] = field(default_factory=list)
    words: list[Words] = field(default_factory=list)


def arrangement(record: Mapping[str, Any]) -> Figure:
    """Draw the arrangement at its own size, at most 165 mm wide."""
    title = "Arrangement"
    with canvas.settings():
        laid = laid_out(record)
        left, low, right, high = _bounds(laid)
        width, height = (
            (far - near + 2 * MARGIN) / canvas.POINTS_PER_MM for near, far in ((left, right), (low, high))
        )
        drawn = canvas.page(width, height)
        sketch_ink.draw(drawn, laid, (MARGIN - left, MARGIN - low))
        text = canvas.svg_text(drawn, title)
    shrink = min(1.0, WIDEST_MM / width)
    return Figure(
        "arrangement",
        title,
        _caption(laid.sketch),
        _alt(laid.sketch),
        text,
        round(width * shrink, 2),
        round(height * shrink, 2),
    )


def laid_out(record: Mapping[str, Any]) -> Laid:
    """Every piece, line and label at its place [pt]; call within :func:`calcpack.figures.canvas.settings`."""
    laid = Laid(lay_out(record))
    _route(laid, record)
    _label(laid, record)
    return laid


def _route(laid: Laid, record: Mapping[str, Any]) -> None:
    """Open ends and their words first, then shafts, then the rest; later lines go round earlier ones."""
    sketch = laid.sketch
    router = Router([piece.box.grown(CLEAR) for piece in sketch.pieces])
    closed = [line for line in sketch.lines if line.start is not None and line.end is not None]
    for line in (one for one in sketch.lines if one not in closed):
        route, words = _open_end(laid, line, record)
        router.runs.append((route.points[0], route.points[-1]))
        router.boxes.append(words.box)
        laid.routes.append((line, route))
        laid.words.append(words)
    router.lay_net(
        piece.end(port)
        for line in closed
        for piece in (line.start, line.end)
        for port in ports(sketch, piece, line, ())
    )
    for line in sorted(closed, key=lambda one: one.style != "power"):
        laid.routes.append((line, _closed_route(laid, router, line)))


def _closed_route(laid: Laid, router: Router, line: Line) -> Route:
    """The best way between two pieces, which takes a port of each."""
    starts, ends = (
        [piece.end(port) for port in ports(laid.sketch, piece, line, laid.used.get(piece.name, ()))]
        for piece in (line.start, line.end)
    )
    route = router.route(starts, ends) or _straight(starts[0], ends[0])
    _use(laid, line.start, route.start.port)
    _use(laid, line.end, route.end.port)
    return route


def _straight(start: End, end: End) -> Route:
    """Where equipment leaves no way round, a line across is better than none."""
    return Route(start, end, ((start.x, start.y), (end.x, end.y)))


def _use(laid: Laid, piece: Piece, port: Port) -> None:
    laid.used.setdefault(piece.name, []).append(port)


def _open_end(laid: Laid, line: Line, record: Mapping[str, Any]) -> tuple[Route, Words]:
    """A straight line away from its piece, at the port where its words have most room."""
    piece = line.end if line.start is None else line.start
    taken = [one.box for one in (*laid.sketch.pieces, *laid.words)]
    choices = []
    for port in ports(laid.sketch, piece, line, laid.used.get(piece.name, ())):
        route = _away(piece, port, inward=line.start is None)
        words = _open_words(line, route, record)
        choices.append((sum(words.box.overlap(box) for box in taken), len(choices), route, words, port))
    _, _, route, words, port = min(choices)
    _use(laid, piece, port)
    return route, words


def _away(piece: Piece, port: Port, *, inward: bool) -> Route:
    near = piece.end(port)
    far = End(port, near.x + OPEN_RUN * port.out_x, near.y + OPEN_RUN * port.out_y)
    start, end = (far, near) if inward else (near, far)
    return Route(start, end, ((start.x, start.y), (end.x, end.y)))


def _label(laid: Laid, record: Mapping[str, Any]) -> None:
    """State numbers on their lines, words beside the others, then the names of the smaller pieces."""
    room = Room(EVERYWHERE, boxes=[_body(piece) for piece in laid.sketch.pieces])
    room.boxes += [words.box for words in laid.words]
    for line, route in laid.routes:
        if line.style == "fluid" and line.label:
            laid.numbers.append(_number(line, route, laid.routes, room))
    for _, route in laid.routes:
        room.add_line(route.points)
    for line, route in laid.routes:
        if line.label and line.style != "fluid" and line.start is not None and line.end is not None:
            laid.words.append(_beside_line(line, route, record, room))
    for piece in laid.sketch.pieces:
        if not piece.shape.named_inside:
            laid.words.append(_name(piece, room))


def _body(piece: Piece) -> Box:
    """What labels keep off."""
    return Box(piece.x, piece.y, 7.0, 12.0) if piece.kind == "valve" else piece.box.grown(1.0)


def _half(lines: Iterable[str]) -> tuple[float, float]:
    """Half the width and height of lines of text, with a little air."""
    lines = tuple(lines)
    return max(marks.extent(text).width for text in lines) / 2.0 + 2.0, 5.0 * len(lines)


def _open_words(line: Line, route: Route, record: Mapping[str, Any]) -> Words:
    """What enters or leaves, with the stream's temperature where the record has it."""
    # The label of a fluid's line is its state, which stands on the line.
    lines = [plain(line.open_name if line.style == "fluid" else line.label or line.open_name)]
    stream, _, end = line.open_name.rpartition(" ")
    for one in record["streams"]:
        if line.style == "stream" and one["name"] == stream and one.get(f"T_{end}"):
            lines.append(quantity_text(one[f"T_{end}"]))
    far = route.start if line.start is None else route.end
    wide, tall = _half(lines)
    way = far.port.way
    return Words(Box(far.x + way[0] * (wide + 1.0), far.y + way[1] * (tall + 1.0), wide, tall), tuple(lines))


def _number(line: Line, route: Route, routes: Iterable[tuple[Line, Route]], room: Room) -> Words:
    """The state's number on its line, near the middle of the longest run, off other lines."""
    others = Room(room.frame, boxes=room.boxes)
    for _, other in routes:
        if other is not route:
            others.add_line(other.points)
    half = marks.half_width(line.label)
    corners = np.array(route.points)
    lengths = np.hypot(*np.diff(corners, axis=0).T)
    places = []
    for start, end, length in zip(corners[:-1], corners[1:], lengths, strict=True):
        for share in (0.5, 0.4, 0.6, 0.3, 0.7):
            x, y = start + share * (end - start)
            cost = 0.1 * float(lengths.max() - length) + 10.0 * abs(share - 0.5)
            places.append(Candidate(Box(float(x), float(y), half, marks.ROUND), cost))
    return Words(others.settle(places).box, (line.label,))


def _beside_line(line: Line, route: Route, record: Mapping[str, Any], room: Room) -> Words:
    """A heat flow's symbol and value beside its line."""
    known = known_quantity(record, line.label)
    text = symbol_text(line.label) if line.style == "heat" else plain(line.label)
    text += f" = {quantity_text(known)}" if known else ""
    wide, tall = _half([text])
    (x0, y0), (x1, y1) = max(
        zip(route.points[:-1], route.points[1:], strict=True),
        key=lambda run: abs(run[1][0] - run[0][0]) + abs(run[1][1] - run[0][1]),
    )
    x, y = (x0 + x1) / 2, (y0 + y1) / 2
    places = (
        [Candidate(Box(x + side * (wide + 5.0), y, wide, tall), 0.1 * (side < 0)) for side in (1, -1)]
        if x0 == x1
        else [Candidate(Box(x, y + side * (tall + 3.0), wide, tall), 0.1 * (side < 0)) for side in (1, -1)]
    )
    return Words(room.settle(places).box, (text,))


def _name(piece: Piece, room: Room) -> Words:
    """The name of a small piece, on whichever side has room."""
    wide, tall = _half([plain(piece.name)])
    # An upright valve is slimmer than the square it stands in.
    slim = 4.5 if piece.kind == "valve" else 0.0
    reach_x, reach_y = piece.shape.half_width - slim + wide + 2.0, piece.shape.half_height + tall + 1.5
    places = [
        Candidate(Box(piece.x + across * reach_x, piece.y + up * reach_y, wide, tall), cost)
        for across, up, cost in (
            (0.0, -1.0, 0.0),
            (0.0, 1.0, 0.1),
            (1.0, 0.0, 0.2),
            (-1.0, 0.0, 0.3),
            (0.75, -1.0, 1.0),
            (-0.75, -1.0, 1.1),
            (0.75, 1.0, 1.2),
            (-0.75, 1.0, 1.3),
            (1.0, -0.7, 2.0),
            (-1.0, -0.7, 2.1),
            (1.0, 0.7, 2.2),
            (-1.0, 0.7, 2.3),
        )
    ]
    return Words(room.settle(places).box, (plain(piece.name),))


def _bounds(laid: Laid) -> tuple[float, float, float, float]:
    """Left, low, right and high end of everything drawn."""
    boxes = [piece.box for piece in laid.sketch.pieces] + [one.box for one in (*laid.numbers, *laid.words)]
    corners: list[Point] = [point for _, route in laid.routes for point in route.points]
    corners += [
        (box.x + across * box.half_width, box.y + up * box.half_height)
        for box in boxes
        for across in (-1, 1)
        for up in (-1, 1)
    ]
    xs, ys = zip(*corners, strict=True)
    return min(xs), min(ys), max(xs), max(ys)


def _caption(sketch: Sketch) -> str:
    styles = {line.style for line in sketch.lines}
    shafts = any(line.style == "power" and line.start and line.end for line in sketch.lines)
    opens = any(line.style == "power" and not (line.start and line.end) for line in sketch.lines)
    pieces = ["Circled numbers are the states of the state table."] if "fluid" in styles else []
    words = [
        ("solid: working fluid", "fluid" in styles),
        ("dash-dotted: secondary streams", "stream" in styles),
        ("dotted: power", opens),
        ("double: shaft", shafts),
        ("thick: heat flow", "heat" in styles),
    ]
    legend = ", ".join(word for word, there in words if there)
    return " ".join([*pieces, f"{legend[:1].upper()}{legend[1:]}."]) if legend else " ".join(pieces)


def _alt(sketch: Sketch) -> str:
    """The equipment, and every line from where to where with its number or word."""
    names = ", ".join(piece.name for piece in sketch.pieces)
    lines = "; ".join(_line_words(line) for line in sketch.lines)
    machines = sum(piece.kind in MACHINES for piece in sketch.pieces)
    return (
        f"Arrangement sketch: {names}. Lines: {lines}."
        if lines or machines
        else f"Arrangement sketch: {names}."
    )


def _line_words(line: Line) -> str:
    start = line.start.name if line.start else line.open_name
    end = line.end.name if line.end else line.open_name
    word = {"fluid": "state ", "heat": "heat flow ", "power": ""}.get(line.style, "")
    label = line.label if line.style in ("fluid", "heat") else ""
    return f"{start} to {end}" + (f", {word}{label}" if label else "")
