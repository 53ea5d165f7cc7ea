"""Integrals along a stream or an exchanger by Simpson's rule, in the place of closed forms and entropies."""
from __future__ import annotations

from collections.abc import Callable, Sequence
from itertools import pairwise

from calcpack.plan.facts import ExchangerView
from calcpack.solving.solution import Solution

PIECES = 64
FINE = 1000


def simpson(values: Sequence[float], width: float) -> float:
    """The integral of equally spaced values, an odd number of them, over ``width``."""
    inner = 4.0 * sum(values[1:-1:2]) + 2.0 * sum(values[2:-1:2])
    return (values[0] + inner + values[-1]) * width / (3.0 * (len(values) - 1))


def entropy_change(h: Callable[[float, float], float], p: float, T_in: float, T_out: float) -> float:
    """The entropy change [J/(kg K)] at constant pressure from enthalpies alone.

    The integral of dh/T, by parts: h/T between the ends, and the integral of h/T² dT.
    """
    start = h(p, T_in)
    levels = [T_in + (T_out - T_in) * index / PIECES for index in range(PIECES + 1)]
    # Counted from the inlet, so that the zero of enthalpy does not blow up the two parts.
    risen = [h(p, T) - start for T in levels]
    return risen[-1] / T_out + simpson([rise / T**2 for rise, T in zip(risen, levels, strict=True)], T_out - T_in)


def conductance(solution: Solution, view: ExchangerView, *, bent: bool = False) -> float:
    """The integral of dQ/ΔT along an exchanger's profile [W/K].

    Temperatures are straight against heat within each zone, as a log-mean
    difference takes them; with ``bent``, only between the rows of the profile.
    """
    step = solution.step(view.series)
    at = {column.symbol: index for index, column in enumerate(step.columns)}
    rows = [cells for row, cells in zip(step.step.rows, solution.program.tables[view.series], strict=True)
            if bent or row.label.endswith(" end")]
    first, last = rows[0][at[view.enthalpy]], rows[-1][at[view.enthalpy]]
    total = 0.0
    for one, other in pairwise(rows):
        share = (other[at[view.enthalpy]] - one[at[view.enthalpy]]) / (last - first)
        start, end = one[at[view.pinch]], other[at[view.pinch]]
        inverse = [1.0 / (start + (end - start) * index / FINE) for index in range(FINE + 1)]
        total += simpson(inverse, share) * abs(solution.value(view.duty))
    return total
