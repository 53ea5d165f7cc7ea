"""Give the properties of a refrigerant blend by the multi-fluid mixture model.

The library's own flashes of mixtures have holes in ordinary ranges and are slow
from p and h or p and s. Here each saturation state is tried again from guesses
at nearby pressures, and every other state is found with the phase imposed.
"""
from __future__ import annotations

from collections.abc import Callable
from functools import cached_property
from typing import Any, NamedTuple

from calcpack.errors import FluidRangeError
from calcpack.fluids import literature, wording
from calcpack.fluids.base import Getter
from calcpack.fluids.library import FLASH_ERRORS, library, new_state
from calcpack.fluids.register import Fact
from calcpack.fluids.saturation import Saturation
from calcpack.fluids.two_phase import Given, TwoPhaseFluid
from calcpack.fluids.zero import SaturatedLiquid

# Within this part of p_crit the mixture model's states are not to be trusted.
_CRITICAL_BAND = 0.02


class End(NamedTuple):
    """One end of the two-phase range at a pressure, in the library's zero."""

    T: float
    h: float
    s: float
    rho: float


class Blend(TwoPhaseFluid):
    """A predefined mixture of CoolProp; x is the vapour *mass* fraction.

    Viscosity and conductivity are not offered: the library only estimates them.
    The critical point is found once, when it is first needed (up to some seconds).
    """

    has_gaps = True

    def __init__(self, name: str, designation: str, reference: str = "",
                 facts: tuple[Fact, ...] = ()) -> None:
        super().__init__("HEOS", name, designation, reference)
        self.facts = facts
        for transport in ("mu", "lambda"):
            del self._getters[transport]
        del self._constants["T_triple"]
        self._ends_at: dict[float, tuple[End, End]] = {}
        self._describe(name, reference or "own zero")
        self._flashes = {
            ("p", "T"): self._at_pT, ("p", "h"): self._at_ph, ("p", "s"): self._at_ps,
            ("p", "x"): self._at_px, ("T", "x"): self._at_Tx}

    def _read_limits(self) -> None:
        state = self._state
        self._line = Saturation(state)
        self.T_min, self.T_max, self.p_max = state.Tmin(), state.Tmax(), state.pmax()
        # Half of the reducing temperature is far below any use and still on the saturation line.
        self.T_lowest = max(self.T_min, 0.5 * state.T_reducing())
        state.update(self._CP.QT_INPUTS, 1.0, self.T_lowest)
        self.p_lowest = state.p()

    def _liquid(self) -> SaturatedLiquid:
        def at_pressure(p: float) -> tuple[float, float]:
            self._line.at_pressure(p, 0.0)
            return self._state.hmass(), self._state.smass()

        def at_temperature(T: float) -> tuple[float, float]:
            self._line.at_temperature(T, 0.0, self.p_lowest, self.p_crit)
            return self._state.hmass(), self._state.smass()
        return SaturatedLiquid(self.designation, self.T_lowest, self._state.T_reducing(), self.p_lowest,
                               self._lowest_component_p_crit, at_temperature, at_pressure)

    @cached_property
    def _critical(self) -> tuple[float, float]:
        """(T, p) of the stable critical point; the one at the highest T if there are several."""
        points = new_state("HEOS", self._library_name).all_critical_points()
        stable = [(point.T, point.p) for point in points if point.stable and point.p > 0]
        if not stable:
            raise wording.out_of_range(f"no stable critical point of {self.designation} was found", "")
        return max(stable)

    @property
    def T_crit(self) -> float:      # type: ignore[override]
        """Critical temperature [K]."""
        return self._critical[0]

    @property
    def p_crit(self) -> float:      # type: ignore[override]
        """Critical pressure [Pa]."""
        return self._critical[1]

    @cached_property
    def _lowest_component_p_crit(self) -> float:
        return min(library().PropsSI("pcrit", name) for name in self._state.fluid_names())

    def _is_below_critical(self, p: float) -> bool:
        """Whether p is subcritical; far below, without finding the critical point first."""
        return p < 0.6 * self._lowest_component_p_crit or p < self.p_crit

    def _describe(self, name: str, reference: str) -> None:
        CP, state = self._CP, self._state
        parts = state.fluid_names()
        mole, mass = state.get_mole_fractions(), state.get_mass_fractions()

        def listed(shares: list[float]) -> str:
            return " / ".join(f"{share * 100:.4g}" for share in shares)
        self.model = (f"multi-fluid Helmholtz mixture model of {' / '.join(parts)}, "
                      f"{listed(mass)} % by mass ({listed(mole)} % by mole)")
        keys = [CP.get_BibTeXKey(part, "EOS") for part in parts]
        pairs = _pair_keys(CP, parts)
        self.equation = "; ".join(
            [f"{part}: {literature.citation(key)}" for part, key in zip(parts, keys, strict=True)]
            + [f"mixing: {literature.citation(key)}" for key in pairs])
        self.identity = f"{name}|mixture|{','.join([*keys, *pairs])}|{reference}"

    def _quality(self) -> float:
        super()._quality()
        return _mass_quality(self._state)

    def _equilibrium_quality(self) -> float:
        p, h = self._state.p(), self._state.hmass()
        if p not in self._ends_at:
            pair, first, second = self._pair, self._first, self._second
            self._pair = None
            self._ends(p, (("p",), p))
            self._settle(pair, first, second)
        bubble, dew = self._ends_at[p]
        return (h - bubble.h) / (dew.h - bubble.h)

    def _ends(self, p: float, given: tuple) -> tuple[End, End]:
        """Bubble and dew end at p; kept, for a pressure is asked for many times."""
        if p in self._ends_at:
            return self._ends_at[p]
        if not self._is_below_critical(p) or p < self.p_lowest:
            self._need_saturation_pressure(p, wording.state(*given))
        ends = []
        for x in (0.0, 1.0):
            self._saturate(p, x, given)
            ends.append(End(self._state.T(), self._state.hmass(), self._state.smass(), self._state.rhomass()))
        if len(self._ends_at) > 500:
            self._ends_at.clear()
        self._ends_at[p] = (ends[0], ends[1])
        return self._ends_at[p]

    def _saturate(self, p: float, x: float, given: tuple) -> None:
        try:
            self._line.at_pressure(p, x)
        except FLASH_ERRORS as error:
            raise wording.out_of_range(
                f"no saturation state of {self.designation} was found at this pressure",
                wording.state(*given), detail=str(error),
                hint="the mixture model has gaps; try a pressure some per cent away") from error

    def _at_px(self, p: float, x: float) -> None:
        given = ("p", "x"), p, x
        self._need_quality(x, wording.state(*given))
        if x in (0.0, 1.0):
            if not self._is_below_critical(p) or p < self.p_lowest:
                self._need_saturation_pressure(p, wording.state(*given))
            self._saturate(p, x, given)
        else:
            self._between(p, lambda: _mass_quality(self._state), x, (0.0, 1.0), given)
        self._accept(given)

    def _at_Tx(self, T: float, x: float) -> None:
        given = ("T", "x"), T, x
        self._need_quality(x, wording.state(*given))
        self._need_saturation_temperature(T, wording.state(*given))
        if x not in (0.0, 1.0):
            self._at_px(self._pressure_between(T, x, given), x)
            return
        try:
            self._line.at_temperature(T, x, self.p_lowest, self.p_crit)
        except FLASH_ERRORS as error:
            raise self._no_state(given, error) from error
        self._accept(given)

    def _pressure_between(self, T: float, x: float, given: Given) -> float:
        """p at which a mixture of vapour fraction x has the temperature T."""
        from scipy.optimize import brentq
        pressures = []
        for end in (1.0, 0.0):
            self._at_Tx(T, end)
            pressures.append(self._state.p())

        def miss(p: float) -> float:
            self._at_px(p, x)
            return self._state.T() - T
        try:
            return brentq(miss, *pressures, xtol=1e-3, rtol=1e-13)
        except FLASH_ERRORS as error:
            raise self._no_state(given, error) from error

    def _at_pT(self, p: float, T: float) -> None:
        given = ("p", "T"), p, T
        self._need_range(p=p, T=T, given=given)
        phase, limit = self._phase(p, given, lambda bubble, dew: (T < bubble.T, T > dew.T))
        try:
            if phase is None:
                self._state.update(self._CP.PT_INPUTS, p, T)
            else:
                self._single(p, T, phase, limit)
        except FLASH_ERRORS as error:
            raise self._no_state(given, error) from error
        self._accept(given)

    def _at_ph(self, p: float, h: float) -> None:
        self._at_p_and("h", p, h, h - self._h_zero)

    def _at_ps(self, p: float, s: float) -> None:
        self._at_p_and("s", p, s, s - self._s_zero)

    def _at_p_and(self, name: str, p: float, shown: float, raw: float) -> None:
        given = ("p", name), p, shown
        self._need_range(p=p, given=given)
        read = self._state.hmass if name == "h" else self._state.smass

        def side(bubble: End, dew: End) -> tuple[bool, bool]:
            return raw < getattr(bubble, name), raw > getattr(dew, name)
        phase, limit = self._phase(p, given, side)
        try:
            if phase is None:
                bubble, dew = self._ends(p, given)
                self._between(p, read, raw, (getattr(bubble, name), getattr(dew, name)), given)
            else:
                self._newton(name, read, p, raw, phase, limit)
        except FLASH_ERRORS as error:
            raise self._no_state(given, error) from error
        self._accept(given)

    def _phase(self, p: float, given: Given, side: Callable[[End, End], tuple[bool, bool]],
               ) -> tuple[Any, End | None]:
        """(phase to impose, end of the two-phase range next to it); phase None between the ends."""
        CP = self._CP
        if not self._is_below_critical(p * (1 - _CRITICAL_BAND)):
            return CP.iphase_supercritical, None
        if not self._is_below_critical(p * (1 + _CRITICAL_BAND)):
            raise self._too_critical(p, given)
        if p < self.p_lowest:
            return CP.iphase_gas, None
        bubble, dew = self._ends(p, given)
        below, above = side(bubble, dew)
        if below:
            return CP.iphase_liquid, bubble
        return (CP.iphase_gas, dew) if above else (None, None)

    def _too_critical(self, p: float, given: Given) -> FluidRangeError:
        return wording.out_of_range(
            f"pressure {wording.pressure(p)} is within 2 % of the critical pressure "
            f"{wording.pressure(self.p_crit)} of the blend {self.designation}: the mixture model has no "
            "sure state there", wording.state(*given), hint="move the pressure away from the critical one")

    def _single(self, p: float, T: float, phase: Any, limit: End | None) -> None:
        """One phase at p and T; ValueError if the density is on the wrong side of ``limit``."""
        CP = self._CP
        if phase == CP.iphase_supercritical and 1.05 * self.T_crit > T:
            # Below and around the critical temperature the other search can end in a false root.
            phase = CP.iphase_liquid
        self._state.specify_phase(phase)
        try:
            self._state.update(CP.PT_INPUTS, p, T)
        finally:
            self._state.unspecify_phase()
        if limit is None:
            return
        ratio = self._state.rhomass() / limit.rho
        if (ratio < 0.999) if phase == CP.iphase_liquid else (ratio > 1.001):
            raise ValueError("the density found belongs to the other phase")

    def _newton(self, name: str, read: Getter, p: float, wanted: float, phase: Any,
                limit: End | None) -> None:
        """T at p where h or s is ``wanted`` in one phase: Newton with cp, kept in a bracket."""
        low, high = self.T_min, self.T_max
        if limit is not None:
            low, high = (low, limit.T) if phase == self._CP.iphase_liquid else (limit.T, high)
        T = limit.T if limit else self._state.T_reducing()
        for _ in range(60):
            self._single(p, T, phase, limit)
            miss = read() - wanted
            slope = self._state.cpmass() / (1.0 if name == "h" else T)
            low, high = (low, T) if miss > 0.0 else (T, high)
            nearer = T - miss / slope
            if not low <= nearer <= high:
                nearer = 0.5 * (low + high)
            if abs(nearer - T) <= 1e-11 * T:
                break
            T = nearer
        else:
            raise ValueError("no temperature in the range gives this value")

    def _between(self, p: float, read: Getter, wanted: float, ends: tuple[float, float],
                 given: Given) -> None:
        """The two-phase state at p where ``read`` is ``wanted``, between its values at the ends."""
        from scipy.optimize import brentq
        CP, state = self._CP, self._state
        bubble, dew = self._ends(p, given)

        def at(inputs: Any, low: float, high: float) -> None:
            def miss(place: float) -> float:
                if place in (low, high):
                    return ends[place == high] - wanted
                state.update(inputs, p, place)
                return read() - wanted
            place = brentq(miss, low, high, xtol=1e-13, rtol=1e-13)
            if place in (low, high):
                self._saturate(p, float(place == high), given)
            else:
                state.update(inputs, p, place)
        try:
            at(CP.PQ_INPUTS, 0.0, 1.0)
        except FLASH_ERRORS:
            # The flash from p and quality has a hole here; the one from p and T has none, but is slow.
            at(CP.PT_INPUTS, bubble.T, dew.T)


def _mass_quality(state: Any) -> float:
    """Vapour mass fraction of a two-phase mixture; the library's own quality is by mole."""
    x = state.Q()
    if x in (0.0, 1.0):
        return x
    return state.Qmass()


def _pair_keys(CP: Any, parts: list[str]) -> list[str]:
    """Bibliography keys of the binary mixing parameters, each once, in order."""
    CAS = [CP.get_fluid_param_string(part, "CAS") for part in parts]
    found: list[str] = []
    for place, first in enumerate(CAS):
        for second in CAS[place + 1:]:
            key = _pair_key(CP, first, second)
            if key not in found:
                found.append(key)
    return found


def _pair_key(CP: Any, first: str, second: str) -> str:
    # The table knows each pair in one order only.
    try:
        return CP.get_mixture_binary_pair_data(first, second, "BibTeX")
    except FLASH_ERRORS:
        return CP.get_mixture_binary_pair_data(second, first, "BibTeX")
