"""A laid plan: steps read, proved, numbered and ready to be compiled; no numbers yet."""
from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from calcpack.formula.dimension import TEMPERATURE, Measure
from calcpack.formula.tree import Node
from calcpack.plan.facts import Facts, InputNeed
from calcpack.plan.steps import Closing, Step
from calcpack.units import Unit


@dataclass(frozen=True, slots=True)
class LaidColumn:
    """A column of a series with its tree (None for the first) and print unit."""

    symbol: str
    title: str
    tree: Node | None
    measure: Measure
    unit: Unit


@dataclass(frozen=True, slots=True)
class LaidStep:
    """A step whose formula has been read and whose dimension is proved.

    ``trees`` holds further formulas by name: a root's ``low`` and ``high``, a
    choice's ``when 0``, ``value 0`` …, a series' ``row 0`` …. ``uses`` are the
    symbols it reads, in reading order; a root's are those of its equation and
    bracket.
    """

    step: Step
    id: str
    tree: Node | None
    trees: Mapping[str, Node]
    measure: Measure
    unit: Unit
    uses: tuple[str, ...]
    columns: tuple[LaidColumn, ...] = ()

    @property
    def symbol(self) -> str:
        return self.step.symbol

    @property
    def kind(self) -> str:
        return self.step.kind

    @property
    def level(self) -> bool:
        """Whether the value is a temperature level, printed with its Celsius twin."""
        return is_level(self.measure)


def is_level(measure: Measure) -> bool:
    """Whether a measure is that of a temperature level."""
    return measure.dimension == TEMPERATURE and measure.level == 1.0


@dataclass(frozen=True, slots=True)
class LaidInput:
    """An input's measure and print unit; ``need`` is None for an input of the engineer's own."""

    symbol: str
    title: str
    measure: Measure
    unit: Unit
    need: InputNeed | None = None


@dataclass(frozen=True, slots=True)
class LaidDemand:
    """A demand whose condition has been read and proved."""

    condition: Node
    text: str
    hint: str


@dataclass(frozen=True, slots=True)
class LaidPlan:
    """The whole: inputs, steps in order of evaluation with their closings, sections, facts."""

    inputs: Mapping[str, LaidInput]
    items: tuple[LaidStep | Closing | LaidDemand, ...]
    sections: tuple[str, ...]
    facts: Facts
    fluids: Mapping[str, Any]

    @property
    def steps(self) -> tuple[LaidStep, ...]:
        return tuple(item for item in self.items if isinstance(item, LaidStep))

    def step(self, symbol: str) -> LaidStep:
        """The step that gives ``symbol``; KeyError for an input."""
        for item in self.items:
            if isinstance(item, LaidStep) and item.symbol == symbol:
                return item
        raise KeyError(symbol)
