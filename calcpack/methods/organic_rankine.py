"""Organic Rankine engine on a finite heat source: options, inputs, and the order of its parts."""
from __future__ import annotations

from collections.abc import Mapping

from calcpack.errors import Fault, SpecError
from calcpack.methods import rankine_heater
from calcpack.methods import rankine_parts as parts
from calcpack.methods.method import Method, Option, Role
from calcpack.methods.rankine_facts import facts
from calcpack.plan.equipment.exchanger import Exchanger, conductance, require_pinch
from calcpack.plan.equipment.streams import Stream, inlet_state, stream
from calcpack.plan.plan import Plan

OPTIONS = (
    Option("evaporating", "How the evaporating level is set", {
        "temperature": "an input; the flow of working fluid follows from the pinch and the source's lowest outlet",
        "pressure": "an input; the flow of working fluid follows from the pinch and the source's lowest outlet",
        "pinch": "found from the pinch; the source's outlet temperature, or the loop, is an input",
        "optimum": "chosen so that the net power is greatest; the flow follows as for a temperature",
        "supercritical": "no level: the heater's pressure is an input above the critical pressure"}),
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
        "saturated": "dry saturated vapour", "superheated": "superheat is an input",
        "temperature": "the temperature is an input",
        "optimum": "the superheat is chosen so that the net power is greatest"}),
    Option("recuperator", "Heat recovered from the exhaust vapour to the liquid", {
        "none": "no recuperator", "yes": "a recuperator with a given difference at its cold end"}),
    Option("liquid", "State at the condenser outlet", {
        "saturated": "saturated liquid", "subcooled": "subcooling is an input"}),
    Option("loop", "What brings the source's heat to the working fluid", {
        "none": "the source itself, in the heater",
        "yes": "a carrier loop of given supply and return temperature, such as thermal oil or pressurised water"}),
    Option("auxiliaries", "Power of the pumps and fans of the streams", {
        "given": "an input, all together",
        "computed": "from flow, pressure rise and efficiency of each stream, beside an input for the rest"}),
)


def lay(plan: Plan) -> None:
    """Lay the plan: levels, states, heat taken, condenser, power, and the reversible power of the source."""
    _consistent(plan.options)
    source, sink, loop = _streams(plan)
    _inputs(plan, source, sink, loop)
    streams = [one for one in (source, sink, loop) if one]
    if streams:
        section = plan.section("Streams at their ends")
        for one in streams:
            inlet_state(section, one)
    carrier = rankine_heater.loop_heater(plan, source, loop) if loop else None
    parts.levels(plan, source, sink, loop)
    parts.states(plan)
    exchangers = [one for one in (carrier, rankine_heater.heater(plan, source, loop), parts.condenser(plan,
                                                                                                      sink)) if one]
    moved = tuple(streams) if plan.options["auxiliaries"] == "computed" else ()
    # A trial of an optimum may ask what no exchanger can do: only the chosen value must not.
    checks = [lambda: _require(plan, exchangers), lambda: parts.power(plan, moved)]
    for add in reversed(checks) if parts.free_value(plan) else checks:
        add()
    if source:
        parts.bound(plan, source, sink)
    facts(plan, source, sink, loop)


def _require(plan: Plan, exchangers: list[Exchanger]) -> None:
    """What must hold of recuperator and exchangers, and their conductances."""
    if plan.options["recuperator"] == "yes":
        parts.require_recuperation(plan)
    for one in exchangers:
        require_pinch(plan, one)
    for one in exchangers:
        conductance(plan.section(f"{one.title}: conductance"), one)


def _consistent(options: Mapping[str, str]) -> None:
    """Options that contradict one another are told before any number."""
    evaporating, inlet = options["evaporating"], options["expander_inlet"]
    for level, side in (("evaporating", "source"), ("condensing", "sink")):
        if options[level] in ("pinch", "optimum") and options[f"{side}_stream"] == "none":
            raise SpecError(Fault(f"option {level}: {options[level]} needs a {side} stream, and {side}_stream is none",
                                  hint=f"set {level} to temperature or pressure, or give the stream"))
    if evaporating == "supercritical" and inlet != "temperature":
        raise SpecError(Fault(f"option expander_inlet: {inlet} has no meaning above the critical pressure",
                              expected="expander_inlet: temperature"))
    if inlet == "optimum" and (evaporating not in ("temperature", "pressure") or options["source_stream"] == "none"):
        raise SpecError(Fault("option expander_inlet: optimum needs a given evaporating level and a source stream",
                              hint="set evaporating to temperature or pressure; one optimum at a time is found"))
    if evaporating == "optimum" and inlet == "temperature":
        raise SpecError(Fault("option expander_inlet: temperature leaves no room for an evaporating level to be found",
                              hint="set expander_inlet to saturated or superheated"))
    if options["loop"] == "yes":
        if options["source_stream"] == "none":
            raise SpecError(Fault("option loop: yes needs a source stream, and source_stream is none"))
        if "optimum" in (evaporating, inlet):
            raise SpecError(Fault("with a carrier loop the heat taken is the loop's: most power is at the pinch",
                                  hint="set evaporating to pinch and expander_inlet to saturated or superheated"))
    if options["auxiliaries"] == "computed" and options["source_stream"] == options["sink_stream"] == "none":
        raise SpecError(Fault("option auxiliaries: computed needs a stream that is moved",
                              hint="set auxiliaries to given, or give a source or sink stream"))


def _streams(plan: Plan) -> tuple[Stream | None, Stream | None, Stream | None]:
    source = sink = loop = None
    # Far below its temperature a source that cools little has no pinch inside the heater: no level to be found.
    found = plan.options["evaporating"] == "pinch" and plan.options["loop"] == "none"
    if plan.options["source_stream"] != "none":
        source = stream(plan, "source", gives_heat=True, mode="flow",
                        typical={"in": "180 degC" if found else "280 degC", "m_dot": "12 kg/s", "p": "1.013 bar"})
        if found:
            plan.input("T_source_set", "temperature", "Outlet temperature of the source, as set", "90 degC")
        else:
            plan.input("T_source_min", "temperature", "Lowest outlet temperature of the source", "120 degC")
    if plan.options["sink_stream"] != "none":
        sink = stream(plan, "sink", gives_heat=False, mode=plan.options["sink_stream"],
                      typical={"in": "20 degC", "out": "28 degC", "m_dot": "50 kg/s"})
    if plan.options["loop"] == "yes":
        hot = plan.options["evaporating"] == "supercritical"
        loop = stream(plan, "loop", gives_heat=True, mode="outlet",
                      typical={"in": "265 degC" if hot else "190 degC", "out": "110 degC",
                               "p": "70 bar" if hot else "20 bar"})
    return source, sink, loop


def _inputs(plan: Plan, source: Stream | None, sink: Stream | None, loop: Stream | None) -> None:
    positive = {"low": "0 K", "low_open": True}
    _level_inputs(plan)
    if loop:
        plan.input("dT_pinch_l", "temperature difference", "Smallest temperature difference in the loop heater", "10 K",
                   **positive)
    if source:
        if not loop or plan.options["evaporating"] == "pinch":
            plan.input("dT_pinch_h", "temperature difference", "Smallest temperature difference in the heater",
                       "10 K" if loop else "15 K", **positive)
        plan.input("T_0", "temperature", "Temperature of the dead state", "15 degC")
    else:
        plan.input("m_dot_wf", "mass flow", "Mass flow of the working fluid", "1 kg/s", low="0 kg/s", low_open=True)
    if plan.options["condensing"] == "pinch":
        plan.input("dT_pinch_c", "temperature difference", "Smallest temperature difference in the condenser", "5 K",
                   **positive)
    if plan.options["expander_inlet"] == "superheated":
        plan.input("dT_sh", "temperature difference", "Superheat at the expander inlet", "10 K",
                   note="for none, set the option expander_inlet to saturated", **positive)
    if plan.options["expander_inlet"] == "temperature":
        usual = "250 degC" if plan.options["evaporating"] == "supercritical" else "160 degC"
        plan.input("T_3", "temperature", "Temperature at the expander inlet", usual)
    if plan.options["liquid"] == "subcooled":
        plan.input("dT_sc", "temperature difference", "Subcooling at the condenser outlet", "3 K",
                   note="for none, set the option liquid to saturated", **positive)
    if plan.options["recuperator"] == "yes":
        plan.input("dT_rec", "temperature difference", "Temperature difference at the recuperator's cold end", "10 K",
                   **positive)
    _machine_inputs(plan)
    if plan.options["auxiliaries"] == "computed":
        for one in filter(None, (source, sink, loop)):
            _mover_inputs(plan, one)


def _mover_inputs(plan: Plan, it: Stream) -> None:
    rise = {"source": "10 mbar", "sink": "1.5 bar", "loop": "2.0 bar"}[it.role]
    plan.input(f"dp_{it.role}", "pressure", f"Pressure rise in the pump or fan of the {it.role}", rise, low="0 bar",
               note="1.5 bar suits water through a condenser, 150 Pa air through an air cooler")
    plan.input(f"eta_{it.role}_aux", "number", f"Efficiency of pump or fan, drive and motor of the {it.role}", "0.65",
               low="0", low_open=True, high="1")


def _level_inputs(plan: Plan) -> None:
    for side, tag, typical in (("evaporating", "e", ("140 degC", "15 bar")), ("condensing", "c", ("35 degC",
                                                                                                  "0.7 bar"))):
        if plan.options[side] == "temperature":
            plan.input(f"T_{tag}", "temperature", f"{side.capitalize()} temperature (dew point)", typical[0])
        elif plan.options[side] == "pressure":
            plan.input(f"p_{tag}", "pressure", f"{side.capitalize()} pressure", typical[1], low="0 bar", low_open=True)
    if plan.options["evaporating"] == "supercritical":
        plan.input("p_e", "pressure", "Pressure of the heater, above the critical pressure", "52 bar", low="0 bar",
                   low_open=True)


def _machine_inputs(plan: Plan) -> None:
    share = {"low": "0", "low_open": True, "high": "1"}
    plan.input("eta_t", "number", "Isentropic efficiency of the expander", "0.80", **share)
    plan.input("eta_p", "number", "Isentropic efficiency of the pump", "0.65", **share)
    plan.input("eta_gen", "number", "Efficiency of generator and gear", "0.95", **share)
    plan.input("eta_pm", "number", "Efficiency of the pump's motor and converter", "0.90", **share)
    if plan.options["auxiliaries"] == "computed":
        plan.input("W_dot_other", "power", "Electrical power of controls and other auxiliaries", "0 kW", low="0 kW",
                   default="0 kW")
        return
    plan.input("W_dot_aux", "power", "Electrical power of cooling pumps, fans and controls", "0 kW", low="0 kW",
               default="0 kW")


def _roles(options: Mapping[str, str]) -> tuple[Role, ...]:
    roles = [Role("wf", "Working fluid", "cyclopentane")]
    if options["source_stream"] != "none":
        roles.append(Role("source", "Heat source", "air"))
    if options["sink_stream"] != "none":
        roles.append(Role("sink", "Sink stream", "water"))
    if options["loop"] == "yes":
        roles.append(Role("loop", "Heat carrier of the loop", "water"))
    return tuple(roles)


def _results(options: Mapping[str, str]) -> tuple[str, ...]:
    shown = ["W_dot_net", "eta_th", "Q_dot_h"]
    return (*shown, "eta_ex", "T_source_out") if options["source_stream"] != "none" else tuple(shown)


METHOD = Method(
    name="organic-rankine",
    title="Organic Rankine engine between a finite heat source and a sink stream",
    text="A working fluid is pumped as liquid, heated and evaporated by a finite source stream, expanded and "
         "condensed against a sink stream, with or without a recuperator between exhaust vapour and liquid. The "
         "flow, or the evaporating level, follows from the smallest temperature difference along the heater.",
    options=OPTIONS, roles=_roles, lay=lay,
    assumes=("steady state", "no pressure drop in exchangers and pipes", "no heat lost to the surroundings",
             "counter-flow exchangers", "kinetic and potential energy neglected",
             "no condensation of water out of a combustion gas"),
    leaves_out=("part load", "sizing of exchangers beyond UA", "heat that pumps and fans of the streams add to them"),
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
