"""A spec's path to all that an issue of its sheet is made of."""
from __future__ import annotations

import json
from collections.abc import Mapping
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

from calcpack.errors import CommandError, Fault
from calcpack.issuing.attached import Attachment
from calcpack.issuing.shelf import Issued, before, issued_sheets
from calcpack.package.family import kin
from calcpack.package.links import family_of
from calcpack.record import Record
from calcpack.review.beside import standing_beside
from calcpack.review.standing import Standing
from calcpack.review.writing import review_path
from calcpack.spec import Spec

Data = Mapping[str, Any]


@dataclass(frozen=True, slots=True)
class Gathered:
    """What an issue is made of: the spec and its record as solved now, and what lies beside the spec.

    ``standing`` tells how the check stands, None where the sheet has no review
    file; ``files`` are attached as they are; ``shelf`` is what was issued before, of
    all sheets in the folder.
    """

    path: Path
    spec: Spec = field(repr=False)
    record: Record = field(repr=False)
    comparison: Data | None
    standing: Standing | None
    files: tuple[Attachment, ...]
    verification: Data | None
    family: Data
    shelf: tuple[Issued, ...]

    @property
    def earlier(self) -> Issued | None:
        """The issue in force that this one supersedes; None for a first issue."""
        return before(self.shelf, self.record.number, self.record.revision)


def gather(path: Path) -> Gathered:
    """Read, solve with the sheets that it takes from, and compare; errors as of a build."""
    from calcpack.pipeline import VERIFICATION, comparison_of, solve_all
    from calcpack.spec import read_spec
    if not path.is_file():
        raise CommandError(Fault(f"there is no spec {path}"))
    shelf, family = issued_sheets(path.parent), family_of([path])
    solved = dict(zip(family.paths, solve_all(family.paths), strict=True))
    record = solved[path]
    around = kin(record, solved={one.number: one for one in solved.values()}, glances=family.glances.values(),
                 issues=shelf, stems={})
    spec = read_spec(path)
    beside, run = review_path(path), path.with_name(VERIFICATION)
    stands = standing_beside(path, record)
    files = _files(path, spec, beside)
    if not {spec.sha256, files[0].sha256} == {record.data["spec_sha256"]}:
        raise CommandError(Fault(f"{path} was changed while it was solved", hint="issue it again"))
    return Gathered(path, spec, record, _plain(comparison_of(path, as_issued(record))), stands, files,
                    _verified(run, record) if run.is_file() else None, _plain(around), shelf)


def _files(path: Path, spec: Spec, review: Path) -> tuple[Attachment, ...]:
    """The spec first, then what lies beside it."""
    found = [Attachment(path.name, "spec", path.read_bytes())]
    if review.is_file():
        found.append(Attachment(review.name, "review", review.read_bytes()))
    series = spec.case.series
    if series is not None and "\n" not in series.rows and series.rows.endswith(".csv"):
        rows = path.parent / series.rows
        found.append(Attachment(rows.name, "rows", rows.read_bytes()))
    return tuple(found)


def _verified(run: Path, record: Record) -> Data:
    """What the sheet's page takes from a run of the published checks: the part on the sheet's method."""
    from calcpack.verification.run import read_verification
    whole, method = read_verification(run), record.data["case"]["method"]
    return {**{key: whole[key] for key in ("date", "engine", "test_set")},
            "methods": {name: one for name, one in whole["methods"].items() if name == method}}


def as_issued(record: Record) -> Record:
    """The record with the status that it is issued with."""
    return Record({**record.data, "sheet": {**record.data["sheet"], "status": "issued"}})


def _plain(data: Data | None) -> Any:
    """As JSON gives it back, so that what is issued now and what is read from the PDF later are the same."""
    return None if data is None else json.loads(json.dumps(data))
