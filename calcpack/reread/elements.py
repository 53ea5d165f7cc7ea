"""The text of an HTML page to a tree of its elements, without what nobody sees."""
from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field
from html.parser import HTMLParser

VOID = frozenset({"meta", "link", "col", "br", "img", "hr", "input"})
UNSEEN = frozenset({"math", "style", "script", "head", "template"})
"""Elements whose text is no part of the visible page; the MathML twin is for screen readers alone."""


@dataclass(slots=True)
class Element:
    """An element of the page; ``inside`` holds its elements and texts in the order of reading."""

    tag: str
    classes: tuple[str, ...] = ()
    id: str = ""
    href: str = ""
    inside: list[Element | str] = field(default_factory=list)

    @property
    def children(self) -> list[Element]:
        """The elements directly inside."""
        return [one for one in self.inside if isinstance(one, Element)]

    @property
    def text(self) -> str:
        """The visible text, runs of white space as one space."""
        return " ".join("".join(self._texts()).split(" ")).strip()

    def _texts(self) -> Iterator[str]:
        for one in self.inside:
            if isinstance(one, str):
                yield one.replace("\n", " ")
            else:
                yield " " if one.tag == "br" else ""
                yield from one._texts()

    def walk(self) -> Iterator[Element]:
        """This element and all below it, in the order of reading."""
        yield self
        for one in self.inside:
            if isinstance(one, Element):
                yield from one.walk()

    def all(self, name: str) -> list[Element]:
        """All elements below with a tag, or with a class where ``name`` starts with a point."""
        if name.startswith("."):
            return [one for one in self.walk() if name[1:] in one.classes]
        return [one for one in self.walk() if one.tag == name]

    def first(self, name: str) -> Element | None:
        """The first of :meth:`all`, or None."""
        return next(iter(self.all(name)), None)


class _Builder(HTMLParser):
    """Builds the tree; leaves out the elements that are not seen."""

    def __init__(self) -> None:
        super().__init__(convert_charrefs=True)
        self.root = Element("page")
        self.open = [self.root]
        self.unseen = 0

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        if self.unseen or tag in UNSEEN:
            self.unseen += tag not in VOID
            return
        given = dict(attrs)
        made = Element(tag, tuple((given.get("class") or "").split()), given.get("id") or "", given.get("href") or "")
        self.open[-1].inside.append(made)
        if tag not in VOID:
            self.open.append(made)

    def handle_endtag(self, tag: str) -> None:
        if self.unseen:
            self.unseen -= 1
        elif tag == self.open[-1].tag:
            self.open.pop()

    def handle_data(self, data: str) -> None:
        if not self.unseen:
            self.open[-1].inside.append(data)


def elements_of(html: str) -> Element:
    """The tree of a page."""
    builder = _Builder()
    builder.feed(html)
    builder.close()
    return builder.root
