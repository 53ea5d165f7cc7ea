"""A root of a sheet to the same root by bisection, which shares nothing with the solver but the equation."""
from __future__ import annotations

from calcpack.errors import Fault, RootError
from calcpack.plan.laid import LaidStep
from calcpack.plan.steps import Closing, OptimumStep, RootStep
from calcpack.solving.roots import Root
from calcpack.solving.solution import Solution

HALVINGS = 60
ENOUGH = 2e-9
"""Width, of the bracket's greater end, at which halving stops."""


def bisected(solution: Solution, symbol: str, root: Root) -> float:
    """The root of ``symbol`` [SI] in the bracket of ``root``.

    Raises
    ------
    NoAnswerError
        Where the equation has one sign at both ends of the bracket, or cannot
        be evaluated on the way.
    """
    low, high = root.low, root.high
    at_low, at_high = (_residual(solution, symbol, end) for end in (low, high))
    if at_low == 0.0 or at_high == 0.0:
        return low if at_low == 0.0 else high
    if at_low * at_high > 0.0:
        raise RootError(Fault("the equation has one sign at both ends of its bracket",
                              found=f"{at_low:.4g} and {at_high:.4g} (SI)"))
    for _ in range(HALVINGS):
        if high - low <= ENOUGH * max(abs(low), abs(high)):
            break
        middle = 0.5 * (low + high)
        at_middle = _residual(solution, symbol, middle)
        if at_middle * at_low > 0.0:
            low = middle
        else:
            high = middle
    return 0.5 * (low + high)


def crossed(solution: Solution, symbol: str, root: Root, within: float) -> float:
    """Where the equation crosses zero ``within`` [SI] of the root; the far end of its bracket if nowhere.

    The last step of a bisection, for an unknown that holds another one: each
    trial of it means finding the other, and a whole bisection would cost more
    than the sheet.
    """
    ends = root.value - within, root.value + within
    at = tuple(_residual(solution, symbol, end) for end in ends)
    if at[0] * at[1] > 0.0:
        return max(root.low, root.high, key=lambda end: abs(end - root.value))
    return ends[0] - at[0] * (ends[1] - ends[0]) / (at[1] - at[0]) if at[0] != at[1] else root.value


def holds_another(solution: Solution, symbol: str) -> bool:
    """Whether another unknown is found inside the equation of ``symbol``."""
    inside = False
    for item in solution.plan.items:
        if isinstance(item, Closing) and item.symbol == symbol:
            return False
        unknown = isinstance(item, LaidStep) and isinstance(item.step, (RootStep, OptimumStep))
        if inside and unknown:
            return True
        inside |= unknown and item.symbol == symbol
    return False


def _residual(solution: Solution, symbol: str, trial: float) -> float:
    return solution.program.residual_at(symbol, trial, solution.values)
