"""Give the properties of a pure (or pseudo-pure) fluid by its Helmholtz equation of state."""
from __future__ import annotations

from typing import Any

from calcpack.errors import FluidRangeError
from calcpack.fluids import literature, wording
from calcpack.fluids.base import Getter
from calcpack.fluids.library import FLASH_ERRORS
from calcpack.fluids.register import Fact
from calcpack.fluids.two_phase import Given, TwoPhaseFluid

# Blends with an equation of their own, with separate bubble and dew lines.
_PSEUDO_PURE = ("Air", "R404A", "R407C", "R410A", "R507A", "SES36")


class PureFluid(TwoPhaseFluid):
    """A fluid by its own Helmholtz equation of state in CoolProp (HEOS)."""

    _backend = "HEOS"
    _match = 1e-6       # relative; how well a state must give back the h and s it was asked for

    def __init__(self, name: str, designation: str, reference: str = "",
                 facts: tuple[Fact, ...] = ()) -> None:
        super().__init__(self._backend, name, designation, reference)
        self.facts = facts
        self._describe(name, reference or "own zero")
        self._flashes = {
            ("p", "T"): self._at_pT, ("p", "h"): self._at_ph, ("p", "s"): self._at_ps,
            ("p", "x"): self._at_px, ("T", "x"): self._at_Tx, ("p", "rho"): self._at_prho,
            ("T", "rho"): self._at_Trho, ("T", "s"): self._at_Ts, ("h", "s"): self._at_hs}

    def _describe(self, name: str, reference: str) -> None:
        key = self._CP.get_BibTeXKey(name, "EOS")
        self.equation = literature.citation(key)
        self.model = _model_words(name)
        self.identity = f"{name}|Helmholtz|{key}|{reference}"

    def _at_pT(self, p: float, T: float) -> None:
        given = ("p", "T"), p, T
        self._need_range(p=p, T=T, given=given)
        try:
            self._state.update(self._CP.PT_INPUTS, p, T)
        except FLASH_ERRORS as error:
            raise self._failed_pT(p, T, error) from error
        self._accept(given)

    def _at_px(self, p: float, x: float) -> None:
        given = ("p", "x"), p, x
        if not (0.0 <= x <= 1.0 and self.p_lowest <= p < self.p_crit):
            self._need_quality(x, wording.state(*given))
            self._need_saturation_pressure(p, wording.state(*given))
        self._flash(self._CP.PQ_INPUTS, p, x, given)
        self._refuse_trivial_root(given)

    def _at_Tx(self, T: float, x: float) -> None:
        given = ("T", "x"), T, x
        if not (0.0 <= x <= 1.0 and self.T_lowest <= T < self.T_crit):
            self._need_quality(x, wording.state(*given))
            self._need_saturation_temperature(T, wording.state(*given))
        if self._library_name in _PSEUDO_PURE and x not in (0.0, 1.0):
            self._flash(self._CP.PQ_INPUTS, self._pressure_between(T, x, given), x, given)
        else:
            self._flash(self._CP.QT_INPUTS, x, T, given)
        self._refuse_trivial_root(given)

    def _pressure_between(self, T: float, x: float, given: Given) -> float:
        """p at which the pseudo-pure fluid with vapour fraction x has the temperature T."""
        from scipy.optimize import brentq
        CP, state = self._CP, self._state

        def miss(p: float) -> float:
            state.update(CP.PQ_INPUTS, p, x)
            return state.T() - T
        try:
            pressures = []
            for end in (1.0, 0.0):
                state.update(CP.QT_INPUTS, end, T)
                pressures.append(state.p())
            # The ends of an azeotrope are equal but for the last digits.
            return brentq(miss, pressures[0] * (1 - 1e-6), pressures[1] * (1 + 1e-6), xtol=1e-4, rtol=1e-13)
        except FLASH_ERRORS as error:
            raise self._no_state(given, error) from error

    def _refuse_trivial_root(self, given: Given) -> None:
        """Near its critical point a pseudo-pure equation can give liquid and vapour as one."""
        state = self._state
        if state.T() < 0.98 * self.T_crit:
            return
        liquid = state.saturated_liquid_keyed_output(self._CP.iDmass)
        if liquid < 1.001 * state.saturated_vapor_keyed_output(self._CP.iDmass):
            raise self._no_state(given, ValueError("liquid and vapour have the same density"))

    def _at_ph(self, p: float, h: float) -> None:
        self._at_p_and("h", p, h, h - self._h_zero, self._CP.HmassP_INPUTS)

    def _at_ps(self, p: float, s: float) -> None:
        self._at_p_and("s", p, s, s - self._s_zero, self._CP.PSmass_INPUTS)

    def _at_p_and(self, name: str, p: float, shown: float, raw: float, inputs: Any) -> None:
        """p with h or s; ``raw`` is ``shown`` in the library's own zero."""
        given = ("p", name), p, shown
        self._need_range(p=p, given=given)
        self._refuse_critical_band(p, given)
        first, second = (raw, p) if name == "h" else (p, raw)
        try:
            self._state.update(inputs, first, second)
        except FLASH_ERRORS as error:
            self._by_bracket(name, p, raw, given, error)
        self._need_match(name, raw, given)
        self._accept(given)

    def _need_match(self, name: str, wanted: float, given: Given) -> None:
        """Refuse a state whose h or s is not the one asked for: a flash can miss without a word."""
        found, scale = ((self._state.hmass(), 1e5) if name == "h" else (self._state.smass(), 1e2))
        if not abs(found - wanted) <= self._match * max(abs(wanted), scale):
            raise self._no_state(given, ValueError(f"{name} of the state found is {found:.9g}"))

    def _at_prho(self, p: float, rho: float) -> None:
        given = ("p", "rho"), p, rho
        self._need_range(p=p, given=given)
        self._need_density(rho, given)
        self._flash(self._CP.DmassP_INPUTS, rho, p, given)
        # This flash can end in a wrong temperature without a word: ask back.
        check = self._saturation
        try:
            check.update(self._CP.DmassT_INPUTS, rho, self._state.T())
        except FLASH_ERRORS as error:
            raise self._no_state(given, error) from error
        if abs(check.p() - p) > 1e-3 * max(p, 0.1 * self.p_crit):
            raise self._no_state(given, ValueError(f"p from T and rho is {check.p():.6g} Pa"))

    def _at_Trho(self, T: float, rho: float) -> None:
        given = ("T", "rho"), T, rho
        self._need_range(T=T, given=given)
        self._need_density(rho, given)
        self._flash(self._CP.DmassT_INPUTS, rho, T, given)

    def _at_Ts(self, T: float, s: float) -> None:
        given = ("T", "s"), T, s
        self._need_range(T=T, given=given)
        self._flash(self._CP.SmassT_INPUTS, s - self._s_zero, T, given)

    def _at_hs(self, h: float, s: float) -> None:
        given = ("h", "s"), h, s
        self._flash(self._CP.HmassSmass_INPUTS, h - self._h_zero, s - self._s_zero, given)
        self._need_match("h", h - self._h_zero, given)
        self._need_match("s", s - self._s_zero, given)
        self._refuse_critical_band(self._state.p(), given)

    def _failed_pT(self, p: float, T: float, error: Exception) -> FluidRangeError:
        if self._lies_between(p, T):
            return self._saturated(p, T, str(error))
        return self._no_state((("p", "T"), p, T), error)

    def _lies_between(self, p: float, T: float) -> bool:
        """Whether T is between the bubble and dew temperatures at p, or within 1 mK of them."""
        if not self.p_lowest <= p < self.p_crit:
            return False
        ends = []
        try:
            for x in (0.0, 1.0):
                self._saturation.update(self._CP.PQ_INPUTS, p, x)
                ends.append(self._saturation.T())
        except FLASH_ERRORS:
            return False
        return ends[0] - 1e-3 <= T <= ends[1] + 1e-3

    def _saturated(self, p: float, T: float, detail: str | None) -> FluidRangeError:
        return wording.out_of_range(
            f"p and T of {self.designation} lie between liquid and vapour and do not fix its state",
            wording.state(("p", "T"), p, T), detail=detail,
            hint="give x with p or with T: x = 0 saturated liquid, x = 1 saturated vapour")

    def _by_bracket(self, name: str, p: float, wanted: float, given: Given,
                    failure: Exception) -> None:
        """Bring the state to p and h (or s) by a bracketed search on T, phase imposed.

        Used only where the library's own flash has failed; ``wanted`` is in the
        library's zero.
        """
        CP, state = self._CP, self._state
        read = state.hmass if name == "h" else state.smass
        try:
            if not self.p_lowest <= p < self.p_crit:
                self._search(read, p, wanted, {}, CP.iphase_not_imposed)
                return
            ends = []
            for x in (0.0, 1.0):
                state.update(CP.PQ_INPUTS, p, x)
                ends.append((state.T(), read()))
            (T_bubble, liquid), (T_dew, vapour) = ends
            if wanted < liquid:
                self._search(read, p, wanted, {T_bubble: liquid}, CP.iphase_liquid)
            elif wanted > vapour:
                self._search(read, p, wanted, {T_dew: vapour}, CP.iphase_gas)
            else:
                state.update(CP.PQ_INPUTS, p, (wanted - liquid) / (vapour - liquid))
        except FLASH_ERRORS as error:
            raise self._no_state(given, failure) from error

    def _search(self, read: Getter, p: float, wanted: float, end: dict[float, float],
                phase: Any) -> None:
        """The state at p whose ``read`` is ``wanted``; ValueError if there is none.

        ``end`` is the value at the saturation temperature that bounds the phase:
        the flash from p and T is not to be asked just there.
        """
        from scipy.optimize import brentq
        CP = self._CP

        def miss(T: float) -> float:
            if T in end:
                return end[T] - wanted
            self._state.update(CP.PT_INPUTS, p, T)
            return read() - wanted
        limit = next(iter(end), None)
        low = limit if limit is not None and phase == CP.iphase_gas else self.T_min
        high = limit if limit is not None and phase == CP.iphase_liquid else self.T_max
        self._impose(phase)
        try:
            miss(brentq(miss, low, high, xtol=1e-10, rtol=1e-14))
        finally:
            self._impose(CP.iphase_not_imposed)

    def _impose(self, phase: Any) -> None:
        if phase == self._CP.iphase_not_imposed:
            self._state.unspecify_phase()
        else:
            self._state.specify_phase(phase)


def _model_words(name: str) -> str:
    if name == "Water":
        return "IAPWS-95, Helmholtz-energy equation of state"
    if name in _PSEUDO_PURE:
        return "pseudo-pure Helmholtz-energy equation of state"
    return "Helmholtz-energy equation of state"
