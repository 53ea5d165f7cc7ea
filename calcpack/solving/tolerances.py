"""Tolerances of inputs to what they do to results and limits: each input moved alone, both ways.

The case is solved again with one input at the end of its tolerance. Effects of
independent inputs are combined as the root of the sum of squares (JCGM 100:2008,
5.1.2, with the tolerance in place of the standard uncertainty: what comes out
is a tolerance of the result of the same kind), and beside it as their plain
sum, the worst case of effects that are linear.
"""
from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from calcpack.errors import NoAnswerError
from calcpack.solving.program import Program
from calcpack.solving.solution import Solution, read_bound
from calcpack.units import Unit, read_quantity, shown_with_unit
from calcpack.units.digits import decimals_for, number_text

NOISE = 1e-8


@dataclass(frozen=True, slots=True)
class Moved:
    """An input, its tolerance [SI], and all values with it at the low and the high end; None without an answer."""

    symbol: str
    tolerance: float
    low: Mapping[str, float] | None
    high: Mapping[str, float] | None

    def effect(self, symbol: str, values: Mapping[str, float]) -> tuple[float, float] | None:
        """The changes of a symbol at the low and the high end [SI]; None where an end has no answer."""
        if self.low is None or self.high is None:
            return None
        # Below this share a difference is what the width of the roots leaves, not an effect.
        noise = NOISE * abs(values[symbol])
        changes = (end[symbol] - values[symbol] for end in (self.low, self.high))
        low, high = (change if abs(change) > noise else 0.0 for change in changes)
        return low, high


def uncertainty(solution: Solution) -> dict[str, Any] | None:
    """The record's entry on tolerances; None where no input states one, or there are no results."""
    symbols = list(dict.fromkeys([*(one.symbol for one in solution.spec.results),
                                  *(limit.symbol for limit in solution.spec.limits)]))
    moved = _moved(solution)
    if not moved or not symbols:
        return None
    results = [symbol for symbol in symbols if symbol in {one.symbol for one in solution.spec.results}]
    return {"inputs": [_input_row(solution, one, results) for one in moved],
            "results": [_combined_row(solution, moved, symbol) for symbol in results],
            "limits": [_limit_row(solution, moved, limit) for limit in solution.spec.limits]}


def _moved(solution: Solution) -> list[Moved]:
    """One re-solution for each end of each tolerance, in a program of its own."""
    stated = {symbol: read_quantity(given.tol).value for symbol, given in solution.spec.case.inputs.items()
              if given.tol is not None and symbol in solution.plan.inputs}
    if not stated:
        return []
    program = Program(solution.plan)
    inputs = {symbol: solution.value(symbol) for symbol in solution.plan.inputs}

    def values(symbol: str, value: float) -> dict[str, float] | None:
        try:
            return program.run({**inputs, symbol: value})
        except NoAnswerError:
            return None
    return [Moved(symbol, tolerance, values(symbol, inputs[symbol] - tolerance),
                  values(symbol, inputs[symbol] + tolerance))
            for symbol, tolerance in stated.items() if tolerance > 0.0]


def _input_row(solution: Solution, moved: Moved, results: list[str]) -> dict[str, Any]:
    effects = {}
    for symbol in results:
        effect = moved.effect(symbol, solution.values)
        effects[symbol] = None if effect is None else {
            "low": _change(effect[0], solution.unit(symbol)), "high": _change(effect[1], solution.unit(symbol)),
            "low_value": effect[0], "high_value": effect[1]}
    return {"symbol": moved.symbol, "tolerance_value": moved.tolerance, "effects": effects}


def _reach(moved: list[Moved], symbol: str, values: Mapping[str, float]) -> tuple[float, float] | None:
    """Root of the sum of squares, and sum, of the greater effect of each input; None if one has no answer."""
    effects = [one.effect(symbol, values) for one in moved]
    if any(effect is None for effect in effects):
        return None
    sizes = [max(abs(low), abs(high)) for low, high in effects]
    return math.sqrt(math.fsum(size * size for size in sizes)), math.fsum(sizes)


def _combined_row(solution: Solution, moved: list[Moved], symbol: str) -> dict[str, Any]:
    reach = _reach(moved, symbol, solution.values)
    row: dict[str, Any] = {"symbol": symbol, "combined": None, "sum": None, "percent": None}
    if reach is None:
        return row
    in_unit = solution.unit(symbol)
    row |= {"combined": _size(reach[0], in_unit), "sum": _size(reach[1], in_unit),
            "combined_value": reach[0], "sum_value": reach[1]}
    if not solution.level(symbol) and solution.value(symbol):
        row["percent"] = f"{number_text(100 * reach[0] / abs(solution.value(symbol)), 1)} %"
    return row


def _limit_row(solution: Solution, moved: list[Moved], limit: Any) -> dict[str, Any]:
    """Whether the limit still holds at the combined effect, and at the sum of all."""
    reach = _reach(moved, limit.symbol, solution.values)
    sign = 1.0 if limit.sense == "at most" else -1.0
    margin = sign * (read_bound(limit.bound, limit.symbol, solution) - solution.value(limit.symbol))
    row = {"id": limit.id, "symbol": limit.symbol, "margin": _change(margin, solution.unit(limit.symbol)),
           "combined": None, "verdict": "an end of a tolerance has no answer"}
    if reach is not None:
        verdict = "does not hold as calculated" if margin < 0.0 else "holds at the sum of all tolerances" \
            if margin >= reach[1] else "holds at the combined tolerance, not at the sum" \
            if margin >= reach[0] else "margin smaller than the combined tolerance"
        row |= {"combined": _size(reach[0], solution.unit(limit.symbol)), "verdict": verdict}
    return row


def _change(value: float, in_unit: Unit) -> str:
    text = _size(abs(value), in_unit)
    return text if value == 0.0 or text.split()[0].strip("0.") == "" else ("+" if value > 0 else "−") + text


def _size(value: float, in_unit: Unit) -> str:
    """A difference in two significant digits; of a temperature level in the size of its degree."""
    number = value / in_unit.factor
    if number < 1e-9:
        return shown_with_unit("0", in_unit)
    return shown_with_unit(number_text(number, max(0, decimals_for(number, 2))), in_unit)
