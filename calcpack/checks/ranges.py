"""States, stream ends and look-ups to the range of each fluid's equation that they use, and its critical margin."""
from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING, Any

from calcpack.checks.entries import difference, entry, pressure, temperature
from calcpack.formula.tree import PropertyCall, Symbol
from calcpack.solving.solution import Solution

if TYPE_CHECKING:
    from calcpack.record import Record

ROUNDING = 1e-8


def met(solution: Solution, role: str) -> tuple[list[float], list[float]]:
    """The temperatures [K] and pressures [Pa] that the sheet meets of the fluid ``role``."""
    points = [*_state_points(solution, role), *_stream_points(solution, role), *_look_ups(solution, role)]
    return [T for T, _ in points if T is not None], [p for _, p in points if p is not None]


def fluid_ranges(solution: Solution, record: Record) -> tuple[dict[str, Any], ...]:
    """For each fluid the lowest and highest temperature and pressure met, against its equation's range."""
    entries = []
    for index, (role, fluid) in enumerate(solution.plan.fluids.items(), start=1):
        T, p = met(solution, role)
        if not T:
            continue
        inside = fluid.T_min * (1 - ROUNDING) <= min(T) and max(T) <= fluid.T_max * (1 + ROUNDING) and \
            (not p or (min(p) > 0.0 and max(p) <= fluid.p_max * (1 + ROUNDING)))
        value = f"{temperature(solution, min(T))} to {temperature(solution, max(T))}"
        value += f", {pressure(solution, min(p))} to {pressure(solution, max(p))}" if p else ""
        text = f"{role}, {fluid.designation}: states, stream ends and look-ups"
        entries.append(entry(f"V-R{index}", "Property range", text, value, fluid.range_text,
                             "ok" if inside else "fails", fluid.model))
    return tuple(entries)


def critical_margins(solution: Solution, record: Record) -> tuple[dict[str, Any], ...]:
    """How near each condensing or evaporating fluid of the cycle comes to its critical pressure."""
    entries = []
    for index, (role, fluid) in enumerate(solution.plan.fluids.items(), start=1):
        p = [p for _, p in _state_points(solution, role) if p is not None]
        if not p or not {"p_crit", "T_crit"} <= set(fluid.constants):
            continue
        p_crit = fluid.reader("p_crit", ())()
        # The flash refuses this band: p with h or s does not fix a state there.
        near = any(abs(one / p_crit - 1.0) < 0.005 for one in p)
        entries.append(entry(
            f"V-C{index}", "Critical point", f"{role}, {fluid.designation}: highest pressure over critical pressure",
            f"{max(p) / p_crit:.3f}", "not within 0.5 % of 1", "fails" if near else "ok", _margin(solution, fluid, p)))
    return tuple(entries)


def _margin(solution: Solution, fluid: Any, p: list[float]) -> str:
    critical = f"critical point {temperature(solution, fluid.reader('T_crit', ())())}, " \
               f"{pressure(solution, fluid.reader('p_crit', ())())}"
    role = solution.plan.facts.roles.get("condensing")
    if role is None or not solution.has(role) or max(p) >= fluid.reader("p_crit", ())():
        return critical
    below = fluid.reader("T_crit", ())() - solution.value(role)
    return f"{critical}; condensing {difference(solution, below)} below it"


def _state_points(solution: Solution, role: str) -> Iterator[tuple[float, float | None]]:
    for point in solution.plan.facts.states:
        if point.fluid == role and solution.has(point.T):
            yield solution.value(point.T), solution.value(point.p) if solution.has(point.p) else None


def _look_ups(solution: Solution, role: str) -> Iterator[tuple[float | None, float | None]]:
    """The temperature and pressure that each property look-up of the fluid was given or gave."""
    for step in solution.plan.steps:
        if not isinstance(step.tree, PropertyCall) or step.tree.fluid != role:
            continue
        known = {key: solution.value(part.name) for key, part in step.tree.given
                 if isinstance(part, Symbol) and solution.has(part.name)}
        known[step.tree.output] = solution.value(step.symbol)
        yield known.get("T"), known.get("p")


def _stream_points(solution: Solution, role: str) -> Iterator[tuple[float, float | None]]:
    for stream in solution.plan.facts.streams:
        if stream.role == role:
            p = solution.value(stream.p) if stream.p is not None and solution.has(stream.p) else None
            yield from ((solution.value(end), p) for end in (stream.T_in, stream.T_out) if solution.has(end))
