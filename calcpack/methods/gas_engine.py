"""Air-standard cycles of a reciprocating engine: Otto, Diesel, dual and Atkinson, corner by corner."""
from __future__ import annotations

from collections.abc import Mapping

from calcpack.errors import Fault, SpecError
from calcpack.methods import gas_engine_parts as parts
from calcpack.methods.gas_engine_parts import CYCLES, Cycle
from calcpack.methods.method import Method, Option, Role
from calcpack.plan.equipment import closed_gas as closed
from calcpack.plan.equipment import grounds
from calcpack.plan.equipment.gas import GAS_VALUES, gas_inputs
from calcpack.plan.plan import Plan

OPTIONS = (
    Option("cycle", "Which processes the cycle has", {
        "diesel": "heat at constant pressure, given away at constant volume",
        "otto": "heat at constant volume, given away at constant volume",
        "dual": "heat at constant volume, then at constant pressure, given away at constant volume",
        "atkinson": "heat at constant volume, expansion down to the first pressure, given away at that pressure"}),
    Option("gas", "How the gas is described", GAS_VALUES),
    Option("heat", "How the heat taken is given", {
        "temperature": "the highest temperature is an input",
        "heat": "the heat a kilogram is an input",
        "cut-off": "the cut-off ratio is an input; Diesel and dual only"}),
    Option("size", "What the engine's size is given by", {
        "specific": "no size: all results are for a kilogram of gas",
        "cylinder": "the volume of gas before compression, for the work of one cycle",
        "two-stroke": "swept volume and speed, a cycle every revolution",
        "four-stroke": "swept volume and speed, a cycle every other revolution"}),
)


def lay(plan: Plan) -> None:
    """Lay the plan: corners, heats and works, efficiency by two ways, Carnot's bound, size."""
    cycle = CYCLES[plan.options["cycle"]]
    if plan.options["heat"] == "cut-off" and not cycle.cut_off:
        raise SpecError(Fault("option heat: cut-off needs heat at constant pressure",
                              hint="set cycle to diesel or dual, or heat to temperature or heat"))
    _inputs(plan, cycle)
    gas = gas_inputs(plan)
    closed.constants(plan.section("The gas"), gas)
    parts.corners(plan, gas, cycle)
    parts.processes(plan, cycle)
    parts.efficiency(plan, gas, cycle)
    parts.bound(plan, cycle)
    _size(plan)
    parts.facts(plan, gas, cycle)


def _inputs(plan: Plan, cycle: Cycle) -> None:
    plan.input("p_1", "pressure", "Pressure before compression", "1.0 bar", low="0 bar", low_open=True)
    plan.input("T_1", "temperature", "Temperature before compression", "25 degC")
    plan.input("r", "number", "Compression ratio", "17" if cycle.cut_off else "10", low="1", low_open=True,
               high="40")
    if cycle.steps_up:
        plan.input("r_h", "number", "Pressure ratio of the heat at constant volume", "1.4", low="1",
                   low_open=True)
    match plan.options["heat"]:
        case "temperature":
            plan.input(f"T_{cycle.hottest}", "temperature", "Highest temperature", "1500 degC")
        case "heat":
            plan.input("q_in", "specific energy", "Heat taken by a kilogram of gas", "900 kJ/kg", low="0 kJ/kg",
                       low_open=True)
        case _:
            plan.input("r_c", "number", "Cut-off ratio: volume after the heat at constant pressure over before",
                       "1.5" if cycle.steps_up else "2",
                       low="1", low_open=True)
    _size_inputs(plan)


def _size_inputs(plan: Plan) -> None:
    positive = {"low_open": True}
    if plan.options["size"] == "cylinder":
        plan.input("V_1", "volume", "Volume of gas before compression", "0.5 L", low="0 L", **positive)
    elif plan.options["size"] != "specific":
        plan.input("V_d", "volume", "Swept volume of all cylinders", "2.0 L", low="0 L", **positive)
        plan.input("n", "frequency", "Speed of the crankshaft", "3000 1/min", low="0 1/s", **positive)


def _size(plan: Plan) -> None:
    """Work of one cycle, or power, from the size given."""
    size = plan.options["size"]
    if size == "specific":
        return
    if size == "cylinder":
        section = plan.section("Work of one cycle")
        section.formula("m", "V_1 / v_1", "Mass of gas", "kg",
                        reference="definition of the specific volume: volume over mass")
        section.formula("W_net", "m * w_net", "Net work of one cycle", "kJ", reference="mass times work of a kilogram")
        section.formula("Q_in", "m * q_in", "Heat taken in one cycle", "kJ", reference="mass times heat of a kilogram")
        return
    section = plan.section("Power")
    section.formula("f_c", "n" if size == "two-stroke" else "n / 2", "Cycles in a unit of time", "1/s",
                    reference=f"{size} engine")
    section.formula("W_dot", "p_m * V_d * f_c", "Power of the gas on the pistons", "kW",
                    reference="mean effective pressure times swept volume, each cycle")
    section.formula("m_dot", "W_dot / w_net", "Flow of gas through the cycle", "kg/s", reference=grounds.FLOW_FOR_WORK)
    section.formula("Q_dot_in", "m_dot * q_in", "Heat flow taken", "kW", reference=grounds.HEAT_OF_SPECIFIC)


def _roles(options: Mapping[str, str]) -> tuple[Role, ...]:
    return () if options["gas"] == "cold-air" else (Role("air", "Gas in the cylinder, an ideal gas", "air"),)


def _results(options: Mapping[str, str]) -> tuple[str, ...]:
    more = {"specific": (), "cylinder": ("W_net",)}.get(options["size"], ("W_dot",))
    return ("eta", "w_net", "p_m", *more)


METHOD = Method(
    name="gas-engine",
    title="Reciprocating engine, air-standard cycle",
    text="A mass of gas in a cylinder is compressed, takes heat, expands and gives heat away. "
         "Compression and expansion are reversible adiabats; heat is taken at constant volume, at "
         "constant pressure, or at one after the other. Work and efficiency are found process by "
         "process, and the efficiency again from the entropic mean temperatures.",
    options=OPTIONS, roles=_roles, lay=lay,
    assumes=("ideal gas in a closed system", "compression and expansion reversible and adiabatic",
             "heat in the place of combustion, the gas stays the same",
             "heat given away in the place of the change of charge"),
    leaves_out=("friction, heat to the walls, finite time of combustion, throttling and change of charge: a real "
                "engine reaches roughly half to three quarters of this efficiency",
                "fuel, exhaust composition, dissociation"),
    sketch="""
    p │   3
      │  ╱│╲          otto: 2-3 and 4-1 at constant volume
      │ 2 │ ╲         diesel: 2-3 at constant pressure
      │  ╲   ╲__ 4    dual: 2-3 at constant volume, 3-4 at constant
      │   ╲__  │      pressure, 4-5 expansion
      │      ╲_│      atkinson: expansion on to the first pressure
      │        1
      └──────────────── v
""",
    results=_results)
