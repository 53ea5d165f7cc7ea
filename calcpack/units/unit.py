"""A unit's spelling to its factor, offset and dimension, through the one pint registry."""
from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache
from typing import Any

import pint
from pint.util import UnitsContainer

from calcpack.errors import Fault, UnitError, nearest
from calcpack.units.spellings import GAUGE, LEVELS, SPELLINGS, UNITS, folded

Dimension = UnitsContainer
"""pint's product of base dimensions; ``*``, ``/``, ``**`` and ``==`` do what they say."""

DIMENSIONLESS: Dimension = UnitsContainer()


@dataclass(frozen=True, slots=True)
class Unit:
    """A unit that can be written and printed.

    ``symbol`` is how it is printed; a value in SI is ``value * factor +
    offset``; ``level`` marks units of temperature levels (°C, °F).
    """

    symbol: str
    factor: float
    offset: float
    dimension: Dimension
    level: bool = False

    def to_si(self, value: float) -> float:
        """``value`` in this unit as an SI float."""
        return value * self.factor + self.offset

    def from_si(self, value: float) -> float:
        """An SI float as a number in this unit."""
        return (value - self.offset) / self.factor


@lru_cache(maxsize=1)
def registry() -> pint.UnitRegistry:
    """The one pint registry of the process; also pint's application registry."""
    made: Any = pint.UnitRegistry(cache_folder=None)
    pint.set_application_registry(made)
    return made


@lru_cache(maxsize=512)
def unit(text: str) -> Unit:
    """The unit that ``text`` spells; the empty text is the unit one.

    Raises
    ------
    UnitError
        For a spelling that is not in the list, with the nearest one.
    """
    if text.strip() in ("", "1", "-"):
        return Unit("", 1.0, 0.0, DIMENSIONLESS)
    symbol = SPELLINGS.get(text.strip()) or SPELLINGS.get(folded(text))
    if symbol is None:
        raise UnitError(Fault(f"{text.strip()!r} is not a unit that calcpack reads", found=repr(text.strip()),
                              hint=_advice(text)))
    return _from_pint(symbol)


def _advice(text: str) -> str | None:
    spelled = text.strip()
    if spelled in GAUGE or folded(spelled) in GAUGE:
        return "a gauge pressure can be given as an input only; its absolute value enters the formulas"
    return nearest(spelled, SPELLINGS) or "units and their case are listed by 'calcpack methods --units'"


@lru_cache(maxsize=512)
def _from_pint(symbol: str) -> Unit:
    text = UNITS[symbol][0]
    ureg = registry()
    if symbol in LEVELS:
        zero = ureg.Quantity(0.0, text).to("kelvin").magnitude
        degree = ureg.Quantity(1.0, f"delta_{text}").to("kelvin").magnitude
        return Unit(symbol, degree, zero, _base(ureg.get_dimensionality("kelvin")), level=True)
    quantity = ureg.Quantity(1.0, ureg.parse_units(text)) if "*british" not in text else ureg.parse_expression(text)
    return Unit(symbol, float(quantity.to_base_units().magnitude), 0.0, _base(quantity.dimensionality))


def pint_quantity(value: float, in_unit: Unit) -> Any:
    """An SI ``value`` as a pint quantity in ``in_unit``, of the one registry."""
    base = registry().Quantity(value, registry().get_base_units(_pint_unit(in_unit.symbol))[1])
    return base.to(_pint_unit(in_unit.symbol))


def _pint_unit(symbol: str) -> Any:
    # pint has no name for a thousand Btu or a ton of refrigeration: give those in their plain unit.
    text = UNITS[symbol][0].split("*british")[-1] if symbol else "dimensionless"
    return registry().parse_units("british" + text if text.startswith("_thermal") else text)


def _base(dimension: Dimension) -> Dimension:
    return UnitsContainer({name: power for name, power in dimension.items() if power})


def dimension_text(dimension: Dimension) -> str:
    """A dimension in words a reader knows: 'mass·length²/time³ (power)'."""
    if not dimension:
        return "a pure number"
    from calcpack.units.kinds import kind_names
    above = [_power(name, power) for name, power in sorted(dimension.items()) if power > 0]
    below = [_power(name, -power) for name, power in sorted(dimension.items()) if power < 0]
    text = "·".join(above) or "1"
    if below:
        text += "/" + (below[0] if len(below) == 1 else f"({'·'.join(below)})")
    known = kind_names(dimension)
    return f"{text} ({known})" if known else text


def _power(name: str, power: float) -> str:
    word = {"substance": "amount of substance"}.get(name.strip("[]"), name.strip("[]"))
    raised = {1: "", 2: "²", 3: "³", 4: "⁴"}.get(power)
    return word + (raised if raised is not None else f"^{power:g}")
