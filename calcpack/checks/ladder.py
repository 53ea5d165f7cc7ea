"""The reversible figure of a sheet to its net one, one rung a loss: destruction in equipment, exergy left unused."""
from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from calcpack.checks.entries import entry, printed
from calcpack.checks.exergy import GROUP, dead_state, destroyed
from calcpack.formula.evaluate import value as evaluated
from calcpack.formula.parse import parse
from calcpack.formula.tree import symbols_of
from calcpack.plan.facts import Ladder
from calcpack.solving.solution import Solution
from calcpack.units.digits import decimals_for, number_text

if TYPE_CHECKING:
    from calcpack.record import Record

SHARE = 1e-9
"""What the rungs may leave between start and end, of the greater of the two."""

GIVES = 1e-6
"""What look-ups may leave below zero in a rung that loses nothing, of the greater of start and end."""

SIGNIFICANT = 5
DEAD = "T_dead"


@dataclass(frozen=True, slots=True)
class Step:
    """One rung [W]: ``kind`` is 'destruction' or 'loss', ``either`` whether it may be below zero."""

    label: str
    value: float
    kind: str
    formula: str
    either: bool = False


@dataclass(frozen=True, slots=True)
class Climb:
    """A ladder with its numbers [W]; ``reason`` says why there are none, else ''."""

    ladder: Ladder
    start: float
    steps: tuple[Step, ...]
    end: float
    reason: str = ""

    @property
    def arrived(self) -> float:
        """Where the rungs lead from the start [W]; the end, but for rounding."""
        lost = math.fsum(step.value for step in self.steps)
        return self.start + lost if self.ladder.upward else self.start - lost

    @property
    def destroys(self) -> bool:
        """Whether equipment stands between start and end; without, the rungs are what the sheet says they are."""
        return any(step.kind == "destruction" for step in self.steps)

    @property
    def size(self) -> float:
        return max(abs(self.start), abs(self.end))


def climb(solution: Solution) -> Climb | None:
    """The ladder of a sheet with its numbers; None where its method has none."""
    ladder = solution.plan.facts.ladder
    if ladder is None:
        return None
    dead = dead_state(solution)
    parts = [one for one in destroyed(solution, dead) if one.volume.name not in ladder.skip]
    missing = missing_symbols(solution, ladder.start, *(rung.formula for rung in (*ladder.before, *ladder.after)))
    if missing:
        return Climb(ladder, 0.0, (), 0.0, f"not on this sheet: {', '.join(missing)}")
    reasons = [f"{one.volume.name}: {one.reason}" for one in parts if one.reason]
    if reasons:
        return Climb(ladder, 0.0, (), 0.0, "; ".join(reasons))
    lost = tuple(Step(one.volume.name, one.balance, "destruction", "") for one in parts if one.balance is not None)
    before, after = (tuple(Step(rung.label, formula_value(solution, rung.formula, dead.T), "loss", rung.formula,
                                rung.either) for rung in rungs) for rungs in (ladder.before, ladder.after))
    return Climb(ladder, formula_value(solution, ladder.start, dead.T), (*before, *lost, *after),
                 solution.value(ladder.end))


def formula_value(solution: Solution, text: str, T_dead: float) -> float:
    """A formula of the sheet's symbols and of the dead state's temperature [SI]."""
    return float(evaluated(parse(text), {**solution.values, DEAD: T_dead}))


def missing_symbols(solution: Solution, *texts: str) -> list[str]:
    """The symbols of formulas that the sheet has no value for, beside the dead state's temperature."""
    return sorted({name for text in texts for name in symbols_of(parse(text))
                   if name != DEAD and not solution.has(name)})


def ladder_sums(solution: Solution, record: Record) -> tuple[dict[str, Any], ...]:
    """The rungs lead from the reversible figure to the net one, and no rung gives what it should take."""
    found = climb(solution)
    if found is None or not (found.destroys or found.reason):
        return ()
    text = f"From the reversible figure to {found.ladder.end}: what the rungs leave over"
    if found.reason:
        return (entry("V-XL", GROUP, text, "", "", "not evaluated", found.reason),)
    dimension = solution.unit(found.ladder.end).dimension
    left, allowed = found.arrived - found.end, SHARE * found.size
    wrong = [step.label for step in found.steps if step.value < -GIVES * found.size and not step.either]
    entries = [entry("V-XL", GROUP, text, printed(solution, left, dimension), printed(solution, allowed, dimension),
                     "ok" if abs(left) <= allowed else "fails", f"{len(found.steps)} rungs"),
               entry("V-XN", GROUP, "Each rung takes from the figure, none gives", ", ".join(wrong) or "none gives",
                     "none", "fails" if wrong else "ok")]
    return tuple(entries)


def ladder_view(solution: Solution) -> dict[str, Any] | None:
    """The record's ladder, every rung printed to the same place; None without one."""
    found = climb(solution)
    if found is None or found.reason:
        return None
    shown_in = solution.unit(found.ladder.end)
    decimals = max(0, decimals_for(shown_in.from_si(found.size), SIGNIFICANT))

    def number(value: float) -> dict[str, Any]:
        return {"value": float(value), "shown": number_text(shown_in.from_si(value), decimals)}
    return {"title": found.ladder.title, "unit": shown_in.symbol, "upward": found.ladder.upward,
            "start": {"label": found.ladder.start_label, "formula": found.ladder.start, **number(found.start)},
            "rungs": [{"label": step.label, "kind": step.kind, "formula": step.formula,
                       "share": step.value / found.size, "share_shown": f"{100.0 * step.value / found.size:.1f} %",
                       **number(step.value)} for step in found.steps],
            "end": {"label": found.ladder.end_label, "symbol": found.ladder.end,
                    "share_shown": f"{100.0 * found.end / found.size:.1f} %", **number(found.end)},
            "dead_state": dead_state(solution).T, "sum_residual": float(found.arrived - found.end)}


def losses(solution: Solution) -> list[dict[str, Any]]:
    """The rungs that are exergy left unused outside the equipment, for the record's exergy."""
    view = ladder_view(solution)
    return [{"label": rung["label"], "value": rung["value"], "shown": rung["shown"], "unit": view["unit"]}
            for rung in view["rungs"] if rung["kind"] == "loss"] if view else []
