"""Reversed gas cycle: refrigerator or heat pump with compressor, turbine and an optional regenerator."""
from __future__ import annotations

from collections.abc import Mapping

from calcpack.methods.method import Method, Option, Role
from calcpack.methods.reversed_gas_parts import Loop, facts, heat_flows, loop, states, work
from calcpack.plan.equipment import grounds
from calcpack.plan.equipment.gas import GAS_VALUES, gas_inputs, specific_volume, zeros
from calcpack.plan.plan import Plan

OPTIONS = (
    Option("duty", "What the machine is for", {
        "refrigerator": "takes heat at the cold side", "heat-pump": "gives heat at the hot side"}),
    Option("gas", "How the gas is described", GAS_VALUES),
    Option("regenerator", "Heat passed from the gas before the turbine to the gas before the compressor", {
        "none": "no regenerator", "yes": "a regenerator of given effectiveness"}),
    Option("pressures", "How the high pressure is given", {
        "ratio": "by the pressure ratio", "high": "as a pressure"}),
    Option("size", "What the machine's size is given by", {
        "duty": "the heat that it is for", "mass-flow": "the mass flow of gas",
        "volume-flow": "the volume flow at the compressor inlet"}),
)


def lay(plan: Plan) -> None:
    """Lay the plan: states, specific work and heats, the reversible bound, flow and powers."""
    _inputs(plan)
    gas = gas_inputs(plan)
    it = loop(plan, gas)
    if gas.constant:
        zeros(plan.section("The gas"), gas)
    states(plan, it)
    work(plan, it)
    _power(plan, it)
    heat_flows(plan, it)
    facts(plan, it)


def _inputs(plan: Plan) -> None:
    cooling, regenerator = plan.options["duty"] == "refrigerator", plan.options["regenerator"] == "yes"
    plan.input("p_1", "pressure", "Low pressure", "1 bar", low="0 bar", low_open=True)
    if plan.options["pressures"] == "ratio":
        plan.input("r_p", "number", "Pressure ratio", "2.5" if regenerator else "4", low="1", low_open=True)
    else:
        plan.input("p_2", "pressure", "High pressure", "2.5 bar" if regenerator else "4 bar", low="0 bar",
                   low_open=True)
    if regenerator:
        plan.input("T_6", "temperature", "Temperature of the gas leaving the cold side",
                   "-40 degC" if cooling else "0 degC")
    else:
        plan.input("T_1", "temperature",
                   "Temperature of the gas leaving the cold side, at the compressor inlet",
                   "-20 degC" if cooling else "5 degC")
    plan.input("T_3", "temperature", "Temperature of the gas leaving the hot side",
               "35 degC" if cooling else "60 degC")
    share = {"low": "0", "low_open": True, "high": "1"}
    plan.input("eta_c", "number", "Isentropic efficiency of the compressor", "0.85", **share)
    plan.input("eta_t", "number", "Isentropic efficiency of the turbine", "0.88", **share)
    if regenerator:
        plan.input("epsilon", "number",
                   "Effectiveness of the regenerator: heat passed on over the most that could be",
                   "0.9", low="0", high="1")
    plan.input("eta_dr", "number", "Efficiency of motor and drive", "0.93", **share)
    _size_input(plan, cooling)


def _size_input(plan: Plan, cooling: bool) -> None:
    match plan.options["size"]:
        case "duty":
            plan.input("Q_dot_c" if cooling else "Q_dot_h", "power",
                       "Heat taken at the cold side" if cooling else "Heat given at the hot side", "100 kW",
                       low="0 kW",
                       low_open=True)
        case "mass-flow":
            plan.input("m_dot", "mass flow", "Mass flow of gas", "2 kg/s", low="0 kg/s", low_open=True)
        case _:
            plan.input("V_dot_1", "volume flow", "Volume flow at the compressor inlet", "1.5 m³/s",
                       low="0 m³/s",
                       low_open=True)


def _power(plan: Plan, it: Loop) -> None:
    section = plan.section("Flow and power")
    cooling, size = plan.options["duty"] == "refrigerator", plan.options["size"]
    if size == "volume-flow":
        v = specific_volume(section, it.inlet)
        section.formula("m_dot", f"V_dot_1 / {v}", "Mass flow of gas", "kg/s",
                        reference="definition of the specific volume: volume flow over mass flow")
    elif size == "duty":
        section.formula("m_dot", "Q_dot_c / q_c" if cooling else "Q_dot_h / q_h", "Mass flow of gas", "kg/s",
                        reference=grounds.FLOW_FOR_HEAT)
    if size != "duty" or not cooling:
        section.formula("Q_dot_c", "m_dot * q_c", "Heat taken at the cold side", "kW",
                        reference=grounds.HEAT_OF_SPECIFIC)
    if size != "duty" or cooling:
        section.formula("Q_dot_h", "m_dot * q_h", "Heat given at the hot side", "kW",
                        reference=grounds.HEAT_OF_SPECIFIC)
    section.formula("W_dot_c", "m_dot * w_c", "Power of the compressor", "kW", reference=grounds.POWER_OF_FLOW)
    section.formula("W_dot_t", "m_dot * w_t", "Power of the turbine", "kW", reference=grounds.POWER_OF_FLOW)
    section.formula("W_dot", "W_dot_c - W_dot_t", "Power drawn at the shaft", "kW",
                    reference="derived: power of the compressor less that of the turbine")
    section.formula("W_dot_el", "W_dot / eta_dr", "Electrical power drawn", "kW",
                    reference="definition of the drive's efficiency: power at the shaft over electrical power")


def _roles(options: Mapping[str, str]) -> tuple[Role, ...]:
    return () if options["gas"] == "cold-air" else (Role("air", "Gas of the cycle, an ideal gas", "air"),)


def _results(options: Mapping[str, str]) -> tuple[str, ...]:
    return ("COP", "W_dot_el", "Q_dot_c" if options["duty"] == "refrigerator" else "Q_dot_h",
            f"T_{_coldest(options)}")


def _coldest(options: Mapping[str, str]) -> str:
    return "5" if options["regenerator"] == "yes" else "4"


METHOD = Method(
    name="reversed-gas-cycle",
    title="Refrigerator or heat pump with a gas that does not condense",
    text="A gas is compressed, gives heat at the high pressure, expands in a turbine that helps to "
         "drive the compressor, and takes heat at the low pressure. A regenerator can cool the gas "
         "before the turbine with the gas that comes from the cold side.",
    options=OPTIONS, roles=_roles, lay=lay,
    assumes=("steady state", "ideal gas", "machines adiabatic, with isentropic efficiencies",
             "no pressure loss in exchangers and pipes",
             "in the balances of entropy and the bound, each side is as warm as the gas that leaves it"),
    leaves_out=("water and ice out of moist air", "heat leaking into the cold side", "fans"),
    sketch="""
   hot side ◄─────┐ heat
         3 ┌──────┴──────┐ 2
       ┌───┤  Exchanger  │◄──┐
   ┌───▼───┐└────────────┘┌──┴───────┐
   │Turbine│══════════════│Compressor│══ motor
   └───┬───┘┌────────────┐└──▲───────┘
       └───►│  Exchanger  ├───┘
         4  └──────▲──────┘ 1
   cold side ──────┘ heat
   (with a regenerator: 3 to 4 gives heat to 6 to 1, the turbine runs
    from 4 to 5, the cold side from 5 to 6)
""",
    results=_results)
