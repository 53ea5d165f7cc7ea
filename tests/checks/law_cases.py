"""Every example spec and every method's starter, and faults put into a program on purpose."""
from __future__ import annotations

import re
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest
from check_cases import solve_text

from calcpack.checks import examine
from calcpack.errors import CalcpackError
from calcpack.methods import methods
from calcpack.methods.starter import starter
from calcpack.pipeline import spec_files
from calcpack.plan.plan import Section

SPECS = Path(__file__).parents[2] / "specs"
OPERATOR = re.compile(r" [+-] ")


def texts() -> list[Any]:
    """A spec's text a case: the example package, and what each method's starter writes.

    A value that one sheet of the package takes from another is written out, as a text stands alone.
    """
    alone = {path.stem: path.read_text("utf-8").replace("{from: MT-102.W_dot_net}", "{value: 320 kW, source: R1}")
             for path in spec_files([SPECS])}
    found = [pytest.param(text, id=name) for name, text in alone.items()]
    return found + [pytest.param(starter(name, {}), id=name) for name in methods()]


def failures(text: str) -> list[str]:
    """What is found wrong with a spec: the error that stops it, or the checks that fail."""
    try:
        return [one["text"] for one in examine(*solve_text(text)).checks if one["status"] == "fails"]
    except CalcpackError as error:
        return [error.faults[0].what]


def sites(text: str, monkeypatch: pytest.MonkeyPatch) -> list[tuple[str, int]]:
    """Where a formula of the method adds or takes away: symbol, and place in its text."""
    found: list[tuple[str, int]] = []

    def watched(self: Section, symbol: str, formula: str, *rest: Any, **more: Any) -> str:
        found.extend((symbol, match.start() + 1) for match in OPERATOR.finditer(formula))
        return _FORMULA(self, symbol, formula, *rest, **more)
    with monkeypatch.context() as patch:
        patch.setattr(Section, "formula", watched)
        assert failures(text) == []
    return list(dict.fromkeys(found))


def flipped(at: tuple[str, int]) -> Callable[..., str]:
    """A ``Section.formula`` that takes for a plus, and the reverse, at one place."""
    def wrong(self: Section, symbol: str, formula: str, *rest: Any, **more: Any) -> str:
        if symbol == at[0]:
            sign = "-" if formula[at[1]] == "+" else "+"
            formula = formula[:at[1]] + sign + formula[at[1] + 1:]
        return _FORMULA(self, symbol, formula, *rest, **more)
    return wrong


_FORMULA = Section.formula


class Altered:
    """A fluid one of whose properties is off by a share; all else is as it was."""

    def __init__(self, fluid: Any, output: str, share: float) -> None:
        self._fluid, self._output, self._share = fluid, output, share

    def __getattr__(self, name: str) -> Any:
        return getattr(self._fluid, name)

    def reader(self, output: str, names: tuple[str, ...]) -> Callable[..., float]:
        read = self._fluid.reader(output, names)
        return read if output != self._output else lambda *known: read(*known) * (1.0 + self._share)
