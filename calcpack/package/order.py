"""Who takes from whom to an order: levels that can be solved one behind the other, and the rings that cannot."""
from __future__ import annotations

from collections.abc import Hashable, Iterable, Mapping, Sequence
from typing import TypeVar

Name = TypeVar("Name", bound=Hashable)


def closure(wanted: Iterable[Name], sources: Mapping[Name, Sequence[Name]]) -> list[Name]:
    """The wanted ones and all that they take from, directly or by way of others, in the order of finding."""
    found: dict[Name, None] = {}
    waiting = list(wanted)
    while waiting:
        name = waiting.pop(0)
        if name not in found:
            found[name] = None
            waiting += sources.get(name, ())
    return list(found)


def ring_through(start: Name, source: Name, sources: Mapping[Name, Sequence[Name]]) -> list[Name] | None:
    """The shortest ring in which ``start`` takes from ``source`` and ``source``, in the end, from ``start``.

    Its first member is ``start``, which stands again at its end; None where
    there is no such ring.
    """
    before: dict[Name, Name] = {}
    waiting = [source]
    while waiting:
        name = waiting.pop(0)
        if name == start:
            path = [name]
            while path[-1] != source:
                path.append(before[path[-1]])
            return [start, *reversed(path)]
        for one in sources.get(name, ()):
            if one not in before and one != source:
                before[one] = name
                waiting.append(one)
    return None


def levels(names: Sequence[Name], sources: Mapping[Name, Sequence[Name]]) -> list[list[Name]]:
    """The names in levels: each takes only from levels before its own. No ring may be left among them.

    Raises
    ------
    ValueError
        Where a ring is left.
    """
    known = set(names)
    waiting = {name: set(sources.get(name, ())) & known for name in names}
    found: list[list[Name]] = []
    done: set[Name] = set()
    while waiting:
        level = [name for name, needed in waiting.items() if needed <= done]
        if not level:
            raise ValueError("a ring is left among the sheets")
        found.append(level)
        done |= set(level)
        for name in level:
            del waiting[name]
    return found
