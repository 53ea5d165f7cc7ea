"""Properties that a fluid can be asked for, each with its kind and its title."""
from __future__ import annotations

from calcpack.formula.dimension import PURE, TEMPERATURE, Measure
from calcpack.units import KINDS, unit

PROPERTIES: dict[str, tuple[str, str]] = {
    "T": ("temperature", "temperature"),
    "p": ("pressure", "absolute pressure"),
    "h": ("specific energy", "specific enthalpy"),
    "u": ("specific energy", "specific internal energy"),
    "s": ("specific entropy", "specific entropy"),
    "rho": ("density", "density"),
    "v": ("specific volume", "specific volume"),
    "x": ("number", "vapour fraction by mass"),
    "x_eq": ("number", "enthalpy-based vapour fraction"),
    "cp": ("specific entropy", "specific heat capacity at constant pressure"),
    "cv": ("specific entropy", "specific heat capacity at constant volume"),
    "gamma": ("number", "heat capacity ratio"),
    "M": ("molar mass", "molar mass"),
    "mu": ("dynamic viscosity", "dynamic viscosity"),
    "lambda": ("thermal conductivity", "thermal conductivity"),
    "a": ("velocity", "speed of sound"),
    "T_crit": ("temperature", "critical temperature"),
    "p_crit": ("pressure", "critical pressure"),
    "T_min": ("temperature", "lowest temperature of the equation"),
    "T_max": ("temperature", "highest temperature of the equation"),
    "p_max": ("pressure", "highest pressure of the equation"),
    "T_triple": ("temperature", "triple-point temperature"),
    "T_freeze": ("temperature", "freezing temperature"),
}


def measure_of_kind(kind: str) -> Measure:
    """The measure of a kind of quantity of :data:`calcpack.units.KINDS`."""
    known = KINDS[kind]
    if known.dimension != TEMPERATURE:
        return PURE if not known.dimension else Measure(known.dimension)
    return Measure(TEMPERATURE, 1.0 if known.level else 0.0)


def measure_of_property(name: str) -> Measure | None:
    """The measure of a property, None for a name that is no property."""
    if name not in PROPERTIES:
        return None
    return measure_of_kind(PROPERTIES[name][0])


def measure_of_unit(symbol: str) -> Measure:
    """The measure of what is written in a unit; K and °R leave level or difference open."""
    written = unit(symbol)
    if written.dimension != TEMPERATURE:
        return Measure(written.dimension)
    return Measure(TEMPERATURE, 1.0 if written.level else None)
