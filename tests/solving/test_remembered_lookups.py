"""Within one run a property asked again with the same values is not asked of the fluid; a new run asks anew."""
from __future__ import annotations

from collections.abc import Callable

from calcpack.plan.lay import lay
from calcpack.plan.plan import Plan
from calcpack.solving.program import Program


class Counting:
    """A fluid that counts how often it is asked."""

    designation = "counted"

    def __init__(self) -> None:
        self.asked = 0

    def reader(self, output: str, names: tuple[str, ...]) -> Callable[..., float]:
        def read(p: float, T: float) -> float:
            self.asked += 1
            return p * 1e-3 + T
        return read


def test_equal_lookups_of_one_run_reach_the_fluid_once_and_a_new_run_asks_again():
    fluid = Counting()
    plan = Plan({}, {"wf": fluid})
    section = plan.section("States")
    section.formula("p_1", "2 bar", "Pressure")
    section.formula("T_1", "300 K", "Temperature", "degC")
    section.property("h_1", "h(wf, p=p_1, T=T_1)", "Enthalpy")
    section.property("h_2", "h(wf, p=p_1, T=T_1)", "The same again")
    laid, faults = lay(plan, {}, "si")
    assert not faults
    program = Program(laid)
    first = program.run({})
    assert first["h_1"] == first["h_2"] == 500.0
    assert fluid.asked == 1
    program.run({})
    assert fluid.asked == 2
