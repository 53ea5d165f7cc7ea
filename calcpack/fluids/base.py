"""Turn a fluid's flashes and getters into named readers: h(p, s), T(p, x), T_crit()."""
from __future__ import annotations

import math
from abc import ABC
from collections.abc import Callable

from calcpack.errors import Fault, FormulaError, nearest
from calcpack.fluids import wording
from calcpack.fluids.register import Fact

Pair = tuple[str, ...]
Getter = Callable[[], float]
Flash = Callable[[float, float], None]


class Fluid(ABC):
    """One fluid under one model; SI floats throughout.

    ``designation``, ``model``, ``equation`` (the full citation), ``range_text``
    and ``reference_state`` are words for the sheet; ``facts`` come from the
    register; ``pairs`` lists what fixes a state; ``identity`` names fluid,
    equation and reference without any library version. ``T_min``, ``T_max``
    [K] and ``p_max`` [Pa] bound the model. Not safe for two threads.
    """

    designation: str
    model: str
    equation: str
    reference_state: str
    range_text: str
    identity: str
    facts: tuple[Fact, ...] = ()
    T_min: float
    T_max: float
    p_max: float

    _flashes: dict[Pair, Flash]
    _getters: dict[str, Getter]
    _constants: dict[str, Getter]

    def __init__(self) -> None:
        self._pair: Pair | None = None
        self._first = self._second = math.nan

    @property
    def pairs(self) -> tuple[Pair, ...]:
        """The sets of inputs that fix a state, each in its own usual order."""
        return tuple(self._flashes)

    @property
    def outputs(self) -> tuple[str, ...]:
        """The properties that a state gives."""
        return tuple(self._getters)

    @property
    def constants(self) -> tuple[str, ...]:
        """The properties that need no state."""
        return tuple(self._constants)

    def reader(self, output: str, names: tuple[str, ...]) -> Callable[..., float]:
        """A fast function of floats in the order of ``names`` that gives ``output``.

        Outputs: T [K], p [Pa], h, u [J/kg], s [J/(kg K)], rho [kg/m3], v [m3/kg],
        x (0 to 1; two-phase states only), x_eq = (h - h_f)/(h_g - h_f) at that
        pressure (any size; below the critical pressure), cp, cv [J/(kg K)],
        gamma, mu [Pa s], lambda [W/(m K)], a [m/s]; with no ``names`` a
        constant: M [kg/mol], R [J/(kg K)], T_crit, p_crit, T_min, T_max, p_max,
        T_triple, T_freeze. Raises FormulaError here for what this fluid does not
        offer; the function raises FluidRangeError outside the model's range.
        """
        if not names:
            return self._constant(output)
        pair = self._pair_of(output, tuple(names))
        get = self._getter(output)
        settle = self._settle
        if len(pair) == 1:
            def read(only: float) -> float:
                settle(pair, only, 0.0)
                return get()
        elif pair == tuple(names):
            def read(first: float, second: float) -> float:
                settle(pair, first, second)
                return get()
        else:
            def read(first: float, second: float) -> float:
                settle(pair, second, first)
                return get()
        return read

    def _settle(self, pair: Pair, first: float, second: float) -> None:
        """Bring the state to these values, unless it is there already."""
        if pair is self._pair and first == self._first and second == self._second:
            return
        # A failed update leaves garbage in the library's state: forget it first.
        self._pair = None
        if not (math.isfinite(first) and math.isfinite(second)):
            raise wording.out_of_range(f"a state of {self.designation} needs finite numbers",
                                       wording.state(pair, first, second))
        self._flashes[pair](first, second)
        self._pair, self._first, self._second = pair, first, second

    def _constant(self, output: str) -> Callable[..., float]:
        if output not in self._constants:
            raise FormulaError(self._unknown(output, self.constants, "without a state"))
        return self._constants[output]

    def _getter(self, output: str) -> Getter:
        if output not in self._getters:
            raise FormulaError(self._unknown(output, self.outputs, "of a state"))
        return self._getters[output]

    def _unknown(self, output: str, known: tuple[str, ...], where: str) -> Fault:
        all_known = {**wording.QUANTITIES, **wording.CONSTANTS}
        named = f" ({all_known[output]})" if output in all_known else ""
        return Fault(f"{self.designation} ({self.model}) has no property {output!r}{named} {where}",
                     found=output, expected="one of " + ", ".join(known),
                     hint=nearest(output, known))

    def _pair_of(self, output: str, names: tuple[str, ...]) -> Pair:
        for pair in self._flashes:
            if len(pair) == len(names) and set(pair) == set(names):
                return pair
        self._getter(output)
        offered = ", ".join(f"({', '.join(pair)})" for pair in self._flashes)
        unknown = [name for name in names if name not in wording.QUANTITIES]
        hint = nearest(unknown[0], wording.QUANTITIES) if unknown else None
        raise FormulaError(Fault(
            f"({', '.join(names)}) does not fix a state of {self.designation} ({self.model})",
            found=f"{output}({', '.join(names)})", expected=f"one of {offered}", hint=hint))

    def _need_temperature(self, kelvin: float, given: str) -> None:
        """Refuse a temperature outside the model; ``given`` describes the state."""
        # A flash gives back a limit of the range to nine digits, not to the last bit.
        if self.T_min * (1 - 1e-8) <= kelvin <= self.T_max * (1 + 1e-8):
            return
        side, bound = ("below", self.T_min) if kelvin < self.T_min else ("above", self.T_max)
        swapped = kelvin > 4000 and "p =" in given
        raise wording.out_of_range(
            f"temperature {wording.temperature(kelvin)} is {side} the limit of "
            f"{wording.temperature(bound)} of the equation for {self.designation}",
            given, self.range_text, "are pressure and temperature swapped?" if swapped else None)

    def _need_pressure(self, pascal: float, given: str) -> None:
        """Refuse a pressure that is not positive or above the model's limit."""
        if 0 < pascal <= self.p_max * (1 + 1e-9):
            return
        if pascal <= 0:
            what = f"absolute pressure {wording.pressure(pascal)} is not above zero"
        else:
            what = (f"pressure {wording.pressure(pascal)} is above the limit of "
                    f"{wording.pressure(self.p_max)} of the equation for {self.designation}")
        raise wording.out_of_range(what, given, self.range_text)
