"""A spec to the record that its sheet is compared with: what it names, else the revision issued before it."""
from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

from calcpack.errors import CommandError
from calcpack.revisions.sources import load

if TYPE_CHECKING:
    from calcpack.record import Record
    from calcpack.spec import Spec


def baseline_for(spec: Spec, record: Record) -> Record | None:
    """The record that this revision of a sheet is compared with; None for a first issue.

    ``sheet.baseline`` decides where the spec names one: a path from the
    spec's folder, or ``REV:path`` in git. Otherwise it is the last revision
    before this one that was issued for use, in ``issued/`` beside the spec:
    the record inside its PDF, or one kept by hand. That needs no git.

    Raises
    ------
    CommandError
        Where the named baseline is not there (with its place in the spec), or
        a file in ``issued/`` cannot be read.
    """
    folder = Path(spec.file).parent
    if spec.sheet.baseline is not None:
        try:
            return load(spec.sheet.baseline, folder)
        except CommandError as error:
            raise error.at(spec.place("sheet", "baseline")) from None
    # The shelf knows the order of revisions, which is of this room: the other way round at import would be a ring.
    from calcpack.issuing.shelf import before, issued_sheets
    last = before(issued_sheets(folder), record.number, record.revision)
    return last.record if last is not None else None
