"""The fluids that a page names to the same fluids opened anew, from the words printed of them."""
from __future__ import annotations

import re
from collections.abc import Mapping
from typing import Any

from calcpack.errors import CalcpackError
from calcpack.fluids import FluidDefinition, open_fluid
from calcpack.formula.symbols import GREEK
from calcpack.reread.linear import BELOW, BELOW_END, MARKS
from calcpack.reread.printed_page import PrintedFluid
from calcpack.reread.reading import UnreadableError
from calcpack.reread.reckoning import places_apart, si_value
from calcpack.reread.step_reader import loose_value
from calcpack.reread.terms import LookUp
from calcpack.units import unit

_LETTERS = {letter: name for name, letter in GREEK.items()}
_CHECKED = (("Equation", "equation"), ("Range", "range_text"), ("Model", "model"))
ZERO = re.compile(r"; saturated liquid at (?P<at>.+?): h = (?P<h>.+?), s = (?P<s>.+)")


def definition_from(words: str) -> FluidDefinition:
    """The definition that the words 'As stated' of a page mean."""
    name, *parts = words.split("; ")
    given: dict[str, Any] = {"name": "" if name == "unnamed" else name}
    for part in parts:
        if match := re.fullmatch(r"(model|reference) (.+)", part):
            given[match[1]] = match[2]
        elif match := re.fullmatch(r"mass fraction (\S+)", part):
            given["mass_fraction"] = float(match[1])
        elif match := re.fullmatch(r"shares by (\w+): (.+)", part):
            shares = (one.rpartition(" ") for one in match[2].split(", "))
            given |= {"basis": match[1], "composition": tuple((gas, float(share)) for gas, _, share in shares)}
        elif match := re.fullmatch(r"heat capacity (\S+) J/\(kg·K\)", part):
            given["constant_cp"] = float(match[1])
        elif match := re.fullmatch(r"density (\S+) kg/m³", part):
            given["density"] = float(match[1])
        else:
            raise UnreadableError(f"{part!r} says nothing about a fluid that can be opened")
    return FluidDefinition(**given)


def open_printed(fluid: PrintedFluid) -> Any:
    """The fluid that a page prints, with the equation, zero and range that the page prints too.

    Raises
    ------
    UnreadableError
        Where the words open no fluid, or another one than the page describes.
    """
    try:
        opened = open_fluid(definition_from(fluid.facts.get("As stated", fluid.designation)))
    except CalcpackError as error:
        raise UnreadableError(f"fluid {fluid.number} cannot be opened by what is printed of it: {error}") from None
    for heading, name in _CHECKED:
        words = " ".join(getattr(opened, name).split())
        if fluid.facts.get(heading, words) != words:
            raise UnreadableError(f"fluid {fluid.number}: {heading.lower()} printed is not that of the fluid as stated")
    if opened.designation != fluid.designation:
        raise UnreadableError(f"fluid {fluid.number} is printed as {fluid.designation}, stated as {opened.designation}")
    _require_zero(fluid, opened)
    return opened


def _require_zero(fluid: PrintedFluid, opened: Any) -> None:
    """The zero of h and s must be that of the opened fluid, and its printed values at saturated liquid too."""
    printed, words = fluid.facts.get("Reference state", ""), " ".join(opened.reference_state.split())
    found = ZERO.fullmatch(printed.removeprefix(words))
    if not printed or printed == words:
        return
    if not printed.startswith(words) or found is None:
        raise UnreadableError(f"fluid {fluid.number}: reference state printed is not that of the fluid as stated")
    at = loose_value(found["at"]).number
    known = "p" if unit(at.unit).dimension == unit("Pa").dimension else "T"
    for letter in ("h", "s"):
        value = opened.reader(letter, (known, "x"))(si_value(at), 0.0)
        if abs(places_apart(loose_value(found[letter]).number, value)) > 1.0:
            raise UnreadableError(f"fluid {fluid.number}: {letter} printed at saturated liquid is not its own")


def property_name(look: str) -> str:
    """The property that a printed letter means: ``ρ`` is rho, a c with an italic p below is cp."""
    letter, _, below = look.partition(BELOW)
    base = MARKS.sub("", letter)
    below_text = MARKS.sub("", below.replace(BELOW_END, ""))
    if base == "c" and below != below_text + BELOW_END:
        return base + below_text
    return "_".join([_LETTERS.get(base, base), *([below_text.replace(",", "_")] if below_text else [])])


class PrintedFluids:
    """The fluids of one page, each opened when it is first asked for."""

    def __init__(self, printed: tuple[PrintedFluid, ...]) -> None:
        self.printed: Mapping[str, PrintedFluid] = {one.number: one for one in printed}
        self.opened: dict[str, Any] = {}
        self.readers: dict[tuple[str, str, tuple[str, ...]], Any] = {}

    def designation(self, number: str) -> str:
        """The designation printed for a fluid's number."""
        if number not in self.printed:
            raise UnreadableError(f"the page describes no fluid {number or 'for this step'}")
        return self.printed[number].designation

    def value(self, number: str, call: LookUp, given: tuple[float, ...]) -> float:
        """A property [SI] of the fluid F1, F2 … at known values [SI]."""
        key = (number, call.letter, tuple(letter for letter, _ in call.given))
        if key not in self.readers:
            self.designation(number)
            if number not in self.opened:
                self.opened[number] = open_printed(self.printed[number])
            names = tuple(property_name(letter) for letter in key[2])
            self.readers[key] = self.opened[number].reader(property_name(call.letter), names)
        return self.readers[key](*given)
