"""Two bound specs and the causes between them to all values of any mixture of the two."""
from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import replace
from typing import TYPE_CHECKING, Any

from calcpack.errors import CalcpackError
from calcpack.revisions.edits import Cause, Edit
from calcpack.revisions.shares import Gap

if TYPE_CHECKING:
    from calcpack.solving.bind import Bound
    from calcpack.solving.program import Program
    from calcpack.spec import Spec


class Mixtures:
    """Solves mixtures of two specs, each once, findings left out; ``solves`` counts.

    Mixtures that differ only in inputs' values share one plan and program.
    """

    def __init__(self, old: Bound, new: Bound, causes: tuple[Cause, ...]) -> None:
        self.old, self.new, self.causes = old, new, causes
        self.solves = 0
        self._found: dict[int, Mapping[str, float] | str] = {}
        self._programs: dict[int, tuple[Program, dict[str, float]]] = {}

    def value(self, symbol: str, mask: int) -> float:
        """A symbol's value [SI] in a mixture; raises Gap where it has none."""
        found = self._values(mask)
        if isinstance(found, str):
            raise Gap(mask, found)
        if symbol not in found:
            raise Gap(mask, f"{symbol} has no value there")
        return found[symbol]

    def names(self, mask: int) -> str:
        """The causes that a mixture takes from the new spec, by name."""
        return ", ".join(cause.name for at, cause in enumerate(self.causes) if mask >> at & 1) or "none of the changes"

    def as_it_was(self) -> Mapping[str, float]:
        """All values of the old spec itself, with nothing of the new one in it.

        Raises
        ------
        CalcpackError
            Where the old spec has no answer today.
        """
        from calcpack.solving.program import Program
        self.solves += 1
        return Program(self.old.plan).run(_numbers(self.old))

    def _values(self, mask: int) -> Mapping[str, float] | str:
        if mask not in self._found:
            self._found[mask] = self._solved(mask)
        return self._found[mask]

    def _solved(self, mask: int) -> Mapping[str, float] | str:
        shape = sum(1 << at for at, cause in enumerate(self.causes) if mask >> at & 1 and not cause.numeric)
        try:
            program, inputs = self._program(shape)
            moved = {edit.name: (self.new if mask >> at & 1 else self.old).readings[edit.name].value
                     for at, cause in enumerate(self.causes) if cause.numeric for edit in cause.edits}
            self.solves += 1
            return program.run({**inputs, **moved})
        except CalcpackError as error:
            return error.faults[0].what

    def _program(self, shape: int) -> tuple[Program, dict[str, float]]:
        from calcpack.solving.bind import bind
        from calcpack.solving.program import Program
        if shape not in self._programs:
            kept = (edit for at, cause in enumerate(self.causes) if not cause.numeric and not shape >> at & 1
                    for edit in cause.edits)
            bound = bind(mixed(self.old, self.new, kept))
            self._programs[shape] = Program(bound.plan), _numbers(bound)
        return self._programs[shape]


def _numbers(bound: Bound) -> dict[str, float]:
    return {name: reading.value for name, reading in bound.readings.items()}


def mixed(old: Bound, new: Bound, kept: Iterable[Edit]) -> Spec:
    """The new spec with what the ``kept`` edits changed as it was in the old one; results and limits left out."""
    edits = list(kept)
    if any(edit.part == "method" for edit in edits):
        return replace(old.spec, results=(), limits=())
    was, now = old.spec, new.spec
    names = {part: [edit.name for edit in edits if edit.part == part] for part in
             ("option", "fluid", "input", "step", "series", "p_atm")}
    case = replace(now.case, options=_put_back(names["option"], old.options, new.options),
                   fluids=_put_back(names["fluid"], was.case.fluids, now.case.fluids),
                   inputs=_put_back(names["input"], was.case.inputs, now.case.inputs),
                   series=was.case.series if names["series"] else now.case.series)
    sheet = replace(now.sheet, p_atm=was.sheet.p_atm, p_atm_text=was.sheet.p_atm_text) if names["p_atm"] else now.sheet
    steps = _put_back(names["step"], *({step.symbol: step for step in spec.steps} for spec in (was, now)))
    return replace(now, sheet=sheet, case=case, steps=tuple(steps.values()), results=(), limits=())


def _put_back(names: Iterable[str], old: Mapping[str, Any], new: Mapping[str, Any]) -> dict[str, Any]:
    found = dict(new)
    for name in names:
        found.pop(name, None)
        if name in old:
            found[name] = old[name]
    return found
