"""Reading of quantities: strict, of the right kind, and never anything but a float or a UnitError."""
from __future__ import annotations

import math

import pint
import pytest
from hypothesis import example, given
from hypothesis import strategies as st

from calcpack.errors import UnitError
from calcpack.units import KINDS, read_quantity, unit
from calcpack.units.spellings import GAUGE, LEVELS, SPELLINGS, UNITS

P_ATM = 98500.0
OUTSIDE = pint.UnitRegistry(cache_folder=None)
NUMBERS = st.one_of(
    st.floats(-1e12, 1e12, allow_nan=False).map(repr), st.integers(-10**6, 10**6).map(str),
    st.sampled_from(["1e400", "-1e400", "1e999", "nan", "inf", "1,5", "1_000", "0x10", "1.", ".5", "+3", "--3", "١٢",
    "²",
                     "9**9**9**9", "1e-400", "-0"]))
UNIT_TEXTS = st.one_of(st.sampled_from(sorted(SPELLINGS)), st.sampled_from(sorted(GAUGE)),
                       st.text("kgKJmsbar/()·²³ °CF*^-.1", max_size=10))


def expected_si(number: str, symbol: str) -> float:
    """pint's own conversion of a number in the unit of that display symbol."""
    name = UNITS[symbol][0] if symbol else "dimensionless"
    if symbol in LEVELS:
        return OUTSIDE.Quantity(float(number), name).to("kelvin").magnitude
    return (float(number) * OUTSIDE.parse_expression(name)).to_base_units().magnitude if symbol else float(number)


@given(st.one_of(st.text(max_size=30), st.builds("{} {}".format, NUMBERS, UNIT_TEXTS),
                 st.builds("{}{}".format, NUMBERS, UNIT_TEXTS)),
       st.one_of(st.none(), st.sampled_from(sorted(KINDS))), st.sampled_from([None, P_ATM]))
@example("1e400 kg", None, None)
@example("9**9**9**9 m", None, None)
@example("3 bar(g)", "pressure", P_ATM)
@example("1" * 5000 + " kg", None, None)
@example("1 " + "(" * 2000, None, None)
def test_any_text_reads_as_pint_reads_it_or_is_refused(text, kind, p_atm):
    try:
        reading = read_quantity(text, kind, p_atm=p_atm)
    except UnitError as error:
        assert error.faults[0].what
        return
    assert math.isfinite(reading.value)
    value = expected_si(reading.text, reading.unit.symbol) + (P_ATM if reading.gauge else 0.0)
    assert reading.value == pytest.approx(value, rel=1e-12, abs=1e-300)


@given(st.floats(1e-6, 1e6), st.sampled_from(sorted(UNITS)))
def test_a_quantity_goes_to_si_and_back(value, symbol):
    reading = read_quantity(f"{value!r} {symbol}")
    assert reading.unit.from_si(reading.value) == pytest.approx(value, rel=1e-9, abs=1e-9)


def fault_of(text, kind=None, p_atm=None):
    with pytest.raises(UnitError) as caught:
        read_quantity(text, kind, p_atm=p_atm)
    return caught.value.faults[0]


@pytest.mark.parametrize("text, hint", [
    ("1,5 bar", "write the decimal point as '.', and no thousands separators"),
    ("1,500.0 kW", "write the decimal point as '.', and no thousands separators"),
    ("5kW", "put a space between number and unit"), ("38°C", "put a space between number and unit"),
    ("nan kg", "a value must be a finite number"), (".inf", "a value must be a finite number"),
    ("٣ kW", None), ("9**9**9**9 m", None), ("2*3 kg", None), ("kg", None), ("", None), ("5 kg extra", None)])
def test_what_is_no_quantity_is_told(text, hint):
    fault = fault_of(text)
    if text == "5 kg extra":
        assert fault.what == "'kg extra' is not a unit that calcpack reads"
        return
    assert fault.what == f"{text!r} is not a quantity"
    assert fault.expected == "number, space, unit: such as '4.2 kJ/(kg·K)'"
    assert fault.hint == hint


def test_too_large_a_number_is_not_read_as_infinity():
    assert fault_of("1e400 kg").what == "'1e400 kg' is not a finite number"


@pytest.mark.parametrize("kind", sorted(KINDS))
@pytest.mark.parametrize("system", ["si", "us"])
def test_each_kind_takes_its_own_units_and_refuses_another(kind, system):
    meant = KINDS[kind]
    symbol = getattr(meant, system)
    assert read_quantity(f"5 {symbol}", kind).unit.dimension == meant.dimension
    other = "kg" if meant.dimension != unit("kg").dimension else "m"
    fault = fault_of(f"5 {other}", kind)
    assert fault.what == f"a {kind} is meant here"
    assert fault.found.startswith(f"'5 {other}', ")


def test_a_pure_number_where_a_unit_is_meant():
    fault = fault_of("5", "pressure")
    assert (fault.what, fault.found, fault.expected) == (
        "a pressure is meant here", "'5', without a unit", "a quantity such as '5 bar'")


@pytest.mark.parametrize("text, hint", [("5 degC", "write 5 K"), ("9 degF", "write 9 degR")])
def test_a_level_is_no_difference(text, hint):
    fault = fault_of(text, "temperature difference")
    assert (fault.what, fault.expected, fault.hint) == (
        "a temperature level stands where a difference is meant", "a difference, in K or °R", hint)


@pytest.mark.parametrize("text", ["5 delta_degC", "9 delta_degF", "5 Δ°C", "5 dK"])
def test_a_difference_is_no_level(text):
    fault = fault_of(text, "temperature")
    assert (fault.what, fault.expected) == (
        "a temperature difference stands where a level is meant", "a level, in degC, degF or K")


def test_kelvin_is_level_or_difference_as_the_kind_says():
    assert read_quantity("5 K", "temperature").value == read_quantity("5 K", "temperature difference").value == 5.0
    assert read_quantity("9 degR", "temperature difference").value == pytest.approx(5.0, rel=1e-12)
    assert read_quantity("5 delta_degC", "temperature difference").value == 5.0


@pytest.mark.parametrize("text", ["-300 degC", "0 K", "-5 K", "-500 degF", "-273.15 degC"])
def test_nothing_is_colder_than_absolute_zero(text):
    fault = fault_of(text, "temperature")
    assert (fault.what, fault.expected) == (
        "a temperature at or below absolute zero", "above 0 K (-273.15 degC)")


@pytest.mark.parametrize("spelled", sorted(GAUGE))
def test_a_gauge_pressure_adds_the_sheets_atmosphere(spelled):
    reading = read_quantity(f"2.5 {spelled}", "pressure", p_atm=P_ATM)
    assert reading.value == pytest.approx(read_quantity(f"2.5 {GAUGE[spelled]}").value + P_ATM, rel=1e-12)
    assert reading.gauge


def test_three_bar_gauge_on_a_hill():
    assert read_quantity("3 bar(g)", "pressure", p_atm=P_ATM).value == 398500.0


def test_gauge_pressures_where_they_mean_nothing():
    assert fault_of("3 bar(g)", "pressure").what == "a gauge pressure cannot be read here"
    assert fault_of("3 bar(g)", "power", P_ATM).what == "a power is meant here"
    assert fault_of("-1 bar(g)", "pressure", P_ATM).what == "the absolute pressure is not above zero"
    assert read_quantity("-0.5 bar(g)", "pressure", p_atm=P_ATM).value == pytest.approx(48500.0)
