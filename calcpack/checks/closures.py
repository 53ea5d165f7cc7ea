"""Control volumes to their balances of mass, energy and entropy, each with its residual.

An open balance or destroyed entropy is an error that names the equipment: the
numbers behind it cannot be right.
"""
from __future__ import annotations

from collections import Counter
from collections.abc import Iterable
from typing import TYPE_CHECKING, Any

from calcpack.checks.entries import TEMPERATURE, entry, printed
from calcpack.errors import BrokenLawError, Fault
from calcpack.plan.facts import Flow, Volume
from calcpack.solving.solution import Solution
from calcpack.units import Dimension, unit
from calcpack.units.digits import number_text

if TYPE_CHECKING:
    from calcpack.record import Record

SHARE = 1e-6
"""The residual that is allowed, as a share of the volume's scale."""

MASS_SHARE = 1e-9
TYPICAL_T = 300.0
"""Turns the allowed energy residual into an allowed entropy residual [K]."""

Heat = tuple[str, str | None]


def mass_balances(solution: Solution, record: Record) -> tuple[dict[str, Any], ...]:
    """One entry: the volume whose mass flows differ most.

    Raises
    ------
    BrokenLawError
        Where more mass enters a volume than leaves it, or the reverse.
    """
    found, faults = [], []
    for volume in _with_whole(solution):
        flows = [*volume.flows_in, *volume.flows_out]
        if not flows:
            continue
        entering, leaving = (sum(solution.value(flow.m_dot) for flow in side)
                             for side in (volume.flows_in, volume.flows_out))
        largest = max(abs(solution.value(flow.m_dot)) for flow in flows)
        dimension = solution.unit(flows[0].m_dot).dimension
        found.append((abs(entering - leaving), MASS_SHARE * largest, volume, dimension))
        if abs(entering - leaving) > MASS_SHARE * largest:
            faults.append(Fault(f"the mass balance of the {volume.name} is open", expected="as much out as in",
                                found=f"{printed(solution, entering, dimension, 6)} in, "
                                      f"{printed(solution, leaving, dimension, 6)} out"))
    _raise(faults)
    if not found:
        return ()
    residual, allowed, volume, dimension = max(found, key=lambda one: one[0] / one[1] if one[1] else 0.0)
    return (entry("V-M", "Mass balance", f"Mass in equals mass out of each of {len(found)} control volumes; worst: "
                  f"{volume.name}", printed(solution, residual, dimension), printed(solution, allowed, dimension),
                  detail=f"allowed: {number_text(MASS_SHARE, 9)} of the largest flow"),)


def energy_balances(solution: Solution, record: Record) -> tuple[dict[str, Any], ...]:
    """The energy residual of each control volume and of all together.

    Raises
    ------
    BrokenLawError
        Where a balance is open by more than a millionth of the volume's scale.
    """
    entries, faults = [], []
    for index, volume in enumerate(_with_whole(solution), start=1):
        entering, leaving = _energy(solution, volume)
        dimension = energy_dimension(solution, volume)
        allowed = SHARE * _scale(solution, volume)
        residual = entering - leaving
        shown = printed(solution, residual, dimension)
        limit = printed(solution, allowed, dimension)
        if not abs(residual) <= allowed:
            faults.append(Fault(f"the energy balance of the {volume.name} is open by {shown}", found=(
                f"{printed(solution, entering, dimension, 6)} in, {printed(solution, leaving, dimension, 6)} out"),
                expected=f"a residual of at most {limit}"))
        entries.append(entry(f"V-E{index}", "Energy balance", _title(volume), shown, limit,
                             detail=_scale_words(volume)))
    _raise(faults)
    return tuple(entries)


def entropy_balances(solution: Solution, record: Record) -> tuple[dict[str, Any], ...]:
    """The entropy that each control volume generates, in total the whole machine's.

    Raises
    ------
    BrokenLawError
        Where a volume destroys entropy, whatever the temperatures that are not stated.
    """
    entries, faults = [], []
    volumes = _with_whole(solution)
    whole = any(not one.cycle for one in volumes)
    for index, volume in enumerate(volumes, start=1):
        # A closed cycle without boundary temperatures says nothing beyond its equipment taken together.
        if volume.cycle and whole and any(T is None for _, T in (*volume.heat_in, *volume.heat_out)):
            continue
        result = _generated(solution, volume)
        dimension = energy_dimension(solution, volume) / TEMPERATURE
        allowed = SHARE * _scale(solution, volume) / TYPICAL_T
        limit = f"at least {printed(solution, -allowed, dimension)}"
        if isinstance(result, str):
            entries.append(entry(f"V-S{index}", "Entropy generated", _title(volume), "", limit, "not evaluated",
                                 f"entropy not evaluated: {result}"))
            continue
        value, note = result
        shown = printed(solution, value, dimension, 4)
        if not value >= -allowed:
            faults.append(Fault(f"the {volume.name} destroys entropy: {shown}", found=shown, expected=limit,
                                hint="no machine can do this: look at its efficiency and its end states"))
        entries.append(entry(f"V-S{index}", "Entropy generated", _title(volume), shown, limit, detail=note))
    _raise(faults)
    return tuple(entries)


def whole_of(volumes: Iterable[Volume], values: Solution) -> Volume | None:
    """All equipment as one control volume: what leaves one part and enters another cancels."""
    parts = [volume for volume in volumes if not volume.cycle]
    if len(parts) < 2:
        return None
    flows_in, flows_out = _crossing((one.flows_in for one in parts), (one.flows_out for one in parts))
    work_in, work_out = _crossing((one.work_in for one in parts), (one.work_out for one in parts))
    heat_in, heat_out = _crossing((one.heat_in for one in parts), (one.heat_out for one in parts))
    scale = max((one.scale for one in parts if one.scale), key=lambda name: abs(values.value(name)), default="")
    return Volume("equipment taken together", flows_in, flows_out, work_in, work_out, heat_in, heat_out, scale)


def _with_whole(solution: Solution) -> list[Volume]:
    volumes = list(solution.plan.facts.volumes)
    whole = whole_of(volumes, solution)
    return [*volumes, whole] if whole else volumes


def _crossing(entering: Iterable[Iterable[Any]], leaving: Iterable[Iterable[Any]]) -> tuple[tuple, tuple]:
    """What crosses the outer boundary: the entering without its like among the leaving, and the reverse."""
    ins = Counter(one for part in entering for one in part)
    outs = Counter(one for part in leaving for one in part)
    return tuple((ins - outs).elements()), tuple((outs - ins).elements())


def _energy(solution: Solution, volume: Volume) -> tuple[float, float]:
    value = solution.value
    sides = []
    for flows, work, heat in ((volume.flows_in, volume.work_in, volume.heat_in),
                              (volume.flows_out, volume.work_out, volume.heat_out)):
        sides.append(sum(value(flow.m_dot) * value(flow.h) for flow in flows) + sum(map(value, work))
                     + sum(value(name) for name, _ in heat))
    return sides[0], sides[1]


def _generated(solution: Solution, volume: Volume) -> tuple[float, str] | str:
    """The entropy generated and a note, or the reason why it cannot be told.

    Heat that leaves at an unstated temperature can only add to what is
    computed here, heat that enters at one can only take from it.
    """
    if any(flow.s is None for flow in (*volume.flows_in, *volume.flows_out)):
        return "a flow's entropy is not on this sheet"
    total = _flow_entropy(solution, volume.flows_out) - _flow_entropy(solution, volume.flows_in)
    leaves = enters = False
    for pairs, sign in ((volume.heat_out, 1.0), (volume.heat_in, -1.0)):
        for name, T in pairs:
            heat = sign * solution.value(name)
            if T is not None:
                total += heat / solution.value(T)
            leaves |= T is None and heat > 0.0
            enters |= T is None and heat < 0.0
    allowed = SHARE * _scale(solution, volume) / TYPICAL_T
    if enters and total >= -allowed:
        return "heat enters at a temperature that is not stated"
    if leaves and total < -allowed:
        return "heat leaves at a temperature that is not stated"
    return total, "a lower limit: the entropy of the heat that is lost is not counted" if leaves else ""


def _flow_entropy(solution: Solution, flows: Iterable[Flow]) -> float:
    return sum(solution.value(flow.m_dot) * solution.value(flow.s) for flow in flows if flow.s is not None)


def _scale(solution: Solution, volume: Volume) -> float:
    """The size of the energy that the volume handles [W, or the sheet's energy unit]."""
    if volume.scale:
        return abs(solution.value(volume.scale))
    names = [*volume.work_in, *volume.work_out, *(name for name, _ in (*volume.heat_in, *volume.heat_out))]
    if names:
        return max(abs(solution.value(name)) for name in names)
    return max((abs(solution.value(flow.m_dot) * solution.value(flow.h))
                for flow in (*volume.flows_in, *volume.flows_out)), default=0.0)


def energy_dimension(solution: Solution, volume: Volume) -> Dimension:
    """Power for a flow process; energy, or energy a kilogram, for a closed cycle's sheet."""
    names = [volume.scale] if volume.scale else []
    names += [*volume.work_in, *volume.work_out, *(name for name, _ in (*volume.heat_in, *volume.heat_out))]
    return solution.unit(names[0]).dimension if names else unit("W").dimension


def _title(volume: Volume) -> str:
    return volume.name[:1].upper() + volume.name[1:]


def _scale_words(volume: Volume) -> str:
    return f"allowed: {number_text(SHARE, 6)} of {volume.scale or 'the largest term'}"


def _raise(faults: list[Fault]) -> None:
    if faults:
        raise BrokenLawError(faults)
