"""What an issued PDF carries to its record and its pages made again, from nothing but the files inside it."""
from __future__ import annotations

import json
import tempfile
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from pathlib import Path

from calcpack.errors import CalcpackError, Fault
from calcpack.issuing.attached import Attachment
from calcpack.issuing.carried import CarriedSheet, NotVerifiableError
from calcpack.record import Record
from calcpack.record.carried import carried_of

UNFIT = (LookupError, TypeError, ValueError, AttributeError)
"""What Python raises where a value of a record from elsewhere is of another kind than calcpack writes."""


@dataclass(frozen=True, slots=True)
class Again:
    """The two costly steps of a verification; a caller that verifies many files may remember what they give.

    ``solve`` takes what a file carries to the record that is had from its
    spec, as it would be issued; ``make`` takes an issued record and its
    attachments to the PDF.
    """

    solve: Callable[[CarriedSheet], Record]
    make: Callable[[Record, Sequence[Attachment]], bytes]


def solved_again(carried: CarriedSheet) -> Record:
    """The record of the carried spec, solved here, with the carried block ``issue``.

    Raises
    ------
    NotVerifiableError
        Where the carried spec has no answer here, with the reason.
    """
    from calcpack.pipeline import solve_spec
    with tempfile.TemporaryDirectory(prefix="calcpack-verify-") as name:
        folder = Path(name)
        _lay_out(carried, folder)
        try:
            solved = solve_spec(folder / carried.spec_name, carried=carried_of(carried.record.data))
        except CalcpackError as error:
            raise NotVerifiableError(_no_answer(error, f"{folder}/")) from None
        except UNFIT as error:
            raise NotVerifiableError(Fault("what the record says of its inputs is not what calcpack writes",
                                           detail=f"{type(error).__name__}: {error}")) from None
    return _as_issued(solved, carried.record)


def made_again(record: Record, attachments: Sequence[Attachment]) -> bytes:
    """The PDF of an issued record.

    Raises
    ------
    MissingPartError
        Where the PDF engine is missing.
    NotVerifiableError
        Where calcpack makes no pages of this record here.
    """
    from jinja2 import TemplateError

    from calcpack.errors import MissingPartError
    from calcpack.issuing.paper import issued_pdf
    try:
        return issued_pdf(record, attachments)
    except MissingPartError:
        raise
    except CalcpackError as error:
        raise NotVerifiableError(_no_answer(error, "")) from None
    except (*UNFIT, TemplateError) as error:
        # The block 'issue' is read from the file as it stands there, and may hold anything.
        raise NotVerifiableError(Fault("no pages can be made of what the record says of its issue",
                                       detail=f"{type(error).__name__}: {error}")) from None


AGAIN = Again(solved_again, made_again)


def _lay_out(carried: CarriedSheet, folder: Path) -> None:
    """The carried files in a folder; rows where the spec looks for them, which may be in a folder below."""
    from calcpack.spec import read_for_faults
    for one in carried.files:
        (folder / one.name).write_bytes(one.content)
    spec, _ = read_for_faults(folder / carried.spec_name)
    series = spec.case.series if spec is not None else None
    for one in carried.files:
        if series is not None and carried.roles[one.name] == "rows" and Path(series.rows).name == one.name:
            # The spec's own rule refuses a path that leads out of its folder; until then nothing is written there.
            wanted = (folder / series.rows).resolve()
            if wanted.is_relative_to(folder.resolve()):
                wanted.parent.mkdir(parents=True, exist_ok=True)
                wanted.write_bytes(one.content)


def _as_issued(solved: Record, carried: Record) -> Record:
    """A solved record as it is frozen at issue."""
    issued = Record({**solved.data, "sheet": {**solved.data["sheet"], "status": "issued"},
                     "issue": carried.data["issue"]})
    return Record(json.loads(issued.to_json()))


def _no_answer(error: CalcpackError, folder: str) -> list[Fault]:
    """The faults of a spec, without the folder that it was put into."""
    return [Fault(("the carried spec has no answer here: " + f"{one.place}: " * bool(one.place) + one.what)
                  .replace(folder, "") if folder else one.what, found=one.found, expected=one.expected)
            for one in error.faults]
