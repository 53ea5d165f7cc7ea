"""A revision in git and the specs of today to what changed of each sheet since: new, removed, changed, unchanged.

What stood at the revision is laid out in a folder aside, so that each sheet of
then is solved with the rows and the other sheets of then.
"""
from __future__ import annotations

import hashlib
import os
import tempfile
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Any, Literal

from calcpack.errors import CalcpackError, CommandError, Fault
from calcpack.package.glance import SUFFIXES, Glance, glance, specs_in
from calcpack.package.links import Family, family_of
from calcpack.package.order import closure
from calcpack.revisions.git import Repository, repository
from calcpack.workers import workers

Data = Mapping[str, Any]
Kind = Literal["changed", "new", "removed", "not compared"]
LAID_OUT = (*SUFFIXES, ".csv")


@dataclass(frozen=True, slots=True)
class SheetChange:
    """One sheet that is not as it was.

    ``file`` is its spec from the top of the repository, ``was`` the file at the
    revision (None for a new sheet); ``record`` the sheet as it is now, of a
    removed one None; ``reason`` says why a sheet is ``not compared``: what stood
    at the revision cannot be solved.
    """

    kind: Kind
    number: str
    file: str
    was: str | None = None
    comparison: Data | None = None
    record: Data | None = None
    reason: str = ""


@dataclass(frozen=True, slots=True)
class Since:
    """The sheets that changed since ``revision``, by number, and how many did not."""

    revision: str
    commit: str
    sheets: tuple[SheetChange, ...]
    unchanged: int

    @property
    def differs(self) -> bool:
        """Whether any sheet prints something else than at the revision."""
        from calcpack.revisions import differs
        return any(one.comparison is None or differs(one.comparison) for one in self.sheets)


def since(revision: str, sources: Sequence[Path]) -> Since:
    """What changed of the sheets in ``sources``, specs or folders, since a revision in git.

    A spec that was renamed is compared with what it was: git finds it by its
    content, else the number of its sheet does.

    Raises
    ------
    CommandError
        Where there is no git repository, no such revision, or no spec.
    CalcpackError
        For a spec of today that is wrong or has no answer, all of them together.
    MissingPartError
        Where git is not installed.
    """
    from calcpack.pipeline import spec_files
    works = _repository(sources)
    commit = works.commit(revision)
    paths = spec_files(sources)
    with tempfile.TemporaryDirectory(prefix="calcpack-") as name:
        then = _Then(works, commit, revision, Path(name).resolve())
        then.lay_out({path.parent for path in paths} | {one for one in sources if one.is_dir()})
        pairs = then.pairs(paths)
        now, before = (family_of(some) for some in (paths, [then.aside / was for _, was in pairs if was]))
        changed = [(path, was) for path, was in pairs if was is None
                   or _footprint(now, path) != _footprint(before, then.aside / was)]
        sheets = [*_compared(then, changed), *then.removed(sources, {was for _, was in pairs if was})]
    sheets.sort(key=lambda one: (one.number, one.file))
    return Since(revision, commit, tuple(sheets), len(pairs) - len(changed))


def _repository(sources: Sequence[Path]) -> Repository:
    for source in sources:
        if not source.exists():
            raise CommandError(Fault(f"there is no file or folder {source}"))
    found = {works.top: works for works in (repository(one if one.is_dir() else one.parent) for one in sources)}
    if len(found) != 1:
        raise CommandError(Fault("the specs lie in several repositories", found=", ".join(map(str, sorted(found))),
                                 expected="specs of one repository"))
    return next(iter(found.values()))


class _Then:
    """The specs and rows as they stood at a commit, in a folder of their own."""

    def __init__(self, works: Repository, commit: str, revision: str, aside: Path) -> None:
        self.works, self.commit, self.revision, self.aside = works, commit, revision, aside

    def lay_out(self, folders: Iterable[Path]) -> None:
        """Write what the folders held of specs and rows, rows also from below them."""
        for folder in {self.name(one) for one in folders}:
            for name in self.works.files(self.commit, folder):
                inside = name if folder == "." else name.removeprefix(f"{folder}/")
                if name.endswith(".csv") or (name.endswith(SUFFIXES) and "/" not in inside):
                    path = self.aside / name
                    path.parent.mkdir(parents=True, exist_ok=True)
                    path.write_bytes(self.works.blob(self.commit, name) or b"")

    def name(self, path: Path) -> str:
        """A path of today as git names it, from the top."""
        return Path(os.path.relpath(path.resolve(), self.works.top.resolve())).as_posix()

    def pairs(self, paths: Sequence[Path]) -> list[tuple[Path, str | None]]:
        """Each spec of today with the name of its file then; None for a new one."""
        renamed = {new: old for old, new in self.works.renamed_since(self.commit)}
        return [(path, self._earlier(path, renamed, self._specs(paths))) for path in paths]

    def _earlier(self, path: Path, renamed: Mapping[str, str], specs: Sequence[str]) -> str | None:
        """The file then of a spec: by its name, its contents or the number of its sheet; what agrees in number first.
        """
        name, number = self.name(path), glance(path, path.read_bytes()).number
        found = [one for one in (name, renamed.get(name)) if one and self._has(one)]
        if not found and (older := self.works.earlier_name(self.commit, name)) and self._has(older):
            found.append(older)
        gone = [one for one in specs if not (self.works.top / one).exists()]
        alike = [one for one in (*found, *gone) if number is not None and self._glance(one).number == number]
        return next(iter((*alike, *found)), None)

    def removed(self, sources: Sequence[Path], kept: set[str]) -> list[SheetChange]:
        """The sheets whose specs stood in the folders then and are gone."""
        gone = [was for was in self._specs(one / "." for one in sources if one.is_dir())
                if was not in kept and not (self.works.top / was).exists()]
        return [SheetChange("removed", self._glance(was).number or was, was, was) for was in gone]

    def _specs(self, paths: Iterable[Path]) -> list[str]:
        """What means to be a spec, then, in the folders of these paths."""
        folders = {self.aside / self.name(one if one.is_dir() else one.parent) for one in paths}
        return [path.relative_to(self.aside).as_posix() for folder in sorted(folders) if folder.is_dir()
                for path in specs_in(folder)]

    def _has(self, name: str) -> bool:
        """Whether a file was there then; one of a folder that was not laid out is, from now on."""
        if not (self.aside / name).is_file() and self.works.blob(self.commit, name) is not None:
            self.lay_out([self.works.top / Path(name).parent])
        return (self.aside / name).is_file()

    def _glance(self, was: str) -> Glance:
        return glance(self.aside / was, (self.aside / was).read_bytes())


def _footprint(family: Family, path: Path) -> tuple[str, ...]:
    """Hashes of all that a sheet is solved from: its spec, those that it takes from, and their files of rows."""
    hashes = []
    for one in closure([path], family.sources):
        rows = family.glances[one].rows_file
        hashes.append(family.glances[one].sha256)
        hashes.append(hashlib.sha256(rows.read_bytes()).hexdigest() if rows is not None and rows.is_file() else "")
    return (family.glances[path].sha256, *sorted(hashes))


Task = tuple[Path, str, str | None, Path | None, str]


def _compared(then: _Then, changed: Sequence[tuple[Path, str | None]]) -> list[SheetChange]:
    """The changed sheets, solved as they are and as they were."""
    from calcpack.pipeline import raise_faults
    tasks = [(path, then.name(path), was, then.aside / was if was else None, then.revision) for path, was in changed]
    with workers(os.cpu_count() or 1) as run:
        found = list(run(_compare, tasks))
    raise_faults(found)
    return found


def _compare(task: Task) -> SheetChange | CalcpackError:
    """One sheet's change, or the faults of its spec of today."""
    from calcpack.pipeline import solve_spec
    from calcpack.revisions import compare_records
    path, file, was, old, revision = task
    try:
        record = solve_spec(path)
    except CalcpackError as error:
        return error
    if old is None:
        return SheetChange("new", record.number, file, None, None, record.data)
    name = f"{revision}:{was}"
    try:
        before = solve_spec(old)
    except CalcpackError as error:
        return SheetChange("not compared", record.number, file, was, None, record.data,
                           f"{name}: {error.faults[0].what}")
    comparison = compare_records(before, record, source=name, folder=path.parent)
    return SheetChange("changed", record.number, file, was, comparison, record.data)
