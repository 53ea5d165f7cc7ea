"""A spec to an issued PDF, or to every reason why not; nothing that was issued is ever touched."""
from __future__ import annotations

import hashlib
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path

from calcpack.errors import CalcpackError, CommandError, Fault
from calcpack.issuing.freezing import frozen
from calcpack.issuing.gathering import Gathered, gather
from calcpack.issuing.paper import FOR_USE, issued_pages, printed
from calcpack.issuing.placing import alone, clear, put_new, require_free
from calcpack.issuing.reasons import clashes, gates, in_words, unmet_points
from calcpack.issuing.register import lost, renew
from calcpack.issuing.shelf import ISSUED_IN, SUPERSEDED_IN
from calcpack.points import unmet
from calcpack.record import Record
from calcpack.render.site import Pages

Seal = Callable[[bytes], bytes]
Tell = Callable[[str], None]


class NotIssuedError(CalcpackError):
    """A sheet that is not fit to be issued, with every reason."""

    exit_status = 1


@dataclass(frozen=True, slots=True)
class Issue:
    """What an issue made, or with ``dry_run`` would have made.

    ``derived`` are the register and the stamped copies that were made anew,
    ``open`` the lines that an issue for information lists as open.
    """

    number: str
    revision: str
    kind: str
    date: str
    path: Path
    sha256: str
    record_sha256: str
    supersedes: str | None
    open: tuple[str, ...]
    derived: tuple[Path, ...]


def issue(path: Path, *, kind: str, date: str, dry_run: bool = False, seal: Seal | None = None,
          tell: Tell = lambda words: None) -> Issue:
    """Issue the sheet of the spec at ``path``.

    Parameters
    ----------
    kind : str
        'for use', which every gate must let pass, or 'for information', which
        lists on its first page what is open.
    date : str
        The ISO date of issue.
    seal : callable, optional
        Takes the finished PDF and gives it sealed.
    tell : callable, optional
        Is told what is being done.

    Raises
    ------
    NotIssuedError
        With every reason at once.
    CalcpackError
        For a spec that is wrong or has no answer, and for a file there already.
    """
    if not path.is_file():
        raise CommandError(Fault(f"there is no spec {path}"))
    folder = path.parent
    with alone(folder, tell):
        if missing := lost(folder):
            raise NotIssuedError(missing)
        if not dry_run:
            clear((folder / ISSUED_IN, folder / ISSUED_IN / SUPERSEDED_IN))
            for mended in renew(folder):
                tell(f"made again {mended}, which was missing or not as it must be")
        tell("solving and comparing")
        case = gather(path)
        tell("making pages")
        record, pages = _fit(case, kind, date)
        target = folder / ISSUED_IN / record.data["issue"]["file"]
        require_free(target)
        tell("writing the PDF")
        made = printed(pages, record, case.files)
        made = made if seal is None or dry_run else seal(made)
        derived = () if dry_run else _put(target, made, folder)
    superseded = record.data["issue"]["supersedes"]
    return Issue(record.number, record.revision, kind, date, target, hashlib.sha256(made).hexdigest(),
                 hashlib.sha256(record.to_json().encode()).hexdigest(), superseded and superseded["revision"],
                 tuple(record.data["issue"]["open"]), derived)


def _put(target: Path, content: bytes, folder: Path) -> tuple[Path, ...]:
    put_new(target, content)
    return renew(folder)


def _fit(case: Gathered, kind: str, date: str) -> tuple[Record, Pages]:
    """The record to issue and its pages, which are judged as they will be issued."""
    refused, told = clashes(case, kind, date), gates(case, date)
    if kind != FOR_USE and refused:
        raise NotIssuedError(refused)
    record = frozen(case, kind, date, in_words(told) if kind != FOR_USE else ())
    pages = issued_pages(record, case.files)
    told = (*told, *unmet_points(unmet(pages.points), told))
    if kind == FOR_USE:
        if refused or told:
            raise NotIssuedError((*refused, *told))
        return record, pages
    record = frozen(case, kind, date, in_words(told))
    return record, issued_pages(record, case.files)
