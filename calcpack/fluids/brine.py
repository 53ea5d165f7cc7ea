"""Give the properties of a brine or another incompressible liquid by the library's correlations."""
from __future__ import annotations

import math
from typing import Any

from calcpack.errors import Fault, NoAnswerError, SpecError
from calcpack.fluids import literature, wording
from calcpack.fluids.base import Fluid
from calcpack.fluids.library import FLASH_ERRORS, library, liquids, new_state

# Plain names of the usual solutes in water, by the library's key.
SOLUTIONS = {
    "ethylene glycol": "MEG", "propylene glycol": "MPG", "glycerol": "MGL", "ethanol": "MEA",
    "methanol": "MMA", "ammonia": "MAM", "calcium chloride": "MCA", "sodium chloride": "MNA",
    "magnesium chloride": "MMG", "lithium chloride": "MLI", "potassium carbonate": "MKC",
    "potassium acetate": "MKA", "potassium formate": "MKF", "lithium bromide": "LiBr",
    "sea water": "MITSW",
}
# The library states no upper pressure for its liquids; properties hardly depend on it.
_P_MAX = 1e7
_P_ALONE = 101325.0


class Brine(Fluid):
    """An incompressible liquid, pure or a solution of ``mass_fraction`` (0 to 1) in water.

    With T, h or s given alone the pressure is 101.325 kPa. ``T_freeze`` [K] is
    the freezing temperature of a solution, where the library has one; the range
    begins there.
    """

    p_max = _P_MAX

    def __init__(self, key: str, designation: str, mass_fraction: float | None = None) -> None:
        super().__init__()
        self.designation, self._key, self._CP = designation, key, library()
        self._state: Any = new_state("INCOMP", key)
        self._set_fraction(mass_fraction)
        self._read_limits()
        percent = "" if mass_fraction is None else f", {mass_fraction * 100:.4g} % by mass in water"
        self.model = f"incompressible liquid{percent} (library key {key})"
        self.equation = _source(key)
        self.reference_state = "the correlation's own zero of h and s, as in the property library"
        self.range_text = f"T {self.T_min:.2f} to {self.T_max:.2f} K (liquid), p up to {_P_MAX / 1e6:.0f} MPa"
        self.identity = f"{designation}|incompressible|{key}|{mass_fraction!r}"
        self._getters = self._state_getters()
        CP = self._CP
        self._flashes = {
            ("T",): lambda T, _: self._at_pT(_P_ALONE, T), ("p", "T"): self._at_pT,
            ("h",): lambda h, _: self._at(CP.HmassP_INPUTS, h, _P_ALONE, "h"),
            ("p", "h"): lambda p, h: self._at(CP.HmassP_INPUTS, h, p, "h"),
            ("s",): lambda s, _: self._at(CP.PSmass_INPUTS, _P_ALONE, s, "s"),
            ("p", "s"): lambda p, s: self._at(CP.PSmass_INPUTS, p, s, "s")}

    def _set_fraction(self, fraction: float | None) -> None:
        is_solution = self._key in liquids()[1]
        if is_solution != (fraction is not None):
            need = "needs the mass fraction of its solute" if is_solution else "takes no mass fraction"
            raise SpecError(Fault(f"{self.designation} {need}", hint="mass_fraction: 0.30"
                                  if is_solution else "leave mass_fraction out"))
        if fraction is None:
            return
        low, high = (self._state.keyed_output(key) for key in
                     (self._CP.ifraction_min, self._CP.ifraction_max))
        if not low <= fraction <= high:
            raise SpecError(Fault(f"mass fraction {fraction:.4g} of {self.designation} is outside its "
                                  "correlation", found=f"{fraction:.4g}",
                                  expected=f"{low:.4g} to {high:.4g}"))
        try:
            self._state.set_mass_fractions([fraction])
        except FLASH_ERRORS as error:
            raise SpecError(Fault(f"the composition of {self.designation} is by volume in its correlation",
                                  found=f"mass fraction {fraction:.4g}", detail=str(error),
                                  hint="choose a solution given by mass, such as ethylene glycol")) from error

    def _read_limits(self) -> None:
        state, CP = self._state, self._CP
        self.T_min, self.T_max = state.Tmin(), state.Tmax()
        self._constants = {"T_min": lambda: self.T_min, "T_max": lambda: self.T_max,
                           "p_max": lambda: _P_MAX}
        if self._key not in liquids()[1]:
            return
        try:
            freezing = state.keyed_output(CP.iT_freeze)
        except FLASH_ERRORS:
            return      # this correlation has no freezing curve
        if math.isfinite(freezing) and freezing > 1.0:
            self.T_min = max(self.T_min, freezing)
            self._constants["T_freeze"] = lambda: freezing

    def _state_getters(self) -> dict:
        state = self._state
        return {"T": state.T, "p": state.p, "h": state.hmass, "s": state.smass, "u": state.umass,
                "rho": state.rhomass, "v": lambda: 1.0 / state.rhomass(), "cp": state.cpmass,
                "mu": lambda: self._transport(state.viscosity, "mu"),
                "lambda": lambda: self._transport(state.conductivity, "lambda")}

    def _transport(self, get: Any, name: str) -> float:
        try:
            value = get()
        except FLASH_ERRORS as error:
            raise wording.out_of_range(f"no {wording.QUANTITIES[name]} of {self.designation} at this state",
                                       wording.state(("T",), self._state.T()), self.range_text,
                                       detail=str(error)) from error
        if not (math.isfinite(value) and value > 0.0):
            raise NoAnswerError(Fault(f"there is no equation for the {wording.QUANTITIES[name]} of "
                                      f"{self.designation}", found=f"{value:.6g}"))
        return value

    def _at_pT(self, p: float, T: float) -> None:
        given = ("p", "T"), p, T
        if not (self.T_min <= T <= self.T_max and 0.0 < p <= _P_MAX):
            self._need_liquid(T, wording.state(*given))
            self._need_pressure(p, wording.state(*given))
        self._update(self._CP.PT_INPUTS, p, T, given)

    def _at(self, inputs: Any, first: float, second: float, name: str) -> None:
        p, value = (second, first) if name == "h" else (first, second)
        given = ("p", name), p, value
        if not 0.0 < p <= _P_MAX:
            self._need_pressure(p, wording.state(*given))
        self._update(inputs, first, second, given)
        if not self.T_min <= self._state.T() <= self.T_max:
            self._need_liquid(self._state.T(), wording.state(*given))

    def _update(self, inputs: Any, first: float, second: float, given: tuple) -> None:
        try:
            self._state.update(inputs, first, second)
        except FLASH_ERRORS as error:
            raise wording.out_of_range(f"no liquid state of {self.designation} was found for these values",
                                       wording.state(*given), self.range_text, detail=str(error)) from error

    def _need_liquid(self, T: float, given: str) -> None:
        if "T_freeze" in self._constants and self.T_min > T:
            raise wording.out_of_range(
                f"temperature {wording.temperature(T)} is below the freezing temperature "
                f"{wording.temperature(self.T_min)} of {self.designation}", given, self.range_text,
                "a higher mass fraction freezes later, up to the eutectic one")
        self._need_temperature(T, given)


def _source(key: str) -> str:
    text = f"Correlations for incompressible liquids of the property library CoolProp, key {key}"
    if key == "LiBr" or not key.startswith("M") or key == "MITSW":
        return text
    return f"{text}, after {literature.citation('Melinder-BOOK-2010')}"
