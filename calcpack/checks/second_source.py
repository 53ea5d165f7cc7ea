"""Properties that carry the result, beside a second formulation of them.

Water is compared with the industrial formulation IAPWS-IF97, other fluids'
saturation pressures with the Peng–Robinson cubic equation: a coarse check that
would show a wrong fluid, a wrong unit or a broken equation, not the last percent.
"""
from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import replace
from functools import cache
from typing import TYPE_CHECKING, Any

from calcpack.checks.entries import entry, printed
from calcpack.errors import CalcpackError
from calcpack.fluids import FluidDefinition, open_fluid
from calcpack.fluids.library import FLASH_ERRORS, library, new_state, plain_faults
from calcpack.fluids.register import find
from calcpack.solving.solution import Solution
from calcpack.units import unit

if TYPE_CHECKING:
    from calcpack.record import Record

GROUP = "Second source"

# Measured with CoolProp 8.0.0: the two formulations of water differ by 0.06 kJ/kg at most in liquid from 30 to
# 180 °C, by 0.51 kJ/kg at 700 K and 500 bar, and by 0.02 % in saturation pressure from 300 to 450 K. Allowed is a
# share of the difference, and for small differences a floor [J/kg].
WATER_ENTHALPY = 0.003
WATER_FLOOR = 60.0
WATER_SATURATION = 5e-4

# Measured with CoolProp 8.0.0 over the register, from 0.65 of the critical temperature: the cubic equation's
# saturation pressure is within 3 % but for the fluids listed.
CUBIC_SATURATION = 0.03
CUBIC_FROM = 0.65
CUBIC_UNFIT = frozenset({"D4", "D5", "MDM", "MD2M", "methanol", "ethanol", "R-702", "R-704"})

LEVELS = ("evaporating", "condensing")


def second_source(solution: Solution, record: Record) -> tuple[dict[str, Any], ...]:
    """Stream enthalpies of water and the cycle's saturation pressures by a second formulation."""
    return (*_streams(solution), *_saturation(solution))


def _streams(solution: Solution) -> Iterator[dict[str, Any]]:
    """The heat that a stream of water takes or gives a kilogram, by both formulations of water."""
    for stream in solution.plan.facts.streams:
        ends = (stream.T_in, stream.T_out, stream.p, stream.h_in, stream.h_out)
        fluid = solution.plan.fluids[stream.role]
        if not _is_water(fluid) or any(name is None or not solution.has(name) for name in ends):
            continue
        T_in, T_out, p, h_in, h_out = (solution.value(name) for name in ends if name is not None)
        try:
            h = _industrial(solution, stream.role).reader("h", ("p", "T"))
            apart = (h_out - h_in) - (h(p, T_out) - h(p, T_in))
        except CalcpackError as error:
            yield _silent(f"V-2-{stream.role}", f"{stream.name}: water by IAPWS-IF97", error)
            continue
        size, allowed = unit("kJ/kg").dimension, max(WATER_ENTHALPY * abs(h_out - h_in), WATER_FLOOR)
        yield entry(f"V-2-{stream.role}", GROUP, f"{stream.name}: enthalpy difference of the water, IAPWS-95 less "
                    "IAPWS-IF97", printed(solution, apart, size), printed(solution, allowed, size),
                    "ok" if abs(apart) <= allowed else "fails",
                    f"of {printed(solution, h_out - h_in, size, 5)}; shares inputs and flow with the main path")


def _saturation(solution: Solution) -> Iterator[dict[str, Any]]:
    """The dew pressure at the evaporating and condensing temperature."""
    fluid = solution.plan.fluids.get("wf")
    if fluid is None or ("T", "x") not in fluid.pairs:
        return
    for level in LEVELS:
        symbol = solution.plan.facts.roles.get(level)
        if symbol is None or not solution.has(symbol):
            continue
        name, text = f"V-2-{level}", f"Dew pressure of {fluid.designation} at the {level} temperature"
        T = solution.value(symbol)
        reason = None if _is_water(fluid) else _cubic_unfit(fluid, T)
        if reason is not None:
            yield entry(name, GROUP, text, "", "", "not evaluated", reason)
            continue
        try:
            yield _compared(solution, name, text, fluid, T)
        except CalcpackError as error:
            yield _silent(name, text, error)


def _compared(solution: Solution, name: str, text: str, fluid: Any, T: float) -> dict[str, Any]:
    water = _is_water(fluid)
    other: Callable[[float], float] = (lambda T: _industrial(solution, "wf").reader("p", ("T", "x"))(T, 1.0)) \
        if water else (lambda T: _cubic_pressure(_library_name(fluid), T))
    main, second = fluid.reader("p", ("T", "x"))(T, 1.0), other(T)
    allowed = WATER_SATURATION if water else CUBIC_SATURATION
    apart = second / main - 1.0
    source = "IAPWS-IF97" if water else "Peng–Robinson equation"
    size = unit("bar").dimension
    both = f"{printed(solution, second, size, 5)} beside {printed(solution, main, size, 5)}"
    shares = "" if water else "; shares the critical point with the main path"
    return entry(name, GROUP, f"{text}, {source} beside {fluid.model}", f"{100.0 * apart:+.2f} %",
                 f"{100.0 * allowed:g} %", "ok" if abs(apart) <= allowed else "fails", both + shares)


def _silent(name: str, text: str, error: CalcpackError) -> dict[str, Any]:
    return entry(name, GROUP, text, "", "", "not evaluated", error.faults[0].what)


def _is_water(fluid: Any) -> bool:
    return fluid.identity.startswith("Water|Helmholtz|")


def _industrial(solution: Solution, role: str) -> Any:
    """The same water by IAPWS-IF97, with the same reference state."""
    definition: FluidDefinition = solution.spec.case.fluids[role]
    return open_fluid(replace(definition, model="IF97"))


def _library_name(fluid: Any) -> str:
    return fluid.identity.partition("|")[0]


def _cubic_unfit(fluid: Any, T: float) -> str | None:
    """Why the cubic equation cannot serve here, or None."""
    known = find(fluid.designation)
    if "|Helmholtz|" not in fluid.identity or _cubic(_library_name(fluid)) is None:
        return f"there is no second formulation of {fluid.designation} at hand"
    if known is not None and known.designation in CUBIC_UNFIT:
        return "the cubic equation is off by more than 3 % for this fluid"
    if T / fluid.reader("T_crit", ())() < CUBIC_FROM:
        return f"below {CUBIC_FROM} of the critical temperature the cubic equation is too coarse"
    return None


@cache
def _cubic(name: str) -> Any | None:
    """The library's Peng–Robinson state of a fluid, None where it has none."""
    try:
        return new_state("PR", name)
    except FLASH_ERRORS:
        return None


def _cubic_pressure(name: str, T: float) -> float:
    state = _cubic(name)
    with plain_faults("the cubic equation has no saturation here", f"T = {T:.6g} K", None):
        state.update(library().QT_INPUTS, 1.0, T)
    return state.p()
