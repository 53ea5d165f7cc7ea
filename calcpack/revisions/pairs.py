"""Two keyed collections to pairs of what was and what is, and their texts side by side."""
from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping, Sequence
from typing import Any

Entry = Mapping[str, Any]


def by(key: str, entries: Iterable[Entry] | None) -> dict[str, Entry]:
    """Entries of a record by one of their keys; a record of an older program may lack the list."""
    return {entry[key]: entry for entry in entries or ()}


def paired(old: Mapping[str, Entry], new: Mapping[str, Entry]) -> Iterator[tuple[str, Entry | None, Entry | None]]:
    """Each key with its old and new entry: first in the order of the new sheet, then what is gone."""
    for key, entry in new.items():
        yield key, old.get(key), entry
    for key, entry in old.items():
        if key not in new:
            yield key, entry, None


def kind_of(old: object | None, new: object | None) -> str:
    """'added', 'removed' or 'changed'."""
    if old is None:
        return "added"
    return "removed" if new is None else "changed"


def text_of(value: object) -> str:
    """A plain value of a record as text; what is not there is the empty text."""
    if value is None:
        return ""
    if isinstance(value, (list, tuple)):
        return ", ".join(text_of(one) for one in value)
    return str(value)


def differing(old: Entry, new: Entry, fields: Sequence[tuple[str, str]]) -> list[tuple[str, str, str]]:
    """``(name, old text, new text)`` of each of the ``(key, name)`` fields whose text is not the same."""
    found = []
    for key, name in fields:
        before, after = text_of(old.get(key)), text_of(new.get(key))
        if before != after:
            found.append((name, before, after))
    return found


def labelled(name: str, text: str) -> str:
    """``'status: open'``; the field whose name is empty is the text itself."""
    return f"{name}: {text or 'none'}" if name else text


def side(parts: Iterable[tuple[str, str]]) -> str:
    """One side of a change of several fields, in one line."""
    return "; ".join(labelled(name, text) for name, text in parts)
