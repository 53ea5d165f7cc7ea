"""Turn SI floats into the words of a fault: kelvin with degrees Celsius, bar, kJ."""
from __future__ import annotations

from calcpack.errors import Fault, FluidRangeError

QUANTITIES = {
    "T": "temperature", "p": "pressure", "h": "specific enthalpy", "s": "specific entropy",
    "rho": "density", "v": "specific volume", "u": "specific internal energy",
    "x": "vapour mass fraction", "x_eq": "equilibrium vapour fraction",
    "cp": "specific heat capacity at constant pressure",
    "cv": "specific heat capacity at constant volume",
    "gamma": "ratio of the heat capacities", "mu": "dynamic viscosity",
    "lambda": "thermal conductivity", "a": "speed of sound",
}
CONSTANTS = {
    "M": "molar mass", "R": "specific gas constant",
    "T_crit": "critical temperature", "p_crit": "critical pressure",
    "T_min": "lowest temperature of the model", "T_max": "highest temperature of the model",
    "p_max": "highest pressure of the model", "T_triple": "triple-point temperature",
    "T_freeze": "freezing temperature",
}


def temperature(kelvin: float) -> str:
    """390.0 → '390.00 K (116.85 °C)'."""
    return f"{kelvin:.2f} K ({kelvin - 273.15:.2f} °C)"


def pressure(pascal: float) -> str:
    """1.2e6 → '12 bar'; six significant digits."""
    return f"{pascal / 1e5:.6g} bar"


def quantity(name: str, value: float) -> str:
    """A value of the named quantity with its customary unit, as 'h = 412.3 kJ/kg'."""
    if name == "T":
        return f"T = {temperature(value)}"
    if name == "p":
        return f"p = {pressure(value)}"
    if name in ("h", "u"):
        return f"{name} = {value / 1e3:.6g} kJ/kg"
    if name == "s":
        return f"s = {value / 1e3:.6g} kJ/(kg·K)"
    if name == "rho":
        return f"rho = {value:.6g} kg/m³"
    return f"{name} = {value:.6g}"


def state(names: tuple[str, ...], *values: float) -> str:
    """The inputs of a state, as 'p = 12 bar, T = 350.00 K (76.85 °C)'."""
    return ", ".join(quantity(name, value) for name, value in zip(names, values, strict=True))


def out_of_range(what: str, found: str, expected: str | None = None, hint: str | None = None,
                 detail: str | None = None) -> FluidRangeError:
    """The error for a state outside a fluid's equation; all parts in words."""
    return FluidRangeError(Fault(what, found=found, expected=expected, hint=hint, detail=detail))
