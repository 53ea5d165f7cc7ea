"""The engineer's own steps, from the spec to the end of the plan."""
from __future__ import annotations

from collections.abc import Collection
from typing import TYPE_CHECKING, Any

from calcpack.errors import Fault, SpecError
from calcpack.formula.parse import parse, parse_condition
from calcpack.formula.tree import symbols_of
from calcpack.plan.order import ordered
from calcpack.plan.plan import Plan
from calcpack.plan.steps import Branch, ChoiceStep, LookupStep, RootStep, Step

if TYPE_CHECKING:
    from calcpack.spec import Spec

SECTION = "The engineer's own steps"


def add_own_steps(plan: Plan, spec: Spec, leaving: Collection[str] = (), title: str = SECTION) -> None:
    """Append the spec's steps but for those ``leaving``, in a section of their own, in an order to evaluate them.

    Raises
    ------
    SpecError
        Where steps form a circle, or give a value to a symbol that has one.
    """
    if all(step.symbol in leaving for step in spec.steps):
        return
    plan.section(title)
    index = len(plan.sections) - 1
    taken = {step.symbol for step in plan.steps} | set(spec.case.inputs) | set(plan.needs)
    steps: list[Step] = []
    faults: list[Fault] = []
    for at, written in enumerate(spec.steps):
        if written.symbol in leaving:
            continue
        if written.symbol in taken:
            faults.append(Fault(f"{written.symbol!r} has a value already, from the method or the inputs",
                                spec.place("steps", at, "symbol"), hint="give the step another symbol"))
            continue
        steps.append(_step(spec, at, written, index))
    if faults:
        raise SpecError(faults)
    plan.items += ordered(steps, {step.symbol: _uses(step) for step in steps})


def resting_on(spec: Spec, symbols: Collection[str]) -> frozenset[str]:
    """The engineer's own steps that use one of ``symbols``, directly or by way of another of them."""
    moving = set(symbols)
    uses = {}
    for at, written in enumerate(spec.steps):
        step = _step(spec, at, written, 0)
        uses[step.symbol] = {*_uses(step), *(symbols_of(parse(step.formula)) if isinstance(step, RootStep) else ())}
    grown = True
    while grown:
        more = {name for name, used in uses.items() if moving & used} - moving
        grown, moving = bool(more), moving | more
    return frozenset(moving & set(uses))


def _step(spec: Spec, at: int, written: Any, section: int) -> Step:
    common = {"symbol": written.symbol, "title": written.title, "unit": written.unit,
              "reference": written.reference or "", "note": written.note or "", "section": section}
    if written.choice is not None:
        branches = tuple(Branch(one.when or "", one.value, one.label or "")
                         for one in written.choice)
        return ChoiceStep(**common, branches=branches, **_at(spec, at, "choice"))
    if written.root is not None:
        root = written.root
        return RootStep(**common, formula=root.equation, low=root.low, high=root.high,
                        **_at(spec, at, "root", "equation"))
    if written.lookup is not None:
        table = written.lookup
        return LookupStep(**common, formula=table.of, points=table.points,
                          source=table.source, **_at(spec, at, "lookup", "of"))
    return Step(**common, formula=written.formula, **_at(spec, at, "formula"))


def _at(spec: Spec, at: int, *keys: str) -> dict[str, Any]:
    path = ("steps", at, *keys)
    return {"place": spec.place(*path), "path": path}


def _uses(step: Step) -> list[str]:
    match step:
        case ChoiceStep(branches=branches):
            texts = [branch.value for branch in branches]
            used = [name for branch in branches if branch.when for name in symbols_of(parse_condition(branch.when))]
        case RootStep(low=low, high=high):
            texts, used = [low, high], []
        case _:
            texts, used = [step.formula], []
    return [*used, *(name for text in texts for name in symbols_of(parse(text)))]
