"""The plan under construction: methods and equipment add their steps to it."""
from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import replace
from typing import Any

from calcpack.plan.facts import Facts, InputNeed
from calcpack.plan.steps import (
    Branch,
    CasesStep,
    ChoiceStep,
    Closing,
    Column,
    Demand,
    LookupStep,
    OptimumStep,
    PropertyStep,
    RootStep,
    Row,
    SeriesStep,
    Step,
    TotalStep,
)


class Plan:
    """Steps in order, the inputs they need, and what is said about them.

    ``options`` holds the method's options, complete with defaults; ``fluids``
    maps each role of the spec (``wf``, ``source`` …) to its open fluid.
    """

    def __init__(self, options: Mapping[str, str], fluids: Mapping[str, Any]) -> None:
        self.options = dict(options)
        self.fluids = dict(fluids)
        self.needs: dict[str, InputNeed] = {}
        self.sections: list[str] = []
        self.items: list[Step | Closing | Demand] = []
        self.facts = Facts()

    def input(self, symbol: str, kind: str, title: str, typical: str, **more: Any) -> str:
        """Declare an input of the method; gives its symbol back."""
        self.needs[symbol] = InputNeed(symbol, kind, title, typical, **more)
        return symbol

    def section(self, title: str) -> Section:
        """Open a section of the calculation; steps print in the order they are added."""
        self.sections.append(title)
        return Section(self, len(self.sections) - 1)

    def add(self, step: Step) -> str:
        """Append a step; gives its symbol back."""
        self.items.append(step)
        return step.symbol

    def close(self, symbol: str) -> None:
        """Say that all steps which the root ``symbol`` needs have been added."""
        self.items.append(Closing(symbol))

    def demand(self, condition: str, text: str, hint: str) -> None:
        """Stop the solution with ``text`` unless ``condition`` holds here."""
        self.items.append(Demand(condition, text, hint))

    @property
    def steps(self) -> tuple[Step, ...]:
        return tuple(item for item in self.items if isinstance(item, Step))


class Section:
    """Adds steps of each kind to one section of a plan."""

    def __init__(self, plan: Plan, index: int) -> None:
        self.plan = plan
        self.index = index

    def _add(self, step: Step) -> str:
        return self.plan.add(replace(step, section=self.index))

    def formula(self, symbol: str, formula: str, title: str, unit: str | None = None, **more: str) -> str:
        """A formula step; ``more`` are ``reference`` and ``note``."""
        return self._add(Step(symbol, title, formula, unit, **more))

    def property(self, symbol: str, formula: str, title: str, unit: str | None = None, **more: str) -> str:
        """A property look-up, ``formula`` such as ``h(wf, p=p_c, s=s_1)``."""
        return self._add(PropertyStep(symbol, title, formula, unit, **more))

    def root(self, symbol: str, equation: str, between: tuple[str, str], title: str,
             unit: str | None = None, **more: str) -> str:
        """An unknown; the plan's ``close`` must follow once ``equation`` can be evaluated."""
        return self._add(RootStep(symbol, title, equation, unit, low=between[0], high=between[1], **more))

    def optimum(self, symbol: str, objective: str, between: tuple[str, str], title: str, unit: str | None = None,
                sense: str = "greatest", **more: str) -> str:
        """A free value at which ``objective`` is greatest or least; the plan's ``close`` must follow."""
        return self._add(OptimumStep(symbol, title, objective, unit, low=between[0], high=between[1], sense=sense,
                                     **more))

    def choice(self, symbol: str, branches: Iterable[tuple[str, str, str]], title: str,
               unit: str | None = None, **more: str) -> str:
        """A choice of (condition, value, label) branches; the last condition is empty."""
        return self._add(ChoiceStep(symbol, title, "", unit, branches=tuple(Branch(*one) for one in branches), **more))

    def lookup(self, symbol: str, of: str, points: Iterable[tuple[str, str]], title: str, source: str,
               unit: str | None = None, **more: str) -> str:
        """A value read from a table of the engineer's by linear interpolation."""
        return self._add(LookupStep(symbol, title, of, unit, points=tuple(points), source=source, **more))

    def series(self, symbol: str, reduction: str, column: str, rows: Iterable[tuple[str, str]],
               columns: Iterable[tuple[str, str, str, str | None]], title: str, unit: str | None = None,
               **more: str) -> str:
        """A table; its value is ``reduction`` of ``column``.

        ``rows`` are (label, formula of the first column); ``columns`` are
        (symbol, title, formula, unit), the first with an empty formula.
        """
        return self._add(SeriesStep(
            symbol, title, "", unit, rows=tuple(Row(*row) for row in rows),
            columns=tuple(Column(name, text, formula, print_in) for name, text, formula, print_in in columns),
            reduction=reduction, column=column, **more))

    def cases(self, symbol: str, title: str, **more: Any) -> str:
        """A table of all steps before this one, solved once a row; ``more`` are the fields of :class:`CasesStep`."""
        return self._add(CasesStep(symbol, title, **more))

    def total(self, symbol: str, of: tuple[str, str, str], title: str, unit: str | None = None, **more: str) -> str:
        """What a column of a cases step comes to; ``of`` are (reduction, column, table)."""
        reduction, column, table = of
        return self._add(TotalStep(symbol, title, "", unit, table=table, column=column, reduction=reduction, **more))
