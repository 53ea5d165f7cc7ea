"""Governing results found again by ways that share no solver with the first, and in part no look-up either.

Each finding says what the way still shares. Properties are looked up again
with fluids opened afresh, from another pair of knowns than the first time.
"""
from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Any

from calcpack.checks.afresh import Afresh, afresh
from calcpack.checks.closures import energy_dimension, whole_of
from calcpack.checks.entries import entry, printed
from calcpack.checks.exergy import dead_state
from calcpack.checks.ladder import climb, formula_value, missing_symbols
from calcpack.checks.quadrature import conductance, entropy_change
from calcpack.checks.root_again import bisected, crossed, holds_another
from calcpack.errors import CalcpackError
from calcpack.plan.facts import Flow
from calcpack.solving.solution import Solution, printed_freely
from calcpack.units import unit

if TYPE_CHECKING:
    from calcpack.record import Record

GROUP = "Second way"
OPENED_AFRESH = "shares the property library, with fluids opened afresh from the spec"

BALANCE = 1e-6
"""Balances and look-ups that differ by more than this share do not differ by rounding."""

LOOK_UP = 1e-9
CLOSED_FORM = 1e-9
QUADRATURE = 1e-6
ROOT = 1e-8
"""How far a root may be from the one bisected, of its bracket: the solver's own width and the noise of look-ups."""

BACKWARD = 1e-4
BACKWARD_T = 0.025
"""IAPWS-IF97 gives temperature from pressure and enthalpy to 25 mK only, below a ten-thousandth of any level."""

LOG_MEAN = 1e-6
"""Differences that are nearly equal at both ends are averaged plainly, which is off by less than this."""


@dataclass(frozen=True, slots=True)
class Found:
    """A result found again [SI]: ``share`` of ``scale`` is how far the two may be apart."""

    text: str
    first: float
    again: float
    share: float
    scale: float
    way: str
    shown: Callable[[float, int], str]


def second_way(solution: Solution, record: Record) -> tuple[dict[str, Any], ...]:
    """Net figure, shaft power, duties, look-ups, states, machines, streams, conductances and roots, found again."""
    new = afresh(solution)
    entries = []
    for index, found in enumerate(_all(solution, new), start=1):
        name = f"V-A{index}"
        if isinstance(found, Found):
            entries.append(_entry(name, found))
        else:
            entries.append(entry(name, GROUP, found[0], "", "", "not evaluated", found[1]))
    return tuple(entries)


Findings = Iterator[Found | tuple[str, str]]


def _all(solution: Solution, new: Afresh) -> Findings:
    for way in (_net, _shaft, _duties, _closed_forms, _look_ups, _states, _machines, _entropies, _conductances, _roots):
        yield from way(solution, new)


def _entry(name: str, found: Found) -> dict[str, Any]:
    apart, allowed = abs(found.again - found.first), found.share * found.scale
    return entry(name, GROUP, found.text, f"{found.shown(found.again, 6)} beside {found.shown(found.first, 6)}",
                 f"{found.shown(allowed, 2)} apart", "ok" if apart <= allowed else "fails",
                 f"apart by {found.shown(apart, 2) if apart else 'nothing'}; {found.way}")


def _symbol_words(solution: Solution, symbol: str) -> Callable[[float, int], str]:
    """How values of a symbol are told: in its print unit, a level counted from zero."""
    return lambda value, digits: printed_freely(value, replace(solution.unit(symbol), offset=0.0), digits)


def _net(solution: Solution, new: Afresh) -> Findings:
    """The net figure from the entropy that the equipment generates, with entropies looked up from h and p."""
    found = climb(solution)
    if found is None or not (found.destroys or found.reason):
        return
    symbol = found.ladder.end
    text = f"{symbol} from the reversible figure, the entropy generated and the losses outside"
    if found.reason:
        yield text, found.reason
        return
    dead, lost = dead_state(solution).T, 0.0
    for volume in solution.plan.facts.volumes:
        if volume.cycle or volume.name in found.ladder.skip:
            continue
        lost += dead * (new.entropy(volume.flows_out) - new.entropy(volume.flows_in))
        lost -= sum(sign * solution.value(heat) * dead / (solution.value(T) if T else dead)
                    for pairs, sign in ((volume.heat_in, 1.0), (volume.heat_out, -1.0)) for heat, T in pairs)
    lost += sum(formula_value(solution, rung.formula, dead) for rung in (*found.ladder.before, *found.ladder.after))
    again = found.start + lost if found.ladder.upward else found.start - lost
    yield Found(text, solution.value(symbol), again, BALANCE, found.size,
                "Gouy and Stodola; shares the property library, the states and the inputs, not the power's formulas",
                _symbol_words(solution, symbol))


def _shaft(solution: Solution, new: Afresh) -> Findings:
    """Work at the shafts from what crosses the outer boundary, with enthalpies looked up from the streams' ends."""
    whole = whole_of(solution.plan.facts.volumes, solution)
    if whole is None or not (whole.work_in or whole.work_out):
        return
    value = solution.value
    entering = new.energy(whole.flows_in) + sum(value(name) for name, _ in whole.heat_in)
    leaving = new.energy(whole.flows_out) + sum(value(name) for name, _ in whole.heat_out)
    first = sum(map(value, whole.work_out)) - sum(map(value, whole.work_in))
    dimension = energy_dimension(solution, whole)
    scale = max(abs(value(whole.scale)) if whole.scale else 0.0, abs(first))
    yield Found("Net work at the shafts from what crosses the outer boundary", first, entering - leaving,
                BALANCE, scale,
                "energy in less energy out; shares the property library, the flows and the streams' ends, not the "
                "machines' formulas", lambda one, digits: printed(solution, one, dimension, digits))


def _duties(solution: Solution, new: Afresh) -> Findings:
    """Each stream's heat by its own side, and by the side that it meets in the exchanger."""
    for stream in solution.plan.facts.streams:
        if not (stream.m_dot and stream.h_in and stream.h_out and solution.has(stream.m_dot)):
            continue
        first, words = solution.value(stream.Q_dot), _symbol_words(solution, stream.Q_dot)
        ends = Flow(stream.m_dot, stream.h_in), Flow(stream.m_dot, stream.h_out)
        yield Found(f"{stream.Q_dot} by the stream, {stream.name.lower()}", first,
                    abs(new.energy(ends[:1]) - new.energy(ends[1:])), BALANCE, abs(first),
                    "flow times the enthalpy difference looked up at the stream's ends; shares the property "
                    "library and the end temperatures", words)
        for volume in solution.plan.facts.volumes:
            if not any(flow.h == stream.h_in for flow in volume.flows_in) or volume.work_in or volume.work_out:
                continue
            other = [tuple(flow for flow in flows if flow.m_dot != stream.m_dot)
                     for flows in (volume.flows_in, volume.flows_out)]
            yield Found(f"{stream.Q_dot} by the other side of the {volume.name}", first,
                        abs(new.energy(other[0]) - new.energy(other[1])), BALANCE, abs(first),
                        "flow times the enthalpy difference looked up from entropy and pressure; shares the property "
                        "library and the flow", words)


def _closed_forms(solution: Solution, new: Afresh) -> Findings:
    for again in solution.plan.facts.again:
        missing = missing_symbols(solution, again.symbol, again.formula)
        if missing:
            yield f"{again.symbol}: {again.text}", f"not on this sheet: {', '.join(missing)}"
            continue
        first = solution.value(again.symbol)
        found = formula_value(solution, again.formula, dead_state(solution).T)
        yield Found(f"{again.symbol}: {again.text}", first, found, CLOSED_FORM,
                    abs(solution.value(again.scale) if again.scale else first),
                    "closed form; shares inputs and look-ups, not the formulas between",
                    _symbol_words(solution, again.symbol))


def _look_ups(solution: Solution, new: Afresh) -> Findings:
    """Every look-up made again."""
    found = new.look_ups()
    if found:
        step, apart = max(found, key=lambda one: one[1])
        yield Found(f"{len(found)} look-ups made again; worst: step {step}", 0.0, apart, LOOK_UP, 1.0,
                    f"greatest share by which a property differs; {OPENED_AFRESH}",
                    lambda one, digits: printed_freely(one, unit(""), 2))


def _states(solution: Solution, new: Afresh) -> Findings:
    """Every state looked up from its pressure and enthalpy: its temperature and entropy must come back."""
    found = new.states()
    if found:
        label, apart = max(found, key=lambda one: one[1])
        industrial = any(_industrial(fluid) for fluid in new.fluids.values())
        yield Found(f"{len(found)} states looked up again from pressure and enthalpy; worst: {label}", 0.0, apart,
                    BACKWARD if industrial else BALANCE, 1.0,
                    f"greatest share by which temperature, or entropy as heat, differs; {OPENED_AFRESH}",
                    lambda one, digits: printed_freely(one, unit(""), 2))


def _industrial(fluid: Any) -> bool:
    """Whether a fluid is water by the industrial formulation."""
    return fluid.model.endswith("IF97")


def _machines(solution: Solution, new: Afresh) -> Findings:
    """Isentropic efficiencies found back from the ends and the work."""
    for one in solution.plan.facts.machines:
        text = f"Isentropic efficiency of the {one.name}, {one.eta}, found back from its ends"
        try:
            ideal = new.reader(one.fluid, "h", ("p", "s"))(solution.value(one.p_out), solution.value(one.s_in))
        except CalcpackError as error:
            yield text, error.faults[0].what
            continue
        ideal = abs(ideal - solution.value(one.h_in))
        work = formula_value(solution, one.work, dead_state(solution).T)
        again = (ideal / work if one.drives else work / ideal) if work and ideal else float("inf")
        yield Found(text, solution.value(one.eta), again, BALANCE, 1.0,
                    "isentropic work looked up anew over work (or the reverse); shares the property library and "
                    "the ends",
                    _symbol_words(solution, one.eta))


def _entropies(solution: Solution, new: Afresh) -> Findings:
    """The entropy change of each stream from its enthalpies alone."""
    size = unit("kJ/(kg·K)").dimension
    for stream in solution.plan.facts.streams:
        ends = [new.points.get(name or "") for name in (stream.h_in, stream.h_out)]
        if not all(end and end.s for end in ends):
            continue
        p, T_in, T_out = (solution.value(name) for name in (ends[0].p, ends[0].T, ends[1].T))
        text = f"{stream.name}: entropy change between its ends"
        try:
            again = entropy_change(new.reader(stream.role, "h", ("p", "T")), p, T_in, T_out)
        except CalcpackError as error:
            yield text, error.faults[0].what
            continue
        first = solution.value(ends[1].s) - solution.value(ends[0].s)
        yield Found(text, first, again, QUADRATURE, abs(first), "integral of dh/T by Simpson's rule over enthalpies "
                    "alone; shares the property library's enthalpy, not its entropy",
                    lambda one, digits: printed(solution, one, size, digits))
        mean = f"T_m_{stream.role}"
        if solution.has(mean):
            rise = new.energy((Flow(stream.m_dot, stream.h_out),)) - new.energy((Flow(stream.m_dot, stream.h_in),))
            yield Found(f"{mean} from enthalpies alone", solution.value(mean),
                        rise / solution.value(stream.m_dot) / again, QUADRATURE, solution.value(mean),
                        "enthalpy change looked up anew over the same integral; shares the library's enthalpy",
                        _symbol_words(solution, mean))


def _conductances(solution: Solution, new: Afresh) -> Findings:
    """Each conductance from the whole profile, without log-mean differences."""
    for view in solution.plan.facts.exchangers:
        symbol = solution.plan.facts.conductances.get(view.series)
        if symbol is None:
            continue
        first, bent = solution.value(symbol), conductance(solution, view, bent=True)
        words = _symbol_words(solution, symbol)
        # An end temperature that is an input differs from the profile's by what the backward equation leaves.
        rough = BACKWARD_T / solution.value(view.series) if any(map(_industrial, new.fluids.values())) else 0.0
        yield Found(f"{symbol}, conductance of the {view.name.lower()}", first, conductance(solution, view),
                    LOG_MEAN + rough, abs(first), "integral of dQ/dT over the zones of the profile; shares the "
                    "profile's temperatures, not the log-mean differences. With the lines bent as in the profile it "
                    f"is {words(bent, 4)}", words)


def _roots(solution: Solution, new: Afresh) -> Findings:
    """Each unknown by bisection of its equation; where it holds another unknown, by the last step of one."""
    for symbol, root in solution.program.roots.items():
        nested, scale = holds_another(solution, symbol), max(abs(root.low), abs(root.high))
        text = f"{symbol}, where its equation changes sign" if nested else f"{symbol} by bisection of its equation"
        way = "sign of the equation on either side" if nested else "halving the stated bracket"
        try:
            again = crossed(solution, symbol, root, ROOT * scale) if nested else bisected(solution, symbol, root)
        except CalcpackError as error:
            yield text, error.faults[0].what
            continue
        yield Found(text, root.value, again, ROOT, scale,
                    f"{way}; shares the formulas and the property library, not the solver",
                    _symbol_words(solution, symbol))
