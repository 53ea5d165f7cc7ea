"""Lines of the sketch from port to port: upright and level runs that go round the equipment.

The shortest way is sought on a net of the coordinates that matter (ports, rims
and gaps), where a bend, a crossing and a shared run each cost length.
"""

from __future__ import annotations

import heapq
from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field
from itertools import pairwise

from calcpack.figures.equipment import Point, Port
from calcpack.figures.placing import Box

CLEAR = 7.5
"""Lines keep this far from equipment [pt]."""
BEND, CROSSING, SHARED = 24.0, 90.0, 4000.0

Way = tuple[int, int]
WAYS: tuple[Way, ...] = ((1, 0), (-1, 0), (0, 1), (0, -1))


@dataclass(frozen=True, slots=True)
class End:
    """A port at its place on the page."""

    port: Port
    x: float
    y: float

    @property
    def stub(self) -> Point:
        """Where the straight part of a line that leaves here ends."""
        return (
            round(self.x + self.port.run * self.port.out_x, 2),
            round(self.y + self.port.run * self.port.out_y, 2),
        )


@dataclass(frozen=True, slots=True)
class Route:
    """A line from port to port with the corners between."""

    start: End
    end: End
    points: tuple[Point, ...]


@dataclass(slots=True)
class Router:
    """The net, the boxes to go round and the lines drawn so far."""

    boxes: list[Box]
    xs: list[float] = field(default_factory=list)
    ys: list[float] = field(default_factory=list)
    runs: list[tuple[Point, Point]] = field(default_factory=list)

    def lay_net(self, ends: Iterable[End]) -> None:
        """Take the coordinates of every port's stub, of every rim, and of the middles between them."""
        ends = list(ends)
        self.xs = _net(
            [end.stub[0] for end in ends], [(b.x - b.half_width, b.x + b.half_width) for b in self.boxes]
        )
        self.ys = _net(
            [end.stub[1] for end in ends], [(b.y - b.half_height, b.y + b.half_height) for b in self.boxes]
        )

    def route(self, starts: Sequence[End], ends: Sequence[End]) -> Route | None:
        """The cheapest way from any of ``starts`` to any of ``ends``; None where there is none."""
        goals = {end.stub: end for end in ends}
        queue: list[tuple[float, int, Point, Way]] = []
        best: dict[tuple[Point, Way], float] = {}
        came: dict[tuple[Point, Way], tuple[Point, Way] | End] = {}
        for start in starts:
            self._push(queue, best, came, 0.0, (start.stub, start.port.way), start)
        while queue:
            cost, _, place, way = heapq.heappop(queue)
            if cost > best[place, way]:
                continue
            if place in goals and way == _back(goals[place].port.way):
                return self._traced(came, (place, way), goals[place])
            for turn in WAYS:
                if turn == _back(way):
                    continue
                if turn == way:
                    self._walk(queue, best, came, cost, place, way)
                else:
                    self._push(queue, best, came, cost + BEND, (place, turn), (place, way))
        return None

    def _walk(self, queue: list, best: dict, came: dict, cost: float, place: Point, way: Way) -> None:
        step = self._next(place, way)
        if step is None or any(_enters(box, place, step) for box in self.boxes):
            return
        length = abs(step[0] - place[0]) + abs(step[1] - place[1])
        self._push(queue, best, came, cost + length + self._met(place, step), (step, way), (place, way))

    @staticmethod
    def _push(
        queue: list, best: dict, came: dict, cost: float, state: tuple[Point, Way], source: object
    ) -> None:
        if cost < best.get(state, float("inf")):
            best[state] = cost
            came[state] = source
            heapq.heappush(queue, (cost, len(came), *state))

    def _next(self, place: Point, way: Way) -> Point | None:
        if way[0]:
            at = self.xs.index(place[0]) + way[0]
            return (self.xs[at], place[1]) if 0 <= at < len(self.xs) else None
        at = self.ys.index(place[1]) + way[1]
        return (place[0], self.ys[at]) if 0 <= at < len(self.ys) else None

    def _met(self, start: Point, end: Point) -> float:
        return sum(_meeting(start, end, *run) for run in self.runs)

    def _traced(self, came: dict, state: tuple[Point, Way], end: End) -> Route:
        points = [(end.x, end.y)]
        source: object = state
        while not isinstance(source, End):
            points.append(source[0])
            source = came[source]
        points.append((source.x, source.y))
        corners = _corners(points[::-1])
        self.runs += list(pairwise(corners))
        return Route(source, end, tuple(corners))


def _back(way: Way) -> Way:
    return (-way[0], -way[1])


def _net(places: Sequence[float], rims: Sequence[tuple[float, float]]) -> list[float]:
    """Sorted coordinates: the places, just off each rim, and half-way across the gaps between rims."""
    edges = sorted(
        {round(edge + shift, 2) for low, high in rims for edge, shift in ((low, -0.5), (high, 0.5))}
    )
    middles = [round((low + high) / 2.0, 2) for low, high in pairwise(edges) if high - low > 12.0]
    outer = [edges[0] - 14.0, edges[-1] + 14.0] if edges else []
    return sorted({*(round(place, 2) for place in places), *edges, *middles, *outer})


def _enters(box: Box, start: Point, end: Point) -> bool:
    """Whether a run passes through the inside of a box."""
    across = max(start[0], end[0]) > box.x - box.half_width and min(start[0], end[0]) < box.x + box.half_width
    up = max(start[1], end[1]) > box.y - box.half_height and min(start[1], end[1]) < box.y + box.half_height
    return across and up


def _meeting(start: Point, end: Point, other_start: Point, other_end: Point) -> float:
    """What it costs that a new run meets an old one: dear along it, less across it."""
    level, other_level = start[1] == end[1], other_start[1] == other_end[1]
    fixed, moving = (1, 0) if level else (0, 1)
    low, high = sorted((start[moving], end[moving]))
    if level == other_level:
        other_low, other_high = sorted((other_start[moving], other_end[moving]))
        close = abs(start[fixed] - other_start[fixed]) < 6.0
        return SHARED if close and low < other_high and other_low < high else 0.0
    other_low, other_high = sorted((other_start[fixed], other_end[fixed]))
    # A step may end on the other line; half the cost on each side makes a whole crossing.
    touches = low <= other_start[moving] <= high and other_low < start[fixed] < other_high
    return (CROSSING if low < other_start[moving] < high else CROSSING / 2.0) if touches else 0.0


def _corners(points: Sequence[Point]) -> list[Point]:
    """The points where the direction changes, with both ends."""
    kept = [points[0]]
    for index in range(1, len(points) - 1):
        before, here, after = kept[-1], points[index], points[index + 1]
        if here == before:
            continue
        straight = (before[0] == here[0] == after[0]) or (before[1] == here[1] == after[1])
        if not straight:
            kept.append(here)
    return [*kept, points[-1]]
