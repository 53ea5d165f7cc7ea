"""Turn the bytes of a spec into text whose every character has a line and a column."""
from __future__ import annotations

import bisect
import hashlib
import re
from dataclasses import dataclass, field
from itertools import islice
from pathlib import Path

from calcpack.errors import Fault, Place, SpecError

MAX_BYTES = 1_000_000

# Control characters, line breaks that editors do not show as such, lone
# surrogates, and marks that reverse the direction of text: none can be seen,
# and a printed sheet would not show what the file says.
UNSEEN = re.compile("[\x00-\x08\x0b\x0c\x0e-\x1f\x7f-\x9f\u200e\u200f\u2028-\u202e\u2066-\u2069"
                    "\ud800-\udfff\ufeff\ufffe\uffff]")
_MAX_UNSEEN = 10

_PIECES = {
    "plain": re.compile(r"\S"),
    "block": re.compile(r"\S"),
    "single": re.compile(r"''|\S"),
    "double": re.compile(r"\\(?:x..|u.{4}|U.{8}|.)|\S", re.DOTALL),
}
_BLANK_ESCAPES = frozenset("\\" + letter for letter in "nrtvfNLP_ \t\r\n")


@dataclass(frozen=True, slots=True)
class Source:
    """The text of one spec under the ``file`` name that messages show."""

    file: str
    text: str
    sha256: str = ""
    starts: tuple[int, ...] = field(default=(), repr=False)

    @classmethod
    def of(cls, file: str, text: str, sha256: str = "") -> Source:
        """A source with its line starts found."""
        starts = [0]
        for row in text.splitlines(keepends=True):
            starts.append(starts[-1] + len(row))
        return cls(file, text, sha256, tuple(starts[:-1] or [0]))

    def place(self, start: int, end: int) -> Place:
        """The place of the characters ``start`` to ``end``, cut at the end of the first line."""
        start = min(start, len(self.text))
        line = bisect.bisect_right(self.starts, start) - 1
        stop = self.starts[line + 1] if line + 1 < len(self.starts) else len(self.text)
        row = self.text[self.starts[line]:stop].rstrip("\r\n")
        column = min(start - self.starts[line], len(row))
        length = len(row[column:end - self.starts[line]].rstrip())
        return Place(self.file, line + 1, column + 1, max(1, length))

    def inside(self, span: tuple[int, int], style: str, content: str, column: int, length: int) -> Place:
        """The place of ``length`` characters of a scalar's ``content`` from ``column`` (from 0).

        Counts the characters that are not blank, since quotes, escapes and
        folded lines change only blanks and the width of a character.
        """
        places = _seen_characters(self.text[span[0]:span[1]], style)
        if not places:
            return self.place(*span)
        before = _count(content[:column])
        at_character = column < len(content) and not content[column].isspace() and before < len(places)
        start = places[before][0] if at_character else places[min(before, len(places)) - 1][1]
        last = _count(content[:column + length]) - 1
        end = places[last][1] if at_character and before <= last < len(places) else start + 1
        return self.place(span[0] + start, span[0] + end)


def _count(content: str) -> int:
    return sum(not letter.isspace() for letter in content)


def _seen_characters(raw: str, style: str) -> list[tuple[int, int]]:
    """Start and end in ``raw`` of each character of the scalar that is not blank."""
    first, last = 0, len(raw)
    if style in ("single", "double"):
        first, last = 1, len(raw) - 1
    elif style == "block":
        first = raw.find("\n") + 1 or len(raw)
    pieces = _PIECES[style].finditer(raw, first, last)
    return [piece.span() for piece in pieces if not _is_blank(piece.group())]


def _is_blank(piece: str) -> bool:
    if piece in _BLANK_ESCAPES:
        return True
    return piece[:2] in ("\\x", "\\u", "\\U") and chr(int(piece[2:], 16)).isspace()


def open_source(path: Path, name: str | None = None, noun: str = "spec") -> Source:
    """The source that the file at ``path`` holds; messages call such a file ``noun``.

    Raises
    ------
    SpecError
        If there is no such file, or it is not UTF-8 text of at most 1 MB.
    """
    shown = name if name is not None else str(path)
    try:
        if not path.is_file():
            what = f"{shown!r} is not a file" if path.exists() else f"there is no file {shown!r}"
            raise SpecError(Fault(what, hint=f"give the path of a {noun}"))
        with path.open("rb") as stream:
            content = stream.read(MAX_BYTES + 1)
    except (OSError, ValueError) as error:       # ValueError: a NUL in the path
        raise SpecError(Fault(f"{shown!r} cannot be read", detail=str(error))) from None
    return source_of_bytes(content, shown, noun)


def source_of_bytes(content: bytes, name: str, noun: str = "spec") -> Source:
    """The source that ``content`` holds; raises like :func:`open_source`."""
    if len(content) > MAX_BYTES:
        raise SpecError(Fault(f"the {noun} is larger than 1 MB", Place(name, 1, 1),
                              hint=f"a {noun} holds one sheet; keep data in files of their own"))
    text = _decoded(content, name)
    source = Source.of(name, text.removeprefix("\ufeff"), hashlib.sha256(content).hexdigest())
    _refuse_unseen(source)
    return source


def source_of_text(text: str, name: str, noun: str = "spec") -> Source:
    """The source that ``text`` holds; raises like :func:`open_source`."""
    return source_of_bytes(text.encode("utf-8", "surrogatepass"), name, noun)


def _decoded(content: bytes, name: str) -> str:
    if content.startswith((b"\xff\xfe", b"\xfe\xff")):
        raise SpecError(Fault("the file is UTF-16 text", Place(name, 1, 1), expected="UTF-8 text",
                              hint="save the file as UTF-8"))
    if b"\0" in content:
        raise SpecError(Fault("the file is binary, not text", Place(name, 1, 1), expected="UTF-8 text"))
    try:
        return content.decode("utf-8")
    except UnicodeDecodeError as error:
        before = Source.of(name, content[:error.start].decode("utf-8") + "\ufffd")
        byte = content[error.start]
        place = before.place(len(before.text) - 1, len(before.text))
        raise SpecError(Fault("the file is not UTF-8 text", place, found=f"the byte 0x{byte:02X}",
                              expected="UTF-8 text", hint="save the file as UTF-8")) from None


def _refuse_unseen(source: Source) -> None:
    faults = [unseen_fault(match.group(), source.place(match.start(), match.end()))
              for match in islice(UNSEEN.finditer(source.text), _MAX_UNSEEN)]
    if faults:
        raise SpecError(faults)


def unseen_fault(letter: str, place: Place) -> Fault:
    """The fault for a character that nobody can see."""
    return Fault(f"the character U+{ord(letter):04X} cannot be seen and is not allowed", place,
                 hint="delete it")
