"""The order of the stages, in one place: spec, plan, solution, record, findings, outputs.

Each stage takes a frozen value and returns another; nothing else knows the order.
"""
from __future__ import annotations

import os
import re
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, Any

from calcpack.errors import CalcpackError, CommandError, Fault, NoAnswerError, SpecError

if TYPE_CHECKING:
    from calcpack.points import Point
    from calcpack.record import Record
    from calcpack.spec import Spec

Tell = Callable[[str], None]


@dataclass(frozen=True, slots=True)
class Package:
    """What a build made: the records in the order of their numbers, the files written, each sheet's open points."""

    records: tuple[Record, ...]
    files: tuple[Path, ...]
    unmet: Mapping[str, tuple[Point, ...]]


def solve_spec(path: Path, overrides: Mapping[str, str] | None = None, *, text: str | None = None,
               name: str | None = None) -> Record:
    """A spec file (or ``text`` in its place, called ``name``) to its record, findings included.

    Raises
    ------
    CalcpackError
        SpecError for what is wrong in the spec, all at once; NoAnswerError
        where the numbers have no answer or break a law.
    """
    return _solved(path, overrides, text=text, name=name)[1]


def _solved(path: Path, overrides: Mapping[str, str] | None = None, *, text: str | None = None,
            name: str | None = None) -> tuple[Spec, Record]:
    from calcpack.checks import examine
    from calcpack.record.build import build_record, with_findings
    from calcpack.solving import solved
    from calcpack.solving.bind import bind
    from calcpack.spec import read_for_faults
    spec, faults = read_for_faults(path, text=text, name=name)
    if spec is None:
        raise SpecError(faults)
    try:
        solution = solved(bind(spec, overrides, faults))
        record = build_record(solution)
        return spec, with_findings(record, examine(solution, record))
    except NoAnswerError as error:
        # What has no answer is the case as a whole: the reader is told which sheet and where it begins.
        raise error.at(spec.place("case", "method", key=True)) from None


def solve_all(paths: Sequence[Path], overrides: Mapping[str, str] | None = None) -> list[Record]:
    """Records of several specs; the faults of all of them come together."""
    return [record for _, record in _together([lambda path=path: _solved(path, overrides) for path in paths])]


def _together(calls: Sequence[Callable[[], Any]]) -> list[Any]:
    """Make every call; raise the faults of all that failed, a wrong spec before a missing answer."""
    done, failed = [], []
    for call in calls:
        try:
            done.append(call())
        except CalcpackError as error:
            failed.append(error)
    if failed:
        kind = min(failed, key=lambda error: error.exit_status)
        raise type(kind)(fault for error in failed for fault in error.faults)
    return done


def build_package(sources: Sequence[Path], folder: Path, *, pdf: bool, jobs: int | None, tell: Tell,
                  verification: Path | None = None) -> Package:
    """Solve every spec in ``sources``, compare each with its baseline and write the site to ``folder``.

    ``verification`` is the record of a run of the published checks; without
    one, ``verification.json`` beside a spec is taken where there is one.

    Raises
    ------
    CalcpackError
        Before anything is written, with the faults of all specs.
    """
    from calcpack.render.pages import Extras
    from calcpack.render.site import build_site
    paths = spec_files(sources)
    jobs = jobs or min(len(paths), os.cpu_count() or 1)
    tell(f"solving {len(paths)} sheets" if len(paths) > 1 else "solving 1 sheet")
    runs = _verifications(paths, verification)
    found = list(zip(_solve_with_baselines(paths, jobs), runs, strict=True))
    found.sort(key=lambda one: one[0][0].number)
    solved = [pair for pair, _ in found]
    _require_distinct(solved)
    tell("writing pages" + (" and PDFs" if pdf else ""))
    extras = {record.number: Extras(verification=run) for (record, _), run in found}
    site = build_site(solved, folder, pdf=pdf, jobs=jobs, progress=tell, extras=extras)
    return Package(tuple(record for record, _ in solved), site.files, site.unmet)


VERIFICATION = "verification.json"
"""Name of the record of a run of the published checks, beside the specs that it goes with."""


def _verifications(paths: Sequence[Path], given: Path | None) -> list[dict[str, Any] | None]:
    """For each spec the run of the published checks that its sheet speaks of."""
    from calcpack.verification.run import read_verification
    files = [given or path.with_name(VERIFICATION) for path in paths]
    read = {file: read_verification(file) for file in dict.fromkeys(files) if given is not None or file.is_file()}
    return [read.get(file) for file in files]


def _solve_with_baselines(paths: Sequence[Path], jobs: int) -> list[tuple[Record, dict | None]]:
    if jobs == 1 or len(paths) == 1:
        return _together([lambda path=path: record_and_comparison(path) for path in paths])
    # Processes, not threads: a property state shared by two threads gives wrong values.
    from concurrent.futures import ProcessPoolExecutor
    with ProcessPoolExecutor(min(jobs, len(paths))) as pool:
        futures = [pool.submit(record_and_comparison, path) for path in paths]
        return _together([future.result for future in futures])


def record_and_comparison(path: Path) -> tuple[Record, dict[str, Any] | None]:
    """A spec's record, and what changed against its baseline; None where it has none."""
    from calcpack.revisions import baseline_for, compare_records
    spec, record = _solved(path)
    baseline = baseline_for(spec, record)
    return record, compare_records(baseline, record, folder=path.parent) if baseline is not None else None


def spec_files(sources: Sequence[Path]) -> list[Path]:
    """The specs named, and those in the folders named; files of a folder that are no specs are left.

    Raises
    ------
    CommandError
        Where there is no such file or folder, or a folder holds no spec.
    """
    found: list[Path] = []
    for source in sources:
        if source.is_dir():
            inside = sorted(path for path in source.iterdir() if path.suffix in (".yaml", ".yml") and _is_spec(path))
            if not inside:
                raise CommandError(Fault(f"{source} holds no spec", expected="a .yaml file with the key 'calcpack'"))
            found += inside
        elif source.is_file():
            found.append(source)
        else:
            raise CommandError(Fault(f"there is no file or folder {source}"))
    return list(dict.fromkeys(found))


def _is_spec(path: Path) -> bool:
    """Whether a file of a folder means to be a spec; a review file beside it, say, does not."""
    return re.search(r"^['\"]?calcpack['\"]?\s*:", path.read_text("utf-8", errors="replace"), re.MULTILINE) is not None


def _require_distinct(solved: Sequence[tuple[Record, Any]]) -> None:
    numbers = [record.number for record, _ in solved]
    twice = sorted({number for number in numbers if numbers.count(number) > 1})
    if twice:
        files = ", ".join(record.data["spec_file"] for record, _ in solved if record.number in twice)
        raise CommandError(Fault(f"the sheet number {twice[0]} stands in more than one spec", found=files,
                                 expected="a number of its own for each sheet"))
