"""One point with its verdict, and what the judges look at."""
from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from typing import Any

from calcpack.render.pages import Extras
from calcpack.reread.elements import Element, elements_of
from calcpack.reread.from_print import Redone
from calcpack.verification.statement import statement

MET, UNMET, IDLE, PERSON = "met", "not met", "not applicable", "for a person"

Verdict = tuple[str, str]
Data = Mapping[str, Any]


@dataclass(frozen=True, slots=True)
class Point:
    """A point of the list: its verdict, and where on the sheet or why."""

    number: int
    group: str
    text: str
    verdict: str
    where: str


@dataclass(frozen=True, slots=True)
class View:
    """A sheet as the judges see it: its record, its page as text and as a tree, the page done again."""

    record: Data
    html: str
    page: Element
    parts: Mapping[str, Element]
    redone: Redone
    comparison: Data | None
    verified: Data
    extras: Extras

    @classmethod
    def of(cls, record: Data, html: str, redone: Redone, comparison: Data | None, extras: Extras) -> View:
        """The view of one sheet."""
        page = elements_of(html)
        parts = {part.id.removeprefix("part-"): part for part in page.all(".part")}
        verified = statement(record, extras.verification)
        return cls(record, html, page, parts, redone, comparison, verified, extras)

    @property
    def sheet(self) -> Data:
        """The title block's entries."""
        return self.record["sheet"]

    def items(self, key: str) -> Sequence[Data]:
        """A list of the record, empty where it has none."""
        return self.record.get(key) or ()

    def text(self, part: str) -> str:
        """The visible text of a part; empty where the sheet has none."""
        return self.parts[part].text if part in self.parts else ""

    def prints(self, part: str, *words: str) -> bool:
        """Whether a part's visible text has all the words."""
        text = self.text(part)
        return all(" ".join(word.split()) in text for word in words)

    @property
    def title(self) -> str:
        """The visible text of the title block."""
        return next((one.text for one in self.page.all("header")), "")


Judge = Callable[[View], Verdict]


def decided(holds: bool, where: str, otherwise: str) -> Verdict:
    """Met and where, or not met and why."""
    return (MET, where) if holds else (UNMET, otherwise)


def all_of(entries: Sequence[Data], good: Callable[[Data], bool], name: Callable[[Data], str], where: str,
           lacking: str, idle: str) -> Verdict:
    """Met if every entry is good; else which are not, by name; idle where there are none."""
    if not entries:
        return IDLE, idle
    bad = [name(one) for one in entries if not good(one)]
    return decided(not bad, where, f"{lacking}: {shortened(bad)}")


def shortened(names: Sequence[str], most: int = 4) -> str:
    """The first names, and how many more."""
    more = f" and {len(names) - most} more" if len(names) > most else ""
    return ", ".join(names[:most]) + more
