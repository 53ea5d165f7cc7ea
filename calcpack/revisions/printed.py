"""Two printed values to whether they differ, by how much, and in what words.

What a sheet prints is what a reader compares: the change is the difference of
the two printed numbers, so that it can be re-done from print.
"""
from __future__ import annotations

import math
from collections.abc import Mapping
from decimal import ROUND_HALF_EVEN, Decimal
from typing import Any

from calcpack.units import shown_with_unit, unit
from calcpack.units.digits import last_place, number_text

Entry = Mapping[str, Any]

SAME_IN_SI = 1e-9
"""Relative difference up to which one exact input in two units of print is the same."""


def quantity_text(entry: Entry | None) -> str | None:
    """A value as printed, ``'311.15 K (38.00 °C)'``; None where there is no entry."""
    if entry is None:
        return None
    text = shown_with_unit(entry["shown"], entry["unit"])
    twin = entry.get("also_shown")
    return f"{text} ({twin})" if twin else text


def is_level(*entries: Entry) -> bool:
    """Whether one of the entries is a temperature level: those are printed with a twin."""
    return any(entry.get("also_shown") for entry in entries)


def same_print(old: Entry, new: Entry, *, exact: bool = False) -> bool:
    """Whether two values are the same as far as both are printed.

    Numbers with different decimals are compared at the coarser of the two;
    in different units, within one unit of the last place. ``exact`` values,
    inputs and constants, are printed in full: every digit of theirs counts.
    """
    if old["unit"] == new["unit"]:
        before, after = Decimal(old["shown"]), Decimal(new["shown"])
        return before == after or (not exact and _at_coarser(before, after)[2] == 0)
    if exact:
        return math.isclose(old["value"], new["value"], rel_tol=SAME_IN_SI)
    return abs(new["value"] - old["value"]) <= max(_place(old), _place(new))


def change(old: Entry, new: Entry, *, exact: bool = False) -> str:
    """The new value less the old, with sign and unit: ``'+2.00 K'``."""
    if old["unit"] == new["unit"]:
        before, after = Decimal(old["shown"]), Decimal(new["shown"])
        difference = after - before if exact else _at_coarser(before, after)[2]
        number, decimals = float(difference), -difference.as_tuple().exponent
    else:
        number = (new["value"] - old["value"]) / unit(new["unit"]).factor
        decimals = -Decimal(new["shown"]).as_tuple().exponent
    text = number_text(number, int(decimals))
    return shown_with_unit(text if text.startswith("-") else f"+{text}", new["unit"])


def change_percent(old: Entry, new: Entry) -> str | None:
    """The change as a share of the old printed value, two digits: ``'+1.9 %'``.

    None where a share says nothing: of a temperature level, of zero, or
    across zero.
    """
    if is_level(old, new):
        return None
    if old["unit"] == new["unit"]:
        before, after = float(old["shown"]), float(new["shown"])
    else:
        before, after = old["value"], new["value"]
    if before * after <= 0.0:
        return None
    percent = 100.0 * (after - before) / abs(before)
    decimals = 0 if percent == 0.0 else max(0, 1 - math.floor(math.log10(abs(percent))))
    return f"{percent:+.{min(decimals, 6)}f} %"


def _at_coarser(before: Decimal, after: Decimal) -> tuple[Decimal, Decimal, Decimal]:
    """Both numbers at the coarser of their last places, and the second less the first."""
    coarser = Decimal(1).scaleb(max(before.as_tuple().exponent, after.as_tuple().exponent))
    before, after = (number.quantize(coarser, rounding=ROUND_HALF_EVEN) for number in (before, after))
    return before, after, after - before


def _place(entry: Entry) -> float:
    """One unit of the last printed place, in SI."""
    return last_place(entry["shown"]) * unit(entry["unit"]).factor
