"""Which unit each kind is printed in, and how dimensions are told to a reader."""
from __future__ import annotations

import pytest

from calcpack.units import DIMENSIONLESS, KINDS, dimension_text, kind_of_unit, pint_quantity, print_unit, unit
from calcpack.units.kinds import US_UNITS, kind_names
from calcpack.units.spellings import UNITS


@pytest.mark.parametrize("kind", KINDS.values(), ids=KINDS)
def test_si_and_us_units_of_a_kind_measure_the_same(kind):
    assert unit(kind.si).dimension == unit(kind.us).dimension == kind.dimension
    assert kind.level == (kind.name == "temperature")


@pytest.mark.parametrize("symbol", sorted(UNITS))
@pytest.mark.parametrize("system", ["si", "us"])
def test_any_unit_is_printed_in_one_of_its_own_dimension_and_of_the_sheets_system(symbol, system):
    written = unit(symbol)
    chosen = print_unit(written.dimension, system, written)
    assert chosen.dimension == written.dimension
    assert not chosen.level, "levels are printed absolute"
    if system == "si":
        assert chosen.symbol not in US_UNITS
    else:
        assert chosen.symbol != "kW" and chosen.symbol != "bar" and chosen.symbol != "kJ/kg"


@pytest.mark.parametrize("symbol, si, us", [
    ("kW", "kW", "kBtu/h"), ("kg/h", "kg/h", "lb/h"), ("psi", "bar", "psi"), ("°C", "K", "°R"), ("°F", "K", "°R"),
    ("m³/h", "m³/h", "ft³/min"), ("MWh", "MWh", "MWh"), ("W", "W", "kBtu/h"), ("%", "%", "%"),
    ("bar/L", "bar/L", "bar/L"),
    ("TR", "kW", "TR"), ("1/min", "1/min", "1/min")])
def test_what_a_wanted_unit_becomes_on_each_sheet(symbol, si, us):
    written = unit(symbol)
    assert print_unit(written.dimension, "si", written).symbol == si
    assert print_unit(written.dimension, "us", written).symbol == us


def test_a_dimension_of_no_kind_is_printed_without_a_factor():
    odd = unit("kg").dimension * unit("m").dimension
    chosen = print_unit(odd, "si")
    assert (chosen.factor, chosen.offset, chosen.dimension) == (1.0, 0.0, odd)


@pytest.mark.parametrize("symbol, name", [
    ("°C", "temperature"), ("K", "temperature difference"), ("kJ/kg", "specific energy"), ("", "number"),
    ("%", "number"),
    ("bar/L", None)])
def test_the_kind_a_unit_speaks_of(symbol, name):
    found = kind_of_unit(unit(symbol))
    assert (found.name if found else None) == name


@pytest.mark.parametrize("symbol, text", [
    ("", "a pure number"), ("kW", "length²·mass/time³ (power)"), ("bar", "mass/(length·time²) (pressure)"),
    ("K", "temperature (temperature or temperature difference)"), ("bar/L", "mass/(length^4·time²)")])
def test_dimensions_in_words(symbol, text):
    found = dimension_text(unit(symbol).dimension)
    assert found == text.replace("length^4", "length⁴")


def test_a_dimension_of_no_kind_has_no_name():
    assert kind_names(unit("bar/L").dimension) == ""
    assert kind_names(DIMENSIONLESS) == "number"


@pytest.mark.parametrize("symbol", sorted(set(UNITS) | {""}))
def test_a_pint_quantity_has_the_value_in_its_unit(symbol):
    found = pint_quantity(300.0, unit(symbol))
    base = found.to_base_units().magnitude
    assert base == pytest.approx(300.0, rel=1e-12)
    plain = {"kBtu/h": "Btu/h", "TR": "Btu/h"}
    assert found.magnitude == pytest.approx(unit(plain.get(symbol, symbol)).from_si(300.0), rel=1e-9)
