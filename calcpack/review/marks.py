"""A checker's mark, its answer and a signature, as frozen values."""
from __future__ import annotations

import unicodedata
from dataclasses import dataclass

VERDICTS = ("agreed", "comment", "corrected")
ROLES = ("prepared", "checked", "approved")
GONE = "gone"
"""What a mark has seen of a target that the sheet had no more when the mark was made."""


@dataclass(frozen=True, slots=True)
class Answer:
    """What the author answers to a comment."""

    by: str
    date: str
    text: str


@dataclass(frozen=True, slots=True)
class Mark:
    """What a checker says of one target at one revision.

    ``seen`` is the target's identity then, ``shown`` its printed number, None
    where it has none. ``agreed`` needs no text; ``comment`` says what is
    wrong or asked, ``corrected`` what was wrong and has been put right.
    """

    kind: str
    name: str
    revision: str
    seen: str
    shown: str | None
    verdict: str
    by: str
    date: str
    text: str | None = None
    answer: Answer | None = None

    @property
    def key(self) -> tuple[str, str]:
        """Kind and name of the target."""
        return self.kind, self.name


@dataclass(frozen=True, slots=True)
class Signature:
    """Who signed a sheet for what, bound to the identity of the whole record."""

    role: str
    by: str
    date: str
    revision: str
    record: str


@dataclass(frozen=True, slots=True)
class ReviewFile:
    """The marks of a sheet in the order they were made, and its signatures."""

    sheet: str
    marks: tuple[Mark, ...] = ()
    signatures: tuple[Signature, ...] = ()


def same_person(one: str, other: str) -> bool:
    """Whether two names are one person's: case, white space, full stops and what cannot be seen do not count."""
    return plain_name(one) == plain_name(other)


def plain_name(name: str) -> str:
    """A name as it is compared: ``'S. Virta'`` and ``'s virta'`` are the same."""
    shown = (one for one in unicodedata.normalize("NFKC", name) if unicodedata.category(one) != "Cf")
    return "".join("".join(shown).replace(".", " ").split()).casefold()
