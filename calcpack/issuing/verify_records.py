"""A record that a file carries, and the one solved here, to every place where they do not agree.

Texts must be the same; numbers may differ by what another machine's last
binary digits amount to. What computed the record (versions, platform) is not
compared but told.
"""
from __future__ import annotations

import math
import re
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from typing import Any

from calcpack.issuing.verify_report import Difference

RELATIVE = 1e-9
"""What two machines may differ by, as a share of the value."""
LEAST = 1e-12
"""In SI units; a residual that should be zero has no size to take a share of."""
APART = ("engine", "issue")
"""Parts of a record that say what computed it, and what was stated at issue."""
RESIDUE = re.compile(r"\d(\.\d+)?e-(1\d|[2-9]\d)\b")
"""A number so small that it is the rounding of a machine; as a text it stands in the checks of balances."""
NAMES = ("symbol", "id", "number", "name", "revision", "title")
Data = Mapping[str, Any]


@dataclass(frozen=True, slots=True)
class Compared:
    """The outcome: where the records differ, and how many numbers and texts were compared."""

    differences: tuple[Difference, ...]
    numbers: int
    texts: int


def compare_records(carried: Data, here: Data) -> Compared:
    """Every place where two records of one spec differ, in the order of their keys."""
    differences: list[Difference] = []
    counts = {"numbers": 0, "texts": 0}
    for where, one, other in _pairs("record", _without(carried), _without(here)):
        counts["numbers" if _is_number(one) else "texts"] += 1
        if not (_equal(one, other) or (where.startswith("record checks") and _same_but_residue(one, other))):
            differences.append(Difference(where, "the record has another value", _told(one), _told(other)))
    return Compared(tuple(differences), counts["numbers"], counts["texts"])


def made_with(carried: Data, here: Data) -> tuple[str, ...]:
    """What computed the carried record and is another version here, as sentences."""
    one, other = _engine(carried), _engine(here)
    return tuple(f"made with {name} {one.get(name, '(not told)')}, here {other.get(name, '(not there)')}"
                 for name in sorted({*one, *other}) if one.get(name) != other.get(name))


def _engine(record: Data) -> dict[str, str]:
    engine = record.get("engine") or {}
    named = {"calcpack": "calcpack", "python": "Python", "platform": "platform"}
    return {**{title: str(engine.get(key)) for key, title in named.items()}, **engine.get("libraries", {})}


class _Missing:
    """Stands for what one side does not have."""


MISSING = _Missing()


def _without(record: Data) -> dict[str, Any]:
    return {key: value for key, value in record.items() if key not in APART}


def _pairs(where: str, one: Any, other: Any) -> Iterator[tuple[str, Any, Any]]:
    """The plain values of two trees side by side, each with the words for its place."""
    if isinstance(one, Mapping) and isinstance(other, Mapping):
        for key in sorted({*one, *other}):
            yield from _pairs(_below(where, key), one.get(key, MISSING), other.get(key, MISSING))
    elif isinstance(one, list) and isinstance(other, list):
        for index in range(max(len(one), len(other))):
            first = one[index] if index < len(one) else MISSING
            second = other[index] if index < len(other) else MISSING
            name = _name(first) or _name(second) or str(index + 1)
            yield from _pairs(_below(where, name), first, second)
    else:
        yield where, one, other


def _below(where: str, name: str) -> str:
    return f"{where} {name}" if where == "record" else f"{where}, {name}"


def _name(item: Any) -> str | None:
    if not isinstance(item, Mapping):
        return None
    return next((str(item[key]) for key in NAMES if isinstance(item.get(key), str | int) and item[key] != ""), None)


def _is_number(value: Any) -> bool:
    return isinstance(value, int | float) and not isinstance(value, bool)


def _equal(one: Any, other: Any) -> bool:
    if _is_number(one) and _is_number(other):
        return math.isclose(one, other, rel_tol=RELATIVE, abs_tol=LEAST)
    return type(one) is type(other) and one == other


def _same_but_residue(one: Any, other: Any) -> bool:
    if not (isinstance(one, str) and isinstance(other, str)):
        return False
    return RESIDUE.sub("0", one) == RESIDUE.sub("0", other)


def _told(value: Any) -> str:
    """A value for a message, cut where it is long."""
    if value is MISSING:
        return "nothing"
    if isinstance(value, Mapping | list):
        return f"{'an entry' if isinstance(value, Mapping) else 'a list'} of {len(value)}"
    text = repr(value)
    return text if len(text) <= 100 else text[:97] + "…'"
