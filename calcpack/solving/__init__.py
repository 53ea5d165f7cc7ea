"""A plan and its inputs to a solution: roots, digits of print, curves."""
from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from calcpack.solving.bind import Bound
    from calcpack.solving.solution import Solution

__all__ = ["solved"]


def solved(bound: Bound) -> Solution:
    """Run a bound case and settle how each value is printed.

    Raises
    ------
    NoAnswerError
        Where the numbers have no answer.
    """
    from calcpack.solving.printing import Printing
    from calcpack.solving.program import Program
    from calcpack.solving.solution import Solution
    program = Program(bound.plan)
    values = program.run({name: reading.value for name, reading in bound.readings.items()})
    return Solution(bound.spec, bound.method, bound.options, bound.plan, program, values,
                    Printing(bound.plan, program, values), bound.spec.sheet.units, bound.written,
                    bound.spec.sheet.p_atm)
