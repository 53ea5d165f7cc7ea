"""Symbols, units and quantities of the record to the text that figures print."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from calcpack.formula.symbols import parts

GAP = "\u202f"
"""The narrow no-break space between a number and its unit."""


def symbol_text(name: str) -> str:
    """A symbol such as ``Q_dot_sink`` as mathtext: letter in italics, subscript upright."""
    part = parts(name)
    letter = rf"\mathrm{{{part.letter}}}" if part.word else part.letter
    letter = rf"\dot{{{letter}}}" if part.dot else letter
    below = ",".join(
        ([part.italic_index] if part.italic_index else []) + [rf"\mathrm{{{piece}}}" for piece in part.below]
    )
    prefix = rf"\mathrm{{{part.prefix}}}" if part.prefix else ""
    return f"${prefix}{letter}" + (f"_{{{below}}}" if below else "") + "$"


def axis_text(letter: str, unit_symbol: str) -> str:
    """An axis label after ISO 80000-1, quantity over unit: T / °C, h / (kJ/kg)."""
    if not unit_symbol:
        return symbol_text(letter)
    compound = f"({unit_symbol})" if any(sign in unit_symbol for sign in "/·") else unit_symbol
    return f"{symbol_text(letter)} / {compound}"


def plain(text: str) -> str:
    """Words from the record, safe to print: a dollar sign starts no mathtext."""
    return text.replace("$", r"\$")


def quantity_text(quantity: Mapping[str, Any]) -> str:
    """A number with its unit as printed on the sheet, a temperature in its Celsius or Fahrenheit twin."""
    if quantity.get("also_shown"):
        number, _, unit_symbol = quantity["also_shown"].partition(" ")
    else:
        number, unit_symbol = quantity["shown"], quantity["unit"]
    number = number.replace("-", "\u2212")
    return f"{number}{GAP}{unit_symbol}" if unit_symbol else number


def known_quantity(record: Mapping[str, Any], symbol: str) -> Mapping[str, Any] | None:
    """The input or step of the record that has ``symbol``, or None."""
    return next(
        (
            one
            for one in (*record["inputs"], *record["steps"])
            if one.get("symbol") == symbol and one.get("shown") is not None
        ),
        None,
    )


def fluid_name(record: Mapping[str, Any], role: str) -> str:
    """The designation of the fluid in ``role``, or '' where the record names none."""
    return str(record["case"]["fluids"].get(role, {}).get("designation", ""))
