"""Control volumes and a dead state to flow exergies, and to what each piece of equipment destroys of them.

Flow exergy without kinetic, potential and chemical parts:
e = (h - h_0) - T_0 (s - s_0). What a volume destroys is what enters it less
what leaves it; by Gouy and Stodola it is T_0 times the entropy generated.
"""
from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from calcpack.checks.closures import energy_dimension
from calcpack.checks.entries import entry, printed, temperature
from calcpack.errors import CalcpackError
from calcpack.plan.facts import Flow, Volume
from calcpack.solving.solution import Solution
from calcpack.units import print_unit, read_quantity, unit
from calcpack.units.digits import decimals_for, number_text

if TYPE_CHECKING:
    from calcpack.record import Record

USUAL_T = "15 degC"
"""The dead state's temperature where neither a symbol ``T_0`` nor the spec states one."""

GROUP = "Exergy"
BY_ENTROPY = "the dead state's temperature times the entropy generated"
SHARE = 1e-6
"""How far a destruction may be from T_0 times the entropy generated, of the destruction.

Also how far below zero it may be, of all the exergy that enters: look-ups from
other pairs of knowns leave that much in a pipe without a loss.
"""

ROUNDING = 1e-9
"""What rounding may leave, of all the exergy that enters a volume."""

UNSTATED = "heat crosses its boundary at a temperature that is not stated"
NO_ENTROPY = "a flow's entropy is not on this sheet"


@dataclass(frozen=True, slots=True)
class DeadState:
    """The surroundings: temperature [K], absolute pressure [Pa], and where the temperature is from."""

    T: float
    p: float
    source: str


@dataclass(frozen=True, slots=True)
class Destroyed:
    """What a volume destroys [W]: ``balance`` is exergy in less exergy out, ``from_entropy`` T_0 times the
    entropy generated, ``entering`` all that enters; None with a ``reason`` where it cannot be told.
    """

    volume: Volume
    balance: float | None = None
    from_entropy: float | None = None
    entering: float = 0.0
    reason: str = ""


def dead_state(solution: Solution) -> DeadState:
    """The dead state of a sheet: the symbol T_0, else the spec's ``sheet.T_dead``, else 15 °C."""
    if solution.has("T_0") and solution.level("T_0"):
        return DeadState(solution.value("T_0"), solution.p_atm, "T_0 of this sheet")
    written = solution.spec.sheet.T_dead
    source = "as stated for the sheet" if written else "default"
    return DeadState(read_quantity(written or USUAL_T, "temperature").value, solution.p_atm, source)


def destroyed(solution: Solution, dead: DeadState) -> tuple[Destroyed, ...]:
    """The exergy destruction of each piece of equipment, in the order of the plan."""
    ladder = solution.plan.facts.ladder
    room = frozenset(ladder.room if ladder else ())
    zeros = _zeros(solution, dead)
    return tuple(_destroyed(solution, volume, dead, room, zeros)
                 for volume in solution.plan.facts.volumes if not volume.cycle)


def _destroyed(solution: Solution, volume: Volume, dead: DeadState, room: frozenset[str],
               zeros: dict[str, tuple[float, float]]) -> Destroyed:
    if any(flow.s is None for flow in (*volume.flows_in, *volume.flows_out)):
        return Destroyed(volume, reason=NO_ENTROPY)
    heats = [(solution.value(name), T, name, sign) for pairs, sign in ((volume.heat_in, 1.0), (volume.heat_out, -1.0))
             for name, T in pairs]
    if any(T is None and heat and not _to_room(name, room) for heat, T, name, _ in heats):
        return Destroyed(volume, reason=UNSTATED)
    levels = [(sign * heat, solution.value(T) if T else dead.T) for heat, T, _, sign in heats]
    entering, leaving = (_flow_exergy(solution, flows, dead, zeros) for flows in (volume.flows_in, volume.flows_out))
    works = [solution.value(name) for name in volume.work_in], [solution.value(name) for name in volume.work_out]
    balance = sum(entering) - sum(leaving) + sum(works[0]) - sum(works[1]) \
        + sum(heat * (1.0 - dead.T / T) for heat, T in levels)
    generated = _entropy(solution, volume.flows_out) - _entropy(solution, volume.flows_in) \
        - sum(heat / T for heat, T in levels)
    size = sum(map(abs, (*entering, *leaving, *works[0], *works[1])))
    return Destroyed(volume, balance, dead.T * generated, size)


def _to_room(name: str, room: frozenset[str]) -> bool:
    """Whether a heat, or a part of it such as that of one stage, goes to the surroundings."""
    return any(name == one or name.startswith(f"{one}_") for one in room)


def _entropy(solution: Solution, flows: Iterable[Flow]) -> float:
    return sum(solution.value(flow.m_dot) * solution.value(flow.s) for flow in flows if flow.s is not None)


def _flow_exergy(solution: Solution, flows: Iterable[Flow], dead: DeadState,
                 zeros: dict[str, tuple[float, float]]) -> list[float]:
    return [solution.value(flow.m_dot) * specific(solution, flow, dead, zeros) for flow in flows]


def specific(solution: Solution, flow: Flow, dead: DeadState, zeros: dict[str, tuple[float, float]]) -> float:
    """The flow exergy [J/kg]; where the fluid has no state at the dead state, less a constant of the fluid."""
    h_0, s_0 = zeros.get(flow.h, (0.0, 0.0))
    return (solution.value(flow.h) - h_0) - dead.T * (solution.value(flow.s) - s_0)


def roles(solution: Solution) -> dict[str, str]:
    """The fluid role of each enthalpy symbol that a state or a stream names."""
    found = {point.h: point.fluid for point in solution.plan.facts.states if point.h}
    for stream in solution.plan.facts.streams:
        found |= {name: stream.role for name in (stream.h_in, stream.h_out) if name}
    return found


def _zeros(solution: Solution, dead: DeadState) -> dict[str, tuple[float, float]]:
    """Enthalpy and entropy at the dead state by enthalpy symbol, left out for a fluid that has no state there.

    They count only if every flow of a fluid has its role named: in a balance
    they cancel, which a fluid known on one side alone would spoil.
    """
    known = roles(solution)
    flows = [flow for volume in solution.plan.facts.volumes if not volume.cycle
             for flow in (*volume.flows_in, *volume.flows_out)]
    if any(flow.h not in known for flow in flows):
        return {}
    at_rest = {role: at_dead_state(solution, role, dead) for role in set(known.values())}
    return {name: found for name, role in known.items() if (found := at_rest[role]) is not None}


def at_dead_state(solution: Solution, role: str, dead: DeadState) -> tuple[float, float] | None:
    """Enthalpy and entropy of a fluid at the dead state; None where its equation does not reach it."""
    fluid = solution.plan.fluids.get(role)
    if fluid is None:
        return None
    try:
        return fluid.reader("h", ("p", "T"))(dead.p, dead.T), fluid.reader("s", ("p", "T"))(dead.p, dead.T)
    except CalcpackError:
        return None


def gouy_stodola(solution: Solution, record: Record) -> tuple[dict[str, Any], ...]:
    """Each piece of equipment: what its balance leaves is T_0 times the entropy generated, and not below zero."""
    dead = dead_state(solution)
    entries = []
    for index, one in enumerate(destroyed(solution, dead), start=1):
        name = one.volume.name
        text = f"{name[:1].upper()}{name[1:]}: exergy destroyed, less {BY_ENTROPY}"
        if one.balance is None or one.from_entropy is None:
            entries.append(entry(f"V-X{index}", GROUP, text, "", "", "not evaluated", one.reason))
            continue
        dimension = energy_dimension(solution, one.volume)
        apart, allowed = one.balance - one.from_entropy, allowed_gap(one)
        gives = one.balance < -SHARE * one.entering
        good = abs(apart) <= allowed and not gives
        below = "" if not gives else ", below zero: is the dead state warmer than what gives heat to it?"
        entries.append(entry(f"V-X{index}", GROUP, text, printed(solution, apart, dimension),
                             printed(solution, allowed, dimension), "ok" if good else "fails",
                             f"destroyed {printed(solution, one.balance, dimension, 5)}{below}; Gouy and Stodola, "
                             f"dead state {temperature(solution, dead.T)}, {dead.source}"))
    return tuple(entries)


def allowed_gap(one: Destroyed) -> float:
    """How far the two ways to a destruction may be apart [W]."""
    return SHARE * abs(one.balance or 0.0) + ROUNDING * one.entering


def exergy_view(solution: Solution) -> dict[str, Any] | None:
    """The record's exergy: dead state, flow exergies, equipment; None for a sheet without control volumes."""
    if not any(not volume.cycle for volume in solution.plan.facts.volumes):
        return None
    dead = dead_state(solution)
    return {"dead_state": _dead_view(solution, dead), "streams": _stream_views(solution, dead),
            "equipment": [_equipment_view(solution, one) for one in destroyed(solution, dead)]}


def _dead_view(solution: Solution, dead: DeadState) -> dict[str, Any]:
    shown_in = unit("bar" if solution.system == "si" else "psi")
    return {"T": {"value": dead.T, "shown": temperature(solution, dead.T)}, "source": dead.source,
            "p": {"value": dead.p, "shown": number_text(shown_in.from_si(dead.p), 5), "unit": shown_in.symbol}}


def _equipment_view(solution: Solution, one: Destroyed) -> dict[str, Any]:
    dimension = energy_dimension(solution, one.volume)
    return {"name": one.volume.name, "reason": one.reason, "destruction": _power(solution, one.balance, dimension),
            "T0_S_gen": _power(solution, one.from_entropy, dimension)}


def _power(solution: Solution, value: float | None, dimension: Any) -> dict[str, Any] | None:
    if value is None:
        return None
    number, _, symbol = printed(solution, value, dimension, 5).partition(" ")
    return {"value": float(value), "shown": number, "unit": symbol}


def _stream_views(solution: Solution, dead: DeadState) -> list[dict[str, Any]]:
    """Each flow of known fluid at each of its ends: specific flow exergy, and with its mass flow the whole."""
    known = roles(solution)
    labels = {point.h: f"state {point.number}, {point.label}" for point in solution.plan.facts.states if point.h}
    for stream in solution.plan.facts.streams:
        labels |= {name: f"{stream.name}, {end}" for name, end in ((stream.h_in, "inlet"), (stream.h_out, "outlet"))
                   if name}
    flows: dict[str, Flow] = {}
    for volume in solution.plan.facts.volumes:
        for flow in (*volume.flows_in, *volume.flows_out):
            if flow.s is not None and flow.h in known:
                flows.setdefault(flow.h, flow)
    return [view for name in known if name in flows
            for view in [_stream_view(solution, dead, flows[name], labels[name], known[name])] if view]


def _stream_view(solution: Solution, dead: DeadState, flow: Flow, label: str, role: str) -> dict[str, Any] | None:
    rest = at_dead_state(solution, role, dead)
    if rest is None:
        return None
    e = specific(solution, flow, dead, {flow.h: rest})
    per_mass, power = (print_unit(unit(name).dimension, solution.system) for name in ("kJ/kg", "kW"))
    values = {"e": (e, per_mass), "E_dot": (solution.value(flow.m_dot) * e, power)}
    return {"label": label, "role": role, "h": flow.h, "m_dot": flow.m_dot, **{
        name: {"value": float(value), "unit": shown_in.symbol, "shown": number_text(
            shown_in.from_si(value), decimals_for(shown_in.from_si(value), 5))}
        for name, (value, shown_in) in values.items()}}
