"""What the spec demands to verdicts: value, bound, margin, and whether it holds."""
from __future__ import annotations

from dataclasses import asdict
from typing import TYPE_CHECKING, Any

from calcpack.checks.entries import difference
from calcpack.solving.solution import Solution, celsius_twin, printed_freely, read_bound
from calcpack.units import read_quantity, shown_with_unit
from calcpack.units.digits import number_text

if TYPE_CHECKING:
    from calcpack.spec.model import Limit

ROUNDING = 1e-9
"""A value that a root brings to its bound stands within this share of it, and holds."""

NO_PERCENT = "a share of a temperature level would hang on where its scale begins"
NO_PERCENT_OF_ZERO = "there is no share of a bound of zero"


def limits(solution: Solution) -> tuple[dict[str, Any], ...]:
    """The limits of the spec in its order, as the record keeps them."""
    return tuple(_entry(solution, one) for one in solution.spec.limits)


def _entry(solution: Solution, limit: Limit) -> dict[str, Any]:
    value = solution.value(limit.symbol)
    bound = read_bound(limit.bound, limit.symbol, solution)
    margin = bound - value if limit.sense == "at most" else value - bound
    holds = margin >= -ROUNDING * max(abs(bound), abs(value))
    percent, reason = _percent(solution, limit, margin, bound)
    shown_bound = _printed_bound(solution, limit, bound)
    named = f"{limit.bound} = {shown_bound}" if limit.bound in solution.values else shown_bound
    return {"id": limit.id, "symbol": limit.symbol, "sense": limit.sense,
            "text": f"{_title(solution, limit.symbol)} {limit.sense} {named}",
            "value": _printed(solution, limit.symbol, value), "bound": shown_bound, "bound_written": limit.bound,
            "margin": _margin(solution, limit.symbol, margin), "margin_percent": percent,
            "margin_percent_reason": reason, "margin_value": float(margin), "bound_value": float(bound),
            "status": "holds" if holds else "fails", "verdict": _verdict(holds, limit),
            "waiver": None if limit.waiver is None else asdict(limit.waiver), "why": limit.why, "source": limit.source,
            "step": None if limit.symbol in solution.plan.inputs else solution.step(limit.symbol).id}


def _verdict(holds: bool, limit: Limit) -> str:
    """'holds', 'fails' or 'waived'; a waiver of a limit that holds changes nothing."""
    if holds:
        return "holds"
    return "fails" if limit.waiver is None else "waived"


def _printed(solution: Solution, symbol: str, value: float) -> str:
    """A value in the printed form of ``symbol``, a level with its everyday twin."""
    text = shown_with_unit(solution.printing.shown(symbol, value), solution.unit(symbol))
    if not solution.level(symbol):
        return text
    return f"{text} ({celsius_twin(value, solution.printing.decimals[symbol], solution.system)})"


def _printed_bound(solution: Solution, limit: Limit, bound: float) -> str:
    """A bound in the unit of what it bounds: a symbol as it is printed, a quantity with the digits it was given."""
    if limit.bound in solution.values:
        return _printed(solution, limit.bound, bound)
    unit = solution.unit(limit.symbol)
    written = read_quantity(limit.bound, p_atm=solution.p_atm)
    if written.unit.symbol == unit.symbol and not written.gauge and not solution.level(limit.symbol):
        return shown_with_unit(written.text, unit)
    return _printed(solution, limit.symbol, bound)


def _margin(solution: Solution, symbol: str, margin: float) -> str:
    if solution.level(symbol):
        return difference(solution, margin)
    unit, decimals = solution.unit(symbol), solution.printing.decimals[symbol]
    # A margin below the printed place would read as zero, which is not what it is.
    if margin and float(number_text(unit.from_si(margin), decimals)) == 0.0:
        return printed_freely(margin, unit, 2)
    return shown_with_unit(number_text(unit.from_si(margin), decimals), unit)


def _percent(solution: Solution, limit: Limit, margin: float, bound: float) -> tuple[str | None, str | None]:
    if solution.level(limit.symbol):
        return None, NO_PERCENT
    if bound == 0.0:
        return None, NO_PERCENT_OF_ZERO
    return f"{100.0 * margin / abs(bound):.1f} %", None


def _title(solution: Solution, symbol: str) -> str:
    if symbol in solution.plan.inputs:
        return solution.plan.inputs[symbol].title
    return solution.step(symbol).step.title
