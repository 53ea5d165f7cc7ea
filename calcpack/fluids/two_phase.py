"""What fluids with a vapour and a liquid share: getters, saturation line, reference state."""
from __future__ import annotations

import math
from typing import Any

from calcpack.errors import Fault, FluidRangeError, FormulaError, NoAnswerError
from calcpack.fluids import wording
from calcpack.fluids.base import Fluid, Getter
from calcpack.fluids.library import FLASH_ERRORS, library, new_state, plain_faults
from calcpack.fluids.zero import SaturatedLiquid, zero

# Within this part of p_crit the flashes from p and h, p and s, h and s are not to be trusted.
CRITICAL_BAND = 0.005
Given = tuple[tuple[str, ...], float, float]    # the names and values that were asked for


class TwoPhaseFluid(Fluid):
    """What pure fluids share: getters on a low-level state, saturation, reference state.

    ``T_crit`` [K], ``p_crit`` [Pa] are the critical point, ``p_lowest`` the
    saturation pressure at ``T_lowest``, where the saturation line begins.
    ``has_gaps`` says that some saturation states cannot be found.
    """

    has_gaps = False
    T_crit: float
    p_crit: float
    T_lowest: float
    p_lowest: float

    def __init__(self, backend: str, name: str, designation: str, reference: str) -> None:
        super().__init__()
        CP = library()
        self.designation = designation
        self._CP = CP
        self._library_name = name
        self._state: Any = new_state(backend, name)
        self._saturation: Any = new_state(backend, name)
        self._read_limits()
        self.range_text = (f"T {self.T_min:.5g} to {self.T_max:.5g} K, "
                           f"p up to {self.p_max / 1e6:.4g} MPa")
        zero_point = zero(reference, self._liquid())
        self._h_zero, self._s_zero = zero_point.h, zero_point.s
        self.reference_state = zero_point.words
        self._getters = self._state_getters()
        self._constants = self._constant_getters()
        self._probed: set[str] = set()

    def _read_limits(self) -> None:
        state = self._state
        self.T_min, self.T_max, self.p_max = state.Tmin(), state.Tmax(), state.pmax()
        self.T_crit, self.p_crit = state.T_critical(), state.p_critical()
        self.T_lowest = max(self.T_min, state.Ttriple())
        state.update(self._CP.QT_INPUTS, 0.0, self.T_lowest)
        self.p_lowest = state.p()

    def _liquid(self) -> SaturatedLiquid:
        CP = self._CP

        def at(inputs: Any, first: float, second: float) -> tuple[float, float]:
            self._saturation.update(inputs, first, second)
            return self._saturation.hmass(), self._saturation.smass()
        return SaturatedLiquid(
            self.designation, self.T_lowest, self.T_crit, self.p_lowest, self.p_crit,
            at_temperature=lambda T: at(CP.QT_INPUTS, 0.0, T),
            at_pressure=lambda p: at(CP.PQ_INPUTS, p, 0.0))

    def _state_getters(self) -> dict[str, Getter]:
        state, h_zero, s_zero = self._state, self._h_zero, self._s_zero
        plain: dict[str, Getter] = {
            "T": state.T, "p": state.p,
            "h": lambda: state.hmass() + h_zero, "s": lambda: state.smass() + s_zero,
            "u": lambda: state.umass() + h_zero,
            "rho": state.rhomass, "v": lambda: 1.0 / state.rhomass(),
            "x": self._quality, "x_eq": self._equilibrium_quality}
        one_phase = {
            "cp": state.cpmass, "cv": state.cvmass,
            "gamma": lambda: state.cpmass() / state.cvmass(),
            "mu": state.viscosity, "lambda": state.conductivity, "a": state.speed_sound}
        return plain | {name: self._in_one_phase(name, get) for name, get in one_phase.items()}

    def _constant_getters(self) -> dict[str, Getter]:
        M = self._state.molar_mass()
        R = self._state.gas_constant() / M
        T_triple = self._state.Ttriple()
        return {"M": lambda: M, "R": lambda: R,
                "T_crit": lambda: self.T_crit, "p_crit": lambda: self.p_crit,
                "T_min": lambda: self.T_min, "T_max": lambda: self.T_max,
                "p_max": lambda: self.p_max, "T_triple": lambda: T_triple}

    def _getter(self, output: str) -> Getter:
        get = super()._getter(output)
        if output in ("mu", "lambda") and output not in self._probed:
            self._probe(output)
        return get

    def _probe(self, output: str) -> None:
        """Refuse a transport property that the library has no equation for."""
        state = self._saturation
        try:
            state.update(self._CP.QT_INPUTS, 1.0, 0.5 * (self.T_lowest + self.T_crit))
            state.viscosity() if output == "mu" else state.conductivity()
        except FLASH_ERRORS as error:
            raise FormulaError(Fault(
                f"there is no equation for the {wording.QUANTITIES[output]} of {self.designation}",
                found=output, hint="give it as an input, with its source", detail=str(error))) from error
        self._probed.add(output)

    def _in_one_phase(self, name: str, get: Getter) -> Getter:
        state, two_phase = self._state, self._CP.iphase_twophase

        def checked() -> float:
            if state.phase() == two_phase and 0.0 < state.Q() < 1.0:
                raise wording.out_of_range(
                    f"the {wording.QUANTITIES[name]} of {self.designation} is not defined for a "
                    "mixture of liquid and vapour", self._where(),
                    hint="ask at x = 0 or x = 1, or for one phase")
            try:
                value = get()
            except FLASH_ERRORS as error:
                raise wording.out_of_range(
                    f"no {wording.QUANTITIES[name]} of {self.designation} at this state",
                    self._where(), self.range_text, detail=str(error)) from error
            if not math.isfinite(value):
                raise NoAnswerError(Fault(f"the {wording.QUANTITIES[name]} of {self.designation} is not "
                                          "finite at this state", found=self._where()))
            return value
        return checked

    def _where(self) -> str:
        return wording.state(("p", "T"), self._state.p(), self._state.T())

    def _quality(self) -> float:
        if self._state.phase() != self._CP.iphase_twophase:
            raise wording.out_of_range(f"{self.designation} is a single phase here: no vapour fraction",
                                       self._where(), hint="x_eq gives the equilibrium fraction")
        return self._state.Q()

    def _equilibrium_quality(self) -> float:
        p, h = self._state.p(), self._state.hmass()
        h_liquid, h_vapour = self._saturated_pair(p, "x_eq")
        return (h - h_liquid) / (h_vapour - h_liquid)

    def _saturated_pair(self, p: float, asked: str) -> tuple[float, float]:
        """Enthalpies of saturated liquid and vapour at ``p``, in the library's zero."""
        given = f"{asked} at p = {wording.pressure(p)}"
        self._need_saturation_pressure(p, given)
        ends = []
        for x in (0.0, 1.0):
            with plain_faults(f"no saturation state of {self.designation}", given, self._saturation_text()):
                self._saturation.update(self._CP.PQ_INPUTS, p, x)
            ends.append(self._saturation.hmass())
        return ends[0], ends[1]

    def _saturation_text(self) -> str:
        return (f"p {wording.pressure(self.p_lowest)} to {wording.pressure(self.p_crit)}, "
                f"T {self.T_lowest:.2f} to {self.T_crit:.2f} K")

    def _need_saturation_pressure(self, p: float, given: str) -> None:
        if self.p_lowest * (1 - 1e-9) <= p < self.p_crit:
            return
        if p >= self.p_crit:
            what = (f"condensing/saturation pressure {wording.pressure(p)} is {_side(p, self.p_crit)} the "
                    f"critical pressure {wording.pressure(self.p_crit)} of {self.designation}")
        else:
            what = (f"saturation pressure {wording.pressure(p)} is below the lowest of the equation for "
                    f"{self.designation}, {wording.pressure(self.p_lowest)}")
        raise wording.out_of_range(what, given, self._saturation_text())

    def _need_saturation_temperature(self, T: float, given: str) -> None:
        if self.T_lowest * (1 - 1e-12) <= T < self.T_crit:
            return
        if self.T_lowest < T:
            what = (f"condensing/saturation temperature {wording.temperature(T)} is {_side(T, self.T_crit)} "
                    f"the critical temperature {wording.temperature(self.T_crit)} of {self.designation}")
        else:
            what = (f"saturation temperature {wording.temperature(T)} is below the lowest of the equation "
                    f"for {self.designation}, {wording.temperature(self.T_lowest)}")
        raise wording.out_of_range(what, given, self._saturation_text())

    def _need_quality(self, x: float, given: str) -> None:
        if not 0.0 <= x <= 1.0:
            raise wording.out_of_range(f"vapour mass fraction x = {x:.6g} is not between 0 and 1", given,
                                       "0 for saturated liquid to 1 for saturated vapour")

    def _flash(self, inputs: Any, first: float, second: float, given: Given) -> None:
        try:
            self._state.update(inputs, first, second)
        except FLASH_ERRORS as error:
            raise self._no_state(given, error) from error
        self._accept(given)

    def _accept(self, given: Given) -> None:
        """After a flash: finite, and inside the range that was asked to hold."""
        state = self._state
        try:
            # The industrial formulation computes on asking, and refuses then.
            T, p, h = state.T(), state.p(), state.hmass()
        except FLASH_ERRORS as error:
            raise self._no_state(given, error) from error
        finite = math.isfinite(T) and math.isfinite(p) and math.isfinite(h)
        if finite and self.T_min <= T <= self.T_max and 0.0 < p <= self.p_max:
            return
        words = wording.state(*given)
        if not finite:
            raise NoAnswerError(Fault(f"no state of {self.designation} was found for these values",
                                      found=words, expected=self.range_text))
        self._need_temperature(T, words)
        self._need_pressure(p, words)

    def _need_range(self, *, given: Given, p: float | None = None, T: float | None = None) -> None:
        if T is not None and not self.T_min <= T <= self.T_max:
            self._need_temperature(T, wording.state(*given))
        if p is not None and not 0.0 < p <= self.p_max:
            self._need_pressure(p, wording.state(*given))

    def _need_density(self, rho: float, given: Given) -> None:
        if rho <= 0.0:
            raise wording.out_of_range(f"density {rho:.6g} kg/m³ is not above zero",
                                       wording.state(*given))

    def _refuse_critical_band(self, p: float, given: Given) -> None:
        if abs(p / self.p_crit - 1.0) < CRITICAL_BAND:
            raise wording.out_of_range(
                f"pressure {wording.pressure(p)} is within 0.5 % of the critical pressure "
                f"{wording.pressure(self.p_crit)} of {self.designation}: "
                f"{' and '.join(given[0])} do not fix a state well enough there",
                wording.state(*given), hint="move the pressure away from the critical one")

    def _no_state(self, given: Given, error: Exception) -> FluidRangeError:
        return wording.out_of_range(f"no state of {self.designation} was found for these values",
                                    wording.state(*given), self.range_text, detail=str(error))


def _side(value: float, limit: float) -> str:
    return "at" if value == limit else "above"
