"""The order of the stages, in one place: spec, plan, solution, record, findings, comparison; outputs follow.

Each stage takes a frozen value and returns another; nothing else knows the
order. :mod:`building` takes many specs through it to a site.
"""
from __future__ import annotations

from collections.abc import Callable, Iterable, Mapping, Sequence
from pathlib import Path
from typing import TYPE_CHECKING, Any

from calcpack.errors import CalcpackError, CommandError, Fault, NoAnswerError, SpecError
from calcpack.package.carrying import Taken, Task, solved_in_order
from calcpack.package.glance import specs_in
from calcpack.package.links import Text, Texts, family_of, takes_from_others
from calcpack.record.carried import Carried, with_origins

if TYPE_CHECKING:
    from calcpack.record import Record
    from calcpack.review.standing import Standing

VERIFICATION = "verification.json"
"""Name of the record of a run of the published checks, beside the specs that it goes with."""


def solve_spec(path: Path, overrides: Mapping[str, str] | None = None, *, text: str | None = None,
               name: str | None = None, carried: Mapping[str, Carried] | None = None,
               beside: Texts | None = None) -> Record:
    """A spec file (or ``text`` in its place, called ``name``) to its record, findings included.

    What it takes from other sheets is had from their specs in its folder, or
    from ``beside`` in the place of that folder; they are solved first. With
    ``carried`` it is had from there alone, by the symbol of the input.

    Raises
    ------
    CalcpackError
        SpecError for what is wrong in the spec, all at once; NoAnswerError
        where the numbers have no answer or break a law.
    """
    if carried is not None:
        return solved_alone(path, overrides, text=text, name=name, carried=carried)
    texts = dict(beside or {})
    if text is not None:
        texts[path] = Text(text.encode("utf-8", "surrogatepass"), name or str(path))
    return _solved_with_sources([path], overrides, texts, look=beside is None)[0]


def solve_all(paths: Sequence[Path], overrides: Mapping[str, str] | None = None) -> list[Record]:
    """Records of several specs; the faults of all of them come together.

    ``overrides`` hold for the specs named, not for others that these take from.
    """
    return _solved_with_sources(paths, overrides, {}, look=True)


def _solved_with_sources(paths: Sequence[Path], overrides: Mapping[str, str] | None, texts: Texts, *,
                         look: bool) -> list[Record]:
    family = family_of(paths, texts, beside=look and any(takes_from_others(path, texts) for path in paths))

    def solve(task: Task) -> Record | CalcpackError:
        path, carried = task
        given = texts.get(path)
        try:
            return solved_alone(path, overrides if path in paths else None, carried=carried,
                                text=given.content.decode("utf-8", "surrogatepass") if given else None,
                                name=given.name if given else None)
        except CalcpackError as error:
            return error
    solved: dict[Path, Any] = solved_in_order(family, lambda tasks: [solve(task) for task in tasks])
    raise_faults(solved.values())
    return [solved[path] for path in paths]


def solved_alone(path: Path, overrides: Mapping[str, str] | None = None, *, text: str | None = None,
                 name: str | None = None, carried: Taken | None = None) -> Record:
    """One spec to its record, with what it takes from other sheets given; raises like :func:`solve_spec`."""
    from calcpack.checks import examine
    from calcpack.record.build import build_record, with_findings
    from calcpack.solving import solved
    from calcpack.solving.bind import bind
    from calcpack.spec import read_for_faults
    spec, faults = read_for_faults(path, text=text, name=name)
    if spec is None:
        raise SpecError(faults)
    try:
        solution = solved(bind(spec, overrides, faults, carried))
        record = build_record(solution)
        record = with_findings(record, examine(solution, record))
    except NoAnswerError as error:
        # What has no answer is the case as a whole: the reader is told which sheet and where it begins.
        raise error.at(spec.place("case", "method", key=True)) from None
    return with_origins(record, {symbol: one for symbol, one in (carried or {}).items()
                                 if isinstance(one, Carried) and symbol not in (overrides or {})})


def together(calls: Sequence[Callable[[], Any]]) -> list[Any]:
    """Make every call; raise the faults of all that failed, a wrong spec before a missing answer."""
    done: list[Any] = []
    for call in calls:
        try:
            done.append(call())
        except CalcpackError as error:
            done.append(error)
    raise_faults(done)
    return done


def raise_faults(outcomes: Iterable[Any]) -> None:
    """Raise the faults of all outcomes that are errors, each fault once; a wrong spec decides the kind."""
    failed = [one for one in outcomes if isinstance(one, CalcpackError)]
    if failed:
        kind = min(failed, key=lambda error: error.exit_status)
        raise type(kind)(dict.fromkeys(fault for error in failed for fault in error.faults))


def record_and_comparison(path: Path) -> tuple[Record, dict[str, Any] | None]:
    """A spec's record, and what changed against its baseline; None where it has none."""
    record = solve_spec(path)
    return record, comparison_of(path, record)


def comparison_of(path: Path, record: Record) -> dict[str, Any] | None:
    """What changed in a spec's record against its baseline; None where it has none."""
    from calcpack.revisions import baseline_for, compare_records
    from calcpack.spec import read_spec
    baseline = baseline_for(read_spec(path), record)
    return compare_records(baseline, record, folder=path.parent) if baseline is not None else None


def verifications(paths: Sequence[Path], given: Path | None) -> list[dict[str, Any] | None]:
    """For each spec the run of the published checks that its sheet speaks of."""
    from calcpack.verification.run import read_verification
    files = [given or path.with_name(VERIFICATION) for path in paths]
    read = {file: read_verification(file) for file in dict.fromkeys(files) if given is not None or file.is_file()}
    return [read.get(file) for file in files]


def reviews(paths: Sequence[Path], records: Sequence[Record]) -> list[Standing | None]:
    """How the check of each sheet stands by the review file beside its spec; None where there is none."""
    from calcpack.review.beside import standing_beside
    return together([lambda path=path, record=record: standing_beside(path, record)
                     for path, record in zip(paths, records, strict=True)])


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
            inside = specs_in(source)
            if not inside:
                raise CommandError(Fault(f"{source} holds no spec", expected="a .yaml file with the key 'calcpack'"))
            found += inside
        elif source.is_file():
            found.append(source)
        else:
            raise CommandError(Fault(f"there is no file or folder {source}"))
    return list(dict.fromkeys(found))
