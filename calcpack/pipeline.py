"""The order of the stages, in one place: spec, plan, solution, record, findings.

Each stage takes a frozen value and returns another; nothing else knows the order.
"""
from __future__ import annotations

from collections.abc import Mapping
from pathlib import Path
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from calcpack.record import Record


def solve_spec(path: Path, overrides: Mapping[str, str] | None = None, *, text: str | None = None,
               name: str | None = None) -> Record:
    """A spec file (or ``text`` in its place, called ``name``) to its record, findings included.

    Raises
    ------
    CalcpackError
        SpecError for what is wrong in the spec, all at once; NoAnswerError
        where the numbers have no answer or break a law.
    """
    from calcpack.checks import examine
    from calcpack.record.build import build_record, with_findings
    from calcpack.solve import solved
    from calcpack.solve.bind import bind
    from calcpack.spec import read_for_faults
    from calcpack.errors import SpecError
    spec, faults = read_for_faults(path, text=text, name=name)
    if spec is None:
        raise SpecError(faults)
    solution = solved(bind(spec, overrides, faults))
    record = build_record(solution)
    return with_findings(record, examine(solution, record))
