"""Steam plant with reheats, feedwater heaters and process steam: options, inputs, and the order of its parts."""
from __future__ import annotations

import math
from collections.abc import Mapping

from calcpack.errors import Fault, SpecError
from calcpack.methods import steam_facts as said
from calcpack.methods import steam_flows as flows
from calcpack.methods import steam_states as states
from calcpack.methods.method import Method, Option, Role
from calcpack.methods.steam_arrangement import PATTERN, PATTERN_TEXT, Arrangement, arrangement
from calcpack.plan.equipment.streams import inlet_state, stream
from calcpack.plan.plan import Plan

OPTIONS = (
    Option("steam", "Steam at the turbine inlet", {
        "superheated": "pressure and temperature are inputs", "saturated": "dry saturated steam of a given pressure"}),
    Option("reheats", "Reheats between turbine sections", {
        "0": "none", "1": "one", "2": "two", "3": "three"}),
    Option("heaters", "Feedwater heaters and the order of extractions", {
        "none": "no feedwater heater",
        "open": "one open heater: steam and feedwater mix",
        "closed-trap": "one closed heater, its drains trapped down to the next lower heater or the condenser",
        "closed-pump": "one closed heater, its drains pumped forward into the feedwater behind it",
        "closed-trap open closed-trap": "three heaters, from the highest extraction pressure down"}, PATTERN,
        PATTERN_TEXT),
    Option("condensing", "How the condensing level is set", {
        "pressure": "the saturation pressure is an input", "temperature": "the saturation temperature is an input"}),
    Option("cooling", "What is known of the cooling water", {
        "none": "no stream: the condenser is not calculated",
        "outlet": "inlet and outlet temperature are inputs, the flow follows",
        "flow": "inlet temperature and flow are inputs, the outlet follows"}),
    Option("lines", "Steam lines, boiler and extraction lines", {
        "ideal": "no loss of pressure or heat", "losses": "pressure and heat losses are inputs"}),
    Option("process", "Steam taken for a process", {
        "none": "no process steam", "share": "its share of the steam at the turbine inlet is an input",
        "heat": "the heat left with the process is an input"}),
    Option("size_by", "What sets the size of the plant", {
        "power": "the net power is an input", "flow": "the flow of steam at the turbine inlet is an input"}),
)


def lay(plan: Plan) -> None:
    """Lay the plan: pressures, states, extraction shares, works and heats, flow and power, condenser, bound."""
    arranged = arrangement(plan.options)
    if plan.options["process"] == "heat" and plan.options["size_by"] == "power":
        raise SpecError(Fault("option process: heat needs option size_by: flow",
                              hint="or give the process steam's share"))
    losses = plan.options["lines"] == "losses"
    _inputs(plan, arranged, losses)
    sink = None
    if plan.options["cooling"] != "none":
        sink = stream(plan, "sink", gives_heat=False, mode=plan.options["cooling"],
                      typical={"in": "18 degC", "out": "26 degC", "m_dot": "3000 kg/s"})
        inlet_state(plan.section("Cooling water at its ends"), sink)
    water = states.Water(plan, arranged, losses)
    states.pressures(plan, water)
    states.turbine(plan, water)
    states.feedwater(plan, water)
    shares = flows.shares(plan, water)
    flows.specific(plan, water, shares)
    flows.power(plan, water, shares)
    if sink:
        said.condenser(plan, water, shares, sink)
    said.bound(plan, water, shares)
    said.facts(plan, water, shares, sink)


def _inputs(plan: Plan, arranged: Arrangement, losses: bool) -> None:
    positive = {"low_open": True}
    hot = plan.options["steam"] == "superheated"
    plan.input("p_1", "pressure", "Pressure at the turbine inlet", "100 bar" if hot else "60 bar", low="0 bar",
               **positive)
    if hot:
        plan.input("T_1", "temperature", "Temperature at the turbine inlet", "540 degC")
    if plan.options["condensing"] == "pressure":
        plan.input("p_c", "pressure", "Condensing pressure", "0.05 bar", low="0 bar", **positive)
    else:
        plan.input("T_c", "temperature", "Condensing temperature", "33 degC")
    _station_inputs(plan, arranged)
    if losses:
        _loss_inputs(plan, arranged)
    if arranged.process:
        _process_inputs(plan, arranged)
    _machine_inputs(plan, arranged)
    if plan.options["size_by"] == "power":
        plan.input("W_dot_net", "power", "Net electrical power", "50 MW", low="0 kW", **positive)
    else:
        plan.input("m_dot_1", "mass flow", "Mass flow of steam at the turbine inlet", "50 kg/s", low="0 kg/s",
                   **positive)


def _typical(plan: Plan, at: int, stations: int) -> float:
    """A pressure [bar] between turbine inlet and condenser, in equal steps of saturation temperature, to two digits."""
    # Between the two ends ln p is all but linear in 1/T; saturation is at 311 °C for 100 bar, 276 °C for 60 bar.
    top, T_top = (100.0, 584.0) if plan.options["steam"] == "superheated" else (60.0, 549.0)
    bottom, T_bottom = 0.05, 306.0
    T = T_top + (T_bottom - T_top) * at / (stations + 1)
    share = (1 / T - 1 / T_top) / (1 / T_bottom - 1 / T_top)
    return float(f"{top * (bottom / top) ** share:.2g}")


def _station_inputs(plan: Plan, arranged: Arrangement) -> None:
    titles = {"heater": "Extraction pressure of heater {}, at the turbine",
              "process": "Pressure of the process steam, at the turbine",
              "reheat": "Pressure before reheater {}, at the turbine"}
    for at, station in enumerate(arranged.stations, start=1):
        plan.input(station.pressure, "pressure", titles[station.kind].format(station.index),
                   f"{_typical(plan, at, len(arranged.stations)):g} bar", low="0 bar", low_open=True)
        if station.reheat:
            plan.input(f"T_rh{station.reheat}", "temperature",
                       f"Temperature at the turbine behind reheater {station.reheat}",
                       "540 degC")
    for heater, kind in enumerate(arranged.heaters, start=1):
        if kind != "open":
            plan.input(f"dT_ttd_{heater}", "temperature difference",
                       f"Terminal temperature difference of heater {heater}", "3 K",
                       low="-10 K", note="saturation temperature in the heater less feedwater outlet temperature")


def _loss_inputs(plan: Plan, arranged: Arrangement) -> None:
    share = {"low": "0", "high": "0.5"}
    plan.input("f_p_main", "number", "Pressure lost in the main steam line, of that at the boiler outlet", "0.03",
               **share)
    plan.input("f_p_b", "number", "Pressure lost in the boiler, of that at its inlet", "0.08", **share)
    plan.input("q_l_main", "specific energy", "Heat lost by the main steam line, a kilogram", "5 kJ/kg", low="0 kJ/kg")
    if arranged.heaters:
        plan.input("f_p_x", "number", "Pressure lost in the extraction lines, of that at the turbine", "0.05", **share)
    if arranged.reheats:
        plan.input("f_p_rh", "number", "Pressure lost in a reheater with its lines", "0.08", **share)
        plan.input("q_l_rh", "specific energy", "Heat lost by the line behind a reheater, a kilogram", "4 kJ/kg",
                   low="0 kJ/kg")


def _process_inputs(plan: Plan, arranged: Arrangement) -> None:
    if plan.options["process"] == "share":
        plan.input("y_pr", "number", "Share of the steam at the turbine inlet that goes to the process", "0.15",
                   low="0",
                   low_open=True, high="1")
    else:
        plan.input("Q_dot_pr", "power", "Heat left with the process", "15 MW", low="0 kW", low_open=True)
    place = arranged.returns_to
    stations = arranged.stations
    feeding = [at for at, one in enumerate(stations, start=1) if (one.kind, one.index) == ("heater", place)]
    least = _typical(plan, feeding[0], len(stations)) if feeding else 1.0
    plan.input("p_ret", "pressure", "Pressure of the water that comes back", f"{max(6, math.ceil(1.5 * least))} bar",
               low="0 bar",
               low_open=True)
    plan.input("f_ret", "number", "Share of the process steam that comes back as condensate", "0.8", low="0", high="1",
               note="the rest is made up by fresh water")
    plan.input("T_ret", "temperature", "Temperature of the returned condensate", "60 degC")
    plan.input("T_mu", "temperature", "Temperature of the make-up water", "15 degC")


def _machine_inputs(plan: Plan, arranged: Arrangement) -> None:
    share = {"low": "0", "low_open": True, "high": "1"}
    for part in range(1, arranged.reheats + 2):
        tag, words = (str(part), f" section {part}") if arranged.reheats else ("", "")
        plan.input(f"eta_t{tag}", "number",
                   f"Isentropic efficiency of the turbine{words}, from extraction to extraction", "0.87",
                   **share)
    for pump in range(1, arranged.pumps + 1):
        tag, words = (str(pump), f"pump {pump}, counted from the condenser") if arranged.opens else ("",
                                                                                                     "the feed pump")
        plan.input(f"eta_p{tag}", "number", f"Isentropic efficiency of {words}", "0.78", **share)
    for heater, kind in enumerate(arranged.heaters, start=1):
        if kind == "closed-pump":
            plan.input(f"eta_d{heater}", "number", f"Isentropic efficiency of the drain pump of heater {heater}",
                       "0.70", **share)
    plan.input("eta_gen", "number", "Efficiency of generator and gear", "0.98", **share)
    plan.input("eta_pm", "number", "Efficiency of the pumps' motors", "0.94", **share)
    plan.input("eta_b", "number", "Efficiency of the boiler: heat to the steam over heat of the fuel", "0.90", **share)
    plan.input("W_dot_aux", "power", "Electrical power of fans, cooling pumps and controls", "0 kW", low="0 kW",
               default="0 kW")


def _roles(options: Mapping[str, str]) -> tuple[Role, ...]:
    water = (Role("wf", "Water and steam", "water"),)
    return water if options["cooling"] == "none" else (*water, Role("sink", "Cooling water", "water"))


def _results(options: Mapping[str, str]) -> tuple[str, ...]:
    shown = ("W_dot_net", "eta_th", "HR", "m_dot_1", "r_bw", "b_st")
    return shown if options["process"] == "none" else (*shown, "Q_dot_pr", "eps_u")


METHOD = Method(
    name="steam-plant",
    title="Steam plant with reheats, feedwater heaters and process steam",
    text="Steam expands in a turbine of one to four sections with reheat between them, gives extraction steam to open "
         "and "
         "closed feedwater heaters and to a process, condenses, and is pumped back through the heaters to the boiler. "
         "Each heater's extraction share follows from its energy balance, from the highest pressure down.",
    options=OPTIONS, roles=_roles, lay=lay,
    assumes=("steady state", "heaters and condenser without heat loss and without subcooling of drains and condensate",
             "water leaves an open heater saturated", "no blowdown, no gland steam",
             "one isentropic efficiency a turbine section, applied from extraction to extraction",
             "returned and make-up water arrive at the stated pressure; their pumping is outside",
             "kinetic and potential energy neglected"),
    leaves_out=("drain coolers and desuperheating zones of closed heaters", "leaving loss and part load of the turbine",
                "the boiler's own balance beyond its efficiency"),
    sketch="""
          ┌────────┐ 1   ┌─────────┐   ┌─────────┐
          │ Boiler ├────►│ Turbine ├──►│ Turbine ├── generator
          │        │◄────┤         │ ┌►└──┬───┬──┘
          └▲─────┬─┘     └──┬──────┘ │    │   │
           │     └──reheat──┼────────┘    │ ┌─▼─────────┐
           │                │ extraction  │ │ Condenser │◄─ cooling water
         ┌─┴──────┐  ┌────┐ │ ┌────────┐  │ └─┬─────────┘
         │ Heater │◄─┤Pump│◄┼─┤ Heater │◄─┘   │
         └────────┘  └────┘   └───▲────┘  ┌───▼┐
                                  └───────┤Pump│
                                          └────┘
""",
    results=_results)
