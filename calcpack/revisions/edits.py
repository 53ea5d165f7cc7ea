"""Two bound specs to the edits between them that can move a number, those that need each other put together."""
from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Any, Literal

from calcpack.errors import CalcpackError

if TYPE_CHECKING:
    from calcpack.solving.bind import Bound
    from calcpack.spec.model import Step

Part = Literal["method", "option", "fluid", "p_atm", "series", "input", "step"]


@dataclass(frozen=True, slots=True)
class Edit:
    """One thing of a spec that is not the same; ``one_sided`` where only one of the two has it."""

    part: Part
    name: str
    text: str
    one_sided: bool = False


@dataclass(frozen=True, slots=True)
class Cause:
    """Edits that are taken together; ``numeric`` where they change values of inputs and nothing else."""

    edits: tuple[Edit, ...]
    numeric: bool

    @property
    def name(self) -> str:
        """The names of its edits; another method stands for all that comes with it."""
        if self.edits[0].part == "method":
            return "method"
        return ", ".join(dict.fromkeys(edit.name for edit in self.edits))

    @property
    def text(self) -> str:
        """What was and is, edit by edit."""
        if self.edits[0].part == "method":
            return f"{self.edits[0].text}, with its options, fluids and inputs, and the engineer's own steps"
        return "; ".join(edit.text for edit in self.edits)


def causes_between(old: Bound, new: Bound, words: Mapping[str, str]) -> tuple[Cause, ...]:
    """The causes in the written order: options, fluids, inputs, series, own steps.

    An option stands together with the inputs and fluids that only exist with
    it, a step with what it uses and only one of the two sheets has; with
    another method all is one cause. ``words`` say, by symbol, what an input or a step
    was and is.
    """
    edits = tuple(_edits(old, new, words))
    groups = _Groups(len(edits))
    for pair in _needing_each_other(old, new, edits):
        groups.join(*pair)
    return tuple(Cause(tuple(edits[at] for at in members), all(_is_numeric(old, new, edits[at]) for at in members))
                 for members in groups.members())


def _edits(old: Bound, new: Bound, words: Mapping[str, str]) -> Iterator[Edit]:
    if old.method.name != new.method.name:
        yield Edit("method", "method", f"method: {old.method.name} → {new.method.name}")
    was, now = old.spec, new.spec
    yield from _pairs("option", old.options, new.options, str)
    yield from _pairs("fluid", was.case.fluids, now.case.fluids, lambda fluid: fluid.words)
    air = was.sheet.p_atm != now.sheet.p_atm and _has_gauge(old, new)
    if air:
        yield Edit("p_atm", "p_atm", f"p_atm: {was.sheet.p_atm_text} → {now.sheet.p_atm_text}")
    for edit in _pairs("input", old.written, new.written, str):
        if air or edit.one_sided or not _same_reading(old, new, edit.name):
            yield Edit("input", edit.name, words.get(edit.name, edit.text), edit.one_sided)
    if was.case.series != now.case.series:
        yield Edit("series", "series", "series: its rows, inputs or totals", None in (was.case.series, now.case.series))
    for edit in _pairs("step", _contents(was.steps), _contents(now.steps), _content_text):
        yield replace(edit, text=words.get(edit.name, edit.text))


def _pairs(part: Part, old: Mapping[str, Any], new: Mapping[str, Any], text: Any) -> Iterator[Edit]:
    """The keys with another value, in the order of the new spec, then what is gone."""
    for name in dict.fromkeys((*new, *old)):
        was, now = old.get(name), new.get(name)
        if was != now:
            sides = ("none" if one is None else text(one) for one in (was, now))
            yield Edit(part, name, f"{name}: {' → '.join(sides)}", was is None or now is None)


def _contents(steps: Iterable[Step]) -> dict[str, tuple]:
    """What computes each of the engineer's own steps; titles, notes and units of print do not."""
    return {step.symbol: (step.kind, step.formula, step.root,
                          tuple((one.when, one.value) for one in step.choice or ()),
                          (step.lookup.of, step.lookup.points) if step.lookup else None) for step in steps}


def _content_text(content: tuple) -> str:
    _, formula, root, branches, lookup = content
    if root is not None:
        return f"{root.equation} is zero"
    if lookup is not None:
        return "; ".join(f"{x} → {y}" for x, y in lookup[1])
    return formula or "; ".join(f"{value} if {when}" if when else f"{value} otherwise" for when, value in branches)


def _has_gauge(*bounds: Bound) -> bool:
    return any(reading.gauge for bound in bounds for reading in bound.readings.values())


def _same_reading(old: Bound, new: Bound, symbol: str) -> bool:
    was, now = old.readings[symbol], new.readings[symbol]
    return was.value == now.value and was.unit.dimension == now.unit.dimension


def _is_numeric(old: Bound, new: Bound, edit: Edit) -> bool:
    """Whether an edit only puts another number into the same plan."""
    if edit.part != "input" or edit.one_sided or (old.spec.sheet.p_atm != new.spec.sheet.p_atm
                                                  and _has_gauge(old, new)):
        return False
    was, now = old.plan.inputs.get(edit.name), new.plan.inputs.get(edit.name)
    return was is not None and now is not None and was.measure == now.measure


class _Groups:
    """Places 0 … n-1 in groups that can be joined."""

    def __init__(self, count: int) -> None:
        self.of = list(range(count))

    def join(self, one: int, other: int) -> None:
        kept, gone = sorted((self.of[one], self.of[other]))
        self.of = [kept if group == gone else group for group in self.of]

    def members(self) -> list[list[int]]:
        return [[at for at, group in enumerate(self.of) if group == name] for name in dict.fromkeys(self.of)]


def _needing_each_other(old: Bound, new: Bound, edits: tuple[Edit, ...]) -> Iterator[tuple[int, int]]:
    """Pairs of edits of which one cannot be made without the other, as far as the specs tell."""
    if any(edit.part == "method" for edit in edits):
        yield from ((0, at) for at in range(len(edits)))
        return
    shaping = [at for at, edit in enumerate(edits) if edit.part in ("option", "series")]
    claimed: set[int] = set()
    for at in shaping:
        for other in _claims(old, new, edits, at):
            claimed.add(other)
            yield at, other
    for at, edit in enumerate(edits):
        if edit.one_sided and edit.part in ("input", "fluid") and at not in claimed and _of_method(old, new, edit):
            yield from ((other, at) for other in shaping)
        if edit.part == "step":
            yield from ((other, at) for other in _providers(old, new, edits, edit, shaping))


def _claims(old: Bound, new: Bound, edits: tuple[Edit, ...], at: int) -> Iterator[int]:
    """The edits that go with an option or a series: what it brings, takes away or cannot do without."""
    if edits[at].part == "series":
        named = {name for bound in (old, new) if bound.spec.case.series for name in bound.spec.case.series.inputs}
        yield from (other for other, edit in enumerate(edits) if edit.part == "input" and edit.name in named)
        return
    name, brought = edits[at].name, set()
    for one, two in ((old, new), (new, old)):
        try:
            brought |= _asked_for(one, one.options) ^ _asked_for(one, {**one.options, name: two.options[name]})
        except CalcpackError:
            # This value asks for another option to change with it.
            yield from (other for other, edit in enumerate(edits) if edit.part == "option")
    yield from (other for other, edit in enumerate(edits) if edit.one_sided and (edit.part, edit.name) in brought)


def _asked_for(bound: Bound, options: Mapping[str, str]) -> set[tuple[str, str]]:
    """The inputs and fluids that the method takes with these options."""
    from calcpack.methods.starter import needs_of
    return {("input", symbol) for symbol in needs_of(bound.method, options)} \
        | {("fluid", role.name) for role in bound.method.roles(options)}


def _of_method(old: Bound, new: Bound, edit: Edit) -> bool:
    """Whether only one of the two plans asks for this input or fluid."""
    here = [(edit.part, edit.name) in _asked_for(bound, bound.options) for bound in (old, new)]
    return here[0] != here[1]


def _providers(old: Bound, new: Bound, edits: tuple[Edit, ...], edit: Edit, shaping: list[int]) -> Iterator[int]:
    """The edits that give, in one of the two sheets alone, what an own step uses; and its own symbol's."""
    have = [{*bound.plan.inputs, *(step.symbol for step in bound.plan.steps)} for bound in (old, new)]
    lone = have[0] ^ have[1]
    used = {edit.name} & lone
    for bound in (old, new):
        if any(step.symbol == edit.name for step in bound.spec.steps):
            used |= set(bound.plan.step(edit.name).uses) & lone
    given = {one.name: at for at, one in enumerate(edits) if one.part in ("input", "step") and one.name != edit.name}
    yield from (given[name] for name in used if name in given)
    yield from (at for at, one in enumerate(edits) if one.name == edit.name and one is not edit)
    if any(name not in given and name != edit.name for name in used):
        yield from shaping
