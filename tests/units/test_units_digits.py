"""Printed numbers: they read back, are plain where a reader expects it, and zero has no sign."""
from __future__ import annotations

from decimal import Decimal

import pytest
from hypothesis import example, given
from hypothesis import strategies as st

from calcpack.formula.evaluate import value
from calcpack.formula.parse import parse
from calcpack.units import shown, shown_with_unit, unit
from calcpack.units.digits import decimals_for, last_place, number_text

NUMBERS = st.one_of(st.floats(-1e9, 1e9), st.floats(-1.0, 1.0), st.floats(allow_nan=False, allow_infinity=False))
EXPONENT_FREE = (Decimal("1e-4"), Decimal("1e7"))


@given(NUMBERS, st.integers(-9, 15))
@example(-0.0, 2)
@example(-0.004, 2)
@example(9999999.96, 1)
@example(0.00009999, 5)
@example(1e30, 2)
@example(1.7976931348623157e308, 12)
@example(5e-324, 12)
def test_a_printed_number_reads_back_within_half_a_place(number, decimals):
    text = number_text(number, decimals)
    assert abs(Decimal(text) - Decimal(repr(number))) <= Decimal(1).scaleb(-decimals) / 2
    if EXPONENT_FREE[0] <= abs(Decimal(text)) < EXPONENT_FREE[1]:
        assert "e" not in text.lower()
    if Decimal(text) == 0:
        assert not text.startswith("-") and "e" not in text


@given(NUMBERS.map(abs), st.integers(-9, 12))
def test_the_formula_parser_reads_what_is_printed(number, decimals):
    text = number_text(number, decimals)
    assert value(parse(text)) == float(text)


@given(st.floats(1e-12, 1e12), st.integers(1, 12))
def test_significant_digits_are_as_many_as_asked(number, significant):
    digits = Decimal(number_text(number, decimals_for(number, significant))).as_tuple().digits
    # A rounding up to the next power of ten shows one digit more; trailing zeros before the point are not counted.
    assert len(digits) in (significant, significant + 1) or number >= 10.0**significant


@pytest.mark.parametrize("number, decimals, text", [
    (1593.7123, 1, "1593.7"), (0.0123456, 5, "0.01235"), (1.2345e-5, 8, "1.234e-5"), (0.0, 2, "0.00"),
    (-0.001, 2, "0.00"),
    (2.5, 0, "2"), (3.5, 0, "4"), (-2.25, 1, "-2.2"), (123456.0, -3, "123000"), (12345678.0, 0, "1.2345678e7"),
    (12345678.0, -3, "1.2346e7"), (0.0, 12, "0"), (1e-4, 4, "0.0001")])
def test_numbers_as_they_are_printed(number, decimals, text):
    assert number_text(number, decimals) == text


def test_the_last_place():
    assert last_place("12.40") == pytest.approx(0.01)
    assert last_place("1.235e-5") == pytest.approx(1e-8)
    assert last_place("250") == 1.0


def test_shown_takes_the_unit_off_and_puts_it_back():
    assert shown(311.15, unit("°C"), 2) == "38.00"
    assert shown(450e3, unit("kW"), 1) == "450.0"
    assert shown_with_unit("450.0", unit("kW")) == "450.0 kW"
    assert shown_with_unit("0.72", unit("")) == "0.72"
