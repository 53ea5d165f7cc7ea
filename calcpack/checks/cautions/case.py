"""A solution as the cautions see it: the working fluid, its states, the streams, what plays which part."""
from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

from calcpack.checks.cautions.worked import plain
from calcpack.errors import CalcpackError
from calcpack.fluids.gas import IdealGas
from calcpack.fluids.register import Entry, Fact, fact, find
from calcpack.plan.facts import StatePoint, StreamLine
from calcpack.solving.solution import Solution
from calcpack.spec.safety import BY_NAME

OF_CIRCUIT = frozenset({"charge", "concentration"})
"""Safety quantities that each circuit has for itself; those of the role ``wf_high`` end in ``_high``."""


@dataclass(frozen=True, slots=True)
class Case:
    """Read-only questions to one solution; values are SI floats, None where the sheet has none.

    ``role`` is that of the working fluid; a cascade has a second one.
    """

    solution: Solution
    role: str = "wf"

    @property
    def working(self) -> Any | None:
        """The working fluid if it evaporates and condenses, else None: a textbook gas has no vessels to guard."""
        fluid = self.solution.plan.fluids.get(self.role)
        return fluid if fluid is not None and ("p", "x") in fluid.pairs and self.points else None

    @property
    def points(self) -> list[StatePoint]:
        """The numbered states of the working fluid."""
        return [point for point in self.solution.plan.facts.states if point.fluid == self.role]

    @property
    def other_circuits(self) -> list[str]:
        """The roles of working fluids beside the first: those with numbered states of their own that condense."""
        roles = dict.fromkeys(point.fluid for point in self.solution.plan.facts.states if point.fluid != "wf")
        first = Case(self.solution).working is not None
        return [role for role in roles if first and Case(self.solution, role).working is not None]

    @property
    def streams(self) -> list[StreamLine]:
        """The secondary streams."""
        return self.solution.plan.facts.streams

    @property
    def registered(self) -> Entry | None:
        """The working fluid's entry in the register."""
        return find(self.working.designation) if self.working is not None else None

    def is_fluid(self, designation: str) -> bool:
        """Whether the working fluid is the register's ``designation``, under whatever name it was opened."""
        entry = self.registered
        return entry is not None and entry.designation == designation

    def part(self, name: str) -> float | None:
        """The value of the symbol that plays a part, such as 'discharge'."""
        return self.value(self.solution.plan.facts.roles.get(name))

    def point(self, name: str) -> StatePoint | None:
        """The state that plays a part, such as 'expander outlet'."""
        number = self.solution.plan.facts.roles.get(name)
        return next((point for point in self.points if point.number == number), None)

    def value(self, symbol: str | None) -> float | None:
        """The value of a symbol, None where the sheet has none."""
        return self.solution.value(symbol) if symbol is not None and self.solution.has(symbol) else None

    def fluid_of(self, stream: StreamLine) -> Any:
        """The fluid of a stream."""
        return self.solution.plan.fluids[stream.role]

    @staticmethod
    def is_gas(fluid: Any) -> bool:
        """Whether a fluid is taken as an ideal gas, one component or a mixture."""
        return isinstance(fluid, IdealGas)

    def of_points(self, quantity: str) -> list[float]:
        """T or p of all states of the working fluid."""
        found = (self.value(getattr(point, quantity)) for point in self.points)
        return [value for value in found if value is not None]

    def of_streams(self, *quantities: str) -> Iterator[float]:
        """Values of the streams' ends, such as T_in and T_out."""
        for stream in self.streams:
            for quantity in quantities:
                value = self.value(getattr(stream, quantity))
                if value is not None:
                    yield value

    def given(self, name: str) -> float | None:
        """A safety quantity of the spec [SI], None where it is not given."""
        key = self._key(name)
        text = self.solution.spec.case.safety.values.get(key)
        return None if text is None else BY_NAME[key].value(text, self.solution.p_atm)

    def _key(self, name: str) -> str:
        """What the spec calls a safety quantity of this circuit."""
        return name + self.role.removeprefix("wf") if name in OF_CIRCUIT else name

    def missing(self, *names: str) -> str:
        """Which of these safety quantities are not given, in words; empty where all are."""
        gone = [self._key(name) for name in names if self.given(name) is None]
        return f"not given under case.safety: {', '.join(gone)}" if gone else ""

    @property
    def room_level(self) -> str:
        """Where the room lies: 'above-ground', 'below-ground' or 'lowest-basement'."""
        return self.solution.spec.case.safety.room_level or "above-ground"

    def gauge_bar(self, p: float) -> float:
        """An absolute pressure [Pa] as bar above the sheet's atmosphere, to the digits that a working prints."""
        return float(plain((p - self.solution.p_atm) / 1e5))

    def litres(self, name: str) -> float | None:
        """A volume among the safety quantities in litres, to the digits that a working prints."""
        V = self.given(name)
        return None if V is None else float(plain(1000.0 * V))

    def number(self, quantity: str) -> float | None:
        """The number that the register gives for a quantity of the working fluid."""
        found = self.fact(quantity)
        return None if found is None else found.number

    @property
    def molar_mass(self) -> float | None:
        """Of the working fluid [g/mol]."""
        M = self.constant("M")
        return None if M is None else 1000.0 * M

    @property
    def compresses(self) -> bool:
        """Whether the sheet is of a machine with a compressor: a heat pump or a refrigerating machine."""
        return self.working is not None and self.part("discharge") is not None

    def constant(self, name: str) -> float | None:
        """A constant of the working fluid, such as T_crit; None where its model has none."""
        fluid = self.working
        return fluid.reader(name, ())() if fluid is not None and name in fluid.constants else None

    def fact(self, quantity: str) -> Fact | None:
        """What the register says of the working fluid."""
        return fact(self.working, quantity) if self.working is not None else None

    def bubble_pressure(self, T: float) -> float | None:
        """The working fluid's bubble pressure at T; None above its critical point or outside its equation."""
        try:
            return self.working.reader("p", ("T", "x"))(T, 0.0)
        except CalcpackError:
            return None

    def bubble_temperature(self, p: float) -> float | None:
        """The working fluid's bubble temperature at p; None above its critical point or outside its equation."""
        try:
            return self.working.reader("T", ("p", "x"))(p, 0.0)
        except CalcpackError:
            return None

    def saturated(self, output: str, T: float, x: float) -> float | None:
        """A property of the saturated working fluid; None where there is none."""
        try:
            return self.working.reader(output, ("T", "x"))(T, x)
        except CalcpackError:
            return None

    def is_water(self, stream: StreamLine) -> bool:
        """Whether a secondary stream is plain water."""
        known = find(self.fluid_of(stream).designation)
        return known is not None and known.designation == "R-718"

    def vapour_share(self, point: StatePoint) -> float | None:
        """The enthalpy-based vapour fraction of a state; None above the critical pressure."""
        p, h = self.value(point.p), self.value(point.h)
        if p is None or h is None:
            return None
        try:
            return self.working.reader("x_eq", ("p", "h"))(p, h)
        except CalcpackError:
            return None
