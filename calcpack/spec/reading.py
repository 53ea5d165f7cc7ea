"""Turn a spec file into a Spec, or into all its faults at once.

The stages, in order: bytes to text (:mod:`source`), text to tree (:mod:`nodes`),
tree to shape (:mod:`schema`, :mod:`faults`), shape to checked draft
(:mod:`rules`), draft to Spec (:mod:`building`). A faulty spec goes on,
without its faulty entries (:mod:`repair`), to the next stage.
"""
from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from itertools import islice
from pathlib import Path
from typing import Any

from pydantic import ValidationError

from calcpack.errors import Fault, SpecError
from calcpack.spec.building import built
from calcpack.spec.drafts import Draft, written_symbols
from calcpack.spec.faults import no_value, wrongs_of
from calcpack.spec.model import Spec
from calcpack.spec.nodes import MAX_FAULTS, Listing, Mapping, Node, Scalar, read_tree
from calcpack.spec.places import Path as KeyPath
from calcpack.spec.places import Wrong, find
from calcpack.spec.repair import repaired
from calcpack.spec.rules import RULES
from calcpack.spec.schema import Document
from calcpack.spec.source import Source, open_source, source_of_text

_MAX_ROUNDS = 8


@dataclass(frozen=True, slots=True)
class _Shape:
    """A document of the right shape, its tree, the faults on the way and the paths where they were."""

    document: Document
    tree: Mapping
    faults: tuple[Fault, ...]
    touched: frozenset[KeyPath]


def read_spec(path: Path, *, text: str | None = None, name: str | None = None) -> Spec:
    """The spec at ``path``, or in ``text`` as if it stood there; messages call it ``name``.

    Raises
    ------
    SpecError
        With all faults that can be found, in the order of the file.
    """
    spec, faults = read_for_faults(path, text=text, name=name)
    if faults or spec is None:
        raise SpecError(faults)
    return spec


def read_for_faults(path: Path, *, text: str | None = None, name: str | None = None,
                    ) -> tuple[Spec | None, tuple[Fault, ...]]:
    """What can be used of a spec, and its faults.

    The Spec of a faulty file lacks the faulty entries (``Spec.dropped`` names
    their symbols); it is for finding more faults, never for results. It is
    None where the file has no method, or cannot be read at all.
    """
    shown = name if name is not None else str(path)
    try:
        source = open_source(path, shown) if text is None else source_of_text(text, shown)
        tree, faults = read_tree(source)
        spec, more = _checked(source, tree)
    except SpecError as error:
        return None, _ordered(error.faults)
    return spec, _ordered([*faults, *more])


def _checked(source: Source, written: Mapping) -> tuple[Spec | None, list[Fault]]:
    shape = _shaped(source, written)
    draft, wrongs = _ruled(shape.document, written, shape.touched)
    faults = [*shape.faults, *_told(source, shape.tree, wrongs)]
    if not _names_a_method(shape.tree):
        return None, faults
    tree = shape.tree
    while any(wrong.spoils != "nothing" for wrong in wrongs):
        tree = repaired(tree, wrongs)
        document, _ = _validated(tree)
        if document is None:
            return None, faults
        draft, wrongs = _ruled(document, written, shape.touched)
    return built(draft, source, tree, written_symbols(written) - written_symbols(tree)), faults


def _ruled(document: Document, written: Mapping, touched: frozenset[KeyPath]) -> tuple[Draft, list[Wrong]]:
    draft = Draft.of(document, written, touched)
    return draft, list(islice((wrong for rule in RULES for wrong in rule(draft)), MAX_FAULTS))


def _shaped(source: Source, written: Mapping) -> _Shape:
    """What is left of a tree once everything of the wrong shape is left out, and what was wrong."""
    tree, faults, touched = written, [], set()
    for _ in range(_MAX_ROUNDS):
        document, wrongs = _validated(tree)
        faults += _told(source, tree, wrongs)
        if len(wrongs) >= MAX_FAULTS:
            break
        touched |= {wrong.path for wrong in wrongs}
        if document is not None and not wrongs:
            return _Shape(document, tree, tuple(faults), frozenset(touched))
        tree = repaired(tree, wrongs)
    raise SpecError(faults)


def _told(source: Source, tree: Mapping, wrongs: list[Wrong]) -> list[Fault]:
    return [wrong.placed(source, tree) for wrong in wrongs if _is_news(tree, wrong)]


def _validated(tree: Mapping) -> tuple[Document | None, list[Wrong]]:
    empty = [Wrong(path, no_value(path), at_key=isinstance(path[-1], str))
             for path in islice(_without_value(tree, ()), MAX_FAULTS)]
    try:
        return Document.model_validate(_plain(tree)), empty
    except ValidationError as error:
        known = {wrong.path for wrong in empty}
        wrongs = wrongs_of(error.errors(include_url=False)[:MAX_FAULTS])
        return None, empty + [wrong for wrong in wrongs if wrong.path not in known]


def _plain(node: Node) -> Any:
    if isinstance(node, Scalar):
        return node.text if node.has_value else None
    if isinstance(node, Listing):
        return [_plain(item) for item in node.items]
    return {key.text: _plain(value) for key, value in node.entries}


def _without_value(node: Node, path: KeyPath) -> Iterator[KeyPath]:
    if isinstance(node, Scalar):
        if not node.has_value:
            yield path
    elif isinstance(node, Listing):
        for index, item in enumerate(node.items):
            yield from _without_value(item, (*path, index))
    else:
        for key, value in node.entries:
            yield from _without_value(value, (*path, key.text))


def _is_news(tree: Mapping, wrong: Wrong) -> bool:
    """False where the value has a fault that was told when the tree was read."""
    _, node, _ = find(tree, wrong.path)
    return not isinstance(node, Scalar) or node.usable or wrong.at_key


def _names_a_method(tree: Mapping) -> bool:
    """False where the method is a stopgap of :mod:`repair`, which stands on no text."""
    _, node, _ = find(tree, ("case", "method"))
    return node.end > node.start and isinstance(node, Scalar) and node.usable


def _ordered(faults: list[Fault] | tuple[Fault, ...]) -> tuple[Fault, ...]:
    """The faults in the order of the file, each once; of very many the first."""
    unique = list(dict.fromkeys(faults))
    unique.sort(key=lambda fault: (fault.place.line, fault.place.column) if fault.place else (0, 0))
    if len(unique) >= MAX_FAULTS:
        unique = [*unique[:MAX_FAULTS - 1], Fault("there may be more faults, which are not listed")]
    return tuple(unique)
