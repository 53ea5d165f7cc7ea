"""What a verification finds to its verdict, its text for a terminal of 80 columns, and its JSON."""
from __future__ import annotations

import json
import textwrap
from collections.abc import Iterator
from dataclasses import asdict, dataclass
from typing import Any

WIDTH = 80
LISTED = 20
"""How many differences the text lists; the JSON lists all."""
SAME, DIFFERS, NOT_VERIFIABLE = "same", "differs", "not verifiable"


@dataclass(frozen=True, slots=True)
class Difference:
    """One place where the file and calcpack do not agree: what the file has, and what it should have.

    The last two are empty where ``what`` says it all.
    """

    where: str
    what: str
    found: str = ""
    expected: str = ""


@dataclass(frozen=True, slots=True)
class Stage:
    """One step of a verification: what was checked, with its figures, and what came of it.

    ``blocked`` says why nothing can be told; ``remarks`` what the reader should
    know beside the verdict.
    """

    name: str
    words: str
    differences: tuple[Difference, ...] = ()
    blocked: str | None = None
    remarks: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Report:
    """The verification of one file."""

    file: str
    title: str
    stages: tuple[Stage, ...]
    record: Any | None = None

    @property
    def differences(self) -> tuple[Difference, ...]:
        return tuple(one for stage in self.stages for one in stage.differences)

    @property
    def reasons(self) -> tuple[str, ...]:
        """Why something cannot be verified."""
        return tuple(stage.blocked for stage in self.stages if stage.blocked)

    @property
    def remarks(self) -> tuple[str, ...]:
        return tuple(one for stage in self.stages for one in stage.remarks)

    @property
    def status(self) -> str:
        """``same``, ``differs`` or ``not verifiable``; a difference outweighs what cannot be told."""
        if self.differences:
            return DIFFERS
        return NOT_VERIFIABLE if self.reasons else SAME


def report_json(report: Report) -> str:
    """The report as JSON, keys in a fixed order."""
    data = {"file": report.file, "sheet": report.title, "status": report.status,
            "checked": [{"name": one.name, "text": one.words} for one in report.stages],
            "differences": [asdict(one) for one in report.differences],
            "not_verifiable": list(report.reasons), "remarks": list(report.remarks)}
    return json.dumps(data, ensure_ascii=False, indent=1) + "\n"


def report_text(report: Report) -> str:
    """The report for a terminal."""
    return "\n".join(line.rstrip() for line in _lines(report)) + "\n"


def _lines(report: Report) -> Iterator[str]:
    yield from _wrapped(report.title or report.file, "")
    if report.title:
        yield from _wrapped(report.file, "")
    yield ""
    wide = max(len(stage.name) for stage in report.stages) + 2
    for stage in report.stages:
        first, rest = f"  {stage.name:<{wide}}", " " * (wide + 2)
        yield from textwrap.wrap(stage.words, WIDTH, initial_indent=first, subsequent_indent=rest)
    if report.remarks:
        yield from ("", "To know")
    for remark in report.remarks:
        yield from textwrap.wrap(remark, WIDTH, initial_indent="  - ", subsequent_indent="    ")
    yield ""
    yield from _verdict(report)


def _verdict(report: Report) -> Iterator[str]:
    if report.status == SAME:
        yield "Same: what this file prints is what calcpack gives for the spec inside it."
        return
    for one in report.differences[:LISTED]:
        yield from _wrapped(f"{one.where}: {one.what}", "")
        if one.found or one.expected:
            yield from _wrapped(one.found, "    found:    ")
            yield from _wrapped(one.expected, "    expected: ")
    left = len(report.differences) - LISTED
    if left > 0:
        yield f"and {left} more; --json lists them all"
    for reason in report.reasons:
        yield from _wrapped(f"Not verifiable: {reason}", "")
    if report.differences:
        count = len(report.differences)
        yield f"Differs: {count} difference{'s' if count > 1 else ''}."


def _wrapped(text: str, label: str) -> list[str]:
    return textwrap.wrap(text, WIDTH, initial_indent=label, subsequent_indent=" " * (len(label) or 4),
                         break_on_hyphens=False) or [label.rstrip()]
