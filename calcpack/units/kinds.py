"""Kinds of quantity: the unit each is printed in, in `si` and in `us`, and how finely.

Two quantities of one dimension can be two kinds: a temperature level and a
temperature difference, or an energy and a torque. A kind's ``decimals`` is where
the printed digits start from; they grow where a re-check by hand needs more.
"""
from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache

from calcpack.units.unit import Dimension, Unit, unit


@dataclass(frozen=True, slots=True)
class Kind:
    """A kind of quantity; ``si`` and ``us`` are the customary units of print."""

    name: str
    si: str
    us: str
    decimals: int | None = None      # None: by significant digits
    significant: int = 5

    @property
    def dimension(self) -> Dimension:
        return unit(self.si).dimension

    @property
    def level(self) -> bool:
        return self.name == "temperature"


KINDS: dict[str, Kind] = {kind.name: kind for kind in (
    Kind("number", "", ""),
    Kind("temperature", "K", "°R", decimals=2),
    Kind("temperature difference", "K", "°R", decimals=2),
    Kind("pressure", "bar", "psi"),
    Kind("power", "kW", "kBtu/h"),
    Kind("energy", "kJ", "Btu"),
    Kind("specific energy", "kJ/kg", "Btu/lb", decimals=2),
    Kind("specific entropy", "kJ/(kg·K)", "Btu/(lb·°R)", decimals=5),
    Kind("entropy", "kJ/K", "Btu/°R"),
    Kind("entropy flow", "kW/K", "Btu/(h·°R)"),
    Kind("heat transfer coefficient", "W/(m²·K)", "Btu/(h·ft²·°R)"),
    Kind("thermal conductivity", "W/(m·K)", "W/(m·K)"),
    Kind("heat flux", "kW/m²", "kW/m²"),
    Kind("mass", "kg", "lb"),
    Kind("mass flow", "kg/s", "lb/h"),
    Kind("volume flow", "m³/s", "ft³/min"),
    Kind("density", "kg/m³", "lb/ft³"),
    Kind("specific volume", "m³/kg", "ft³/lb"),
    Kind("amount of substance", "mol", "mol"),
    Kind("amount flow", "mol/s", "mol/s"),
    Kind("molar mass", "g/mol", "g/mol"),
    Kind("molar heat capacity", "J/(mol·K)", "J/(mol·K)"),
    Kind("molar energy", "kJ/mol", "kJ/mol"),
    Kind("length", "m", "ft"),
    Kind("area", "m²", "ft²"),
    Kind("volume", "m³", "ft³"),
    Kind("velocity", "m/s", "ft/s"),
    Kind("acceleration", "m/s²", "m/s²"),
    Kind("time", "s", "s"),
    Kind("frequency", "1/s", "1/s"),
    Kind("emission factor", "kg/kWh", "kg/kWh"),
    Kind("dynamic viscosity", "µPa·s", "µPa·s"),
    Kind("force", "N", "N"),
)}


@lru_cache(maxsize=1)
def _by_dimension() -> dict[Dimension, list[Kind]]:
    table: dict[Dimension, list[Kind]] = {}
    for kind in KINDS.values():
        table.setdefault(kind.dimension, []).append(kind)
    return table


def kind_names(dimension: Dimension) -> str:
    """The names of the kinds that have this dimension, or ''."""
    return " or ".join(kind.name for kind in _by_dimension().get(dimension, []))


def kind_of_unit(written: Unit) -> Kind | None:
    """The kind a unit speaks of; °C and °F speak of levels, K and °R of either."""
    kinds = _by_dimension().get(written.dimension, [])
    if written.level:
        return KINDS["temperature"]
    return next((kind for kind in kinds if not kind.level), None)


def print_unit(dimension: Dimension, system: str, wanted: Unit | None = None) -> Unit:
    """The unit a quantity is printed in on a sheet of the ``system`` 'si' or 'us'.

    A ``wanted`` unit holds where it belongs to the sheet's system; one of the
    other system gives way to the customary unit of its kind. Temperature
    levels are printed absolute, since formulas hold for absolute temperatures
    only.
    """
    kinds = _by_dimension().get(dimension, [])
    if not kinds:
        return wanted if wanted is not None else Unit("", 1.0, 0.0, dimension)
    customary = unit(kinds[0].si if system == "si" else kinds[0].us)
    if wanted is None or wanted.level:
        return customary
    foreign = wanted.symbol in US_UNITS if system == "si" else \
        wanted.symbol not in US_UNITS and kinds[0].si != kinds[0].us and wanted.symbol not in _EVERYWHERE
    return customary if foreign else wanted


US_UNITS = frozenset({
    "°R", "°F", "psi", "mmHg", "inHg", "Btu", "hp", "Btu/h", "kBtu/h", "TR", "Btu/lb", "Btu/°R",
    "Btu/(lb·°R)", "Btu/(h·°R)", "Btu/(h·ft²·°R)", "lb", "lb/h", "lb/s", "lb/min", "ft³/min", "ft³/h", "ft³/s",
    "gal/min", "lb/ft³", "ft³/lb", "in", "ft", "ft²", "in²", "ft³", "in³", "ft/s"})
"""Units that give way to the SI unit of their kind on an SI sheet."""

_EVERYWHERE = frozenset({"kWh", "MWh", "GWh", "mol", "atm"})
