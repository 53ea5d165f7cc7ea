"""A review file's marks and signatures to its text: one form, the same from here and from the sheet's page.

A key stands on each line, in a fixed order, so that a new mark is a block of
new lines in a diff. A scalar is plain where :data:`PLAIN` allows it, else a
JSON string, which YAML reads as such. Texts are trimmed, as they are when read.
"""
from __future__ import annotations

import json
import re
from collections.abc import Iterable
from pathlib import Path

from calcpack.review.marks import Mark, ReviewFile, Signature

FORMAT = "1"
SUFFIX = ".review.yaml"
PLAIN = re.compile(r"[A-Za-z][A-Za-z0-9_.()/+°%-]*( [A-Za-z0-9_.()/+°%-]+)*")
WORDS = frozenset(("true", "false", "null", "yes", "no", "on", "off"))


def review_path(spec_path: Path) -> Path:
    """Where the review file of a spec lies: ``pump.yaml`` has ``pump.review.yaml`` beside it."""
    return spec_path.with_name(spec_path.stem + SUFFIX)


def review_text(review: ReviewFile) -> str:
    """The file's text."""
    lines = [f"# Marks of the check of sheet {review.sheet}. "
             "Written by 'calcpack review' and by the sheet's page; keep it in git.",
             f"review: {FORMAT}", f"sheet: {scalar(review.sheet)}"]
    lines += _list("marks", map(_mark, review.marks))
    lines += _list("signatures", map(_signature, review.signatures))
    return "\n".join(lines) + "\n"


def scalar(text: str) -> str:
    """A text as a YAML scalar."""
    text = text.strip()
    if PLAIN.fullmatch(text) and text.lower() not in WORDS:
        return text
    return json.dumps(text, ensure_ascii=False)


def _list(name: str, entries: Iterable[list[str]]) -> list[str]:
    """A list of mappings; nothing for an empty one."""
    lines = [line for first, *others in entries
             for line in (f"  - {first}", *(f"    {other}" for other in others))]
    return [f"{name}:", *lines] if lines else []


def _keys(pairs: Iterable[tuple[str, str | None]]) -> list[str]:
    return [f"{key}: {scalar(value)}" for key, value in pairs if value is not None]


def _mark(mark: Mark) -> list[str]:
    lines = _keys(((mark.kind, mark.name), ("revision", mark.revision), ("seen", mark.seen), ("shown", mark.shown),
                   ("verdict", mark.verdict), ("by", mark.by), ("date", mark.date), ("text", mark.text)))
    if mark.answer is not None:
        inside = _keys((("by", mark.answer.by), ("date", mark.answer.date), ("text", mark.answer.text)))
        lines += ["answer:", *(f"  {line}" for line in inside)]
    return lines


def _signature(one: Signature) -> list[str]:
    return _keys((("role", one.role), ("by", one.by), ("date", one.date), ("revision", one.revision),
                  ("record", one.record)))
