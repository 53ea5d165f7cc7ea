"""The parts of a reversed gas cycle's plan: states, work and heats, bound, balances, sketch."""
from __future__ import annotations

from dataclasses import dataclass

from calcpack.plan.equipment import grounds
from calcpack.plan.equipment.gas import Gas, GasState, at_enthalpy, caloric, compress, expand
from calcpack.plan.facts import Again, Bound, Box, Diagram, Equal, Ladder, Link, Path, Rung, Sketch, Volume
from calcpack.plan.plan import Plan


@dataclass(frozen=True, slots=True)
class Loop:
    """The states of the loop; without a regenerator ``before`` is ``cooled`` and ``left`` is ``inlet``."""

    inlet: GasState
    compressed: GasState
    cooled: GasState
    before: GasState
    expanded: GasState
    left: GasState

    @property
    def regenerates(self) -> bool:
        return self.before is not self.cooled

    def states(self) -> tuple[GasState, ...]:
        ends = (self.before, self.expanded, self.left) if self.regenerates else (self.expanded,)
        return (self.inlet, self.compressed, self.cooled, *ends)


def loop(plan: Plan, gas: Gas) -> Loop:
    """The states that the options ask for."""
    def at(number: str, label: str, p: str) -> GasState:
        return GasState(number, label, gas, p, f"T_{number}")
    inlet, compressed = at("1", "at the compressor inlet", "p_1"), at("2", "at the compressor outlet", "p_2")
    cooled = at("3", "of the gas leaving the hot side", "p_2")
    if plan.options["regenerator"] == "none":
        return Loop(inlet, compressed, cooled, cooled, at("4", "at the turbine outlet", "p_1"), inlet)
    return Loop(inlet, compressed, cooled, at("4", "at the turbine inlet", "p_2"),
                at("5", "at the turbine outlet", "p_1"),
                at("6", "of the gas leaving the cold side", "p_1"))


def states(plan: Plan, it: Loop) -> None:
    """States around the loop."""
    section = plan.section("States of the gas")
    if plan.options["pressures"] == "ratio":
        section.formula("p_2", "r_p * p_1", "High pressure", "bar", reference=grounds.HIGH_PRESSURE)
    else:
        plan.demand("p_2 > p_1", "the high pressure is not above the low pressure", "check the two pressures")
        section.formula("r_p", "p_2 / p_1", "Pressure ratio", reference=grounds.PRESSURE_RATIO)
    plan.demand(f"{it.cooled.T} > {it.left.T}", "the hot side is not warmer than the cold side",
                f"no machine is called for: check {it.cooled.T} and {it.left.T}")
    caloric(section, it.left)
    caloric(section, it.cooled)
    if it.regenerates:
        section = plan.section("Regenerator")
        section.formula("q_reg", f"epsilon * ({it.cooled.h} - {it.left.h})",
                        "Heat passed on by the regenerator", "kJ/kg",
                        reference="effectiveness: heat passed on over the most that could be")
        section.formula(it.before.h, f"{it.cooled.h} - q_reg", f"Specific enthalpy {it.before.label}", "kJ/kg",
                        reference="energy balance of the regenerator")
        at_enthalpy(section, it.before)
        section.formula(it.inlet.h, f"{it.left.h} + q_reg", f"Specific enthalpy {it.inlet.label}", "kJ/kg",
                        reference="energy balance of the regenerator")
        at_enthalpy(section, it.inlet)
    machines = plan.section("Compressor and turbine")
    compress(machines, it.inlet, it.compressed, "w_c", "compressor")
    expand(machines, it.before, it.expanded, "w_t", "turbine")
    plan.demand(f"{it.compressed.T} > {it.cooled.T}", "the compressed gas is not warmer than the hot side",
                "raise the pressure ratio")
    plan.demand(f"{it.expanded.T} < {it.left.T}", "the expanded gas is not colder than the cold side",
                "raise the pressure ratio, or the efficiency of the turbine")


def work(plan: Plan, it: Loop) -> None:
    """Specific work and heats, coefficient of performance, the reversible bound."""
    section = plan.section("Specific work, heats and coefficient of performance")
    section.formula("w_net", "w_c - w_t", "Specific work drawn", "kJ/kg",
                    reference="derived: work of the compressor less that of the turbine")
    section.formula("q_c", f"{it.left.h} - {it.expanded.h}", "Heat taken at the cold side", "kJ/kg",
                    reference=grounds.HEAT_OF_KILOGRAM)
    section.formula("q_h", f"{it.compressed.h} - {it.cooled.h}", "Heat given at the hot side", "kJ/kg",
                    reference=grounds.HEAT_OF_KILOGRAM)
    section.formula("w_bal", "q_h - q_c", "Specific work from the heats", "kJ/kg",
                    note="equal to that of the machines", reference=grounds.FIRST_LAW_OF_CYCLE)
    hot, cold = it.cooled.T, it.left.T
    if plan.options["duty"] == "refrigerator":
        section.formula("COP", "q_c / w_net", "Coefficient of performance: cooling over work at the shaft",
                        reference=grounds.COP)
        section.formula("COP_rev", f"{cold} / ({hot} - {cold})",
                        "The same of a reversible machine between the two sides",
                        reference="Carnot; the sides at the temperatures at which the gas leaves them")
    else:
        section.formula("COP", "q_h / w_net", "Coefficient of performance: heat given over work at the shaft",
                        reference=grounds.COP)
        section.formula("COP_rev", f"{hot} / ({hot} - {cold})",
                        "The same of a reversible machine between the two sides",
                        reference="Carnot; the sides at the temperatures at which the gas leaves them")
    section.formula("g_rev", "COP / COP_rev", "Share of the reversible machine's figure that is reached",
                    reference=grounds.SHARE_OF_BOUND)
    section.formula("r_w", "w_t / w_c", "Share of the compressor's work that the turbine gives back",
                    reference="derived: work of the turbine over that of the compressor")
    plan.facts.equals.append(Equal("w_net", "w_bal", "work by the machines and by the heats", 1e-9))
    plan.facts.bounds.append(Bound("COP", "COP_rev", "the machine does no better than the reversible one"))


def heat_flows(plan: Plan, it: Loop) -> None:
    """The regenerator's heat flow, and the figure with the drive's loss."""
    section = plan.section("Whole machine")
    if it.regenerates:
        section.formula("Q_dot_reg", "m_dot * q_reg", "Heat passed on by the regenerator", "kW",
                        reference=grounds.HEAT_OF_SPECIFIC)
    useful = "Q_dot_c" if plan.options["duty"] == "refrigerator" else "Q_dot_h"
    section.formula("COP_el", f"{useful} / W_dot_el", "Coefficient of performance on the electrical power",
                    reference=grounds.COP)
    plan.facts.again.append(Again("COP_el", "COP * eta_dr", "from the figure at the shaft"))


def facts(plan: Plan, it: Loop) -> None:
    """States, balances, ladder, diagrams and sketch."""
    plan.facts.states += [one.point for one in it.states()]
    hot, cold = it.cooled.T, it.left.T
    plan.facts.volumes += [
        Volume("compressor", (it.inlet.flow,), (it.compressed.flow,), work_in=("W_dot_c",), scale="W_dot_c"),
        Volume("hot-side exchanger", (it.compressed.flow,), (it.cooled.flow,), heat_out=(("Q_dot_h", hot),),
               scale="Q_dot_h"),
        Volume("turbine", (it.before.flow,), (it.expanded.flow,), work_out=("W_dot_t",), scale="W_dot_t"),
        Volume("cold-side exchanger", (it.expanded.flow,), (it.left.flow,), heat_in=(("Q_dot_c", cold),),
               scale="Q_dot_c"),
        Volume("whole machine", work_in=("W_dot",), heat_in=(("Q_dot_c", cold),), heat_out=(("Q_dot_h", hot),),
               scale="Q_dot_h", cycle=True)]
    if it.regenerates:
        plan.facts.volumes.insert(-1, Volume("regenerator", (it.cooled.flow, it.left.flow),
                                             (it.before.flow, it.inlet.flow), scale="Q_dot_reg"))
    plan.facts.ladder = _ladder(plan, hot, cold)
    plan.facts.diagrams.append(Diagram("T-s", it.inlet.gas.role, _paths(it)))
    plan.facts.roles.update({"low pressure": "p_1", "high pressure": "p_2", "hottest": it.compressed.T,
                             "pressure ratio": "r_p"})
    plan.facts.sketch = _sketch(it)


def _ladder(plan: Plan, hot: str, cold: str) -> Ladder:
    """The power of a reversible machine for the same duty, up to the electrical power."""
    if plan.options["duty"] == "refrigerator":
        start, rung = "Q_dot_c / COP_rev", Rung(
            "more heat given at the hot side than by the reversible machine",
            f"(Q_dot_h - Q_dot_c * {hot} / {cold}) * (1 - T_dead / {hot})", either=True)
    else:
        start, rung = "Q_dot_h / COP_rev", Rung(
            "less heat taken at the cold side than by the reversible machine",
            f"(Q_dot_h * {cold} / {hot} - Q_dot_c) * (1 - T_dead / {cold})", either=True)
    return Ladder("From the reversible power to the power drawn", start,
                  "Reversible power for the same duty between the two sides", "W_dot_el",
                  "Electrical power drawn",
                  before=(rung,), after=(Rung("motor and drive", "W_dot_el - W_dot"),), upward=True)


def _paths(it: Loop) -> tuple[Path, ...]:
    round_trip = [(it.inlet, it.compressed, "straight"), (it.compressed, it.cooled, "p")]
    if it.regenerates:
        round_trip.append((it.cooled, it.before, "p"))
    round_trip += [(it.before, it.expanded, "straight"), (it.expanded, it.left, "p")]
    if it.regenerates:
        round_trip.append((it.left, it.inlet, "p"))
    return tuple(Path(a.number, b.number, along) for a, b, along in round_trip)


def _sketch(it: Loop) -> Sketch:
    boxes = [Box("Hot-side exchanger", "exchanger", 1, 0), Box("Turbine", "turbine", 0, 1),
             Box("Compressor", "compressor", 2, 1), Box("Motor", "motor", 3, 1),
             Box("Cold-side exchanger", "exchanger", 1, 3 if it.regenerates else 2)]
    links = [Link("Compressor", "Hot-side exchanger", "2"),
             Link("Turbine", "Cold-side exchanger", it.expanded.number),
             Link("Motor", "Compressor", "", "power")]
    if it.regenerates:
        boxes.append(Box("Regenerator", "recuperator", 1, 2))
        links += [Link("Hot-side exchanger", "Regenerator", "3"), Link("Regenerator", "Turbine", "4"),
                  Link("Cold-side exchanger", "Regenerator", "6"), Link("Regenerator", "Compressor", "1")]
    else:
        links += [Link("Hot-side exchanger", "Turbine", "3"), Link("Cold-side exchanger", "Compressor", "1")]
    return Sketch(tuple(boxes), tuple(links))
