"""Turn the name of a reference state into constant offsets of h and s, and into words.

The library's own switch is never used: it is global to the process and leaves
states that exist already at the old zero.
"""
from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from calcpack.errors import Fault, SpecError
from calcpack.fluids import wording

_KELVIN_0C, _KELVIN_MINUS_40C, _ATMOSPHERE = 273.15, 233.15, 101325.0
_WORDS = {
    "IIR": "IIR: h = 200 kJ/kg, s = 1 kJ/(kg·K) for saturated liquid at 0 °C",
    "ASHRAE": "ASHRAE: h = 0, s = 0 for saturated liquid at -40 °C",
    "NBP": "NBP: h = 0, s = 0 for saturated liquid at the normal boiling point (101.325 kPa)",
    "": "the equation's own zero of h and s, as in the property library",
}
_TEMPERATURES = {"IIR": _KELVIN_0C, "ASHRAE": _KELVIN_MINUS_40C}
_VALUES = {"IIR": (200e3, 1e3), "ASHRAE": (0.0, 0.0), "NBP": (0.0, 0.0)}


@dataclass(frozen=True, slots=True)
class Zero:
    """What to add to the library's h (and u) [J/kg] and s [J/(kg K)], and why."""

    h: float
    s: float
    words: str


@dataclass(frozen=True, slots=True)
class SaturatedLiquid:
    """How to ask a fluid for (h, s) of its saturated liquid, in the library's zero."""

    designation: str
    T_lowest: float
    T_crit: float
    p_lowest: float
    p_crit: float
    at_temperature: Callable[[float], tuple[float, float]]
    at_pressure: Callable[[float], tuple[float, float]]


def zero(reference: str, liquid: SaturatedLiquid) -> Zero:
    """The offsets of ``reference``; SpecError where the fluid has no such liquid."""
    if not reference:
        return Zero(0.0, 0.0, _WORDS[""])
    if reference == "NBP":
        if not liquid.p_lowest <= _ATMOSPHERE < liquid.p_crit:
            raise _impossible(reference, liquid, "it has no liquid at 101.325 kPa")
        h, s = liquid.at_pressure(_ATMOSPHERE)
    else:
        T = _TEMPERATURES[reference]
        if not liquid.T_lowest <= T < liquid.T_crit:
            raise _impossible(reference, liquid, f"it has no saturated liquid at {wording.temperature(T)}")
        h, s = liquid.at_temperature(T)
    h_wanted, s_wanted = _VALUES[reference]
    return Zero(h_wanted - h, s_wanted - s, _WORDS[reference])


def _impossible(reference: str, liquid: SaturatedLiquid, why: str) -> SpecError:
    return SpecError(Fault(
        f"reference state {reference} is impossible for {liquid.designation}: {why}",
        found=reference,
        expected=(f"a reference inside its saturation line, {wording.temperature(liquid.T_lowest)} to "
                  f"{wording.temperature(liquid.T_crit)}"),
        hint="leave the reference out for the equation's own zero"))
