"""The record's sketch to pieces on the page and the ports at which each line meets them."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, field
from typing import Any

from calcpack.figures.equipment import LEVEL, OPPOSITE, Port, Shape, four_sides, machine_ports, shape_of
from calcpack.figures.placing import Box
from calcpack.figures.routing import End
from calcpack.figures.words import plain

GAP_ACROSS, GAP_UP = 44.0, 44.0
"""Room between columns and between rows [pt]."""
EXCHANGERS = frozenset({"exchanger", "recuperator"})
MACHINES = frozenset({"compressor", "expander", "turbine"})


@dataclass(frozen=True, slots=True)
class Piece:
    """A piece of equipment at its place on the page [pt], y upwards."""

    name: str
    kind: str
    column: float
    row: float
    x: float
    y: float
    shape: Shape

    @property
    def box(self) -> Box:
        """The rectangle that the piece takes."""
        return Box(self.x, self.y, self.shape.half_width, self.shape.half_height)

    def end(self, port: Port) -> End:
        """``port`` at its place on the page."""
        return End(port, round(self.x + port.x, 2), round(self.y + port.y, 2))


@dataclass(frozen=True, slots=True)
class Line:
    """A link of the sketch; ``start`` or ``end`` is None where the line ends open."""

    start: Piece | None
    end: Piece | None
    label: str
    style: str
    open_name: str

    def other(self, piece: Piece) -> Piece | None:
        """The piece at the far end."""
        return self.end if self.start is piece else self.start


@dataclass(frozen=True, slots=True)
class Pass:
    """A way through an exchanger: its lines in and out, their ports, and its level."""

    piece: Piece
    inlet: Line | None
    outlet: Line | None
    level: float
    inlet_port: Port
    outlet_port: Port
    zigzag: bool


@dataclass(slots=True)
class Sketch:
    """All pieces and lines, the passes through exchangers, and which machines lie mirrored."""

    pieces: tuple[Piece, ...]
    lines: tuple[Line, ...]
    passes: list[Pass] = field(default_factory=list)
    mirrored: dict[str, bool] = field(default_factory=dict)

    def of(self, piece: Piece, style: str | None = None) -> list[Line]:
        """The lines that meet ``piece``, of one style or of all."""
        return [
            line for line in self.lines if piece in (line.start, line.end) and style in (None, line.style)
        ]


def lay_out(record: Mapping[str, Any]) -> Sketch:
    """Pieces on a grid of columns and rows, lines between them, ports of exchangers and sides of machines."""
    first = _lay(record, {})
    return _lay(record, {piece.name: _lift(first, piece) for piece in first.pieces})


def _lay(record: Mapping[str, Any], lifts: Mapping[str, float]) -> Sketch:
    drawn = record["sketch"]
    pieces = _pieces(drawn["nodes"], lifts)
    named = {piece.name: piece for piece in pieces}
    lines = tuple(_line(link, named) for link in drawn["links"])
    pressures = {state["number"]: state["p"]["value"] for state in record["states"] if state.get("p")}
    sketch = Sketch(pieces, lines)
    for piece in pieces:
        if piece.kind in EXCHANGERS:
            sketch.passes += _passes(sketch, piece, pressures)
        elif piece.kind in MACHINES:
            sketch.mirrored[piece.name] = _mirrored(sketch, piece)
    return sketch


def _lift(sketch: Sketch, piece: Piece) -> float:
    """How far a small piece moves up so that its line runs level into the exchanger beside it."""
    if piece.kind not in ("pump", "valve"):
        return 0.0
    levels = {
        port.y
        for one in sketch.passes
        if one.piece.row == piece.row
        for line, port in ((one.inlet, one.inlet_port), (one.outlet, one.outlet_port))
        if line is not None and line.other(one.piece) is piece and port.out_x
    }
    return levels.pop() if len(levels) == 1 else 0.0


def _line(link: Mapping[str, str], named: Mapping[str, Piece]) -> Line:
    start, end = named.get(link["from"]), named.get(link["to"])
    open_name = link["from"] if start is None else link["to"] if end is None else ""
    return Line(start, end, link["label"], link["style"], open_name)


def _pieces(nodes: Iterable[Mapping[str, Any]], lifts: Mapping[str, float]) -> tuple[Piece, ...]:
    nodes = list(nodes)
    shapes = [shape_of(node["shape"], plain(node["name"])) for node in nodes]
    across = _positions(
        [node["column"] for node in nodes], [shape.half_width for shape in shapes], GAP_ACROSS
    )
    down = _positions([node["row"] for node in nodes], [shape.half_height for shape in shapes], GAP_UP)
    return tuple(
        Piece(
            node["name"],
            node["shape"],
            node["column"],
            node["row"],
            across[node["column"]],
            lifts.get(node["name"], 0.0) - down[node["row"]],
            shape,
        )
        for node, shape in zip(nodes, shapes, strict=True)
    )


def _positions(places: Sequence[float], halves: Sequence[float], gap: float) -> dict[float, float]:
    """The middle of each column or row, wide enough for its largest piece."""
    found: dict[float, float] = {}
    edge = 0.0
    for place in sorted(set(places)):
        half = max(size for at, size in zip(places, halves, strict=True) if at == place)
        found[place] = round(edge + half, 2)
        edge = found[place] + half + gap
    return found


def _free_side(sketch: Sketch, piece: Piece) -> int:
    """Above (1) or below (-1): the side with no other piece beyond it; above where neither or both are free."""
    beyond = [one.y - piece.y for one in sketch.pieces if one.column == piece.column and one is not piece]
    above, below = any(gap > 0 for gap in beyond), any(gap < 0 for gap in beyond)
    return -1 if above and not below else 1


def _passes(sketch: Sketch, piece: Piece, pressures: Mapping[str, float]) -> list[Pass]:
    """The streams' pass lies on the free side, the fluid's on the other; two fluid passes by where they lead."""
    fluid = _paired(piece, sketch.of(piece, "fluid"), lambda line: pressures.get(line.label, 0.0))
    stream = _paired(piece, sketch.of(piece, "stream"), lambda line: 0.0)
    passes: list[Pass] = []
    side = _free_side(sketch, piece)
    if stream and fluid:
        passes += [_fluid_pass(piece, *pair, -side * LEVEL, zigzag=False) for pair in fluid]
        warm_right = passes[0].outlet_port.x > 0
        passes += [_stream_pass(piece, *pair, side * LEVEL, right_to_left=warm_right) for pair in stream]
        return passes
    if stream:
        return [_stream_pass(piece, *pair, side * LEVEL, right_to_left=False) for pair in stream]
    order = sorted(
        fluid, key=lambda pair: sum(line.other(piece).row for line in pair if line and line.other(piece))
    )
    return [
        _fluid_pass(piece, *pair, LEVEL if at == 0 else -LEVEL, zigzag=at == 0)
        for at, pair in enumerate(order)
    ]


def _paired(piece: Piece, lines: Sequence[Line], alike: Any) -> list[tuple[Line | None, Line | None]]:
    """Each line in with the line out that is most alike: of one pressure for a fluid."""
    inward, outward = (
        [line for line in lines if line.end is piece],
        [line for line in lines if line.start is piece],
    )
    pairs: list[tuple[Line | None, Line | None]] = []
    for line in inward:
        match = min(outward, key=lambda one: abs(alike(one) - alike(line)), default=None)
        if match is not None:
            outward.remove(match)
        pairs.append((line, match))
    return pairs + [(None, line) for line in outward]


def _stream_pass(
    piece: Piece, inlet: Line | None, outlet: Line | None, level: float, *, right_to_left: bool
) -> Pass:
    """A stream enters and leaves on the free side, against the working fluid's direction."""
    side = 1 if level > 0 else -1
    x = piece.shape.half_width * (0.5 if right_to_left else -0.5)
    ports = [Port(at, side * piece.shape.half_height, 0, side) for at in (x, -x)]
    return Pass(piece, inlet, outlet, level, ports[0], ports[1], zigzag=True)


def _fluid_pass(piece: Piece, inlet: Line | None, outlet: Line | None, level: float, *, zigzag: bool) -> Pass:
    """In on one side and out on the other, each towards the piece that it comes from or leads to."""
    lean_in, lean_out = (_lean(piece, line) for line in (inlet, outlet))
    right = lean_in if lean_in else -lean_out if lean_out else -1
    ports = [_side_port(piece, line, level, way) for line, way in ((inlet, right), (outlet, -right))]
    return Pass(piece, inlet, outlet, level, ports[0], ports[1], zigzag)


def _lean(piece: Piece, line: Line | None) -> int:
    """Where the other piece lies: right (1), left (-1), or in the same column or nowhere (0)."""
    other = line.other(piece) if line else None
    return 0 if other is None or other.column == piece.column else 1 if other.column > piece.column else -1


def _side_port(piece: Piece, line: Line | None, level: float, right: int) -> Port:
    """At the end of the level, or above or below it towards a piece of the same column."""
    other = line.other(piece) if line else None
    up = 1 if level > 0 else -1
    if other is not None and other.column == piece.column and (other.y - piece.y) * up > 0:
        return Port(right * piece.shape.half_width * 0.5, up * piece.shape.half_height, 0, up)
    return Port(right * piece.shape.half_width, level, right, 0)


def _mirrored(sketch: Sketch, piece: Piece) -> bool:
    """Whether the machine's wide end lies to the right: the way round with the shorter lines."""

    def length(mirrored: bool) -> float:
        total = 0.0
        for line in sketch.of(piece, "fluid"):
            other = line.other(piece)
            if other is None:
                continue
            x = machine_ports(end_of(piece, line), mirrored)[0].x + piece.x
            total += abs(x - other.x) * (2.0 if other.row == piece.row else 1.0)
        return total

    return length(True) < length(False) - 1e-6


def end_of(piece: Piece, line: Line) -> str:
    """The end of a machine that a line meets: a compressor draws at its wide end, an expander gives there."""
    if line.style == "power":
        return "shaft"
    enters = line.end is piece
    return "wide" if enters == (piece.kind == "compressor") else "narrow"


def ports(sketch: Sketch, piece: Piece, line: Line, used: Sequence[Port]) -> list[Port]:
    """The ports of ``piece`` that ``line`` may take, those in use left out."""
    if piece.kind in EXCHANGERS:
        fixed = [
            port
            for one in sketch.passes
            if one.piece is piece
            for at, port in ((one.inlet, one.inlet_port), (one.outlet, one.outlet_port))
            if at is line
        ]
        if fixed:
            return fixed
    if piece.kind in MACHINES:
        offered = machine_ports(end_of(piece, line), sketch.mirrored[piece.name])
    else:
        offered = four_sides(piece.shape)
    if piece.kind == "valve" and used:
        offered = tuple(port for port in offered if port.way == OPPOSITE[used[0].way])
    free = [port for port in offered if all((port.x, port.y) != (one.x, one.y) for one in used)]
    return free or list(offered)
