"""Give the enthalpy and entropy of a stream of constant heat capacity."""
from __future__ import annotations

import math

from calcpack.errors import Fault, SpecError
from calcpack.fluids import wording
from calcpack.fluids.base import Fluid

_T_ZERO = 273.15


class ConstantHeat(Fluid):
    """A stream with one stated heat capacity: h = cp (T - 273.15 K), s = cp ln(T / 273.15 K).

    Pressure has no influence; ``density`` [kg/m3], if given, is constant too.
    """

    T_min, T_max, p_max = 1.0, 5000.0, 1e9

    def __init__(self, designation: str, cp: float, density: float | None = None) -> None:
        super().__init__()
        for value, name in ((cp, "heat capacity"), (density, "density")):
            if value is not None and not 0.0 < value < math.inf:
                raise SpecError(Fault(f"the {name} of {designation!r} must be above zero",
                                      found=f"{value:.6g}"))
        self.designation = designation or "stream of constant heat capacity"
        self.model = "constant heat capacity"
        self.equation = "h = cp (T - 273.15 K), s = cp ln(T / 273.15 K); cp as stated in the inputs"
        self.reference_state = "h = 0, s = 0 at 0 °C"
        self.range_text = "as far as the stated heat capacity holds"
        self.identity = f"{self.designation}|constant cp|{cp!r}|{density!r}"
        self._cp = cp
        self._T = math.nan
        self._p: float | None = None
        self._getters = {
            "T": lambda: self._T, "h": lambda: cp * (self._T - _T_ZERO),
            "s": lambda: cp * math.log(self._T / _T_ZERO), "cp": lambda: cp, "p": self._pressure}
        if density is not None:
            self._getters |= {"rho": lambda: density, "v": lambda: 1.0 / density}
        self._constants = {"T_min": lambda: self.T_min, "T_max": lambda: self.T_max, "cp": lambda: cp}
        self._flashes = {
            ("T",): lambda T, _: self._at(T, None), ("p", "T"): lambda p, T: self._at(T, p),
            ("h",): lambda h, _: self._at(self._T_of_h(h), None),
            ("p", "h"): lambda p, h: self._at(self._T_of_h(h), p),
            ("s",): lambda s, _: self._at(self._T_of_s(s), None),
            ("p", "s"): lambda p, s: self._at(self._T_of_s(s), p)}

    def _T_of_h(self, h: float) -> float:
        return _T_ZERO + h / self._cp

    def _T_of_s(self, s: float) -> float:
        # The exponent is bounded so that nonsense ends in the range check, not in an overflow.
        return _T_ZERO * math.exp(min(max(s / self._cp, -50.0), 50.0))

    def _at(self, T: float, p: float | None) -> None:
        if not self.T_min <= T <= self.T_max or (p is not None and p <= 0.0):
            given = wording.state(("T",), T) if p is None else wording.state(("p", "T"), p, T)
            self._need_temperature(T, given)
            self._need_pressure(1.0 if p is None else p, given)
        self._T, self._p = T, p

    def _pressure(self) -> float:
        if self._p is None:
            raise wording.out_of_range(f"the pressure of {self.designation} was not given",
                                       wording.state(("T",), self._T))
        return self._p
