"""The value of every mixture of causes to each cause's share in the whole change.

A mixture is a number whose bit ``i`` says whether cause ``i`` is taken as it
is now; 0 is everything as it was, ``2**count - 1`` everything as it is now.
"""
from __future__ import annotations

from collections.abc import Callable
from math import factorial, fsum

Value = Callable[[int], float]

MOST = 8
"""So many causes are averaged over all orders, 2^n solves; more are taken one at a time."""


class Gap(Exception):
    """The mixture ``mask`` has no value, for the ``reason`` told."""

    def __init__(self, mask: int, reason: str) -> None:
        super().__init__(reason)
        self.mask = mask
        self.reason = reason


def averaged(count: int, value: Value) -> list[float]:
    r"""Each cause's effect, averaged over all orders in which the causes can be taken.

    .. math:: \phi_i = \sum_{S \not\ni i} \frac{|S|!\,(n-|S|-1)!}{n!}\,[v(S \cup i) - v(S)]

    The parts sum to v(all) - v(none), and no order is preferred: the Shapley
    value of a game (L. S. Shapley, "A value for n-person games", 1953; the
    formula from memory, its properties are tested).

    Raises
    ------
    Gap
        From ``value``, where a mixture has none.
    """
    weights = [factorial(size) * factorial(count - size - 1) / factorial(count) for size in range(count)]
    return [fsum(weights[mask.bit_count()] * (value(mask | 1 << at) - value(mask))
                 for mask in range(1 << count) if not mask >> at & 1)
            for at in range(count)]


def one_by_one(count: int, value: Value) -> list[tuple[tuple[int, ...], float]]:
    """The effect of each cause taken after those before it, as ``(causes, effect)``.

    Where a mixture on the way has no value, its last cause is told together
    with the next one.

    Raises
    ------
    Gap
        Where one of the two ends has no value.
    """
    parts, together, mask, last = [], (), 0, value(0)
    for at in range(count):
        together, mask = (*together, at), mask | 1 << at
        try:
            here = value(mask)
        except Gap:
            if at == count - 1:
                raise
            continue
        parts.append((together, here - last))
        together, last = (), here
    return parts
