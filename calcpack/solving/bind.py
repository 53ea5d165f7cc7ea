"""A spec bound to its method: fluids opened, inputs read, the plan laid.

Everything that can be wrong before a number is computed is found here, and
told at once.
"""
from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from calcpack.errors import CalcpackError, Fault, NoAnswerError, SpecError, UnitError, nearest
from calcpack.formula.dimension import TEMPERATURE
from calcpack.methods import Method, methods
from calcpack.plan.facts import InputNeed
from calcpack.plan.laid import LaidInput, LaidPlan
from calcpack.plan.lay import lay
from calcpack.plan.outputs import measure_of_kind, measure_of_unit
from calcpack.plan.plan import Plan
from calcpack.record.carried import Carried
from calcpack.solving.carrying import reading_of
from calcpack.solving.own import add_own_steps
from calcpack.solving.series import Opened, close_series, kind_faults, open_series
from calcpack.spec.drafts import SERIES
from calcpack.units import Reading, kind_of_unit, print_unit, read_quantity, shown_with_unit

if TYPE_CHECKING:
    from calcpack.spec import Spec

READ_BY_CAUTIONS = frozenset({"p_SO3", "p_H2O"})
"""Inputs of the engineer's own that no step needs to read, since cautions do."""

_NAMES = re.compile(r"[A-Za-z][A-Za-z0-9]*(?:_[A-Za-z0-9]+)*")


@dataclass(frozen=True, slots=True)
class Bound:
    """A spec ready to be solved: its method, options, laid plan and input readings."""

    spec: Spec
    method: Method
    options: Mapping[str, str]
    plan: LaidPlan
    readings: Mapping[str, Reading]
    written: Mapping[str, str]


def bind(spec: Spec, overrides: Mapping[str, str] | None = None, earlier: tuple[Fault, ...] = (),
         carried: Mapping[str, Carried | CalcpackError] | None = None) -> Bound:
    """Bind ``spec``; ``overrides`` replace input values, ``earlier`` are faults already found.

    ``carried`` has, by input, what is taken from other sheets, or why it cannot be had.

    Raises
    ------
    SpecError
        With every fault, the earlier ones first, in the order of the file.
    NoAnswerError
        Where nothing is wrong, and a sheet that a value is taken from has no answer.
    """
    binder = _Binder(spec, dict(overrides or {}), carried or {}, bool(earlier))
    bound = binder.bind()
    faults = [*earlier, *binder.faults]
    if not faults and binder.unanswered:
        raise NoAnswerError(binder.unanswered)
    if faults or bound is None:
        raise SpecError(sorted(faults, key=lambda fault: (fault.place.line, fault.place.column)
                               if fault.place else (0, 0)))
    return bound


class _Binder:
    def __init__(self, spec: Spec, overrides: dict[str, str], carried: Mapping[str, Carried | CalcpackError],
                 faulty: bool = False) -> None:
        self.spec = spec
        self.faulty = faulty
        self.overrides = overrides
        self.carried = carried
        self.faults: list[Fault] = []
        self.unanswered: list[Fault] = []
        # Inputs without a value: the steps that use them are not blamed for it.
        self.lost: set[str] = set()
        self.readings: dict[str, Reading] = {}
        self.written: dict[str, str] = {}
        # Whether the options say which plan is meant; else nothing that only hangs on the plan is blamed.
        self.shaped = True

    def bind(self) -> Bound | None:
        method = self.method()
        if method is None:
            return None
        options = self.options(method)
        self.shaped = not self.faults
        fluids = self.fluids(method, options)
        plan = Plan(options, fluids)
        count = len(self.faults)
        self.guarded(lambda: method.lay(plan), ("case", "options"))
        if not self.shaped:
            # A default in the place of a faulty option may contradict the others.
            del self.faults[count:]
        opened = self.opened(plan)
        self.shaped = self.shaped and len(self.faults) == count and SERIES not in self.spec.dropped
        inputs = self.inputs(plan.needs)
        if not self.shaped:
            return None
        self.guarded(lambda: close_series(plan, self.spec, opened) if opened else add_own_steps(plan, self.spec),
                     ("steps",))
        laid, faults = lay(plan, inputs, self.spec.sheet.units,
                           lambda fault, path: self.spec.located(fault, *path), self.spec.dropped | self.lost)
        # A method's steps cannot be proved where an option, a fluid or an input of its own is at fault.
        self.faults += [fault for fault in faults if fault.place is not None or not self.faults]
        self.faults += kind_faults(laid, self.spec, opened) if opened else []
        self.outside(laid, plan)
        self.idle(laid, plan)
        if self.spec.sheet.T_dead is not None and "T_0" in (*plan.needs, *self.spec.case.inputs):
            self.fault("the dead state is given twice", ("sheet", "T_dead"), key=True,
                       expected="the input T_0 alone, where the sheet has one")
        return Bound(self.spec, method, options, laid, self.readings, self.written)

    def opened(self, plan: Plan) -> Opened | None:
        """The series of the spec, if it has one that can be read."""
        found: list[Opened] = []
        if self.spec.case.series is not None and self.shaped:
            self.guarded(lambda: found.append(open_series(plan, self.spec)), ("case", "series"))
        return found[0] if found else None

    def guarded(self, call: Any, path: tuple) -> None:
        try:
            call()
        except CalcpackError as error:
            self.faults += [fault.at(self.spec.place(*path, key=True)) for fault in error.faults]

    def fault(self, what: str, path: tuple, *, key: bool = False, **more: str | None) -> None:
        self.faults.append(Fault(what, self.spec.place(*path, key=key), **more))

    def method(self) -> Method | None:
        known = methods()
        name = self.spec.case.method
        if name not in known:
            self.fault(f"there is no method {name!r}", ("case", "method"), expected="one of " + ", ".join(known),
                       hint=nearest(name, known))
        return known.get(name)

    def options(self, method: Method) -> dict[str, str]:
        chosen: dict[str, str] = {}
        for name, value in self.spec.case.options.items():
            option = method.option(name)
            if option is None:
                names = [one.name for one in method.options]
                self.fault(f"{method.name} has no option {name!r}", ("case", "options", name), key=True,
                           expected="one of " + ", ".join(names) if names else "no options",
                           hint=nearest(name, names))
            elif not option.accepts(value):
                self.fault(f"option {name} cannot be {value!r}", ("case", "options", name),
                           expected=option.expected, hint=nearest(value, option.values))
            else:
                chosen[name] = value
        return method.complete(chosen)

    def fluids(self, method: Method, options: Mapping[str, str]) -> dict[str, Any]:
        from calcpack.fluids import open_fluid
        wanted = {role.name: role for role in method.roles(options)}
        opened: dict[str, Any] = {}
        for name, definition in self.spec.case.fluids.items():
            if self.shaped and wanted and name not in wanted and not self.spec.steps:
                self.fault(f"{method.name} has no use for a fluid {name!r} with these options",
                           ("case", "fluids", name), key=True, expected="one of " + ", ".join(wanted),
                           hint=nearest(name, wanted))
                continue
            try:
                opened[name] = open_fluid(definition)
            except CalcpackError as error:
                self.faults += [fault.at(self.spec.place("case", "fluids", name)) for fault in error.faults]
        for name, role in wanted.items():
            if self.shaped and name not in self.spec.case.fluids:
                self.fault(f"the fluid {name!r} is missing", ("case",), key=True,
                           expected=f"case.fluids.{name}: {role.title.lower()}, such as {role.typical}")
        return opened

    def inputs(self, needs: Mapping[str, InputNeed]) -> dict[str, LaidInput]:
        laid: dict[str, LaidInput] = {}
        given = self.spec.case.inputs
        for symbol in self.overrides:
            if self.shaped and symbol not in given and symbol not in needs:
                self.faults.append(Fault(f"--set {symbol}: there is no input of that symbol",
                                         hint=nearest(symbol, [*given, *needs])))
        for symbol, need in needs.items():
            if symbol in self.spec.dropped:
                continue
            if symbol not in given and symbol not in self.overrides and need.default is None:
                if self.shaped:
                    self.fault(f"the input {symbol!r} is missing", ("case",), key=True,
                               expected=f"case.inputs.{symbol}: {need.title[:1].lower()}{need.title[1:]}, "
                                        f"such as {need.typical!r}")
                continue
            reading = self.reading(symbol, need)
            if reading is not None:
                laid[symbol] = _laid(symbol, need.title, reading, need, self.spec.sheet.units)
        for symbol in given:
            if symbol not in needs:
                reading = self.reading(symbol, None)
                if reading is not None:
                    laid[symbol] = _laid(symbol, given[symbol].title or symbol, reading, None, self.spec.sheet.units)
        return laid

    def reading(self, symbol: str, need: InputNeed | None) -> Reading | None:
        """Read an input and keep it; None and a fault where it cannot be read."""
        given = self.spec.case.inputs.get(symbol)
        if given is not None and given.link is not None and symbol not in self.overrides:
            return self.taken(symbol, need)
        text = self.overrides.get(symbol, given.value if given else (need.default if need else ""))
        place = self.spec.place("case", "inputs", symbol, "value") if given and symbol not in self.overrides else None
        kind = need.kind if need else _own_kind(symbol, text)
        try:
            reading = read_quantity(text, kind, p_atm=self.spec.sheet.p_atm)
            if need is not None:
                _require_range(reading, need, text)
        except UnitError as error:
            for fault in error.faults:
                shown = fault if place else Fault(f"--set {symbol}: {fault.what}", None, fault.found, fault.expected,
                                                  fault.hint)
                self.faults.append(shown.at(place))
            return None
        self.readings[symbol] = reading
        self.written[symbol] = text.strip()
        self.tolerance(symbol, reading)
        return reading

    def taken(self, symbol: str, need: InputNeed | None) -> Reading | None:
        """The reading of an input that another sheet gives; None and a fault where it cannot be had."""
        link, place = self.spec.case.inputs[symbol].link, self.spec.place("case", "inputs", symbol, "from")
        one = self.carried.get(symbol) or SpecError(Fault(f"nothing here gives the value of {link}"))
        if isinstance(one, CalcpackError):
            kept = self.unanswered if isinstance(one, NoAnswerError) else self.faults
            kept += [fault.at(place) for fault in one.faults]
            self.lost.add(symbol)
            return None
        try:
            reading = reading_of(one, need.kind if need else _own_kind(symbol, f"1 {one.unit}"), str(link))
            if need is not None:
                _require_range(reading, need, f"{reading.text} {one.unit}")
        except UnitError as error:
            self.faults += [fault.at(place) for fault in error.faults]
            self.lost.add(symbol)
            return None
        self.readings[symbol] = reading
        self.written[symbol] = shown_with_unit(reading.text, one.unit)
        self.tolerance(symbol, reading)
        return reading

    def tolerance(self, symbol: str, reading: Reading) -> None:
        given = self.spec.case.inputs.get(symbol)
        if given is None or given.tol is None:
            return
        kind = kind_of_unit(reading.unit)
        name = "temperature difference" if reading.unit.dimension == TEMPERATURE else kind.name if kind else None
        try:
            if read_quantity(given.tol, name).value < 0.0:
                raise UnitError(Fault("a tolerance is not negative", found=repr(given.tol)))
        except UnitError as error:
            self.faults += [fault.at(self.spec.place("case", "inputs", symbol, "tol")) for fault in error.faults]

    def outside(self, laid: LaidPlan, plan: Plan) -> None:
        """Results and limits must name symbols of this sheet; one whose own step or input is at fault is not blamed."""
        proved = {*laid.inputs, *(step.symbol for step in laid.steps)}
        known = [*plan.needs, *self.spec.case.inputs, *(step.symbol for step in (*plan.steps, *self.spec.steps))]
        for index, result in enumerate(self.spec.results):
            if result.symbol not in known:
                self.fault(f"the result {result.symbol!r} has no value on this sheet", ("results", index),
                           hint=nearest(result.symbol, known))
        for index, limit in enumerate(self.spec.limits):
            if limit.symbol not in known:
                self.fault(f"the limited quantity {limit.symbol!r} has no value on this sheet",
                           ("limits", index, "symbol"), hint=nearest(limit.symbol, known))
            elif limit.symbol in proved:
                self.limit_bound(laid, index, known)

    def idle(self, laid: LaidPlan, plan: Plan) -> None:
        """An input that nothing uses is a slip: of spelling, or left over from another option."""
        if self.faults or self.faulty or self.lost:
            # What would have used it may be the very thing at fault.
            return
        used = {name for step in laid.steps for name in step.uses} | {one.symbol for one in self.spec.results}
        used |= READ_BY_CAUTIONS | {name for limit in self.spec.limits for name in (limit.symbol, limit.bound)}
        if self.spec.case.series is not None:
            used |= set(_NAMES.findall(repr(self.spec.case.series)))
        unread = [need for need in plan.needs if need not in self.spec.case.inputs]
        for symbol in self.spec.case.inputs:
            if symbol not in used and symbol not in plan.needs:
                self.fault(f"nothing on this sheet uses the input {symbol!r}", ("case", "inputs", symbol), key=True,
                           hint=nearest(symbol, unread) or "delete it, or set the option or step that takes it")

    def limit_bound(self, laid: LaidPlan, index: int, known: list[str]) -> None:
        limit = self.spec.limits[index]
        if limit.bound in known:
            return
        measure = laid.inputs[limit.symbol].measure if limit.symbol in laid.inputs else laid.step(limit.symbol).measure
        unit = laid.inputs[limit.symbol].unit if limit.symbol in laid.inputs else laid.step(limit.symbol).unit
        kind = kind_of_unit(unit)
        name = ("temperature" if measure.level == 1.0 else "temperature difference") \
            if measure.dimension == TEMPERATURE else kind.name if kind else None
        try:
            read_quantity(limit.bound, name, p_atm=self.spec.sheet.p_atm)
        except UnitError as error:
            self.faults += [fault.at(self.spec.place("limits", index, limit.key)) for fault in error.faults]


def _own_kind(symbol: str, text: str) -> str | None:
    """An engineer's own input in K is a difference where its symbol says so (``dT_…``), else a level."""
    spelled = text.split()[-1] if len(text.split()) > 1 else ""
    if spelled in ("K", "degR", "°R"):
        return "temperature difference" if symbol.startswith(("dT", "Delta")) else "temperature"
    return None


def _laid(symbol: str, title: str, reading: Reading, need: InputNeed | None, system: str) -> LaidInput:
    if need is not None:
        measure = measure_of_kind(need.kind)
    elif symbol.startswith(("dT", "Delta")) and reading.unit.dimension == TEMPERATURE:
        measure = measure_of_kind("temperature difference")
    elif reading.unit.dimension == TEMPERATURE:
        measure = measure_of_kind("temperature")
    else:
        measure = measure_of_unit(reading.unit.symbol)
    return LaidInput(symbol, title, measure, print_unit(measure.dimension, system, reading.unit), need)


def _require_range(reading: Reading, need: InputNeed, text: str) -> None:
    """Raise where an input is outside what the method can take."""
    low = read_quantity(need.low, need.kind).value if need.low is not None else None
    high = read_quantity(need.high, need.kind).value if need.high is not None else None
    below = low is not None and (reading.value < low or (need.low_open and reading.value == low))
    above = high is not None and reading.value > high
    if below or above:
        ends = [f"above {need.low}" if need.low_open else f"at least {need.low}"] if need.low is not None else []
        ends += [f"at most {need.high}"] if need.high is not None else []
        raise UnitError(Fault(f"{need.symbol}, {need.title[:1].lower()}{need.title[1:]}, is out of its range",
                              found=repr(text.strip()), expected=" and ".join(ends), hint=need.note or None))
