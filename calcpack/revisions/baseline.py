"""A spec to the record that its sheet is compared with: what it names, else the revision issued before it."""
from __future__ import annotations

import json
from pathlib import Path
from typing import TYPE_CHECKING

from calcpack.errors import CommandError, Fault
from calcpack.record import Record, read_record
from calcpack.revisions.order import place_in_order
from calcpack.revisions.sources import ISSUED_IN, load

if TYPE_CHECKING:
    from calcpack.spec import Spec


def baseline_for(spec: Spec, record: Record) -> Record | None:
    """The record that this revision of a sheet is compared with; None for a first issue.

    ``sheet.baseline`` decides where the spec names one: a path from the
    spec's folder, or ``REV:path`` in git. Otherwise it is the record in
    ``issued/`` beside the spec with the same sheet number and the last
    revision before this one. That needs no git.

    Raises
    ------
    CommandError
        Where the named baseline is not there (with its place in the spec), or
        a record in ``issued/`` cannot be read.
    """
    folder = Path(spec.file).parent
    if spec.sheet.baseline is not None:
        try:
            return load(spec.sheet.baseline, folder)
        except CommandError as error:
            raise error.at(spec.place("sheet", "baseline")) from None
    return _last_issued(folder / ISSUED_IN, record)


def _last_issued(folder: Path, record: Record) -> Record | None:
    here = place_in_order(record.revision)
    before = [(place_in_order(one.revision), one) for one in _issued(folder) if one.number == record.number]
    earlier = [pair for pair in before if pair[0] < here]
    return max(earlier, key=lambda pair: pair[0])[1] if earlier else None


def _issued(folder: Path) -> list[Record]:
    """The records in a folder by name; JSON files that are something else are left alone."""
    if not folder.is_dir():
        return []
    found = []
    for path in sorted(folder.glob("*.json")):
        try:
            data = json.loads(path.read_text("utf-8"))
        except (OSError, ValueError, RecursionError) as error:
            raise CommandError(Fault(f"{path} cannot be read, and may be the revision before this one",
                                     detail=str(error))) from None
        if isinstance(data, dict) and "calcpack" in data and "sheet" in data:
            found.append(read_record(path))
    return found
