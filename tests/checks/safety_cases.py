"""Safety quantities put to a solution, as a spec would give them."""
from __future__ import annotations

import dataclasses
from typing import Any

from check_cases import Solved, by_id

from calcpack.checks.cautions import cautions
from calcpack.solving.solution import Solution
from calcpack.spec.model import Safety

ZERO = 273.15
ROOM = {"room_volume": "300 m³"}


def with_safety(solution: Solution, room_level: str | None = None, fluid_group: str | None = None,
                **values: str) -> Solution:
    """A solution whose spec gives these safety quantities."""
    case = dataclasses.replace(solution.spec.case, safety=Safety(values, room_level, "R1", fluid_group))
    return dataclasses.replace(solution, spec=dataclasses.replace(solution.spec, case=case))


def found(solved: Solved, **safety: Any) -> dict[str, dict[str, Any]]:
    """The cautions by their id, with these safety quantities."""
    return by_id(cautions(with_safety(solved[0], **safety)))
