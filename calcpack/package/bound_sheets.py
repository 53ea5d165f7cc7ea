"""Specs to the sheets of a bound package: as the specs stand now, or as they were last issued for use."""
from __future__ import annotations

import tempfile
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field
from pathlib import Path
from typing import TYPE_CHECKING, Any

from calcpack.errors import CommandError, Fault
from calcpack.issuing.shelf import Issued, issued_sheets
from calcpack.package.glance import glance
from calcpack.record import Record

if TYPE_CHECKING:
    from calcpack.review.standing import Standing

ROLES = ("prepared", "checked", "approved")
Tell = Callable[[str], None]


@dataclass(frozen=True, slots=True)
class Signed:
    """A signature in the list of sheets: the name, or None, and in a word how it stands."""

    name: str | None
    state: str


@dataclass(frozen=True, slots=True)
class BoundSheet:
    """A sheet as it is bound: its PDF, the file that stands for it in the transmittal list, and who signed.

    ``file`` and ``sha256`` are of the issued PDF, else of the spec; ``signatures`` stand in the order of :data:`ROLES`.
    """

    record: Record
    status: str
    date: str
    signatures: tuple[Signed, ...]
    content: bytes = field(repr=False)
    file: str
    sha256: str

    @property
    def number(self) -> str:
        return self.record.number


def sheets_now(sources: Sequence[Path], *, jobs: int | None, tell: Tell) -> tuple[BoundSheet, ...]:
    """The sheets as their specs stand, in the order of their numbers; each stamped by its status.

    Raises
    ------
    CalcpackError
        With the faults of all specs; MissingPartError where PDFs cannot be made.
    """
    from calcpack.building import build_package
    from calcpack.pipeline import spec_files
    from calcpack.render.outcome import sheet_date, status_words
    from calcpack.render.sheet import file_stem
    paths = {glance(path, path.read_bytes()).number: path for path in spec_files(sources)}
    found = []
    with tempfile.TemporaryDirectory(prefix="calcpack-") as name:
        site = Path(name)
        for record in build_package(sources, site, pdf=True, jobs=jobs, tell=tell).records:
            found.append(BoundSheet(record, status_words(record.data), sheet_date(record.data),
                                    _by_review(paths[record.number], record),
                                    (site / f"{file_stem(record.number)}.pdf").read_bytes(),
                                    record.data["spec_file"], record.data["spec_sha256"]))
    return tuple(found)


def sheets_issued(sources: Sequence[Path]) -> tuple[BoundSheet, ...]:
    """The last issue for use of each sheet whose spec is among ``sources``, in the order of their numbers.

    Raises
    ------
    CommandError
        For every sheet that has no issue for use, and for files that cannot be read.
    """
    from calcpack.pipeline import spec_files
    from calcpack.render.outcome import status_words
    shelves: dict[Path, tuple[Issued, ...]] = {}
    found, missing = [], []
    for path in spec_files(sources):
        number = glance(path, path.read_bytes()).number
        shelf = shelves.setdefault(path.parent, issued_sheets(path.parent))
        last = _in_force(shelf, number)
        if last is None:
            missing.append(Fault(f"sheet {number or path.name} has no PDF that was issued for use", found=path.name,
                                 hint="'calcpack issue' issues it; without --issued its present state is bound"))
        else:
            found.append(BoundSheet(last.record, status_words(last.record.data), last.date, _by_issue(last),
                                    last.path.read_bytes(), last.path.name, last.sha256))
    if missing:
        raise CommandError(missing)
    return tuple(sorted(found, key=lambda one: one.number))


def _in_force(shelf: Sequence[Issued], number: str | None) -> Issued | None:
    """The last issue for use of a sheet; the shelf is in the order of revisions."""
    from calcpack.issuing.paper import FOR_USE
    return next((one for one in reversed(shelf) if one.number == number and one.kind == FOR_USE), None)


def _by_review(path: Path, record: Record) -> tuple[Signed, ...]:
    """Who signed the sheet as it is, by its review file; without one, whom the spec names."""
    from calcpack.review.beside import standing_beside
    from calcpack.review.standing import LAPSED, MISSING, SIGNED, UNBOUND, standing
    found: Standing = standing_beside(path, record) or standing(record.data, None)
    words = {SIGNED: "signed", LAPSED: "VOID, sheet moved", UNBOUND: "named, not signed", MISSING: "not signed"}
    return tuple(Signed(found.signatures[role].name, words[found.signatures[role].state]) for role in ROLES)


def _by_issue(one: Issued) -> tuple[Signed, ...]:
    signed: Mapping[str, Any] = one.signatures
    return tuple(Signed(entry["name"], "signed") if (entry := signed.get(role)) else Signed(None, "not signed")
                 for role in ROLES)
