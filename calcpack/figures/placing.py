"""Labels to free places: where a box hides no line, no other box and stays inside the frame."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field
from itertools import pairwise

import numpy as np

STEP = 1.0
"""Lines are felt at points this far apart [pt]."""
OUTSIDE, ON_BOX, ON_LINE = 400.0, 60.0, 8.0


@dataclass(frozen=True, slots=True)
class Box:
    """An upright rectangle about (x, y) with half its width and height [pt]."""

    x: float
    y: float
    half_width: float
    half_height: float

    def grown(self, by: float) -> Box:
        """The same box with ``by`` more on every side."""
        return Box(self.x, self.y, self.half_width + by, self.half_height + by)

    def overlap(self, other: Box) -> float:
        """How deep the two lie in one another [pt]; 0 where they only touch."""
        across = self.half_width + other.half_width - abs(self.x - other.x)
        up = self.half_height + other.half_height - abs(self.y - other.y)
        return max(0.0, min(across, up))

    def outside(self, frame: Box) -> float:
        """How far the box reaches out of ``frame`` [pt]."""
        across = abs(self.x - frame.x) + self.half_width - frame.half_width
        up = abs(self.y - frame.y) + self.half_height - frame.half_height
        return max(0.0, across) + max(0.0, up)


@dataclass(frozen=True, slots=True)
class Candidate:
    """A place for a label, with what speaks against it before anything lies there."""

    box: Box
    cost: float = 0.0


@dataclass(slots=True)
class Room:
    """What is on the page already."""

    frame: Box
    boxes: list[Box] = field(default_factory=list)
    felt: list[np.ndarray] = field(default_factory=list)

    def add_line(self, points: np.ndarray | Sequence[Sequence[float]]) -> None:
        """Keep labels off a polyline [pt]."""
        self.felt.append(sampled(np.asarray(points, dtype=float)))

    def cost(self, candidate: Candidate) -> float:
        """What speaks against a place: lines hidden, boxes overlapped, parts outside."""
        box = candidate.box
        cost = candidate.cost + OUTSIDE * box.outside(self.frame)
        cost += sum(ON_BOX * (1.0 + box.overlap(other)) for other in self.boxes if box.overlap(other) > 0.0)
        for points in self.felt:
            inside = (np.abs(points[:, 0] - box.x) < box.half_width) & (
                np.abs(points[:, 1] - box.y) < box.half_height
            )
            cost += ON_LINE * float(np.count_nonzero(inside))
        return cost

    def settle(self, candidates: Iterable[Candidate]) -> Candidate:
        """The best of the candidates, kept from then on; the first of equals."""
        best = min(candidates, key=self.cost)
        self.boxes.append(best.box)
        return best


def sampled(points: np.ndarray) -> np.ndarray:
    """Points along a polyline, at most :data:`STEP` apart."""
    pieces = [points[:1]]
    for start, end in pairwise(points):
        count = max(1, int(np.ceil(np.hypot(*(end - start)) / STEP)))
        share = np.arange(1, count + 1)[:, None] / count
        pieces.append(start + (end - start) * share)
    return np.concatenate(pieces)


def around(
    x: float,
    y: float,
    half_width: float,
    half_height: float,
    *,
    away_from: tuple[float, float],
    gaps: Sequence[float] = (1.5, 3.0, 5.0, 8.0, 12.0, 17.0, 23.0),
) -> list[Candidate]:
    """Places about a point, the nearest and those on the far side of ``away_from`` first."""
    outward = np.arctan2(y - away_from[1], x - away_from[0])
    candidates = []
    for gap in gaps:
        for turn in range(24):
            angle = outward + turn * np.pi / 12.0
            candidates.append(
                Candidate(
                    Box(
                        x + (half_width + gap) * float(np.cos(angle)),
                        y + (half_height + gap) * float(np.sin(angle)),
                        half_width,
                        half_height,
                    ),
                    cost=0.5 * gap + 2.0 * (1.0 - float(np.cos(angle - outward))),
                )
            )
    return candidates
