"""Turn the text of a spec into a tree whose keys and values know where they stand.

The YAML library gives the events (YAML 1.2, https://yaml.org/spec/1.2.2/); the
tree is built here, so that nothing is resolved: each scalar stays the text that
was written until the schema says what it means. Duplicate keys, anchors,
aliases, tags and second documents are faults.
"""
from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import yaml

from calcpack.errors import Fault, SpecError
from calcpack.spec.scalars import clipped
from calcpack.spec.source import UNSEEN, Source, unseen_fault
from calcpack.spec.syntax import syntax_fault

MAX_DEPTH = 20
MAX_FAULTS = 50
_STYLES = {"'": "single", '"': "double", "|": "block", ">": "block"}
_NO_VALUE = frozenset(("", "~", "null", "Null", "NULL"))


@dataclass(frozen=True, slots=True)
class Scalar:
    """A text as written, trimmed; ``style`` is plain, single, double or block.

    ``usable`` is False where a fault has been told already, and nothing more
    is to be said about the value.
    """

    text: str
    style: str
    start: int
    end: int
    usable: bool = True

    @property
    def has_value(self) -> bool:
        """False for what YAML reads as null: an empty value, ``~``, ``null``."""
        return self.style != "plain" or self.text not in _NO_VALUE


@dataclass(frozen=True, slots=True)
class Listing:
    """A list of nodes."""

    items: tuple[Node, ...]
    start: int
    end: int


@dataclass(frozen=True, slots=True)
class Mapping:
    """Keys, each with its value, in the order written; no key twice."""

    entries: tuple[tuple[Scalar, Node], ...]
    start: int
    end: int

    def get(self, name: str) -> Node | None:
        """The value under the key ``name``, or None."""
        return next((value for key, value in self.entries if key.text == name), None)

    def key(self, name: str) -> Scalar | None:
        """The key ``name`` as a node, or None."""
        return next((key for key, _ in self.entries if key.text == name), None)


Node = Scalar | Listing | Mapping


def read_tree(source: Source, noun: str = "spec", opening: str = "calcpack: 1") -> tuple[Mapping, tuple[Fault, ...]]:
    """The tree of a spec, and the faults that leave the rest readable.

    Another kind of file that is written like a spec is called ``noun`` in
    messages, and starts with the line ``opening``.

    Raises
    ------
    SpecError
        If the text is not YAML, is empty, is no mapping, nests too deep, or
        holds a second document; with all faults found until there.
    """
    builder = _Builder(source, noun, opening)
    try:
        tree = builder.document()
    except yaml.YAMLError as error:
        raise SpecError([*builder.faults, syntax_fault(error, source)]) from None
    except SpecError as error:
        raise SpecError([*builder.faults, *error.faults]) from None
    return tree, tuple(builder.faults)


class _Builder:
    """One pass over the events of a text; each method takes the events of one node."""

    def __init__(self, source: Source, noun: str, opening: str) -> None:
        self.source = source
        self.noun = noun
        self.expected = f"a mapping that starts with '{opening}'"
        self.faults: list[Fault] = []
        self.events: Iterator = yaml.parse(source.text, Loader=yaml.CSafeLoader)

    def document(self) -> Mapping:
        next(self.events)                                      # the stream starts
        if not isinstance(next(self.events), yaml.DocumentStartEvent):
            raise self.stop(f"the {self.noun} is empty", 0, 0, expected=self.expected)
        tree = self.node(next(self.events), 1)
        next(self.events)                                      # the document ends
        after = next(self.events)
        if isinstance(after, yaml.DocumentStartEvent):
            raise self.stop("a second document starts here", *_span(after), expected="one sheet a file",
                            hint="give each sheet its own file")
        return self.top(tree)

    def top(self, tree: Node) -> Mapping:
        if isinstance(tree, Mapping):
            return tree
        if isinstance(tree, Scalar) and not tree.has_value:
            raise self.stop(f"the {self.noun} is empty", tree.start, tree.end, expected=self.expected)
        raise self.stop(f"the {self.noun} must be a mapping of keys", tree.start, tree.end,
                        expected=self.expected, found=kind_of(tree))

    def node(self, event: yaml.Event, depth: int) -> Node:
        if depth > MAX_DEPTH:
            raise self.stop(f"the {self.noun} nests deeper than {MAX_DEPTH} levels", *_span(event))
        if isinstance(event, yaml.AliasEvent):
            start, end = _span(event)
            self.fault(f"an alias, '*{event.anchor}', is not allowed", start, end,
                       hint="write the value out where it is used")
            return Scalar("", "double", start, end, usable=False)
        self.refuse_marks(event)
        if isinstance(event, yaml.ScalarEvent):
            return self.scalar(event)
        if isinstance(event, yaml.SequenceStartEvent):
            return self.listing(event, depth)
        return self.mapping(event, depth)

    def refuse_marks(self, event: yaml.NodeEvent) -> None:
        """Anchors and tags are faults; the value behind them is read all the same."""
        start, end = _span(event)
        if event.anchor is not None:
            self.fault(f"an anchor, '&{event.anchor}', is not allowed", start, end,
                       hint="write the value out where it is used")
        if event.tag is not None:
            tag = event.tag.replace("tag:yaml.org,2002:", "!!")
            self.fault(f"a tag, {clipped(tag)}, is not allowed", start, end,
                       hint="leave the tag out; the key says what the value is")

    def scalar(self, event: yaml.ScalarEvent) -> Scalar:
        start, end = _span(event)
        unseen = UNSEEN.search(event.value)
        if unseen:
            fault = unseen_fault(unseen.group(), self.source.place(start, end))
            self.fault(fault.what, start, end, hint=fault.hint)
        style = _STYLES.get(event.style, "plain")
        return Scalar(event.value.strip(), style, start, end, usable=unseen is None)

    def listing(self, event: yaml.Event, depth: int) -> Listing:
        items = []
        while not isinstance(following := next(self.events), yaml.SequenceEndEvent):
            items.append(self.node(following, depth + 1))
        return Listing(tuple(items), event.start_mark.index, following.end_mark.index)

    def mapping(self, event: yaml.Event, depth: int) -> Mapping:
        entries: dict[str, tuple[Scalar, Node]] = {}
        while not isinstance(following := next(self.events), yaml.MappingEndEvent):
            key = self.node(following, depth + 1)
            value = self.node(next(self.events), depth + 1)
            if self.is_key(key, entries):
                entries[key.text] = (key, value)
        return Mapping(tuple(entries.values()), event.start_mark.index, following.end_mark.index)

    def is_key(self, key: Node, entries: dict[str, tuple[Scalar, Node]]) -> bool:
        if not isinstance(key, Scalar):
            self.fault("a key must be a word", key.start, key.end, found=kind_of(key))
            return False
        if not key.usable:
            return False
        if not key.has_value or not key.text:
            self.fault("a key is missing before the colon", key.start, key.end)
            return False
        if key.text == "<<" and key.style == "plain":
            self.fault("a merge key, '<<', is not allowed", key.start, key.end, hint="write the keys out")
            return False
        if key.text in entries:
            first = self.source.place(entries[key.text][0].start, entries[key.text][0].end)
            self.fault(f"key {clipped(key.text)} is given twice", key.start, key.end,
                       hint=f"first given on line {first.line}")
            return False
        return True

    def fault(self, what: str, start: int, end: int, **words: str) -> None:
        self.faults.append(Fault(what, self.source.place(start, end), **words))
        if len(self.faults) > MAX_FAULTS:
            raise SpecError(())                 # the faults until here are told

    def stop(self, what: str, start: int, end: int, **words: str) -> SpecError:
        return SpecError(Fault(what, self.source.place(start, end), **words))


def _span(event: yaml.Event) -> tuple[int, int]:
    return event.start_mark.index, event.end_mark.index


def kind_of(node: Node) -> str:
    """What a node is, in words: 'a list', 'a mapping' or the text in quotes."""
    if isinstance(node, Listing):
        return "a list"
    return "a mapping" if isinstance(node, Mapping) else clipped(node.text)
