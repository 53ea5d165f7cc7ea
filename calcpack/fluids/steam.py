"""Give the properties of water and steam by the industrial formulation IAPWS-IF97."""
from __future__ import annotations

from typing import Any

from calcpack.fluids import literature, wording
from calcpack.fluids.base import Pair
from calcpack.fluids.pure import PureFluid
from calcpack.fluids.two_phase import Given

# IAPWS R7-97(2012), section 2: 273.15 K to 1073.15 K up to 100 MPa, to 2273.15 K up to 50 MPa.
_T_HOT, _T_HIGHEST = 1073.15, 2273.15
_P_HOT = 50e6
_NEWTON = 6


class IndustrialSteam(PureFluid):
    """Water by IAPWS-IF97; T(p, h) and T(p, s) by its own backward equations.

    Its backward equations agree with the basic ones within 0.025 K, no closer.
    Every other property of a state given by p with h or s is that of the basic
    equations where they have this h or s exactly: else a lossless machine would
    seem to make or destroy entropy. p with rho, T with rho and T with s are not
    offered.
    """

    _backend = "IF97"
    _match = 2e-3       # its backward equations miss by up to 0.025 K: some 100 J/kg in 100 kJ/kg

    def __init__(self, designation: str, reference: str = "", facts: tuple = ()) -> None:
        super().__init__("Water", designation, reference, facts)
        for pair in (("p", "rho"), ("T", "rho"), ("T", "s")):
            del self._flashes[pair]
        self._backward_T: float | None = None
        read_T = self._getters["T"]
        self._getters["T"] = lambda: read_T() if self._backward_T is None else self._backward_T
        self.range_text = ("T 273.15 to 1073.15 K with p up to 100 MPa, "
                           "T to 2273.15 K with p up to 50 MPa")

    def _read_limits(self) -> None:
        super()._read_limits()
        self.T_max = _T_HIGHEST

    def _describe(self, name: str, reference: str) -> None:
        self.model, self.equation = "IAPWS-IF97", literature.IF97
        self.identity = f"{name}|IF97|R7-97(2012)|{reference}"

    def _at_pT(self, p: float, T: float) -> None:
        # The library takes p, T on the saturation line for liquid without a word.
        if self.T_lowest <= T < self.T_crit and 0.0 < p < self.p_crit:
            self._saturation.update(self._CP.QT_INPUTS, 0.0, T)
            if abs(self._saturation.p() / p - 1.0) < 1e-6:
                raise self._saturated(p, T, None)
        super()._at_pT(p, T)

    def _settle(self, pair: Pair, first: float, second: float) -> None:
        if pair is not self._pair or first != self._first or second != self._second:
            self._backward_T = None
        super()._settle(pair, first, second)

    def _at_p_and(self, name: str, p: float, shown: float, raw: float, inputs: Any) -> None:
        super()._at_p_and(name, p, shown, raw, inputs)
        self._backward_T = self._state.T()
        boiling, dry = self._ends(name, p) if p < self.p_crit else (None, None)
        if boiling is not None and boiling[0] <= raw <= dry[0]:
            self._state.update(self._CP.PQ_INPUTS, p, (raw - boiling[0]) / (dry[0] - boiling[0]))
            return
        self._refine(name, p, raw, boiling, dry)

    def _ends(self, name: str, p: float) -> tuple[tuple[float, float], tuple[float, float]]:
        """h or s of the saturated liquid and of the dry vapour at p, each with the temperature."""
        found = []
        for share in (0.0, 1.0):
            self._saturation.update(self._CP.PQ_INPUTS, p, share)
            value = self._saturation.hmass() if name == "h" else self._saturation.smass()
            found.append((value, self._saturation.T()))
        return found[0], found[1]

    def _refine(self, name: str, p: float, raw: float, boiling: tuple[float, float] | None,
                dry: tuple[float, float] | None) -> None:
        """Newton from the backward equation's temperature on the basic equations, without leaving the phase."""
        low = dry[1] if dry is not None and raw > dry[0] else 0.0
        high = boiling[1] if boiling is not None and raw < boiling[0] else float("inf")
        state = self._state
        for _ in range(_NEWTON):
            miss = (state.hmass() if name == "h" else state.smass()) - raw
            step = miss / state.cpmass() * (1.0 if name == "h" else state.T())
            T = state.T() - step
            if abs(step) <= 1e-11 * T or not low < T < high:
                return
            state.update(self._CP.PT_INPUTS, p, T)

    def _need_range(self, *, given: Given, p: float | None = None, T: float | None = None) -> None:
        super()._need_range(given=given, p=p, T=T)
        if p is not None and T is not None:
            self._need_hot_pressure(p, T, given)

    def _accept(self, given: Given) -> None:
        super()._accept(given)
        self._need_hot_pressure(self._state.p(), self._state.T(), given)

    def _need_hot_pressure(self, p: float, T: float, given: Given) -> None:
        if T > _T_HOT and p > _P_HOT * (1 + 1e-9):
            raise wording.out_of_range(
                f"pressure {wording.pressure(p)} is above the limit of {wording.pressure(_P_HOT)} of "
                f"IAPWS-IF97 at temperatures above {wording.temperature(_T_HOT)}",
                wording.state(*given), self.range_text)

    def _refuse_trivial_root(self, given: Given) -> None:
        """Nothing: its saturation equation has one root."""

    def _impose(self, phase: Any) -> None:
        """Nothing: this formulation chooses its region by p and T alone."""
