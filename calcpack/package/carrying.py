"""Sheets in their order to what each takes from those before it: values with their origin, or why there is none."""
from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from pathlib import Path

from calcpack.errors import CalcpackError, Fault, NoAnswerError, SpecError, nearest
from calcpack.package.links import Family
from calcpack.record import Record
from calcpack.record.carried import Carried, offered
from calcpack.spec.model import Link

Outcome = Record | CalcpackError
Taken = Mapping[str, Carried | CalcpackError]
Task = tuple[Path, Taken]


def solved_in_order(family: Family, solve: Callable[[Sequence[Task]], Sequence[Outcome]]) -> dict[Path, Outcome]:
    """Every sheet's record or its faults; ``solve`` is given one level at a time, with what its sheets take."""
    solved: dict[Path, Outcome] = {}
    for level in family.levels:
        tasks = [(path, taken(family, path, solved)) for path in level]
        solved |= zip(level, solve(tasks), strict=True)
    return solved


def taken(family: Family, path: Path, solved: Mapping[Path, Outcome]) -> dict[str, Carried | CalcpackError]:
    """What the inputs of a sheet take from others, by symbol."""
    wrong = family.wrong.get(path, {})
    return {symbol: wrong[symbol] if symbol in wrong else _from(family, link, solved)
            for symbol, link in family.glances[path].links.items()}


def _from(family: Family, link: Link, solved: Mapping[Path, Outcome]) -> Carried | CalcpackError:
    path = family.source(link)
    source = solved[path]
    if isinstance(source, CalcpackError):
        # The faults of the source are told at their own places beside this one.
        without = isinstance(source, NoAnswerError)
        return (NoAnswerError if without else SpecError)(Fault(
            f"sheet {link.number}, which gives {link.symbol}, has {'no answer' if without else 'faults of its own'}",
            hint=f"see {path.name}"))
    found = offered(source.data, link.symbol)
    if found is None:
        known = [one["symbol"] for one in (*source.data["inputs"], *source.data["steps"])]
        return SpecError(Fault(f"sheet {link.number} gives no value to {link.symbol}",
                               expected=f"an input or a step of {path.name}", hint=nearest(link.symbol, known)))
    return found
