"""A review file to its marks and signatures, or to all its faults at once, each with its place."""
from __future__ import annotations

import datetime
import re
from collections.abc import Iterable
from itertools import pairwise
from pathlib import Path

from calcpack.errors import Fault, SpecError, nearest
from calcpack.review.marks import ROLES, VERDICTS, Answer, Mark, ReviewFile, Signature
from calcpack.review.targets import KINDS
from calcpack.review.writing import FORMAT
from calcpack.spec.nodes import Listing, Mapping, Node, Scalar, kind_of, read_tree
from calcpack.spec.scalars import clipped
from calcpack.spec.source import Source, open_source, source_of_text

NOUN, OPENING = "review file", "review: 1"
MAX_TEXT = 8000

_COMMENT = re.compile(r"(?:^|(?<=[ \t]))#", re.MULTILINE)
_MARK = (*KINDS, "revision", "seen", "shown", "verdict", "by", "date", "text", "answer")
_ANSWER = ("by", "date", "text")
_SIGNATURE = ("role", "by", "date", "revision", "record")


def read_review(path: Path, text: str | None = None, *, number: str | None = None) -> ReviewFile:
    """The review file at ``path``, or in ``text`` as if it stood there.

    With ``number`` it must be the review of that sheet.

    Raises
    ------
    SpecError
        With all faults, in the order of the file.
    """
    source, tree, faults = _tree(path, text)
    reader = _Reader(source, list(faults))
    review = reader.review(tree, number)
    if reader.faults:
        raise SpecError(sorted(reader.faults, key=lambda one: (one.place.line, one.place.column)))
    return review


def own_comments(path: Path, text: str | None = None) -> tuple[Fault, ...]:
    """The comments that somebody wrote into a review file by hand, which it would lose when it is written again."""
    source, tree, _ = _tree(path, text)
    spans = sorted(_spans(tree))
    # What stands between two scalars holds no text of the file, only its signs and comments.
    edges = [(0, 0), *spans, (len(source.text), len(source.text))]
    header = source.text.find("\n") if source.text.startswith("# Marks of the check of sheet") else -1
    found = [at.start() for (_, start), (end, _) in pairwise(edges)
             for at in _COMMENT.finditer(source.text, start, end)]
    return tuple(Fault("a comment stands here, which would be lost when the file is written again",
                       source.place(at, at + 1), hint="take it out, or put it into a text or an answer")
                 for at in found if at > header)


def _tree(path: Path, text: str | None) -> tuple[Source, Mapping, tuple[Fault, ...]]:
    name = str(path)
    source = open_source(path, name, NOUN) if text is None else source_of_text(text, name, NOUN)
    return source, *read_tree(source, NOUN, OPENING)


def _spans(node: Node) -> Iterable[tuple[int, int]]:
    if isinstance(node, Scalar):
        yield node.start, node.end
    elif isinstance(node, Listing):
        for item in node.items:
            yield from _spans(item)
    else:
        for key, value in node.entries:
            yield from _spans(key)
            yield from _spans(value)


class _Reader:
    """Takes a tree apart; what is wrong is collected, and a value that is wrong reads as empty."""

    def __init__(self, source: Source, faults: list[Fault]) -> None:
        self.source = source
        self.faults = faults

    def review(self, tree: Mapping, number: str | None) -> ReviewFile:
        self.keys(tree, ("review", "sheet", "marks", "signatures"), ("review", "sheet"), "the review file")
        if (version := self.text(tree, "review")) not in ("", FORMAT):
            self.fault(f"this calcpack reads format {FORMAT} of a review file", tree.get("review"),
                       found=clipped(version), expected=OPENING)
        sheet = self.text(tree, "sheet")
        if number is not None and sheet not in ("", number):
            self.fault("this is the review of another sheet", tree.get("sheet"), found=sheet, expected=number)
        return ReviewFile(sheet, tuple(map(self.mark, self.entries(tree, "marks"))),
                          tuple(map(self.signature, self.entries(tree, "signatures"))))

    def entries(self, tree: Mapping, key: str) -> list[Mapping]:
        node = tree.get(key)
        if node is None or (isinstance(node, Scalar) and not node.has_value):
            return []
        if not isinstance(node, Listing):
            self.fault(f"a list is meant for {key}", node, found=kind_of(node))
            return []
        for item in node.items:
            if not isinstance(item, Mapping):
                self.fault(f"a mapping is meant for an entry of {key}", item, found=kind_of(item))
        return [item for item in node.items if isinstance(item, Mapping)]

    def mark(self, node: Mapping) -> Mark:
        kinds = [key.text for key, _ in node.entries if key.text in KINDS]
        self.keys(node, _MARK, ("revision", "seen", "verdict", "by", "date"), "a mark")
        if len(kinds) != 1:
            self.fault("a mark needs one target" if not kinds else "a mark has more than one target",
                       node.key(kinds[1]) if kinds else node, expected="exactly one of " + ", ".join(KINDS))
        kind = kinds[0] if kinds else ""
        verdict, text = self.word(node, "verdict", VERDICTS), self.text(node, "text", most=MAX_TEXT)
        if verdict in ("comment", "corrected") and node.get("text") is None:
            self.fault(f"a mark with the verdict {verdict} needs a text", node.get("verdict"),
                       expected="text: what is wrong or asked" if verdict == "comment" else
                       "text: what was wrong and has been put right")
        return Mark(kind, self.text(node, kind), self.text(node, "revision"), self.text(node, "seen"),
                    self.text(node, "shown") or None, verdict, self.text(node, "by"), self.date(node),
                    text or None, self.answer(node.get("answer")))

    def answer(self, node: Node | None) -> Answer | None:
        if node is None:
            return None
        if not isinstance(node, Mapping):
            self.fault("a mapping is meant for answer", node, found=kind_of(node), expected="keys of by, date, text")
            return None
        self.keys(node, _ANSWER, _ANSWER, "an answer")
        return Answer(self.text(node, "by"), self.date(node), self.text(node, "text", most=MAX_TEXT))

    def signature(self, node: Mapping) -> Signature:
        self.keys(node, _SIGNATURE, _SIGNATURE, "a signature")
        return Signature(self.word(node, "role", ROLES), self.text(node, "by"), self.date(node),
                         self.text(node, "revision"), self.text(node, "record"))

    def keys(self, node: Mapping, known: Iterable[str], needed: Iterable[str], what: str) -> None:
        """Faults for keys that are unknown, and for those that are missing."""
        known = tuple(known)
        written = {key.text for key, _ in node.entries}
        for key, _ in node.entries:
            if key.text not in known:
                self.fault(f"unknown key {clipped(key.text)} in {what}", key, expected="one of " + ", ".join(known),
                           hint=nearest(key.text, known))
        for name in needed:
            if name not in written:
                first = node.entries[0][0] if node.entries else node
                self.fault(f"key {name!r} is missing in {what}", first)

    def text(self, node: Mapping, key: str, most: int = 200) -> str:
        """The text under ``key``; empty where there is none, or none that can be used."""
        value = node.get(key) if key else None
        if value is None:
            return ""
        if not isinstance(value, Scalar):
            self.fault(f"a text is meant for {key}", value, found=kind_of(value))
        elif not value.usable:
            return ""
        elif not value.has_value or not value.text:
            self.fault(f"key {key!r} has no value", node.key(key), hint="write a value, or leave the key out")
        elif len(value.text) > most:
            self.fault(f"a text of {len(value.text)} characters is too long here", value,
                       expected=f"at most {most} characters")
        else:
            return value.text
        return ""

    def word(self, node: Mapping, key: str, known: tuple[str, ...]) -> str:
        found = self.text(node, key)
        if found and found not in known:
            self.fault(f"{clipped(found)} is not a value of {key}", node.get(key),
                       expected="one of " + ", ".join(known), hint=nearest(found, known))
        return found

    def date(self, node: Mapping) -> str:
        found = self.text(node, "date")
        if found and not is_date(found):
            self.fault(f"{clipped(found)} is not a day of the calendar", node.get("date"),
                       expected="year-month-day, such as 2026-03-31")
        return found

    def fault(self, what: str, node: Node | None, **words: str | None) -> None:
        span = (node.start, node.end) if node is not None else (0, 0)
        self.faults.append(Fault(what, self.source.place(*span), **words))


def is_date(text: str) -> bool:
    """Whether a text is a day in ISO form."""
    if not re.fullmatch(r"\d{4}-\d{2}-\d{2}", text):
        return False
    try:
        datetime.date.fromisoformat(text)
    except ValueError:
        return False
    return True
