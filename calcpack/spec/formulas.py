"""Check the engineer's own steps: one kind each, tables that ascend, symbols once."""
from __future__ import annotations

from collections.abc import Callable, Iterator
from itertools import pairwise

from calcpack.errors import Fault
from calcpack.spec.drafts import Draft
from calcpack.spec.places import Path, Wrong
from calcpack.spec.scalars import quantity
from calcpack.spec.schema import WrittenBranch, WrittenLookup, WrittenStep

KINDS = ("formula", "choice", "root", "lookup")


def kinds_of(step: WrittenStep) -> list[str]:
    """The kinds that a step is written as; one of them in a right spec."""
    return [kind for kind in KINDS if getattr(step, kind) is not None]


def one_kind_each(draft: Draft) -> Iterator[Wrong]:
    """A step is a formula, a choice, a root or a lookup."""
    for index, step in enumerate(draft.document.steps):
        given = kinds_of(step)
        if len(given) == 1:
            continue
        what = f"step {step.symbol!r} is both {given[0]!r} and {given[1]!r}" if given else \
            f"nothing says how step {step.symbol!r} is computed"
        yield Wrong(("steps", index, *given[1:2]), Fault(what, expected="one of " + ", ".join(KINDS)),
                    at_key=bool(given))


def choices_end(draft: Draft) -> Iterator[Wrong]:
    """A choice has conditions first and 'otherwise' last, so that one branch always holds."""
    for index, step in enumerate(draft.document.steps):
        branches = step.choice or []
        for place, branch in enumerate(branches):
            fault = _branch_fault(branch, last=place == len(branches) - 1)
            if fault is not None:
                yield Wrong(("steps", index, "choice", place), fault)


def _branch_fault(branch: WrittenBranch, *, last: bool) -> Fault | None:
    if last and branch.otherwise is None:
        return Fault("the last branch of a choice must hold where no condition does",
                     expected="otherwise: formula")
    if not last and branch.otherwise is not None:
        return Fault("'otherwise' stands before the last branch of a choice", expected="when and value")
    if last and (branch.when is not None or branch.value is not None):
        return Fault("a branch has both 'otherwise' and a condition or value", expected="otherwise: formula")
    if not last and (branch.when is None or branch.value is None):
        return Fault("a branch needs a condition and a value", expected="when and value")
    return None


def tables_ascend(draft: Draft) -> Iterator[Wrong]:
    """The points of a table are quantities of one dimension a column; the first of each pair ascends."""
    for index, step in enumerate(draft.document.steps):
        if step.lookup is not None:
            yield from _table(step.lookup, ("steps", index, "lookup", "points"))


def _table(lookup: WrittenLookup, path: Path) -> Iterator[Wrong]:
    readings = [[quantity(text) for text in point] for point in lookup.points]
    for row, (before, after) in enumerate(pairwise(readings), start=1):
        for column in (0, 1):
            if after[column].unit.dimension != before[column].unit.dimension:
                yield Wrong((*path, row, column), Fault(
                    f"{lookup.points[row][column]!r} does not have the dimension of the point before it"))
                return
        if after[0].value <= before[0].value:
            yield Wrong((*path, row, 0), Fault(f"the points do not ascend at {lookup.points[row][0]!r}",
                                               expected="each point above the one before it"))


def symbols_once(draft: Draft) -> Iterator[Wrong]:
    """A symbol has one value: an input's or a step's."""
    seen = dict.fromkeys(draft.document.case.inputs, "an input")
    for index, step in enumerate(draft.document.steps):
        if step.symbol in seen:
            yield Wrong(("steps", index, "symbol"), Fault(
                f"the symbol {step.symbol!r} has a value already, as {seen[step.symbol]}",
                hint="give the step a symbol of its own"))
        seen.setdefault(step.symbol, "a step before this one")


FORMULA_RULES: tuple[Callable[[Draft], Iterator[Wrong]], ...] = (
    one_kind_each, choices_end, tables_ascend, symbols_once)
