"""The engineer's own steps in an order in which each can be evaluated.

Steps may be written in any order; those that form a circle are a fault that
names it, unless one of them is a root, whose unknown the others may use.
"""
from __future__ import annotations

from collections.abc import Mapping, Sequence

from calcpack.errors import Fault, SpecError
from calcpack.plan.steps import Closing, RootStep, Step


def ordered(steps: Sequence[Step], uses: Mapping[str, Sequence[str]]) -> list[Step | Closing]:
    """Steps sorted so that each comes after what it uses, otherwise as written.

    ``uses`` gives, for each symbol, what its formulas read (for a root, what
    its bracket reads).

    Raises
    ------
    SpecError
        For a circle, at the place of its first step.
    """
    own = {step.symbol: step for step in steps}
    result: list[Step | Closing] = []
    placed: set[str] = set()
    waiting = list(steps)
    while waiting:
        ready = next((step for step in waiting if all(
            name not in own or name in placed for name in uses[step.symbol])), None)
        if ready is None:
            raise SpecError(_circle(waiting, uses, placed, own))
        waiting.remove(ready)
        placed.add(ready.symbol)
        result.append(ready)
    return _closed(result, uses)


def _closed(items: list[Step | Closing], uses: Mapping[str, Sequence[str]]) -> list[Step | Closing]:
    """Put each root's closing behind the last step that its equation needs, innermost first."""
    roots = [item for item in items if isinstance(item, RootStep)]
    places: list[tuple[int, int, str]] = []
    for root in roots:
        needed = _needed(root, items, uses)
        last = max((index for index, item in enumerate(items) if isinstance(item, Step)
                    and (item.symbol in needed or item is root)), default=0)
        places.append((last, -items.index(root), root.symbol))
    # A closing may not fall inside a later root's span, or the brackets would cross.
    for last, _, symbol in sorted(places, reverse=True):
        items.insert(last + 1, Closing(symbol))
    return items


def _needed(root: RootStep, items: Sequence[Step | Closing], uses: Mapping[str, Sequence[str]]) -> set[str]:
    from calcpack.formula.parse import parse
    from calcpack.formula.tree import symbols_of
    own = {item.symbol for item in items if isinstance(item, Step)}
    needed: set[str] = set()
    todo = [name for name in symbols_of(parse(root.formula)) if name in own]
    while todo:
        name = todo.pop()
        if name not in needed:
            needed.add(name)
            todo += [used for used in uses[name] if used in own and name != root.symbol]
    return needed


def _circle(waiting: Sequence[Step], uses: Mapping[str, Sequence[str]], placed: set[str],
            own: Mapping[str, Step]) -> Fault:
    path = [waiting[0].symbol]
    while True:
        after = next(name for name in uses[path[-1]] if name in own and name not in placed)
        if after in path:
            loop = [*path[path.index(after):], after]
            break
        path.append(after)
    first = min((own[name] for name in loop), key=lambda step: (step.place.line, step.place.column)
                if step.place else (0, 0))
    return Fault("these steps form a circle: " + " needs ".join(loop), first.place,
                 hint="make one of them a root: an unknown with an equation and a bracket")
