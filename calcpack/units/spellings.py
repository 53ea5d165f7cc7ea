"""The units that can be written: display symbol, pint's text, other spellings.

A closed list on purpose: pint's own parser reads ``3 bar(g)`` as bar times
gram and ``4.18 kJ/kg K`` as kJ·K/kg without a word. The conversion factors and
dimensions are pint's; only the spellings are ours.
"""
from __future__ import annotations

# display symbol: (pint text, other spellings)
UNITS: dict[str, tuple[str, tuple[str, ...]]] = {
    "%": ("percent", ()),
    "K": ("kelvin", ("delta_degC", "Δ°C", "dK")),
    "°R": ("delta_degree_Fahrenheit", ("degR", "delta_degF", "Δ°F", "R")),
    "°C": ("degree_Celsius", ("degC",)),
    "°F": ("degree_Fahrenheit", ("degF",)),
    "Pa": ("pascal", ()),
    "hPa": ("hectopascal", ()),
    "kPa": ("kilopascal", ()),
    "MPa": ("megapascal", ()),
    "mbar": ("millibar", ()),
    "bar": ("bar", ("bar(a)", "bara")),
    "psi": ("psi", ("psia", "psi(a)")),
    "atm": ("atmosphere", ()),
    "mmHg": ("millimeter_Hg", ()),
    "inHg": ("inch_Hg", ()),
    "J": ("joule", ()),
    "kJ": ("kilojoule", ()),
    "MJ": ("megajoule", ()),
    "GJ": ("gigajoule", ()),
    "kWh": ("kilowatt_hour", ()),
    "MWh": ("megawatt_hour", ()),
    "GWh": ("gigawatt_hour", ()),
    "Btu": ("british_thermal_unit", ("BTU",)),
    "W": ("watt", ()),
    "kW": ("kilowatt", ()),
    "MW": ("megawatt", ()),
    "hp": ("horsepower", ()),
    "Btu/h": ("british_thermal_unit/hour", ("BTU/h", "Btu/hr")),
    "kBtu/h": ("1000*british_thermal_unit/hour", ()),
    "TR": ("12000*british_thermal_unit/hour", ("ton of refrigeration",)),
    "J/kg": ("joule/kilogram", ()),
    "kJ/kg": ("kilojoule/kilogram", ()),
    "MJ/kg": ("megajoule/kilogram", ()),
    "Btu/lb": ("british_thermal_unit/pound", ("BTU/lb",)),
    "kWh/kg": ("kilowatt_hour/kilogram", ()),
    "J/mol": ("joule/mole", ()),
    "kJ/mol": ("kilojoule/mole", ("kJ/gmol",)),
    "kJ/kmol": ("kilojoule/kilomole", ()),
    "J/K": ("joule/kelvin", ()),
    "kJ/K": ("kilojoule/kelvin", ()),
    "Btu/°R": ("british_thermal_unit/delta_degree_Fahrenheit", ("Btu/R", "Btu/degR")),
    "J/(kg·K)": ("joule/kilogram/kelvin", ()),
    "kJ/(kg·K)": ("kilojoule/kilogram/kelvin", ()),
    "Btu/(lb·°R)": ("british_thermal_unit/pound/delta_degree_Fahrenheit",
                    ("Btu/(lb·R)", "Btu/(lb·°F)", "Btu/(lb·degF)", "Btu/(lb·degR)")),
    "J/(mol·K)": ("joule/mole/kelvin", ()),
    "kJ/(kmol·K)": ("kilojoule/kilomole/kelvin", ()),
    "W/K": ("watt/kelvin", ()),
    "kW/K": ("kilowatt/kelvin", ()),
    "MW/K": ("megawatt/kelvin", ()),
    "Btu/(h·°R)": ("british_thermal_unit/hour/delta_degree_Fahrenheit",
                   ("Btu/(h·R)", "Btu/(h·°F)", "Btu/(h·degF)", "Btu/(hr·°F)")),
    "W/(m²·K)": ("watt/meter**2/kelvin", ()),
    "kW/(m²·K)": ("kilowatt/meter**2/kelvin", ()),
    "Btu/(h·ft²·°R)": ("british_thermal_unit/hour/foot**2/delta_degree_Fahrenheit",
                       ("Btu/(h·ft²·°F)", "Btu/(h·ft²·degF)", "Btu/(h·ft²·R)")),
    "W/(m·K)": ("watt/meter/kelvin", ()),
    "W/m²": ("watt/meter**2", ()),
    "kW/m²": ("kilowatt/meter**2", ()),
    "kg": ("kilogram", ()),
    "g": ("gram", ()),
    "t": ("metric_ton", ()),
    "lb": ("pound", ("lbm",)),
    "kg/s": ("kilogram/second", ()),
    "g/s": ("gram/second", ()),
    "kg/min": ("kilogram/minute", ()),
    "kg/h": ("kilogram/hour", ("kg/hr",)),
    "t/h": ("metric_ton/hour", ()),
    "lb/h": ("pound/hour", ("lb/hr", "lbm/h")),
    "lb/s": ("pound/second", ()),
    "lb/min": ("pound/minute", ()),
    "m³/s": ("meter**3/second", ()),
    "m³/min": ("meter**3/minute", ()),
    "m³/h": ("meter**3/hour", ("m³/hr",)),
    "L/s": ("liter/second", ("l/s",)),
    "L/min": ("liter/minute", ("l/min",)),
    "L/h": ("liter/hour", ("l/h",)),
    "ft³/min": ("foot**3/minute", ("cfm",)),
    "ft³/h": ("foot**3/hour", ()),
    "ft³/s": ("foot**3/second", ()),
    "gal/min": ("gallon/minute", ("gpm",)),
    "kg/m³": ("kilogram/meter**3", ()),
    "lb/ft³": ("pound/foot**3", ()),
    "m³/kg": ("meter**3/kilogram", ()),
    "ft³/lb": ("foot**3/pound", ()),
    "mol": ("mole", ()),
    "kmol": ("kilomole", ()),
    "mol/s": ("mole/second", ()),
    "g/mol": ("gram/mole", ("kg/kmol",)),
    "kg/mol": ("kilogram/mole", ()),
    "kg/(kmol)": ("kilogram/kilomole", ()),
    "m": ("meter", ()),
    "mm": ("millimeter", ()),
    "cm": ("centimeter", ()),
    "km": ("kilometer", ()),
    "in": ("inch", ()),
    "ft": ("foot", ()),
    "m²": ("meter**2", ()),
    "mm²": ("millimeter**2", ()),
    "cm²": ("centimeter**2", ()),
    "ft²": ("foot**2", ()),
    "in²": ("inch**2", ()),
    "bar/L": ("bar/liter", ()),
    "m³": ("meter**3", ()),
    "L": ("liter", ("l", "dm³")),
    "cm³": ("centimeter**3", ()),
    "ft³": ("foot**3", ()),
    "in³": ("inch**3", ()),
    "m/s": ("meter/second", ()),
    "ft/s": ("foot/second", ()),
    "m²/s²": ("meter**2/second**2", ()),
    "m/s²": ("meter/second**2", ()),
    "s": ("second", ()),
    "min": ("minute", ()),
    "h": ("hour", ("hr",)),
    "d": ("day", ()),
    "a": ("year", ("yr",)),
    "1/s": ("1/second", ()),
    "1/min": ("1/minute", ()),
    "1/h": ("1/hour", ()),
    "1/K": ("1/kelvin", ()),
    "Pa·s": ("pascal*second", ()),
    "mPa·s": ("millipascal*second", ()),
    "µPa·s": ("micropascal*second", ()),
    "N": ("newton", ()),
    "kN": ("kilonewton", ()),
    "N·m": ("newton*meter", ()),
    "kg/kWh": ("kilogram/kilowatt_hour", ()),
    "kJ/kWh": ("kilojoule/kilowatt_hour", ()),
    "kWh/a": ("kilowatt_hour/year", ()),
    "MWh/a": ("megawatt_hour/year", ()),
    "h/a": ("hour/year", ()),
}

LEVELS = frozenset({"°C", "°F"})
"""Units that only a temperature level can have; a difference is written in K or °R."""

GAUGE = {f"{name}({mark})": name for name in ("Pa", "kPa", "MPa", "mbar", "bar", "psi") for mark in ("g", "gauge")} | {
    "barg": "bar", "bar g": "bar", "psig": "psi"}
"""Gauge spellings, each with the unit of its scale; the sheet's p_atm is added."""


def folded(text: str) -> str:
    """One form for the ways a unit is spelled: ``kJ/kg/K``, ``kJ/(kg K)`` and ``kJ/(kg.K)`` are one."""
    text = text.strip().replace("μ", "µ")
    for mark in ("·", "*", "⋅", "×"):
        text = text.replace(mark, ".")
    for plain, raised in (("m^2", "m²"), ("m^3", "m³"), ("ft^2", "ft²"), ("ft^3", "ft³"), ("in^2", "in²"),
                          ("in^3", "in³"), ("s^2", "s²"), ("m2", "m²"), ("m3", "m³"), ("ft2", "ft²"), ("ft3", "ft³")):
        text = text.replace(plain, raised)
    text = ".".join(text.split()) if "(" in text else text
    head, *below = text.split("/")
    if len(below) > 1 and not any("(" in part for part in below):
        text = f"{head}/({'.'.join(below)})"
    return text


def _spelled() -> dict[str, str]:
    known: dict[str, str] = {}
    for symbol, (_, others) in UNITS.items():
        for spelling in (symbol, *others):
            known[spelling] = symbol
            known[folded(spelling)] = symbol
            known[folded(spelling.replace("°R", "R").replace("°", "deg"))] = symbol
    return known


SPELLINGS: dict[str, str] = _spelled()
"""Each accepted spelling, folded, with its display symbol."""
