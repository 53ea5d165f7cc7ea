"""A spec's series around its method: the row's inputs ahead of the method's steps, table and totals behind them."""
from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from pathlib import Path
from typing import TYPE_CHECKING, Any

from calcpack.errors import Fault, SpecError, nearest
from calcpack.plan.equipment.season import Account, account_figures, account_needs, account_rows, account_sums
from calcpack.plan.facts import InputNeed
from calcpack.plan.laid import LaidPlan
from calcpack.plan.outputs import measure_of_kind
from calcpack.plan.plan import Plan
from calcpack.plan.steps import Demand, Step
from calcpack.solving.own import add_own_steps, resting_on
from calcpack.solving.rows import Rows, read_rows

if TYPE_CHECKING:
    from calcpack.spec import Spec

PATH = ("case", "series")
TABLE = "n_rows"
NOTE = "States, diagrams and cautions are those of the row shown; balances and limits are checked in every row."
GROUNDS = {"sum": "sum over the rows", "min": "least of the rows", "max": "greatest of the rows",
           "mean": "arithmetic mean of the rows"}
LATE = "The engineer's own steps on all rows"


@dataclass(frozen=True, slots=True)
class Opened:
    """A series whose rows are read and whose inputs stand ahead of the method's steps."""

    rows: Rows
    account: Account
    replaced: dict[str, InputNeed]


def open_series(plan: Plan, spec: Spec) -> Opened:
    """Put the given columns and the inputs that follow from them ahead of the steps laid so far.

    Raises
    ------
    SpecError
        Where rows cannot be read, or the series does not fit the method.
    """
    written = spec.case.series
    rows = _placed(spec, "rows", lambda: read_rows(written.rows, Path(spec.file).parent))
    shown = _placed(spec, "shown", lambda: rows.index(written.shown))
    account = Account(written.account, written.heat or "", written.power or "", written.cycling, written.backup,
                      written.emissions == "yes", written.costs == "yes", rows.season)
    _require_columns(spec, rows, account)
    replaced = {symbol: _replaced(plan, spec, symbol) for symbol in written.inputs}
    front = _front(plan, spec, rows, replaced, shown)
    plan.items = [*front, *(replace(item, section=item.section + 1) if isinstance(item, Step) else item
                            for item in plan.items)]
    plan.sections.insert(0, f"The row shown in full: {rows.rows[shown].label}")
    account_needs(plan, account)
    return Opened(rows, account, replaced)


def _placed(spec: Spec, key: str, call: Callable[[], Any]) -> Any:
    try:
        return call()
    except SpecError as error:
        raise error.at(spec.place(*PATH, key)) from None


def _require_columns(spec: Spec, rows: Rows, account: Account) -> None:
    given = [column.symbol for column in rows.columns]
    wanted = {"none": (), "output": ("t_bin",), "heating": ("t_bin", "T_out")}[account.kind]
    missing = [name for name in wanted if name not in given]
    if missing:
        raise SpecError(Fault(f"the rows have no column {missing[0]}", spec.place(*PATH, "rows"),
                              found=", ".join(given),
                              expected=f"columns {' and '.join(wanted)} for the account {account.kind!r}"))
    taken = [name for name in given if name in spec.case.inputs or name in spec.case.series.inputs]
    if taken:
        raise SpecError(Fault(f"{taken[0]!r} is a column of the rows and an input", spec.place(*PATH, "rows"),
                              hint="name the column otherwise, or leave the input out"))


def _replaced(plan: Plan, spec: Spec, symbol: str) -> InputNeed:
    """The input that a row sets, taken off those that the spec must give."""
    if symbol not in plan.needs:
        raise SpecError(Fault(f"the method takes no input {symbol!r}", spec.place(*PATH, "inputs", symbol, key=True),
                              hint=nearest(symbol,
                                           plan.needs) or "a quantity of your own that differs by row is a step"))
    return plan.needs.pop(symbol)


def _front(plan: Plan, spec: Spec, rows: Rows, replaced: dict[str, InputNeed], shown: int) -> list[Step | Demand]:
    steps: list[Step | Demand] = [
        Step(column.symbol, column.title, text, column.print_unit or None, reference=rows.source,
             note="given by the row")
        for column, text in zip(rows.columns, rows.rows[shown].values, strict=True)]
    for symbol, need in replaced.items():
        path = (*PATH, "inputs", symbol)
        steps.append(Step(symbol, need.title, spec.case.series.inputs[symbol], _usual_unit(need),
                          reference="relation that the spec states for each row",
                          note="takes the place of an input, by row", place=spec.place(*path), path=path))
        steps += _range_demands(need)
    return steps


def _usual_unit(need: InputNeed) -> str | None:
    parts = need.typical.split()
    return parts[1] if len(parts) > 1 else None


def _range_demands(need: InputNeed) -> list[Demand]:
    ends = [(need.low, ">" if need.low_open else ">="), (need.high, "<=")]
    name = f"{need.symbol}, {need.title[:1].lower()}{need.title[1:]}, is out of its range"
    return [Demand(f"{need.symbol} {sense} {end}", name, need.note or "look at its formula under series.inputs")
            for end, sense in ends if end is not None]


def close_series(plan: Plan, spec: Spec, opened: Opened) -> None:
    """Add the engineer's own steps, the account, the table, the totals, and the own steps that rest on them."""
    written, account = spec.case.series, opened.account
    beyond = _account_symbols(plan, account) | {TABLE, *(total.symbol for total in written.totals)}
    late = resting_on(spec, beyond)
    add_own_steps(plan, spec, leaving=late)
    shown = account_rows(plan, account)
    sums = account_sums(account)
    given = tuple(column.symbol for column in opened.rows.columns)
    columns = dict.fromkeys((*given, *opened.replaced, *shown, *written.columns, *(column for _, column, _ in sums),
                             *(total.of for total in written.totals)))
    _require_known(plan, spec, tuple(columns))
    section = plan.section("All rows")
    section.cases(TABLE, "The calculation solved for each row: number of rows", given=given,
                  bound=tuple(opened.replaced),
                  columns=tuple(columns), rows=opened.rows.rows, source=opened.rows.source,
                  shown=opened.rows.index(written.shown), note=NOTE,
                  reference="the steps before this one, solved anew for each row")
    for symbol, column, title in sums:
        section.total(symbol, ("sum", column, TABLE), title, reference=GROUNDS["sum"])
    account_figures(section, account)
    for index, total in enumerate(written.totals):
        section.total(total.symbol, (total.by, total.of, TABLE), total.title, reference=GROUNDS[total.by],
                      place=spec.place(*PATH, "totals", index, "of"))
    add_own_steps(plan, spec, leaving={step.symbol for step in spec.steps} - late, title=LATE)


def _account_symbols(plan: Plan, account: Account) -> set[str]:
    """What an account adds, found by laying it on a plan of its own."""
    trial = Plan(plan.options, plan.fluids)
    account_rows(trial, account)
    section = trial.section("")
    account_figures(section, account)
    return {step.symbol for step in trial.steps} | {symbol for symbol, _, _ in account_sums(account)}


def _require_known(plan: Plan, spec: Spec, columns: tuple[str, ...]) -> None:
    known = {*(step.symbol for step in plan.steps), *plan.needs, *spec.case.inputs}
    faults = []
    for name in columns:
        if name in known or name in spec.dropped:
            continue
        written = spec.case.series
        path = next((key for key in ("heat", "power") if getattr(written, key) == name), None)
        where = (*PATH, path) if path else (*PATH, "columns", written.columns.index(name)) if name in written.columns \
            else (*PATH, "totals", [total.of for total in written.totals].index(name), "of")
        faults.append(Fault(f"{name!r} has no value ahead of the table of rows", spec.place(*where),
                            hint=nearest(name, known)))
    if faults:
        raise SpecError(faults)


def kind_faults(laid: LaidPlan, spec: Spec, opened: Opened) -> list[Fault]:
    """Formulas that give another kind of quantity than the input they stand for."""
    faults = []
    proved = {step.symbol: step for step in laid.steps}
    for symbol, need in opened.replaced.items():
        if symbol not in proved:
            continue
        found, meant = proved[symbol].measure, measure_of_kind(need.kind)
        if found.dimension != meant.dimension or (found.level is not None and meant.level is not None
                                                  and found.level != meant.level):
            faults.append(Fault(f"{symbol} is {meant.text}, its formula gives {found.text}",
                                spec.place(*PATH, "inputs", symbol)))
    return faults


