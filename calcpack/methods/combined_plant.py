"""Combined plant: gas turbine or exhaust stream, heat-recovery steam generator, steam cycle: options and inputs."""
from __future__ import annotations

from collections.abc import Mapping

from calcpack.errors import Fault, SpecError
from calcpack.methods import combined_facts as said
from calcpack.methods import combined_parts as parts
from calcpack.methods.method import Method, Option, Role
from calcpack.plan.equipment.streams import Stream, inlet_state, stream
from calcpack.plan.plan import Plan

OPTIONS = (
    Option("gas", "Where the hot gas comes from", {
        "exhaust": "a stream whose inlet temperature and flow are inputs",
        "cycle": "an air-standard gas turbine: compressor, heat of the fuel, turbine"}),
    Option("pressures", "Pressures of the steam generator", {
        "1": "one", "2": "two, the low-pressure steam mixed in before the low-pressure turbine"}),
    Option("stack", "What sets the flow of steam", {
        "pinch": "pinch and approach are inputs, the stack temperature follows",
        "temperature": "the stack temperature is an input, the pinch is reported; one pressure only"}),
    Option("condensing", "How the condensing level is set", {
        "pressure": "the saturation pressure is an input", "temperature": "the saturation temperature is an input"}),
    Option("cooling", "What is known of the cooling water", {
        "none": "no stream: the condenser is not calculated",
        "outlet": "inlet and outlet temperature are inputs, the flow follows",
        "flow": "inlet temperature and flow are inputs, the outlet follows"}),
)


def lay(plan: Plan) -> None:
    """Lay the plan: gas, water and steam, steam generator, turbine, powers, condenser, bound of the exhaust."""
    if plan.options["stack"] == "temperature" and plan.options["pressures"] == "2":
        raise SpecError(Fault("option stack: temperature needs option pressures: 1",
                              hint="with two pressures, set stack to pinch"))
    gas = Stream("gas", gives_heat=True, mode="flow")
    _gas_inputs(plan)
    _steam_inputs(plan)
    _machine_inputs(plan)
    sink = None
    if plan.options["cooling"] != "none":
        sink = stream(plan, "sink", gives_heat=False, mode=plan.options["cooling"],
                      typical={"in": "18 degC", "out": "26 degC", "m_dot": "3000 kg/s"})
        inlet_state(plan.section("Cooling water at its ends"), sink)
    parts.gas_turbine(plan, gas)
    parts.dead_state(plan)
    parts.steam_states(plan)
    parts.steam_generator(plan, gas)
    parts.steam_turbine(plan)
    parts.power(plan)
    if sink:
        said.condenser(plan, sink)
    parts.bound(plan, gas)
    said.facts(plan, gas, sink)


def _gas_inputs(plan: Plan) -> None:
    if plan.options["gas"] == "exhaust":
        plan.input("T_gas_in", "temperature", "Temperature of the gas at the steam generator", "560 degC")
    else:
        plan.input("T_g1", "temperature", "Temperature at the compressor inlet", "15 degC")
        plan.input("r_p", "number", "Pressure ratio of the compressor", "16", low="1", low_open=True)
        plan.input("T_g3", "temperature", "Temperature at the gas turbine's inlet", "1250 degC")
        plan.input("f_p_cc", "number", "Pressure lost in the combustor, of that behind the compressor", "0.04",
                   low="0", high="0.5")
    plan.input("m_dot_gas", "mass flow", "Mass flow of the gas", "100 kg/s", low="0 kg/s", low_open=True)
    plan.input("p_gas", "pressure",
               "Pressure of the gas in the steam generator" if plan.options["gas"] == "exhaust" else
               "Pressure at the compressor inlet and in the steam generator", "1.013 bar", low="0 bar", low_open=True)
    plan.input("T_0", "temperature", "Temperature of the dead state", "15 degC")


def _steam_inputs(plan: Plan) -> None:
    positive = {"low": "0 K", "low_open": True}
    two = plan.options["pressures"] == "2"
    typical = {"hp": ("80 bar" if two else "50 bar", "520 degC" if two else "480 degC"), "lp": ("6 bar", "230 degC")}
    for tag in parts.levels_of(plan):
        which = parts.word(plan, tag)
        plan.input(f"p_{tag}", "pressure", f"Pressure of the {which}steam", typical[tag][0], low="0 bar", low_open=True)
        plan.input(f"T_{tag}", "temperature", f"Temperature of the {which}steam", typical[tag][1])
        if plan.options["stack"] == "pinch":
            plan.input(f"dT_pinch_{tag}", "temperature difference",
                       f"Pinch: gas behind the {which}evaporator over saturation", "10 K",
                       **positive)
            plan.input(f"dT_app_{tag}", "temperature difference",
                       f"Approach: saturation over the water entering the {which}drum", "5 K",
                       **positive)
    if plan.options["stack"] == "temperature":
        plan.input("T_stack", "temperature", "Temperature of the gas at the stack", "180 degC")
    if plan.options["condensing"] == "pressure":
        plan.input("p_c", "pressure", "Condensing pressure", "0.05 bar", low="0 bar", low_open=True)
    else:
        plan.input("T_c", "temperature", "Condensing temperature", "33 degC")


def _machine_inputs(plan: Plan) -> None:
    share = {"low": "0", "low_open": True, "high": "1"}
    if plan.options["gas"] == "cycle":
        plan.input("eta_c", "number", "Isentropic efficiency of the compressor", "0.87", **share)
        plan.input("eta_gt", "number", "Isentropic efficiency of the gas turbine", "0.90", **share)
        plan.input("eta_gen_g", "number", "Efficiency of the gas turbine's generator and gear", "0.98", **share)
    if plan.options["pressures"] == "2":
        plan.input("eta_t1", "number", "Isentropic efficiency of the high-pressure turbine", "0.86", **share)
        plan.input("eta_t2", "number", "Isentropic efficiency of the low-pressure turbine", "0.87", **share)
    else:
        plan.input("eta_t", "number", "Isentropic efficiency of the steam turbine", "0.86", **share)
    plan.input("eta_p", "number", "Isentropic efficiency of the feed pumps", "0.75", **share)
    plan.input("eta_gen", "number", "Efficiency of the steam turbine's generator and gear", "0.98", **share)
    plan.input("eta_pm", "number", "Efficiency of the pumps' motors", "0.94", **share)
    plan.input("W_dot_aux", "power", "Electrical power of cooling pumps, fans and controls", "0 kW", low="0 kW",
               default="0 kW")


def _roles(options: Mapping[str, str]) -> tuple[Role, ...]:
    found = (Role("wf", "Water and steam", "water"), Role("gas", "Gas, or air of the gas turbine", "air"))
    return found if options["cooling"] == "none" else (*found, Role("sink", "Cooling water", "water"))


def _results(options: Mapping[str, str]) -> tuple[str, ...]:
    shown = ("W_dot_net", "W_dot_snet", "T_gas_out", "eta_ex", "W_dot_rev")
    return (*shown, "W_dot_gnet", "eta_cc") if options["gas"] == "cycle" else shown


METHOD = Method(
    name="combined-plant",
    title="Combined plant of hot exhaust or gas turbine, heat-recovery steam generator and steam cycle",
    text="Hot gas, given as a stream or made by an air-standard gas turbine, raises superheated steam at one or two "
         "pressures. "
         "Pinch and approach give the flow of steam and the stack temperature, or the stack temperature gives the "
         "flow; the "
         "steam expands, with the low-pressure steam mixed in, and condenses. The exhaust's exergy bounds what it can "
         "give.",
    options=OPTIONS, roles=_roles, lay=lay,
    assumes=("steady state", "gas of constant composition at constant pressure in the steam generator",
             "air-standard gas turbine: the fuel counts as heat", "no heat lost to the surroundings, no blowdown",
             "no pressure drop of water and steam", "saturated condensate, pumped to each pressure from the condenser",
             "with two pressures, high-pressure water and low-pressure steam are heated side by side between the two "
             "pinches",
             "kinetic and potential energy neglected"),
    leaves_out=("reheat and a third pressure", "deaerator and preheating of the feedwater", "supplementary firing",
                "dew point of the exhaust and recirculation that keeps the cold end above it", "part load"),
    sketch="""
   fuel ──►┌───────────┐
     ┌────►│ Combustor ├────┐
  ┌──┴───────┐       ┌────▼────────┐
  │Compressor├───────┤ Gas turbine ├── generator
  └▲─────────┘       └────┬────────┘
  air                     │ exhaust
          stack ◄──┌──────▼──────────┐ 4 ┌─────────┐
                 2 │ Steam generator ├──►│ Turbine ├── generator
             ┌────►└─────────────────┘   └────┬────┘
           ┌─┴──┐       ┌───────────┐       8 │
           │Pump│◄──────┤ Condenser │◄────────┘
           └────┘     1 └───────────┘
""",
    results=_results)
