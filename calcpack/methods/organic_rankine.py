"""Subcritical Rankine engine on a finite heat source: options, inputs, and the order of its parts."""
from __future__ import annotations

from collections.abc import Mapping

from calcpack.errors import Fault, SpecError
from calcpack.methods import rankine_parts as parts
from calcpack.methods.method import Method, Option, Role
from calcpack.plan.equipment.exchanger import conductance, require_pinch
from calcpack.plan.equipment.streams import Stream, inlet_state, stream
from calcpack.plan.plan import Plan

OPTIONS = (
    Option("evaporating", "How the evaporating level is set", {
        "temperature": "an input; the flow of working fluid follows from the pinch and the source's lowest outlet",
        "pressure": "an input; the flow of working fluid follows from the pinch and the source's lowest outlet",
        "pinch": "found from the pinch; the source's outlet temperature is an input"}),
    Option("condensing", "How the condensing level is set", {
        "pinch": "found from the smallest temperature difference in the condenser",
        "temperature": "the saturation temperature is an input",
        "pressure": "the saturation pressure is an input"}),
    Option("source_stream", "What is known of the heat source", {
        "flow": "a stream whose inlet temperature and flow are inputs",
        "none": "no stream: the heater is not calculated and the working fluid's flow is an input"}),
    Option("sink_stream", "What is known of the sink stream", {
        "outlet": "inlet and outlet temperature are inputs, the flow follows",
        "flow": "inlet temperature and flow are inputs, the outlet follows",
        "none": "no stream: the condenser is not calculated"}),
    Option("expander_inlet", "State at the expander inlet", {
        "saturated": "dry saturated vapour", "superheated": "superheat is an input"}),
    Option("recuperator", "Heat recovered from the exhaust vapour to the liquid", {
        "none": "no recuperator", "yes": "a recuperator with a given difference at its cold end"}),
    Option("liquid", "State at the condenser outlet", {
        "saturated": "saturated liquid", "subcooled": "subcooling is an input"}),
)


def lay(plan: Plan) -> None:
    """Lay the plan: levels, states, heat taken, condenser, power, and the reversible power of the source."""
    _consistent(plan.options)
    source, sink = _streams(plan)
    _inputs(plan)
    if source or sink:
        section = plan.section("Streams at their ends")
        for one in filter(None, (source, sink)):
            inlet_state(section, one)
    parts.levels(plan, source, sink)
    parts.states(plan)
    heater = parts.heater(plan, source)
    condenser = parts.condenser(plan, sink)
    if plan.options["recuperator"] == "yes":
        parts.require_recuperation(plan)
    for one in filter(None, (heater, condenser)):
        require_pinch(plan, one)
    for one in filter(None, (heater, condenser)):
        conductance(plan.section(f"{one.title}: conductance"), one)
    parts.power(plan)
    if source:
        parts.bound(plan, source, sink)
    parts.facts(plan, source, sink)


def _consistent(options: Mapping[str, str]) -> None:
    """Options that contradict one another are told before any number."""
    for level, side in (("evaporating", "source"), ("condensing", "sink")):
        if options[level] == "pinch" and options[f"{side}_stream"] == "none":
            raise SpecError(Fault(f"option {level}: pinch needs a {side} stream, and {side}_stream is none",
                                  hint=f"set {level} to temperature or pressure, or give the stream"))


def _streams(plan: Plan) -> tuple[Stream | None, Stream | None]:
    source = sink = None
    if plan.options["source_stream"] != "none":
        source = stream(plan, "source", gives_heat=True, mode="flow",
                        typical={"in": "280 degC", "m_dot": "12 kg/s", "p": "1.013 bar"})
        if plan.options["evaporating"] == "pinch":
            plan.input("T_source_set", "temperature", "Outlet temperature of the source, as set", "150 degC")
        else:
            plan.input("T_source_min", "temperature", "Lowest outlet temperature of the source", "120 degC")
    if plan.options["sink_stream"] != "none":
        sink = stream(plan, "sink", gives_heat=False, mode=plan.options["sink_stream"],
                      typical={"in": "20 degC", "out": "28 degC", "m_dot": "50 kg/s"})
    return source, sink


def _inputs(plan: Plan) -> None:
    positive = {"low": "0 K", "low_open": True}
    _level_inputs(plan)
    if plan.options["source_stream"] != "none":
        plan.input("dT_pinch_h", "temperature difference", "Smallest temperature difference in the heater", "15 K",
                   **positive)
        plan.input("T_0", "temperature", "Temperature of the dead state", "15 degC")
    else:
        plan.input("m_dot_wf", "mass flow", "Mass flow of the working fluid", "1 kg/s", low="0 kg/s", low_open=True)
    if plan.options["condensing"] == "pinch":
        plan.input("dT_pinch_c", "temperature difference", "Smallest temperature difference in the condenser", "5 K",
                   **positive)
    if plan.options["expander_inlet"] == "superheated":
        plan.input("dT_sh", "temperature difference", "Superheat at the expander inlet", "10 K",
                   note="for none, set the option expander_inlet to saturated", **positive)
    if plan.options["liquid"] == "subcooled":
        plan.input("dT_sc", "temperature difference", "Subcooling at the condenser outlet", "3 K",
                   note="for none, set the option liquid to saturated", **positive)
    if plan.options["recuperator"] == "yes":
        plan.input("dT_rec", "temperature difference", "Temperature difference at the recuperator's cold end", "10 K",
                   **positive)
    _machine_inputs(plan)


def _level_inputs(plan: Plan) -> None:
    for side, tag, typical in (("evaporating", "e", ("140 degC", "15 bar")), ("condensing", "c", ("35 degC", "1.5 bar"))):
        if plan.options[side] == "temperature":
            plan.input(f"T_{tag}", "temperature", f"{side.capitalize()} temperature (dew point)", typical[0])
        elif plan.options[side] == "pressure":
            plan.input(f"p_{tag}", "pressure", f"{side.capitalize()} pressure", typical[1], low="0 bar", low_open=True)


def _machine_inputs(plan: Plan) -> None:
    share = {"low": "0", "low_open": True, "high": "1"}
    plan.input("eta_t", "number", "Isentropic efficiency of the expander", "0.80", **share)
    plan.input("eta_p", "number", "Isentropic efficiency of the pump", "0.65", **share)
    plan.input("eta_gen", "number", "Efficiency of generator and gear", "0.95", **share)
    plan.input("eta_pm", "number", "Efficiency of the pump's motor and converter", "0.90", **share)
    plan.input("W_dot_aux", "power", "Electrical power of cooling pumps, fans and controls", "0 kW", low="0 kW",
               default="0 kW")


def _roles(options: Mapping[str, str]) -> tuple[Role, ...]:
    roles = [Role("wf", "Working fluid", "cyclopentane")]
    if options["source_stream"] != "none":
        roles.append(Role("source", "Heat source", "air"))
    if options["sink_stream"] != "none":
        roles.append(Role("sink", "Sink stream", "water"))
    return tuple(roles)


def _results(options: Mapping[str, str]) -> tuple[str, ...]:
    shown = ["W_dot_net", "eta_th", "Q_dot_h"]
    return (*shown, "eta_ex", "T_source_out") if options["source_stream"] != "none" else tuple(shown)


METHOD = Method(
    name="organic-rankine",
    title="Subcritical Rankine engine between a finite heat source and a sink stream",
    text="A working fluid is pumped as liquid, heated and evaporated by a finite source stream, expanded and "
         "condensed against a sink stream, with or without a recuperator between exhaust vapour and liquid. The "
         "flow, or the evaporating level, follows from the smallest temperature difference along the heater.",
    options=OPTIONS, roles=_roles, lay=lay,
    assumes=("steady state", "no pressure drop in exchangers and pipes", "no heat lost to the surroundings",
             "counter-flow exchangers", "kinetic and potential energy neglected",
             "no condensation of water out of a combustion gas"),
    leaves_out=("transcritical operation", "intermediate heat-carrier loop", "part load",
                "sizing of exchangers beyond UA"),
    sketch="""
   source in ──►┌────────┐──► source out
          5 ┌──►┤ Heater ├──┐ 3
   ┌────────┴─┐ └────────┘ ┌▼─────────┐
   │Recupera- │            │ Expander │──► generator
   │tor       │◄───────────┤          │ 4
   └▲───────┬─┘            └──────────┘
   2│       │ 6
  ┌─┴──┐  ┌─▼─────────┐
  │Pump│◄─┤ Condenser │◄── sink in, ──► sink out
  └────┘ 1└───────────┘
  (without recuperator, 2 runs to the heater and 4 to the condenser)
""",
    results=_results)
