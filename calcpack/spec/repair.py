"""Turn the tree of a faulty spec into one that can be read on, so that later stages find their faults too.

Nothing is invented that could be taken for a value: an entry that cannot be
used is left out whole, and only the title block gets words of its own.
"""
from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace

from calcpack.spec.nodes import Listing, Mapping, Node, Scalar
from calcpack.spec.places import Path, Wrong

TITLE_BLOCK = {
    "number": "unnamed", "title": "unnamed", "project": "unnamed", "revision": "0", "status": "draft"}
"""What the title block says where the spec does not, in a spec that is only read for faults."""

_ENTRY_DEPTH = {"case": 3}
_USUAL_ENTRY_DEPTH = 2


def repaired(tree: Mapping, wrongs: Iterable[Wrong]) -> Mapping:
    """The tree without what ``wrongs`` spoil, with a title block and a case."""
    wrongs = tuple(wrongs)
    gone = frozenset(path for wrong in wrongs if (path := _spoilt(wrong)) is not None)
    renamed = {wrong.path: wrong.meant for wrong in wrongs if wrong.meant is not None}
    return _completed(_mapping_without(tree, (), gone, renamed))


def _spoilt(wrong: Wrong) -> Path | None:
    if wrong.spoils == "nothing" or wrong.meant is not None:
        return None
    if wrong.spoils == "key":
        return wrong.path
    if wrong.path[:2] == ("case", "series"):
        # What is left of a series without one of its keys would mean something else.
        return wrong.path[:2]
    return wrong.path[:_ENTRY_DEPTH.get(str(wrong.path[0]), _USUAL_ENTRY_DEPTH)]


def _without(node: Node, path: Path, gone: frozenset[Path], renamed: dict[Path, str]) -> Node:
    if isinstance(node, Mapping):
        return _mapping_without(node, path, gone, renamed)
    if isinstance(node, Listing):
        places = ((*path, index) for index in range(len(node.items)))
        return replace(node, items=tuple(_without(item, place, gone, renamed)
                                         for item, place in zip(node.items, places, strict=True)
                                         if place not in gone))
    return node


def _mapping_without(node: Mapping, path: Path, gone: frozenset[Path], renamed: dict[Path, str]) -> Mapping:
    """The mapping without what is gone; a misspelt key has the meant name, unless that key is there too."""
    taken = {key.text for key, _ in node.entries}
    kept = []
    for key, value in node.entries:
        here = (*path, key.text)
        meant = renamed.get(here)
        if here in gone or meant in taken:
            continue
        if meant is not None:
            taken.add(meant)
        kept.append((replace(key, text=meant or key.text), _without(value, here, gone, renamed)))
    return replace(node, entries=tuple(kept))


def _completed(tree: Mapping) -> Mapping:
    """The tree with the format and every key that the sheet and the case must have."""
    sheet = _filled(_block(tree, "sheet"), TITLE_BLOCK)
    case = _filled(_block(tree, "case"), {"method": "none"})
    heads = {"calcpack": _word("1", tree), "sheet": sheet, "case": case}
    others = tuple((key, value) for key, value in tree.entries if key.text not in heads)
    return replace(tree, entries=tuple((tree.key(name) or _word(name, tree), value)
                                       for name, value in heads.items()) + others)


def _block(tree: Mapping, name: str) -> Mapping:
    block = tree.get(name)
    return block if isinstance(block, Mapping) else Mapping((), tree.start, tree.start)


def _filled(block: Mapping, words: dict[str, str]) -> Mapping:
    missing = tuple((_word(name, block), _word(text, block)) for name, text in words.items()
                    if block.get(name) is None)
    return replace(block, entries=block.entries + missing)


def _word(text: str, beside: Mapping) -> Scalar:
    return Scalar(text, "plain", beside.start, beside.start)
