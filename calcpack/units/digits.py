"""SI floats to printed numbers: the one place where a number is rounded for print."""
from __future__ import annotations

import math
from decimal import ROUND_HALF_EVEN, Context, Decimal

from calcpack.units.unit import Unit

SMALLEST_PLAIN = Decimal("1e-4")
LARGEST_PLAIN = Decimal("1e7")

# Wide enough for the greatest float with all its places.
_WIDE = Context(prec=400, rounding=ROUND_HALF_EVEN)


def decimals_for(value: float, significant: int) -> int:
    """Decimals that give ``value`` the wanted significant digits; negative before the point."""
    if value == 0.0 or not math.isfinite(value):
        return max(0, significant - 1)
    return significant - 1 - math.floor(math.log10(abs(value)))


def shown(value: float, unit: Unit, decimals: int) -> str:
    """An SI ``value`` in ``unit`` with so many decimals, as the formula parser reads it back.

    Between 1e-4 and 1e7 the number is plain (``0.01235``), beyond with an
    exponent (``1.235e-5``); ``decimals`` counts from the point in both.
    """
    return number_text(unit.from_si(value), decimals)


def number_text(number: float, decimals: int) -> str:
    """``number`` rounded to ``decimals``; zero is never negative."""
    exact = Decimal(repr(float(number)))
    rounded = exact.quantize(Decimal(1).scaleb(-decimals), context=_WIDE)
    if rounded == 0:
        return format(abs(rounded), "f") if 0 <= decimals <= 8 else "0"
    if SMALLEST_PLAIN <= abs(rounded) < LARGEST_PLAIN:
        return format(rounded, "f") if decimals >= 0 else format(rounded.to_integral_value(), "f")
    exponent = rounded.adjusted()
    mantissa = rounded.scaleb(-exponent, context=_WIDE)
    places = Decimal(1).scaleb(-max(0, decimals + exponent))
    return f"{format(mantissa.quantize(places, context=_WIDE), 'f')}e{exponent}"


def shown_with_unit(number: str, unit: Unit | str) -> str:
    """``'1593.7'`` and kW to ``'1593.7 kW'``."""
    symbol = unit if isinstance(unit, str) else unit.symbol
    return f"{number} {symbol}" if symbol else number


def last_place(text: str) -> float:
    """The value of one unit in the last printed place: 0.01 for ``'12.40'``."""
    return 10.0 ** Decimal(text).as_tuple().exponent
