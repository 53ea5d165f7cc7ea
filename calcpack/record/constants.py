"""What a fluid's model says without a state to entries that are printed beside it."""
from __future__ import annotations

from typing import Any

from calcpack.errors import CalcpackError
from calcpack.fluids.wording import CONSTANTS
from calcpack.solving.solution import celsius_twin
from calcpack.units import print_unit, shown_with_unit, unit
from calcpack.units.digits import decimals_for, number_text

PRINTED = {"M": "g/mol", "T_crit": "K", "p_crit": "bar", "T_triple": "K", "T_freeze": "K", "T_min": "K",
           "T_max": "K", "p_max": "bar"}
"""The constants that a page shows, each with its unit on an SI sheet, in the order of print."""
SIGNIFICANT = 5


def constant_entries(fluid: Any, system: str) -> list[dict[str, Any]]:
    """The constants of a fluid with their printed values; one that its model cannot find is left out."""
    found = []
    for symbol, customary in PRINTED.items():
        value = _value(fluid, symbol)
        if value is None:
            continue
        shown_in = print_unit(unit(customary).dimension, system)
        level = customary == "K"
        decimals = 2 if level else max(0, decimals_for(shown_in.from_si(value), SIGNIFICANT))
        found.append({"symbol": symbol, "title": CONSTANTS[symbol], "value": float(value), "unit": shown_in.symbol,
                      "shown": number_text(shown_in.from_si(value), decimals),
                      "also_shown": celsius_twin(value, 2, system) if level else None})
    return found


def _value(fluid: Any, symbol: str) -> float | None:
    if symbol not in fluid.constants:
        return None
    try:
        return fluid.reader(symbol, ())()
    except CalcpackError:
        # A blend whose critical point is not found has none to print.
        return None


def zero_words(fluid: Any, system: str) -> str:
    """Where h and s are zero, with their values at a state that a reader finds in any table.

    That state is the saturated liquid at 0 °C, or, where there is none, at one
    atmosphere; gases and liquids without a saturation line say it in words.
    """
    for words, pair, state in _TABLE_STATES:
        try:
            h, s = (fluid.reader(letter, pair)(*state) for letter in ("h", "s"))
        except CalcpackError:
            # The fluid has no such state, or its model no such pair.
            continue
        shown = [shown_with_unit(number_text(shown_in.from_si(value) + 0.0, decimals), shown_in)
                 for value, shown_in, decimals in (
                     (h, print_unit(unit("kJ/kg").dimension, system), 2),
                     (s, print_unit(unit("kJ/(kg·K)").dimension, system), 4))]
        return f"{fluid.reference_state}; {words}: h = {shown[0]}, s = {shown[1]}"
    return fluid.reference_state


_TABLE_STATES = (("saturated liquid at 0 °C", ("T", "x"), (273.15, 0.0)),
                 ("saturated liquid at 0.01 °C", ("T", "x"), (273.16, 0.0)),
                 ("saturated liquid at 101.325 kPa", ("p", "x"), (101325.0, 0.0)))
