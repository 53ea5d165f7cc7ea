"""A residual and a bracket to the root in it, by scipy's Brent method.

The bracket that the sheet states is the one that was used: where a property
cannot be had at an end of the bracket laid down, that end moves inwards.
"""
from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass

from calcpack.errors import Fault, NoAnswerError, RootError

RELATIVE = 1e-11
"""Width to which a root is found, relative to the bracket."""

OPTIMUM_WIDTH = 1e-7
"""Width to which an optimum is found: the objective is flat there, and finer would be noise."""

_INWARDS = (0.0, 1 / 128, 1 / 64, 1 / 32, 1 / 16, 1 / 8, 1 / 4, 3 / 8, 1 / 2)
_SCAN = 16


Told = Callable[[float], str]
PLAIN: Told = "{:.6g}".format
"""Words a value for a message where its unit is not known."""


@dataclass(frozen=True, slots=True)
class Root:
    """A root [SI], the bracket used, and the number of evaluations."""

    value: float
    low: float
    high: float
    evaluations: int


def find_root(residual: Callable[[float], float], low: float, high: float, unknown: Told = PLAIN,
              left: Told = PLAIN) -> Root:
    """The root of ``residual`` between ``low`` and ``high``.

    ``unknown`` and ``left`` word a value of the unknown and of the residual.

    Raises
    ------
    RootError
        Where the residual has one sign all over the bracket, or the bracket
        is empty; ``found`` gives the residuals at its ends. The reason why an
        end could not be evaluated is kept as detail.
    """
    from scipy.optimize import brentq
    if not (math.isfinite(low) and math.isfinite(high) and low < high):
        raise RootError(Fault("the bracket is empty", found=f"from {unknown(low)} to {unknown(high)}"))
    a, at_a, trouble_a = _usable_end(residual, low, high)
    b, at_b, trouble_b = _usable_end(residual, high, low)
    if at_a * at_b > 0.0:
        if a >= b:
            raise RootError(Fault("the equation can be evaluated nowhere but in the middle of its bracket",
                                  found=f"from {unknown(low)} to {unknown(high)}", hint=trouble_a or trouble_b))
        a, at_a, b, at_b = _scan(residual, (a, at_a), (b, at_b), trouble_a or trouble_b, left)
    if at_a == 0.0 or at_b == 0.0:
        return Root(a if at_a == 0.0 else b, a, b, 2)
    known = {a: at_a, b: at_b}
    solution, report = brentq(lambda x: known[x] if x in known else residual(x), a, b,
                              xtol=RELATIVE * max(abs(a), abs(b)), rtol=1e-13, maxiter=200, full_output=True)
    return Root(float(solution), a, b, report.function_calls)


@dataclass(frozen=True, slots=True)
class Optimum:
    """An optimum [SI], the objective there, the bounds used, evaluations, and a curve of (value, objective)."""

    value: float
    objective: float
    low: float
    high: float
    evaluations: int
    curve: tuple[tuple[float, float], ...]


CURVE = 8
"""Steps of the curve that is printed around an optimum."""


def find_optimum(objective: Callable[[float], float], low: float, high: float, *, greatest: bool,
                 unknown: Told = PLAIN) -> Optimum:
    """Where ``objective`` is greatest (or least) between ``low`` and ``high``.

    The objective is taken to have one hump; the curve of equal steps over the
    bounds is searched first, so that an optimum at a bound is found as well.

    Raises
    ------
    RootError
        Where the bounds are empty; a NoAnswerError of the objective where no
        point of the curve can be evaluated.
    """
    from scipy.optimize import minimize_scalar
    if not (math.isfinite(low) and math.isfinite(high) and low < high):
        raise RootError(Fault("the bounds of the optimum are empty", found=f"from {unknown(low)} to {unknown(high)}"))
    sign = -1.0 if greatest else 1.0
    a = _usable_end(objective, low, high)[0]
    b = _usable_end(objective, high, low)[0]
    curve = tuple((x, objective(x)) for x in (a + (b - a) * i / CURVE for i in range(CURVE + 1)))
    best = min(range(CURVE + 1), key=lambda i: sign * curve[i][1])
    left, right = curve[max(0, best - 1)][0], curve[min(CURVE, best + 1)][0]
    found = minimize_scalar(lambda x: sign * objective(x), bounds=(left, right), method="bounded",
                            options={"xatol": OPTIMUM_WIDTH * max(abs(a), abs(b))})
    value, at = float(found.x), sign * float(found.fun)
    if sign * curve[best][1] < sign * at:
        # The optimum lies at a bound, which the bounded search approaches but does not touch.
        value, at = curve[best]
    return Optimum(value, at, a, b, int(found.nfev) + CURVE + 3, curve)


def _usable_end(residual: Callable[[float], float], end: float, other: float) -> tuple[float, float, str | None]:
    """The end nearest to ``end`` where the residual can be had, and the residual there."""
    trouble: NoAnswerError | None = None
    for share in _INWARDS:
        x = end + share * (other - end)
        try:
            return x, residual(x), trouble.faults[0].what if trouble else None
        except NoAnswerError as error:
            trouble = trouble or error
    raise trouble or RootError(Fault("the bracket is empty"))


def _scan(residual: Callable[[float], float], first: tuple[float, float], last: tuple[float, float],
          trouble: str | None, left: Told) -> tuple[float, float, float, float]:
    """Look for a change of sign inside, since the ends have the same."""
    before = first
    for index in range(1, _SCAN):
        x = first[0] + (last[0] - first[0]) * index / _SCAN
        try:
            here = (x, residual(x))
        except NoAnswerError:
            continue
        if before[1] * here[1] <= 0.0:
            return *before, *here
        before = here
    raise RootError(Fault("the equation has no root in its bracket", detail=trouble, found=(
        f"left minus right is {left(first[1])} at the low end and {left(last[1])} at the high end")))
