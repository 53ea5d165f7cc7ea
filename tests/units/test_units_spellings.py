"""The list of units against pint's own reading of the same symbols, and the uniqueness of spellings."""
from __future__ import annotations

import re

import pint
import pytest

from calcpack.errors import UnitError
from calcpack.units import unit
from calcpack.units.spellings import GAUGE, LEVELS, SPELLINGS, UNITS, folded

PLAIN = sorted(set(UNITS) - LEVELS)

# Symbols that pint has no word for, or another: each written out with what it means.
# BTU: pint's is the international table Btu, 1055.056 J (ISO 31-4 annex A, from memory).
# Ton of refrigeration: 12 000 Btu/h by definition (ASHRAE terminology, from memory).
WORDS = {"°R": "delta_degF", "kBtu": "1000*Btu", "TR": "12000*Btu/hour", "%": "percent", "t": "metric_ton", "a": "year",
         "lb": "pound", "in": "inch", "h": "hour", "d": "day", "min": "minute", "gal": "gallon", "hp": "horsepower",
         "mmHg": "mmHg", "inHg": "inHg", "L": "liter", "atm": "atmosphere", "mol": "mole", "g": "gram"}


@pytest.fixture(scope="module")
def outside() -> pint.UnitRegistry:
    """A registry of its own: nothing of the program's is in it."""
    return pint.UnitRegistry(cache_folder=None)


def as_pint_reads(symbol: str) -> str:
    """The display symbol turned to an expression letter by letter, without the program's own table."""
    text = symbol.replace("²", "**2").replace("³", "**3").replace("·", "*").replace("µ", "micro").replace(
        "microPa", "micropascal")
    return re.sub(r"[A-Za-z°%]+", lambda word: f"({WORDS.get(word.group(), word.group())})", text)


@pytest.mark.parametrize("symbol", PLAIN)
def test_every_unit_converts_as_pint_says(outside, symbol):
    meant = outside.parse_expression(as_pint_reads(symbol))
    base = (meant if isinstance(meant, outside.Quantity) else outside.Quantity(meant)).to_base_units()
    known = unit(symbol)
    assert known.factor == pytest.approx(base.magnitude, rel=1e-12)
    assert dict(known.dimension) == {name: power for name, power in base.dimensionality.items() if power}
    assert known.offset == 0.0 and not known.level
    assert known.symbol == symbol


@pytest.mark.parametrize("symbol, name", [("°C", "degC"), ("°F", "degF")])
@pytest.mark.parametrize("value", [-40.0, 0.0, 38.0, 451.0])
def test_levels_convert_as_pint_says(outside, symbol, name, value):
    kelvin = outside.Quantity(value, name).to("kelvin").magnitude
    assert unit(symbol).to_si(value) == pytest.approx(kelvin, rel=1e-12)
    assert unit(symbol).from_si(kelvin) == pytest.approx(value, abs=1e-10)
    assert unit(symbol).level


# Exact by definition: pound and foot by the international agreement of 1959, psi from them with the standard
# acceleration of gravity, 9.806 65 m/s² (NIST SP 811 appendix B, from memory).
EXACT = {"lb": 0.45359237, "ft": 0.3048, "in": 0.0254, "psi": 0.45359237 * 9.80665 / 0.0254**2, "atm": 101325.0,
         "°R": 5 / 9, "kWh": 3.6e6, "kg/h": 1 / 3600, "ft³/min": 0.3048**3 / 60, "kJ/(kg·K)": 1000.0, "bar/L": 1e8}


@pytest.mark.parametrize("symbol, factor", EXACT.items())
def test_units_that_are_exact_by_definition(symbol, factor):
    assert unit(symbol).factor == pytest.approx(factor, rel=1e-9)


def test_every_spelling_means_one_unit():
    meanings: dict[str, set[str]] = {}
    for symbol, (_, others) in UNITS.items():
        for spelling in (symbol, *others):
            for form in {spelling, folded(spelling), folded(spelling.replace("°R", "R").replace("°", "deg"))}:
                meanings.setdefault(form, set()).add(symbol)
    assert {form: symbols for form, symbols in meanings.items() if len(symbols) > 1} == {}
    assert {form: symbols.copy().pop() for form, symbols in meanings.items()} == SPELLINGS


def test_a_gauge_spelling_is_no_unit_of_its_own():
    assert not {folded(name) for name in GAUGE} & set(SPELLINGS)


def test_no_two_units_differ_in_case_alone():
    assert len({symbol.casefold() for symbol in UNITS}) == len(UNITS)


@pytest.mark.parametrize("spelled, symbol", [
    ("kJ/kg/K", "kJ/(kg·K)"), ("kJ/(kg K)", "kJ/(kg·K)"), ("kJ/(kg.K)", "kJ/(kg·K)"), ("kJ/(kg*K)", "kJ/(kg·K)"),
    ("m3/h", "m³/h"), ("m^3/h", "m³/h"), ("W/m2/K", "W/(m²·K)"), ("degC", "°C"), ("μPa·s", "µPa·s"),
    ("Btu/lb/degF", "Btu/(lb·°R)"), (" bar ", "bar"), ("TR", "TR"), ("ton of refrigeration", "TR"), ("", ""),
    ("1", ""), ("-", "")])
def test_ways_to_spell_one_unit(spelled, symbol):
    assert unit(spelled).symbol == symbol


@pytest.mark.parametrize("spelled, hint", [
    ("kj/kg", "did you mean 'kJ/kg'?"), ("Bar", "did you mean 'bar'?"), ("kw", "did you mean 'kW'?"),
    ("bar(g)", "a gauge pressure can be given as an input only; its absolute value enters the formulas"),
    ("furlong_fortnight", "units and their case are listed by 'calcpack methods --units'")])
def test_an_unknown_unit_says_what_is_near(spelled, hint):
    with pytest.raises(UnitError) as caught:
        unit(spelled)
    fault = caught.value.faults[0]
    assert (fault.what, fault.found, fault.hint) == (
        f"{spelled!r} is not a unit that calcpack reads", repr(spelled), hint)
