"""Stirling's and Ericsson's cycle with a regenerator of given effectiveness, corner by corner."""
from __future__ import annotations

from collections.abc import Mapping

from calcpack.methods.gas_engine_parts import engine_sketch
from calcpack.methods.method import Method, Option, Role
from calcpack.plan.equipment import closed_gas as closed
from calcpack.plan.equipment import grounds
from calcpack.plan.equipment.gas import GAS_VALUES, Gas, gas_inputs
from calcpack.plan.facts import Again, Bound, Diagram, Equal, Path, StatePoint, Volume
from calcpack.plan.plan import Plan, Section

OPTIONS = (
    Option("cycle", "Which processes lie between the isotherms", {
        "stirling": "two at constant volume", "ericsson": "two at constant pressure"}),
    Option("gas", "How the gas is described", GAS_VALUES),
    Option("size", "What the engine's size is given by", {
        "specific": "no size: all results are for a kilogram of gas",
        "flow": "mass of gas and speed (Stirling), or mass flow (Ericsson)"}),
)

LABELS = {"1": "start of compression", "2": "end of compression", "3": "start of expansion",
          "4": "end of expansion"}


def lay(plan: Plan) -> None:
    """Lay the plan: corners, heats and works, regenerator, efficiency and Carnot's bound, size."""
    _inputs(plan)
    gas = gas_inputs(plan)
    closed.constants(plan.section("The gas"), gas)
    _corners(plan, gas)
    _heats(plan)
    _efficiency(plan)
    if plan.options["size"] == "flow":
        _size(plan)
    _facts(plan, gas)


def _inputs(plan: Plan) -> None:
    stirling = plan.options["cycle"] == "stirling"
    plan.input("T_h", "temperature", "Temperature of the hot isotherm", "650 degC")
    plan.input("T_c", "temperature", "Temperature of the cold isotherm", "60 degC")
    plan.input("p_1", "pressure", "Pressure before compression", "20 bar" if stirling else "1 bar", low="0 bar",
               low_open=True)
    if stirling:
        plan.input("r", "number", "Volume ratio of the compression", "2", low="1", low_open=True)
    else:
        plan.input("r_p", "number", "Pressure ratio of the compression", "4", low="1", low_open=True)
    plan.input("epsilon", "number",
               "Effectiveness of the regenerator: heat passed on over the most that could be", "0.9",
               low="0", high="1")
    if plan.options["size"] == "flow" and stirling:
        plan.input("m", "mass", "Mass of gas", "5 g", low="0 kg", low_open=True)
        plan.input("n", "frequency", "Cycles in a unit of time", "1500 1/min", low="0 1/s", low_open=True)
    elif plan.options["size"] == "flow":
        plan.input("m_dot", "mass flow", "Mass flow of gas", "1 kg/s", low="0 kg/s", low_open=True)


def _corners(plan: Plan, gas: Gas) -> None:
    section = plan.section("The four corners")
    plan.demand("T_h > T_c", "the hot isotherm is not above the cold one", "check the two temperatures")
    for number, T in (("1", "T_c"), ("2", "T_c"), ("3", "T_h"), ("4", "T_h")):
        section.formula(f"T_{number}", T, f"Temperature at corner {number}, {LABELS[number]}", "degC",
                        reference="two isotherms: the corners are at the temperatures of source and sink")
    closed.volume(section, "1")
    if plan.options["cycle"] == "stirling":
        for number, formula in (("2", "v_1 / r"), ("3", "v_2"), ("4", "v_1")):
            section.formula(f"v_{number}", formula, f"Specific volume at corner {number}", "m³/kg",
                            reference="constant volume, or definition of the compression ratio")
            closed.pressure(section, number)
    else:
        for number, formula in (("2", "p_1 * r_p"), ("3", "p_2"), ("4", "p_1")):
            section.formula(f"p_{number}", formula, f"Pressure at corner {number}", "bar",
                            reference="constant pressure, or definition of the pressure ratio")
            closed.volume(section, number)
    for number in LABELS:
        closed.entropy(section, gas, number)
    add = closed.energy if plan.options["cycle"] == "stirling" else closed.enthalpy
    for number in ("2", "3"):
        add(section, gas, number)


def _heats(plan: Plan) -> None:
    section = plan.section("Heat and work of a kilogram")
    stirling = plan.options["cycle"] == "stirling"
    ratio, letter, word = ("r", "u", "volume") if stirling else ("r_p", "h", "pressure")
    section.formula("w_12", f"-R * T_c * ln({ratio})", "Work on the cold isotherm; below zero it is drawn",
                    "kJ/kg",
                    reference="isotherm of an ideal gas; for a flow at steady state the same")
    section.formula("w_34", f"R * T_h * ln({ratio})", "Work on the hot isotherm", "kJ/kg",
                    reference="isotherm of an ideal gas; for a flow at steady state the same")
    section.formula("w_net", "w_12 + w_34", "Net work", "kJ/kg",
                    note=f"the works at constant {word} cancel" if not stirling else "no work at constant volume",
                    reference=grounds.SUM)
    section.formula("q_most", f"{letter}_3 - {letter}_2", f"Heat that the gas takes at constant {word}",
                    "kJ/kg", reference=f"first law at constant {word}")
    section.formula("q_reg", "epsilon * q_most", "Heat of it that the regenerator passes on", "kJ/kg",
                    reference="definition of the effectiveness: heat passed on over the most that could be")
    section.formula("q_add", "q_most - q_reg", f"Heat at constant {word} that must come from the source",
                    "kJ/kg", reference="energy balance of the gas between the isotherms")
    section.formula("q_in", "w_34 + q_add", "Heat taken from the source", "kJ/kg",
                    reference="on an isotherm of an ideal gas heat equals work")
    section.formula("q_out", "q_add - w_12", "Heat given to the sink", "kJ/kg",
                    note="what the regenerator does not take back is given away too",
                    reference="energy balance of the gas on the way back to corner 1")
    section.formula("q_net", "q_in - q_out", "Heat taken less heat given away", "kJ/kg",
                    note="equal to the net work", reference=grounds.FIRST_LAW_OF_CYCLE)
    plan.facts.equals.append(Equal("w_net", "q_net", "net work equals net heat", 1e-9))


def _efficiency(plan: Plan) -> None:
    section = plan.section("Efficiency and Carnot's bound")
    section.formula("eta", "w_net / q_in", "Thermal efficiency", reference=grounds.EFFICIENCY)
    section.formula("eta_C", "1 - T_c / T_h", "Carnot's efficiency between the two isotherms",
                    reference="reached with a perfect regenerator")
    section.formula("g_C", "eta / eta_C", "Share of Carnot's efficiency that is reached",
                    reference=grounds.SHARE_OF_CARNOT)
    if plan.options["cycle"] == "stirling":
        section.formula("p_m", "w_net / (v_1 - v_2)", "Mean effective pressure", "bar",
                        reference="net work over the volume swept")
    ratio = "r" if plan.options["cycle"] == "stirling" else "r_p"
    plan.facts.again.append(Again("eta", f"(T_h - T_c) / (T_h + (1 - epsilon) * q_most / (R * ln({ratio})))",
                                  "from temperatures, ratio and the heat at the regenerator"))
    plan.facts.bounds.append(Bound("eta", "eta_C", "the cycle stays below Carnot's efficiency, or reaches it"))
    plan.facts.volumes.append(Volume("whole cycle", work_out=("w_net",), heat_in=(("q_in", "T_h"),),
                                     heat_out=(("q_out", "T_c"),), scale="q_in", cycle=True))


def _size(plan: Plan) -> None:
    section = plan.section("Power")
    flow = "m_dot"
    if plan.options["cycle"] == "stirling":
        flow = section.formula("m_dot", "m * n", "Gas through the cycle in a unit of time", "kg/s",
                               reference="mass of gas times cycles in a unit of time")
    section.formula("W_dot", f"{flow} * w_net", "Power of the gas", "kW", reference=grounds.POWER_OF_FLOW)
    _heat_flows(section, flow)


def _heat_flows(section: Section, flow: str) -> None:
    section.formula("Q_dot_in", f"{flow} * q_in", "Heat flow taken from the source", "kW",
                    reference=grounds.HEAT_OF_SPECIFIC)
    section.formula("Q_dot_out", f"{flow} * q_out", "Heat flow given to the sink", "kW",
                    reference=grounds.HEAT_OF_SPECIFIC)
    section.formula("Q_dot_reg", f"{flow} * q_reg", "Heat flow through the regenerator", "kW",
                    reference=grounds.HEAT_OF_SPECIFIC)


def _facts(plan: Plan, gas: Gas) -> None:
    plan.facts.states += [StatePoint(n, label, gas.role, f"T_{n}", f"p_{n}", None, f"s_{n}", f"v_{n}")
                          for n, label in LABELS.items()]
    between = "v" if plan.options["cycle"] == "stirling" else "p"
    paths = (Path("1", "2", "T"), Path("2", "3", between), Path("3", "4", "T"), Path("4", "1", between))
    plan.facts.diagrams += [Diagram("p-v", gas.role, paths), Diagram("T-s", gas.role, paths)]
    plan.facts.sketch = engine_sketch("q_in", "q_out")


def _roles(options: Mapping[str, str]) -> tuple[Role, ...]:
    return () if options["gas"] == "cold-air" else (Role("air", "Working gas, an ideal gas", "air"),)


def _results(options: Mapping[str, str]) -> tuple[str, ...]:
    return ("eta", "w_net", "W_dot") if options["size"] == "flow" else ("eta", "w_net", "q_in")


METHOD = Method(
    name="regenerative-gas-cycle",
    title="Stirling's or Ericsson's cycle with a regenerator",
    text="A gas is compressed on a cold isotherm and expands on a hot one; between them a regenerator "
         "passes heat from the cooling gas to the gas being heated, at constant volume (Stirling) or "
         "constant pressure (Ericsson). With a perfect regenerator the efficiency is Carnot's; what "
         "the regenerator does not pass on must come from the source.",
    options=OPTIONS, roles=_roles, lay=lay,
    assumes=("ideal gas", "isothermal compression and expansion at the temperatures of sink and source",
             "no dead volume, no pressure loss"),
    leaves_out=("the nearly adiabatic cylinders of real machines, their dead volume and flow losses: measured "
                "efficiencies lie far below",),
    sketch="""
    T │  3 ───────► 4      hot isotherm, heat taken
      │   ╱        ╱
      │  ╱ 2-3    ╱ 4-1    regenerator between the two
      │ ╱        ╱
      │ 2 ◄──── 1          cold isotherm, heat given away
      └──────────────── s
""",
    results=_results)
