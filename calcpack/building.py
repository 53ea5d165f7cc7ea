"""Specs to a site: what has not changed since the last build is taken over, the rest is solved, compared, written."""
from __future__ import annotations

import json
import os
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, replace
from pathlib import Path
from typing import TYPE_CHECKING, Any

from calcpack.errors import CalcpackError, CommandError, Fault
from calcpack.issuing.shelf import Issued, before, issued_sheets
from calcpack.package import reuse
from calcpack.package.carrying import Outcome, Task, solved_in_order
from calcpack.package.family import issue_address, kin
from calcpack.package.links import Family, family_of
from calcpack.pipeline import comparison_of, raise_faults, reviews, solved_alone, spec_files, verifications
from calcpack.record import Record
from calcpack.record.carried import Carried, with_origins
from calcpack.render.manifest import SheetEntry
from calcpack.render.pages import Extras
from calcpack.render.sheet import file_stem
from calcpack.render.site import Site, kept_name, write_site
from calcpack.render.site_folder import SiteFolder, site_folder
from calcpack.workers import Run, workers

if TYPE_CHECKING:
    from calcpack.points import Point

Tell = Callable[[str], None]
Data = Mapping[str, Any]


@dataclass(frozen=True, slots=True)
class Package:
    """What a build made: the records in the order of their numbers, the files of the site, each sheet's open points.

    ``solved`` and ``written`` are the numbers of the sheets that this build
    solved and whose files it made; the others stand as an earlier build left them.
    """

    records: tuple[Record, ...]
    files: tuple[Path, ...]
    unmet: Mapping[str, tuple[Point, ...]]
    solved: tuple[str, ...]
    written: tuple[str, ...]


def build_package(sources: Sequence[Path], folder: Path, *, pdf: bool, jobs: int | None, tell: Tell,
                  verification: Path | None = None, fresh: bool = False) -> Package:
    """Solve every spec in ``sources``, compare each with its baseline and write the site to ``folder``.

    What an earlier build left there is taken over where nothing that it hangs
    on has changed; with ``fresh`` all is made anew. ``verification`` is the
    record of a run of the published checks; without one,
    ``verification.json`` beside a spec is taken where there is one.

    Raises
    ------
    CalcpackError
        Before anything is written, with the faults of all specs.
    """
    paths = spec_files(sources)
    jobs = jobs or min(len(paths), os.cpu_count() or 1)
    with site_folder(folder) as held, workers(jobs) as run:
        place = held.forgetful() if fresh else held
        solving = _Solving(family_of(paths), place, run, tell)
        solved = solving.solved()
        sheets = sorted((_Sheet(path, solved[path], solving.entries[path], _hash(solved[path])) for path in paths),
                        key=lambda one: one.record.number)
        require_distinct(sheets)
        shelves = {parent: issued_sheets(parent) for parent in dict.fromkeys(path.parent for path in paths)}
        _Comparing(solving.family, place, run, shelves).compare(sheets)
        runs = verifications([one.path for one in sheets], verification)
        standings = reviews([one.path for one in sheets], [one.record for one in sheets])
        families = _families(sheets, solving.family, solved, shelves)
        extras = {one.record.number: Extras(verification=checked, review=standing, family=family)
                  for one, checked, standing, family in zip(sheets, runs, standings, families, strict=True)}
        site = _write(sheets, place, pdf, jobs, tell, extras, shelves)
    return Package(tuple(one.record for one in sheets), site.files, site.unmet, solving.numbers, site.written)


@dataclass(slots=True)
class _Sheet:
    """A sheet on its way to the site; ``sha256`` is that of its record."""

    path: Path
    record: Record
    entry: SheetEntry
    sha256: str
    comparison: Data | None = None


class _Solving:
    """The specs level by level to their records, those of the former build where they would come out the same."""

    def __init__(self, family: Family, place: SiteFolder, run: Run, tell: Tell) -> None:
        self.family, self.place, self.run, self.tell = family, place, run, tell
        self.entries: dict[Path, SheetEntry] = {}
        self.numbers: tuple[str, ...] = ()
        self.told: set[Path] = set()

    def solved(self) -> dict[Path, Record]:
        """All records by path; raises the faults of all specs."""
        self.announce()
        outcomes: dict[Path, Any] = solved_in_order(self.family, self.level)
        raise_faults(outcomes.values())
        return outcomes

    def announce(self) -> None:
        """Say how many sheets are solved because of what they themselves say."""
        glances, total = self.family.glances, len(self.family.paths)
        self.told = {path for path in self.family.paths
                     if self.place.entry(glances[path].number).own != reuse.own_key(glances[path])}
        count, same = len(self.told), total - len(self.told)
        words = f"solving {count} of {total} sheets, {same} unchanged" if same else \
            f"solving {total} sheet{'s' if total > 1 else ''}"
        self.tell(words if count else f"{total} sheet{'s' if total > 1 else ''} unchanged, nothing to solve")

    def level(self, tasks: Sequence[Task]) -> list[Outcome]:
        """One level; what is taken over has the origin of its values from the sources as they are now."""
        found: list[Outcome | None] = [self.kept(*task) for task in tasks]
        waiting = [at for at, outcome in enumerate(found) if outcome is None]
        led = [at for at in waiting if tasks[at][0] not in self.told]
        if led:
            self.tell(f"solving {len(led)} more, whose sources have moved")
        for at, outcome in zip(waiting, self.run(_solve, [tasks[at] for at in waiting]), strict=True):
            found[at] = outcome
            if isinstance(outcome, Record):
                self.numbers += (outcome.number,)
        return [outcome for outcome in found if outcome is not None]

    def kept(self, path: Path, taken: Mapping[str, Carried | CalcpackError]) -> Record | None:
        """The record of the former build; None where the sheet has to be solved."""
        one = self.family.glances[path]
        carried = {symbol: value for symbol, value in taken.items() if isinstance(value, Carried)}
        number = one.number or ""
        self.entries[path] = SheetEntry(number, reuse.own_key(one), reuse.solving_key(one, carried))
        record = self.place.kept_text(number, self.entries[path].solving, "solving", f"{file_stem(number)}.json")
        if record is None or len(carried) < len(taken):
            return None
        return with_origins(Record(json.loads(record)), carried)


def _solve(task: Task) -> Outcome:
    path, carried = task
    try:
        # As its JSON gives it back: what is taken over later and what is solved now are one and the same.
        return Record(json.loads(solved_alone(path, carried=carried).to_json()))
    except CalcpackError as error:
        return error


class _Comparing:
    """Sheets to their comparisons with the revision before, those of the former build where both records are its."""

    def __init__(self, family: Family, place: SiteFolder, run: Run, shelves: Mapping[Path, Sequence[Issued]]) -> None:
        self.family, self.place, self.run, self.shelves = family, place, run, shelves

    def compare(self, sheets: Sequence[_Sheet]) -> None:
        """Fill in comparison and key of each sheet; raises the faults of all."""
        waiting: list[tuple[_Sheet, Record | None]] = []
        for one in sheets:
            glance = self.family.glances[one.path]
            named = glance.baseline is not None
            last = None if named else before(self.shelves[one.path.parent], one.record.number, one.record.revision)
            content = _baseline_hash(str(glance.baseline), one.path.parent) if named else last and last.record_sha256
            key = "" if named and content is None else reuse.comparing_key(one.sha256, glance, content)
            one.entry = replace(one.entry, comparing=key)
            kept = self.place.kept_text(one.record.number, key, "comparing", kept_name(one.record.number))
            if kept is not None:
                one.comparison = json.loads(kept)
            elif named or last is not None:
                waiting.append((one, last.record if last is not None else None))
        found = list(self.run(_compare, [(one.path, one.record, baseline) for one, baseline in waiting]))
        raise_faults(found)
        for (one, _), comparison in zip(waiting, found, strict=True):
            one.comparison = comparison


def _baseline_hash(named: str, folder: Path) -> str | None:
    """The hash of what a spec names as its baseline; None where more hangs on it than its own bytes."""
    from calcpack.revisions.sources import content_of
    try:
        content = content_of(named, folder)
    except CalcpackError:
        return None
    takes = named.endswith((".yaml", ".yml")) and b"from" in content
    return None if takes else reuse.hashed(content)


def _compare(task: tuple[Path, Record, Record | None]) -> Data | CalcpackError | None:
    from calcpack.revisions import compare_records
    path, record, baseline = task
    try:
        comparison = comparison_of(path, record) if baseline is None else \
            compare_records(baseline, record, folder=path.parent)
    except CalcpackError as error:
        return error
    return json.loads(json.dumps(comparison))


def _hash(record: Record) -> str:
    return reuse.hashed(record.to_json().encode())


def _families(sheets: Sequence[_Sheet], family: Family, solved: Mapping[Path, Record],
              shelves: Mapping[Path, Sequence[Issued]]) -> list[dict[str, Any]]:
    records = {record.number: record for record in solved.values()}
    stems = {one.record.number: file_stem(one.record.number) for one in sheets}
    return [kin(one.record, solved=records, glances=family.glances.values(), issues=shelves[one.path.parent],
                stems=stems) for one in sheets]


def _write(sheets: Sequence[_Sheet], place: SiteFolder, pdf: bool, jobs: int, tell: Tell,
           extras: Mapping[str, Extras], shelves: Mapping[Path, Sequence[Issued]]) -> Site:
    """The site with the keys of its pages, and the issued PDFs of its sheets."""
    engine = _print_engine() if pdf else None
    runs: dict[int, str] = {}
    entries = {}
    for one in sheets:
        beside = extras[one.record.number]
        run = runs.setdefault(id(beside.verification), reuse.key(beside.verification))
        comparison = reuse.key(json.dumps(one.comparison))
        key = reuse.page_key(one.sha256, comparison, engine, (run, beside.review, beside.family))
        entries[one.record.number] = replace(one.entry, page=key)
    numbers = {one.record.number for one in sheets}
    issued = {issue_address(one): one.path.read_bytes() for shelf in shelves.values() for one in shelf
              if one.number in numbers and one.path.suffix == ".pdf"}
    tell("writing pages" + (" and PDFs" if pdf else ""))
    return write_site([(one.record, one.comparison) for one in sheets], place, pdf=pdf, jobs=jobs, progress=tell,
                      extras=extras, entries=entries, files=issued)


def _print_engine() -> str:
    """The versions of what makes PDFs, for the key of a page; without an engine no page is taken over."""
    from calcpack.issuing.paper import print_engine
    try:
        return repr(sorted(print_engine().items()))
    except (ImportError, OSError):
        return repr(object())


def require_distinct(sheets: Sequence[_Sheet]) -> None:
    """Refuse two sheets of one number."""
    numbers = [one.record.number for one in sheets]
    twice = sorted({number for number in numbers if numbers.count(number) > 1})
    if twice:
        files = ", ".join(one.record.data["spec_file"] for one in sheets if one.record.number in twice)
        raise CommandError(Fault(f"the sheet number {twice[0]} stands in more than one spec", found=files,
                                 expected="a number of its own for each sheet"))
