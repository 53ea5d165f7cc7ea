"""Give the properties of an ideal gas or gas mixture from the ideal-gas part of each component's equation."""
from __future__ import annotations

import math
from typing import Any

from calcpack.errors import Fault, SpecError, nearest
from calcpack.fluids import literature, wording
from calcpack.fluids.base import Fluid
from calcpack.fluids.library import FLASH_ERRORS, library, names, new_state
from calcpack.fluids.register import Fact, folded

T_ZERO, P_ZERO = 298.15, 101325.0
_R = 8.31446261815324           # J/(mol K), exact by the definition of the SI (2019)
_THIN = 1e-9                    # mol/m3: so thin that the residual part of the equation is nil
_P_MAX = 1e8


class IdealGas(Fluid):
    """Components in the ideal-gas state: p v = R T, cp of T alone, each at its partial pressure.

    Mole shares in ``composition``, adding up to 1. h = 0 and s = 0 for the gas
    as a whole at 25 °C and 101.325 kPa.
    """

    p_max = _P_MAX

    def __init__(self, composition: tuple[tuple[str, float], ...], designation: str,
                 facts: tuple[Fact, ...] = ()) -> None:
        super().__init__()
        self.designation, self.facts, self._CP = designation, facts, library()
        self._names = tuple(name for name, _ in composition)
        self._shares = tuple(share for _, share in composition)
        self._states: tuple[Any, ...] = tuple(new_state("HEOS", name) for name in self._names)
        self._M = sum(x * state.molar_mass() for x, state in zip(self._shares, self._states, strict=True))
        self._R = _R / self._M
        # Each equation carries the gas constant of its own time; scaled, cp - cv is exactly _R.
        self._weights = tuple((state, x * _R / state.gas_constant() / self._M)
                              for state, x in zip(self._states, self._shares, strict=True))
        self.T_min = max(state.Tmin() for state in self._states)
        self.T_max = min(state.Tmax() for state in self._states)
        self._describe()
        self._T, self._p = math.nan, math.nan
        self._at_T = math.nan
        self._raw = (0.0, 0.0, 0.0)
        self._h_zero, self._s_zero, _ = self._evaluate(T_ZERO)
        self._getters = self._state_getters()
        self._constants = {"M": lambda: self._M, "R": lambda: self._R, "T_min": lambda: self.T_min,
                           "T_max": lambda: self.T_max, "p_max": lambda: _P_MAX}
        self._flashes = {
            ("T",): lambda T, _: self._set(T, math.nan), ("p", "T"): lambda p, T: self._set(T, p),
            ("h",): lambda h, _: self._set(self._T_of_h(h), math.nan),
            ("p", "h"): lambda p, h: self._set(self._T_of_h(h), p),
            ("p", "s"): self._at_ps, ("T", "s"): self._at_Ts, ("h", "s"): self._at_hs,
            ("T", "rho"): lambda T, rho: self._set(T, rho * self._R * T),
            ("p", "rho"): lambda p, rho: self._set(p / (rho * self._R) if rho > 0 else math.nan, p)}

    def _describe(self) -> None:
        shares = ", ".join(f"{name} {x * 100:.4g}" for name, x in zip(self._names, self._shares, strict=True))
        mixture = len(self._names) > 1
        self.model = f"ideal-gas mixture, {shares} % by mole" if mixture else "ideal gas"
        sources = [f"{name}: {literature.citation(_heat_capacity_key(self._CP, name))}"
                   for name in self._names]
        self.equation = "Ideal-gas heat capacity of " + "; ".join(sources)
        self.reference_state = "h = 0, s = 0 at 25 °C and 101.325 kPa"
        self.range_text = f"T {self.T_min:.5g} to {self.T_max:.5g} K, p low enough for an ideal gas"
        self.identity = f"{self.designation}|ideal gas|" + ",".join(
            f"{name}={x!r}" for name, x in zip(self._names, self._shares, strict=True))

    def _state_getters(self) -> dict:
        def heat() -> float:
            return self._evaluate(self._T)[2]
        found = {
            "T": lambda: self._T, "p": self._pressure,
            "h": lambda: self._evaluate(self._T)[0] - self._h_zero,
            "u": lambda: self._evaluate(self._T)[0] - self._h_zero - self._R * self._T,
            "s": lambda: self._s0(self._T) - self._R * math.log(self._pressure() / P_ZERO),
            "rho": lambda: self._pressure() / (self._R * self._T),
            "v": lambda: self._R * self._T / self._pressure(),
            "cp": heat, "cv": lambda: heat() - self._R,
            "gamma": lambda: heat() / (heat() - self._R),
            "a": lambda: math.sqrt(heat() / (heat() - self._R) * self._R * self._T)}
        if len(self._names) == 1:
            found |= {"mu": lambda: self._transport("viscosity", "mu"),
                      "lambda": lambda: self._transport("conductivity", "lambda")}
        return found

    def _evaluate(self, T: float) -> tuple[float, float, float]:
        """h, s at p_zero [J/kg, J/(kg K)], cp in the library's zero; kept for the last T.

        The entropy of mixing is a constant of the composition and drops out
        with the zero of s.
        """
        if self._at_T == T:
            return self._raw
        h = s = cp = 0.0
        for state, weight in self._weights:
            state.update(self._CP.DmolarT_INPUTS, _THIN, T)
            h += weight * state.hmolar()
            s += weight * (state.smolar() - state.gas_constant() * math.log(P_ZERO / (_THIN * _R * T)))
            cp += weight * state.cpmolar()
        self._at_T, self._raw = T, (h, s, cp)
        return self._raw

    def _s0(self, T: float) -> float:
        return self._evaluate(T)[1] - self._s_zero

    def _set(self, T: float, p: float) -> None:
        if not self.T_min <= T <= self.T_max or not (p != p or 0.0 < p <= _P_MAX):
            given = wording.state(("T",), T) if p != p else wording.state(("p", "T"), p, T)
            if not math.isfinite(T):
                raise wording.out_of_range(f"no state of {self.designation} for these values", given)
            self._need_temperature(T, given)
            self._need_pressure(p, given)
        self._T, self._p = T, p

    def _pressure(self) -> float:
        if self._p != self._p:
            raise wording.out_of_range(f"the pressure of {self.designation} was not given",
                                       wording.state(("T",), self._T), hint="give p with T, or p with h")
        return self._p

    def _T_of_h(self, h: float) -> float:
        return self._invert(h + self._h_zero, 0, "h", h)

    def _at_ps(self, p: float, s: float) -> None:
        self._need_pressure(p, wording.state(("p", "s"), p, s))
        wanted = s + self._R * math.log(p / P_ZERO) + self._s_zero
        self._set(self._invert(wanted, 1, "s", s), p)

    def _at_Ts(self, T: float, s: float) -> None:
        self._set(T, math.nan)
        self._set(T, P_ZERO * math.exp(min((self._s0(T) - s) / self._R, 100.0)))

    def _at_hs(self, h: float, s: float) -> None:
        self._at_Ts(self._T_of_h(h), s)

    def _invert(self, wanted: float, which: int, name: str, shown: float) -> float:
        """T at which h or s0 (rising with T) is ``wanted``, by Newton kept inside a bracket."""
        low, high = self.T_min, self.T_max
        for bound, outside in ((low, wanted < self._evaluate(low)[which]),
                               (high, wanted > self._evaluate(high)[which])):
            if outside:
                raise wording.out_of_range(
                    f"no temperature of {self.designation} inside its range has this {name}",
                    wording.quantity(name, shown), self.range_text,
                    hint=f"the limit passed is {wording.temperature(bound)}")
        T = self._T if low < self._T < high else 0.5 * (low + high)
        for _ in range(100):
            values = self._evaluate(T)
            miss = values[which] - wanted
            low, high = (low, T) if miss > 0.0 else (T, high)
            step = miss / (values[2] if which == 0 else values[2] / T)
            nearer = T - step if low <= T - step <= high else 0.5 * (low + high)
            if abs(nearer - T) <= 1e-13 * T:
                return nearer
            T = nearer
        return T

    def _transport(self, ask: str, name: str) -> float:
        state = self._states[0]
        self._at_T = math.nan
        try:
            state.update(self._CP.DmolarT_INPUTS, _THIN, self._T)
            return getattr(state, ask)()
        except FLASH_ERRORS as error:
            raise wording.out_of_range(f"no {wording.QUANTITIES[name]} of {self.designation} at this state",
                                       wording.state(("T",), self._T), detail=str(error)) from error


def mole_shares(composition: tuple[tuple[str, float], ...], basis: str) -> tuple[tuple[str, float], ...]:
    """Library names with mole shares, from shares by mole or mass that add up to 1 within 1e-3.

    Raises SpecError for an unknown component, a share that is not above zero,
    a sum that is off, a component given twice, or an unknown basis.
    """
    if basis not in ("mole", "mass"):
        raise SpecError(Fault("a composition is by mole or by mass", found=basis, expected="mole or mass",
                              hint=nearest(basis, ("mole", "mass"))))
    found: dict[str, float] = {}
    for name, share in composition:
        component = _component(name)
        if component in found or not 0.0 < share <= 1.0:
            what = "is given twice" if component in found else "must have a share above 0, up to 1"
            raise SpecError(Fault(f"component {name!r} {what}", found=f"{share:.6g}"))
        found[component] = share
    total = math.fsum(found.values())
    if abs(total - 1.0) > 1e-3:
        raise SpecError(Fault("the shares of a composition must add up to 1", found=f"{total:.6g}",
                              expected="1 within 0.001"))
    if basis == "mass":
        found = {name: share / new_state("HEOS", name).molar_mass() for name, share in found.items()}
        total = math.fsum(found.values())
    return tuple((name, share / total) for name, share in found.items())


def _component(name: str) -> str:
    known = names()
    if folded(name) not in known:
        raise SpecError(Fault(f"unknown component {name!r} of a gas mixture", found=name,
                              expected="a gas such as N2, O2, CO2, H2O, Ar",
                              hint=nearest(name, ("N2", "O2", "CO2", "H2O", "Ar", "CO", "SO2", "CH4", "H2",
                                                  "nitrogen", "oxygen", "argon", "water", "methane"))))
    return known[folded(name)]


def _heat_capacity_key(CP: Any, name: str) -> str:
    return CP.get_BibTeXKey(name, "CP0") or CP.get_BibTeXKey(name, "EOS")
