"""Turn a path such as ``("case", "inputs", "T_e", "value")`` into the place where it is written."""
from __future__ import annotations

import re
from dataclasses import dataclass, replace
from typing import Literal

from calcpack.errors import Fault, Place
from calcpack.spec.nodes import Listing, Mapping, Node, Scalar
from calcpack.spec.scalars import clipped
from calcpack.spec.source import Source

_PLAIN_KEY = re.compile(r"[\w-]{1,60}")

Path = tuple[str | int, ...]


def step_down(node: Node, segment: str | int) -> tuple[Scalar | None, Node] | None:
    """The key (in a mapping) and value under ``segment``, or None."""
    if isinstance(node, Mapping) and isinstance(segment, str):
        return next(((key, value) for key, value in node.entries if key.text == segment), None)
    if isinstance(node, Listing) and isinstance(segment, int) and 0 <= segment < len(node.items):
        return None, node.items[segment]
    return None


def find(tree: Node, path: Path) -> tuple[Scalar | None, Node, int]:
    """The key and value at ``path`` or at its longest part that is written, and that part's length."""
    key: Scalar | None = None
    for depth, segment in enumerate(path):
        below = step_down(tree, segment)
        if below is None:
            return key, tree, depth
        key, tree = below
    return key, tree, len(path)


def place_of(source: Source, tree: Node, path: Path, *, key: bool = False) -> Place:
    """The place of the value at ``path``, or of its key.

    Of a path that is not written, the longest part that is stands for it: the
    key of the mapping where something is missing, or the short form of an input.
    """
    name, node, depth = find(tree, path)
    if name is not None and (key or (depth < len(path) and not isinstance(node, Scalar))):
        node = name
    return source.place(node.start, node.end)


def located(source: Source, tree: Node, fault: Fault, path: Path) -> Fault:
    """A fault whose column counts inside the text at ``path``, at its place in the file.

    Where no single text stands at ``path``, the place of what does; a fault
    that knows its file keeps its place.
    """
    if fault.place is not None and fault.place.file:
        return fault
    _, node, _ = find(tree, path)
    if fault.place is None or not isinstance(node, Scalar):
        return replace(fault, place=place_of(source, tree, path))
    column, length = fault.place.column - 1, fault.place.length
    return replace(fault, place=source.inside((node.start, node.end), node.style, node.text, column, length))


@dataclass(frozen=True, slots=True)
class Wrong:
    """A fault and the path of what is wrong.

    ``at_key`` points at the key; ``spoils`` says what cannot stay in a spec
    that is read on for more faults: the whole entry, the key alone, or nothing.
    ``meant`` is the known key that a misspelt key is read on as.
    """

    path: Path
    fault: Fault
    at_key: bool = False
    spoils: Literal["entry", "key", "nothing"] = "entry"
    meant: str | None = None

    def placed(self, source: Source, tree: Node) -> Fault:
        """The fault at its place in the file."""
        if self.at_key:
            return self.fault.at(place_of(source, tree, self.path, key=True))
        return located(source, tree, self.fault, self.path)


def in_words(path: Path) -> str:
    """Where a path leads, for a sentence: 'sheet', 'case.inputs.T_e', 'an entry of steps'."""
    names = ".".join(segment if _PLAIN_KEY.fullmatch(segment) else clipped(segment)
                     for segment in path if isinstance(segment, str))
    if path and isinstance(path[-1], int):
        return f"an entry of {names}"
    return names or "the spec"
