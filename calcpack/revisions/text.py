"""An outline to plain text of at most 80 columns, for a terminal."""
from __future__ import annotations

import textwrap
import unicodedata

from calcpack.revisions.outline import Outline, Part, Row
from calcpack.revisions.share_table import HEADING, TOGETHER, ShareTable

COLUMNS = 80


def as_text(outline: Outline) -> str:
    """The comparison as text; every line has at most 80 columns unless one word is longer."""
    blocks = [_wrapped(outline.title), _wrapped(outline.compared), *(_wrapped(note) for note in outline.notes),
              "", _wrapped(outline.summary)]
    for part in outline.parts:
        blocks += ["", *_part(part)]
    return "\n".join(blocks) + "\n"


def _part(part: Part) -> list[str]:
    lines = [part.heading, "-" * len(part.heading)]
    for row in part.rows:
        lines += _row(row)
    return [*lines, *_shares(part.shares)] if part.shares else lines


def _shares(table: ShareTable) -> list[str]:
    """Result by result, each part before the change that it comes from, and their sum."""
    lines = ["", f"{HEADING}:"] if table.columns else [""]
    for column in table.columns:
        lines.append(_plain(column.head))
        told = [(number, text) for text, number in zip(table.causes, column.numbers, strict=True) if number]
        told.append((column.whole, TOGETHER))
        width = max(len(number) for number, _ in told)
        lines += [_wrapped(text, f"    {number:>{width}}  ", " " * (width + 8)) for number, text in told]
    return lines + [_wrapped(note) for note in table.notes]


def _row(row: Row) -> list[str]:
    lines = [_wrapped(f"{row.name}  {row.title}".rstrip(), "", "    ")]
    if row.kind in ("added", "removed"):
        lines.append(_wrapped(f"{row.kind}: {row.new if row.kind == 'added' else row.old}", "    ", "      "))
    else:
        lines += _sides(row)
    return lines + [_wrapped(f"{'follows from' if not at else 'and from'} {cause}", "    ", "        ")
                    for at, cause in enumerate(row.because)]


def _sides(row: Row) -> list[str]:
    """Old and new on one line where they fit, else on two."""
    old, new = row.old or "none", row.new or "none"
    line = "    " + _plain(f"{old} → {new}") + (f"    {row.change}" if row.change else "")
    if _width(line) <= COLUMNS:
        return [line]
    lines = [_wrapped(f"was {old}", "    ", "        "), _wrapped(f"now {new}", "    ", "        ")]
    return [*lines, _wrapped(row.change, "        ", "        ")] if row.change else lines


def _wrapped(text: str, first: str = "", rest: str = "") -> str:
    return textwrap.fill(_plain(text), COLUMNS, initial_indent=first, subsequent_indent=rest, break_long_words=False,
                         break_on_hyphens=False)


def _plain(text: str) -> str:
    """In one line; a character that steers a terminal, which only a forged record holds, is shown as missing."""
    return "".join(letter if letter.isprintable() else "\ufffd" for letter in " ".join(text.split()))


def _width(text: str) -> int:
    """Columns of a terminal; wide characters of East Asia take two."""
    return sum(2 if unicodedata.east_asian_width(letter) in "WF" else 1 for letter in text)
