"""A solution's states and flows to their properties looked up anew, with fluids opened again from the spec."""
from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import dataclass
from typing import Any

from calcpack.errors import CalcpackError
from calcpack.fluids import open_fluid
from calcpack.formula.evaluate import value as evaluated
from calcpack.formula.tree import PropertyCall
from calcpack.plan.facts import Flow
from calcpack.solving.solution import Solution


@dataclass(frozen=True, slots=True)
class Point:
    """Where a flow's enthalpy belongs: its fluid's role, and the symbols of its pressure, temperature, entropy."""

    role: str
    label: str
    p: str
    T: str
    s: str | None


@dataclass(frozen=True, slots=True)
class Afresh:
    """Look-ups beside those of the solution; ``points`` by the symbol of the enthalpy."""

    solution: Solution
    fluids: dict[str, Any]
    points: dict[str, Point]
    ends: frozenset[str]

    def reader(self, role: str, output: str, names: tuple[str, ...]) -> Callable[..., float]:
        """A reader of the role's new fluid."""
        return self.fluids[role].reader(output, names)

    def enthalpy(self, flow: Flow) -> float:
        """A stream's end from pressure and temperature, a state from pressure and entropy [J/kg].

        As the sheet has it where it is neither, or the fluid offers no such look-up.
        """
        value, point = self.solution.value, self.points.get(flow.h)
        if point is None:
            return value(flow.h)
        if flow.h in self.ends:
            return self.looked_up(point, "h", ("p", "T"), (value(point.p), value(point.T)), value(flow.h))
        if point.s is None:
            return value(flow.h)
        return self.looked_up(point, "h", ("p", "s"), (value(point.p), value(point.s)), value(flow.h))

    def looked_up(self, point: Point, output: str, names: tuple[str, str], known: tuple[float, float],
                  otherwise: float) -> float:
        """A property by the new fluid; ``otherwise`` where it has no such look-up or no answer."""
        try:
            return self.reader(point.role, output, names)(*known)
        except CalcpackError:
            return otherwise

    def energy(self, flows: Iterable[Flow]) -> float:
        """Mass flow times enthalpy looked up anew, in sum [W]."""
        return sum(self.solution.value(flow.m_dot) * self.enthalpy(flow) for flow in flows)

    def entropy(self, flows: Iterable[Flow]) -> float:
        """Mass flow times entropy looked up from pressure and enthalpy, in sum [W/K]."""
        total = 0.0
        for flow in flows:
            value, point = self.solution.value, self.points.get(flow.h)
            s = value(flow.s) if point is None else self.looked_up(
                point, "s", ("p", "h"), (value(point.p), value(flow.h)), value(flow.s))
            total += value(flow.m_dot) * s
        return total

    def look_ups(self) -> list[tuple[str, float]]:
        """For each property step its number, and the share by which the same look-up by the new fluid differs."""
        found = []
        for step in self.solution.plan.steps:
            if not isinstance(step.tree, PropertyCall):
                continue
            known = [evaluated(node, self.solution.values) for _, node in step.tree.given]
            reader = self.reader(step.tree.fluid, step.tree.output, tuple(name for name, _ in step.tree.given))
            first = self.solution.value(step.symbol)
            # A property may be zero where the reference state has its zero.
            found.append((step.id, abs(reader(*known) - first) / max(abs(first), 1.0)))
        return found

    def states(self) -> list[tuple[str, float]]:
        """For each point its label, and the greatest share by which temperature or entropy differs."""
        found = []
        for h, point in self.points.items():
            known = self.solution.value(point.p), self.solution.value(h)
            try:
                T = self.reader(point.role, "T", ("p", "h"))(*known)
                s = self.reader(point.role, "s", ("p", "h"))(*known) if point.s else None
            except CalcpackError:
                continue
            first = self.solution.value(point.T)
            apart = abs(T / first - 1.0)
            if s is not None:
                # Entropy has no natural zero: its difference counts as heat, beside a hundred kilojoules a kilogram.
                apart = max(apart, abs(s - self.solution.value(point.s)) * first / 1e5)
            found.append((point.label, apart))
        return found


def afresh(solution: Solution) -> Afresh:
    """The look-ups of a solution, each fluid opened anew from what the spec says of it."""
    # Without the cache of open fluids, so that nothing of the first look-ups is shared.
    fluids = {role: open_fluid.__wrapped__(definition) for role, definition in solution.spec.case.fluids.items()}
    has, points, ends = solution.has, {}, set()
    for point in solution.plan.facts.states:
        if point.h and point.fluid in fluids and all(has(name) for name in (point.h, point.p, point.T)):
            points[point.h] = Point(point.fluid, f"state {point.number}", point.p, point.T,
                                    point.s if point.s and has(point.s) else None)
    for stream in solution.plan.facts.streams:
        for h, T, end in ((stream.h_in, stream.T_in, "inlet"), (stream.h_out, stream.T_out, "outlet")):
            if h and stream.p and all(has(name) for name in (h, T, stream.p)):
                s = f"s{h[1:]}"
                points[h] = Point(stream.role, f"{stream.name.lower()}, {end}", stream.p, T, s if has(s) else None)
                ends.add(h)
    return Afresh(solution, fluids, points, frozenset(ends))
