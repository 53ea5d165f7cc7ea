"""A plan as a method built it to a laid plan: formulas read, dimensions proved, steps numbered."""
from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import replace

from calcpack.errors import CalcpackError, Fault, FormulaError, nearest
from calcpack.formula.dimension import TEMPERATURE, Measure, measure
from calcpack.formula.parse import formula_fault, parse, parse_condition
from calcpack.formula.tree import FUNCTIONS, Node, PropertyCall, Symbol, symbols_of
from calcpack.plan.laid import LaidColumn, LaidDemand, LaidInput, LaidPlan, LaidStep
from calcpack.plan.outputs import PROPERTIES, measure_of_property, measure_of_unit
from calcpack.plan.plan import Plan
from calcpack.plan.steps import (
    CasesStep,
    ChoiceStep,
    Closing,
    Demand,
    LookupStep,
    OptimumStep,
    PropertyStep,
    RootStep,
    SeriesStep,
    Step,
    TotalStep,
)
from calcpack.units import Unit, dimension_text, print_unit, read_quantity, unit

Locate = Callable[[Fault, tuple[str | int, ...]], Fault]


def lay(plan: Plan, inputs: Mapping[str, LaidInput], system: str, locate: Locate | None = None,
        lost: frozenset[str] = frozenset()) -> tuple[LaidPlan, tuple[Fault, ...]]:
    """Read and prove every step of ``plan`` for print units ``system``.

    ``inputs`` are those that the spec gives, ``locate`` puts a fault inside a
    formula's text at its place in the spec, ``lost`` are symbols whose fault
    has been told already. All faults come back together; a
    step with a fault is left out, and what only hangs on it is not blamed.
    """
    layer = _Layer(plan, inputs, system, locate, lost)
    for item in plan.items:
        layer.lay(item)
    return LaidPlan(dict(inputs), tuple(layer.items), tuple(plan.sections), plan.facts,
                    plan.fluids), tuple(layer.faults)


class _Layer:
    """Goes through the items once, knowing at each what is known before it."""

    def __init__(self, plan: Plan, inputs: Mapping[str, LaidInput], system: str, locate: Locate | None,
                 lost: frozenset[str]) -> None:
        self.plan = plan
        self.locate = locate
        self.system = system
        self.known: dict[str, Measure] = {name: one.measure for name, one in inputs.items()}
        self.lost: set[str] = set(lost)
        self.items: list[LaidStep | Closing | LaidDemand] = []
        self.faults: list[Fault] = []
        self.counts: dict[int, int] = {}
        self.later = {step.symbol for step in plan.steps}
        self.open: dict[str, RootStep | OptimumStep] = {}

    def lay(self, item: Step | Closing | Demand) -> None:
        try:
            if isinstance(item, Closing):
                self.close(item)
            elif isinstance(item, Demand):
                condition = parse_condition(item.condition)
                self.measured(condition, item.condition)
                self.items.append(LaidDemand(condition, item.text, item.hint))
            else:
                self.items.append(self.laid(item))
        except CalcpackError as error:
            place = item.place if isinstance(item, Step) else None
            shown = [self.moved(fault, item) for fault in error.faults if fault.what != _SILENT]
            self.faults += [fault.at(place) for fault in shown]
            self.lost.add(item.symbol)

    def moved(self, fault: Fault, item: Step | Closing | Demand) -> Fault:
        """A fault in a formula's text at the place of that text in the spec."""
        if fault.place is None or fault.place.file:
            return fault
        if isinstance(item, Step) and item.path and self.locate is not None:
            return self.locate(fault, item.path)
        return replace(fault, place=None, what=f"in the method's step {item.symbol}: {fault.what}")

    def laid(self, step: Step) -> LaidStep:
        if step.symbol in self.known:
            raise FormulaError(Fault(f"{step.symbol!r} already has a value", hint="give the step another symbol"))
        self.counts[step.section] = self.counts.get(step.section, 0) + 1
        number = f"{step.section + 1}.{self.counts[step.section]}"
        match step:
            case PropertyStep():
                result = self.property(step, number)
            case RootStep() | OptimumStep():
                result = self.root(step, number)
            case ChoiceStep():
                result = self.choice(step, number)
            case LookupStep():
                result = self.lookup(step, number)
            case SeriesStep():
                result = self.series(step, number)
            case CasesStep():
                result = self.cases(step, number)
            case TotalStep():
                result = self.total(step, number)
            case _:
                tree = parse(step.formula)
                if isinstance(tree, PropertyCall):
                    return self.property_from(step, number, tree)
                result = self.finished(step, number, tree, {}, self.measured(tree, step.formula))
        self.known[step.symbol] = result.measure
        return result

    def finished(self, step: Step, number: str, tree: Node | None, trees: Mapping[str, Node], found: Measure,
                 columns: tuple[LaidColumn, ...] = ()) -> LaidStep:
        shown_in, proved = self.fitted(step.unit, found, step.symbol)
        parts = [part for part in (tree, *trees.values()) if part is not None]
        uses = list(dict.fromkeys(name for part in parts for name in symbols_of(part) if name != step.symbol))
        for column in columns:
            if column.tree is not None:
                uses += [name for name in symbols_of(column.tree) if name not in uses]
        local = {column.symbol for column in columns}
        return LaidStep(step, number, tree, dict(trees), proved, shown_in,
                        tuple(name for name in uses if name not in local), columns)

    def fitted(self, spelled: str | None, found: Measure, symbol: str) -> tuple[Unit, Measure]:
        """The print unit, and the measure once the wanted unit has had its say about levels."""
        if spelled is None:
            return print_unit(found.dimension, self.system), found
        wanted = unit(spelled)
        if wanted.dimension != found.dimension:
            raise FormulaError(Fault(f"{symbol} is {dimension_text(found.dimension)}, its unit {spelled!r} is "
                                     f"{dimension_text(wanted.dimension)}"))
        if found.dimension == TEMPERATURE and wanted.level:
            if found.level == 0.0:
                raise FormulaError(Fault(f"{symbol} is a temperature difference, its unit {spelled!r} is for levels",
                                         hint="print a difference in K"))
            found = Measure(TEMPERATURE, 1.0)
        return print_unit(found.dimension, self.system, wanted), found

    def measured(self, tree: Node, text: str, extra: Mapping[str, Measure] | None = None) -> Measure:
        return measure(tree, lambda symbol: self.of_symbol(symbol, text, extra or {}), text)

    def of_symbol(self, symbol: Symbol, text: str, extra: Mapping[str, Measure]) -> Measure:
        name = symbol.name
        if name in extra:
            return extra[name]
        if name in self.known:
            return self.known[name]
        if name in self.lost:
            raise FormulaError(Fault(_SILENT))
        what = f"{name!r} is used before it has a value" if name in self.later else f"{name!r} has no value"
        hint = None if name in self.later else nearest(name, self.known) or \
            "give it under case.inputs or as a step"
        raise FormulaError(formula_fault(text, what, symbol.at, len(name), hint=hint))

    def property_from(self, step: Step, number: str, tree: PropertyCall) -> LaidStep:
        """A formula of the engineer's that is a property look-up, as a property step."""
        fields = {name: getattr(step, name) for name in
                  ("symbol", "title", "formula", "unit", "reference", "note", "section", "place")}
        result = self.property(PropertyStep(**fields), number, tree)
        self.known[step.symbol] = result.measure
        return result

    def property(self, step: PropertyStep, number: str, tree: Node | None = None) -> LaidStep:
        call = tree if tree is not None else parse(step.formula)
        if not isinstance(call, PropertyCall):
            raise FormulaError(Fault("a property look-up such as h(wf, p=p_1, T=T_1) is meant here"))
        found = self.called(call, step.formula)
        return self.finished(step, number, call, {}, found)

    def called(self, call: PropertyCall, text: str, extra: Mapping[str, Measure] | None = None) -> Measure:
        found = measure_of_property(call.output)
        if found is None:
            raise FormulaError(formula_fault(text, f"there is no property or function {call.output!r}", call.at,
                                             len(call.output), hint=nearest(call.output, (*PROPERTIES, *FUNCTIONS))))
        if call.fluid not in self.plan.fluids:
            known = ", ".join(sorted(self.plan.fluids)) or "none"
            raise FormulaError(formula_fault(text, f"{call.fluid!r} is not a fluid of this sheet", call.at,
                                             expected=f"a role under case.fluids: {known}",
                                             hint=nearest(call.fluid, self.plan.fluids)))
        for key, value in call.given:
            meant = measure_of_property(key)
            if meant is None:
                raise FormulaError(formula_fault(text, f"{key!r} is not a property", value.at,
                                                 hint=nearest(key, PROPERTIES)))
            given = self.measured(value, text, extra)
            if given.dimension != meant.dimension or (given.level == 0.0 and meant.level == 1.0):
                raise FormulaError(formula_fault(text, f"{key}= takes {meant.text}, this is {given.text}", value.at))
        self.readable(call)
        return found

    def readable(self, call: PropertyCall) -> None:
        """Ask the fluid, before any number is known, whether it can answer this."""
        self.plan.fluids[call.fluid].reader(call.output, tuple(key for key, _ in call.given))

    def root(self, step: RootStep | OptimumStep, number: str) -> LaidStep:
        trees = {"low": parse(step.low), "high": parse(step.high)}
        found = measure_of_unit(step.unit) if step.unit is not None else self.measured(trees["low"], step.low)
        for name, tree in trees.items():
            end = self.measured(tree, getattr(step, name))
            if end.dimension != found.dimension:
                raise FormulaError(Fault(f"the bracket's {name} end is {end.text}, the unknown {step.symbol} is "
                                         f"{found.text}"))
            if end.level == 1.0:
                found = Measure(found.dimension, 1.0)
        self.open[step.symbol] = step
        return self.finished(step, number, parse(step.formula), trees, found)

    def close(self, closing: Closing) -> None:
        step = self.open.pop(closing.symbol, None)
        if step is None:
            return
        self.measured(parse(step.formula), step.formula)
        self.items.append(closing)

    def choice(self, step: ChoiceStep, number: str) -> LaidStep:
        trees: dict[str, Node] = {}
        found: Measure | None = None
        for index, branch in enumerate(step.branches):
            if branch.when:
                trees[f"when {index}"] = parse_condition(branch.when)
                self.within(step, trees[f"when {index}"], branch.when, index, "when")
            trees[f"value {index}"] = parse(branch.value)
            value = self.within(step, trees[f"value {index}"], branch.value, index,
                                "value" if branch.when else "otherwise")
            if found is not None and found.dimension != value.dimension:
                raise FormulaError(Fault(f"the branches differ: one is {found.text}, one is {value.text}"))
            found = value if found is None or found.level is None else found
        return self.finished(step, number, None, trees, found or Measure(unit("").dimension))

    def within(self, step: ChoiceStep, tree: Node, text: str, index: int, key: str) -> Measure:
        """The measure of a branch's formula; its faults stand at that branch."""
        try:
            return self.measured(tree, text)
        except FormulaError as error:
            if not step.path or self.locate is None:
                raise
            raise FormulaError(self.locate(fault, (*step.path, index, key)) if fault.what != _SILENT else fault
                               for fault in error.faults) from None

    def lookup(self, step: LookupStep, number: str) -> LaidStep:
        tree = parse(step.formula)
        of = self.measured(tree, step.formula)
        value = read_quantity(step.points[0][1])
        for x, y in step.points:
            a, b = read_quantity(x), read_quantity(y)
            if a.unit.dimension != of.dimension or b.unit.dimension != value.unit.dimension:
                raise FormulaError(Fault(f"the table's row {x}, {y} does not fit the symbol looked up, which is "
                                         f"{of.text}, or the rows before it"))
        found = measure_of_unit(value.unit.symbol)
        wanted = replace(step, unit=step.unit or value.unit.symbol)
        return self.finished(wanted, number, tree, {}, found)

    def series(self, step: SeriesStep, number: str) -> LaidStep:
        trees = {f"row {index}": parse(row.first) for index, row in enumerate(step.rows)}
        local: dict[str, Measure] = {}
        columns: list[LaidColumn] = []
        for index, column in enumerate(step.columns):
            tree = parse(column.formula) if column.formula else None
            if index == 0:
                found = self.measured(trees["row 0"], step.rows[0].first)
            elif isinstance(tree, PropertyCall):
                found = self.called(tree, column.formula, local)
            else:
                found = self.measured(tree, column.formula, local)
            shown_in, found = self.fitted(column.unit, found, column.symbol)
            local[column.symbol] = found
            columns.append(LaidColumn(column.symbol, column.title, tree, found, shown_in))
        for index, row in enumerate(step.rows):
            self.measured(trees[f"row {index}"], row.first)
        return self.finished(step, number, None, trees, local[step.column], tuple(columns))

    def cases(self, step: CasesStep, number: str) -> LaidStep:
        for name in step.columns:
            self.of_symbol(Symbol(name, 0), name, {})
        result = self.finished(step, number, None, {}, Measure(unit("").dimension))
        return replace(result, uses=step.columns)

    def total(self, step: TotalStep, number: str) -> LaidStep:
        found = self.of_symbol(Symbol(step.column, 0), step.column, {})
        self.of_symbol(Symbol(step.table, 0), step.table, {})
        if step.reduction == "sum" and found.level == 1.0:
            raise FormulaError(Fault(f"{step.column} is a temperature level, and levels have no sum",
                                     expected="min, max or mean"))
        laid = (one for one in self.items if isinstance(one, LaidStep))
        like = next((one.unit.symbol for one in laid if one.symbol == step.column), None)
        result = self.finished(replace(step, unit=step.unit or like), number, None, {}, found)
        return replace(result, uses=(step.column, step.table))


_SILENT = "a symbol it needs has a fault of its own"
