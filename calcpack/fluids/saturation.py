"""Bring a mixture's state to its bubble or dew line, past the holes of the library's flash."""
from __future__ import annotations

import math
from typing import Any

from calcpack.fluids.library import FLASH_ERRORS, library

# Where the blind flash fails, one from a pressure some per cent away mostly leads there.
_NEARBY = (0.97, 1.03, 0.95, 1.05, 0.94, 1.06, 0.92)
# Liquid and vapour closer than this are the trivial root, not an equilibrium.
_LEAST_DENSITY_RATIO = 1.02


class Saturation:
    """The saturation line of one low-level mixture state; x is 0 (bubble) or 1 (dew)."""

    def __init__(self, state: Any) -> None:
        self._state = state
        self._CP = library()

    def at_pressure(self, p: float, x: float) -> None:
        """Bring the state to saturation at p [Pa]; ValueError if no way leads there."""
        try:
            self._state.update(self._CP.PQ_INPUTS, p, x)
            self._need_two_phases()
            return
        except FLASH_ERRORS as error:
            failure = error
        known = []
        for factor in _NEARBY:
            guess = self._guess(p * factor, x)
            if guess is None:
                continue
            known.append((math.log(factor), guess))
            for each in (guess, _between(known)):
                if each is not None and self._from_guess(p, x, each):
                    return
        raise failure

    def at_temperature(self, T: float, x: float, p_low: float, p_high: float) -> None:
        """Bring the state to saturation at T [K]; p_low, p_high [Pa] bound the answer."""
        try:
            self._state.update(self._CP.QT_INPUTS, x, T)
            self._need_two_phases()
            return
        except FLASH_ERRORS:
            pass        # there is a hole here: go by pressure instead
        from scipy.optimize import brentq

        def miss(log_p: float) -> float:
            self.at_pressure(math.exp(log_p), x)
            return self._state.T() - T
        low, high = self._bracket(T, x, p_low, p_high)
        miss(brentq(miss, math.log(low), math.log(high), xtol=1e-13, rtol=1e-13))

    def _bracket(self, T: float, x: float, p_low: float, p_high: float) -> tuple[float, float]:
        """Two pressures with saturation temperatures either side of T, as near as they are found."""
        below, above = p_low, 0.0
        for step in range(1, 60):
            p = p_high * math.exp(-0.02 * step)
            try:
                self.at_pressure(p, x)
            except FLASH_ERRORS:
                continue
            if self._state.T() < T:
                below = p
                break
            above = p
        if not above:
            raise ValueError("no saturation pressure brackets this temperature")
        return below, above

    def _guess(self, p: float, x: float) -> Any:
        """The saturation state at a nearby pressure as a set of guesses, or None."""
        state, CP = self._state, self._CP
        try:
            state.update(CP.PQ_INPUTS, p, x)
            self._need_two_phases()
        except FLASH_ERRORS:
            return None
        guess = CP.PyGuessesStructure()
        guess.T = state.T()
        guess.rhomolar_liq = state.saturated_liquid_keyed_output(CP.iDmolar)
        guess.rhomolar_vap = state.saturated_vapor_keyed_output(CP.iDmolar)
        guess.x, guess.y = list(state.mole_fractions_liquid()), list(state.mole_fractions_vapor())
        return guess

    def _from_guess(self, p: float, x: float, guess: Any) -> bool:
        try:
            self._state.update_with_guesses(self._CP.PQ_INPUTS, p, x, guess)
            self._need_two_phases()
        except FLASH_ERRORS:
            return False
        # A far-off root is no neighbour: 8 % in pressure is at most some 2 % in temperature.
        return abs(self._state.T() / guess.T - 1.0) < 0.02

    def _need_two_phases(self) -> None:
        state, CP = self._state, self._CP
        liquid = state.saturated_liquid_keyed_output(CP.iDmolar)
        vapour = state.saturated_vapor_keyed_output(CP.iDmolar)
        if not (math.isfinite(state.T()) and liquid > _LEAST_DENSITY_RATIO * vapour > 0.0):
            raise ValueError("liquid and vapour have the same density: not an equilibrium")


def _between(known: list[tuple[float, Any]]) -> Any:
    """Guesses at the pressure itself, on the line through the two states found last; None for one."""
    if len(known) < 2:
        return None
    (at_1, first), (at_2, second) = known[-2:]
    share = -at_1 / (at_2 - at_1)

    def line(one: float, two: float) -> float:
        return one + share * (two - one)
    guess = library().PyGuessesStructure()
    guess.T = line(first.T, second.T)
    guess.rhomolar_liq = line(first.rhomolar_liq, second.rhomolar_liq)
    guess.rhomolar_vap = line(first.rhomolar_vap, second.rhomolar_vap)
    guess.x = [line(*pair) for pair in zip(first.x, second.x, strict=True)]
    guess.y = [line(*pair) for pair in zip(first.y, second.y, strict=True)]
    return guess
