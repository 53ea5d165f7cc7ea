"""Single-stage vapour-compression heat pump or refrigerator between two finite streams."""
from __future__ import annotations

from collections.abc import Mapping

from calcpack.methods.method import Method, Option, Role
from calcpack.plan.equipment.exchanger import Exchanger, Zone, conductance, profile, require_pinch
from calcpack.plan.equipment.machines import compressor, saturation, state, valve
from calcpack.plan.equipment.streams import Stream, balance, entropic_mean, inlet_state, line, stream
from calcpack.plan.facts import Bound, Box, Diagram, Flow, Link, Path, Sketch, StatePoint, Volume
from calcpack.plan.plan import Plan, Section

LEVEL = {
    "pinch": "found from the smallest temperature difference in the exchanger",
    "temperature": "the saturation temperature is an input",
    "pressure": "the saturation pressure is an input",
}
STREAM = {
    "outlet": "inlet and outlet temperature are inputs, the flow follows",
    "flow": "inlet temperature and flow are inputs, the outlet follows",
    "none": "no stream: the exchanger is not calculated",
}
OPTIONS = (
    Option("evaporating", "How the evaporating level is set", LEVEL),
    Option("condensing", "How the condensing level is set", LEVEL),
    Option("source_stream", "What is known of the source stream", STREAM),
    Option("sink_stream", "What is known of the sink stream", STREAM),
    Option("size_by", "What sets the size of the machine", {
        "sink-duty": "the heat given to the sink is an input",
        "source-duty": "the heat taken from the source is an input",
        "swept-volume": "swept volume flow and volumetric efficiency are inputs",
        "mass-flow": "the refrigerant's mass flow is an input"}),
    Option("suction", "State at the compressor inlet", {
        "superheated": "superheat at the evaporator outlet is an input",
        "saturated": "dry saturated vapour"}),
    Option("liquid", "State at the condenser outlet", {
        "subcooled": "subcooling is an input",
        "saturated": "saturated liquid"}),
    Option("serves", "Which coefficient of performance is the result", {
        "heating": "heat given to the sink over power drawn",
        "cooling": "heat taken from the source over power drawn"}),
)


def lay(plan: Plan) -> None:
    """Lay the plan: states, duty, exchangers, power, and the reversible figure between the same streams."""
    source, sink = _streams(plan)
    _inputs(plan)
    if source or sink:
        section = plan.section("Streams at their ends")
        for one in filter(None, (source, sink)):
            inlet_state(section, one)
    _cycle(plan, source, sink)
    _power(plan)
    if source and sink:
        _bound(plan, source, sink)
    _facts(plan, source, sink)


def _streams(plan: Plan) -> tuple[Stream | None, Stream | None]:
    modes = plan.options["source_stream"], plan.options["sink_stream"]
    source = None if modes[0] == "none" else stream(plan, "source", gives_heat=True, mode=modes[0])
    sink = None if modes[1] == "none" else stream(plan, "sink", gives_heat=False, mode=modes[1])
    return source, sink


def _inputs(plan: Plan) -> None:
    for side, tag, word, typical in (("evaporating", "e", "evaporator", "5 K"), ("condensing", "c", "condenser", "3 K")):
        mode = plan.options[side]
        if mode == "pinch":
            plan.input(f"dT_pinch_{tag}", "temperature difference", f"Smallest temperature difference in the {word}",
                       typical, low="0 K", low_open=True)
        elif mode == "temperature":
            plan.input(f"T_{tag}", "temperature", f"{side.capitalize()} temperature (dew point)",
                       "2 degC" if tag == "e" else "40 degC")
        else:
            plan.input(f"p_{tag}", "pressure", f"{side.capitalize()} pressure", "3 bar" if tag == "e" else "12 bar",
                       low="0 bar", low_open=True)
    if plan.options["suction"] == "superheated":
        plan.input("dT_sh", "temperature difference", "Superheat at the compressor inlet", "6 K", low="0 K",
                   low_open=True, note="for none, set the option suction to saturated")
    if plan.options["liquid"] == "subcooled":
        plan.input("dT_sc", "temperature difference", "Subcooling at the condenser outlet", "4 K", low="0 K",
                   low_open=True, note="for none, set the option liquid to saturated")
    _machine_inputs(plan)
    _size_inputs(plan)


def _machine_inputs(plan: Plan) -> None:
    share = {"low": "0", "low_open": True, "high": "1"}
    plan.input("eta_is", "number", "Isentropic efficiency of the compressor", "0.72", **share)
    plan.input("eta_drive", "number", "Efficiency of the drive between motor and compressor", "0.98", **share)
    plan.input("eta_motor", "number", "Efficiency of the motor with its converter", "0.94", **share)
    plan.input("f_loss", "number", "Share of the shaft power that the compressor loses as heat", "0.02",
               low="0", high="0.5")
    plan.input("W_dot_aux", "power", "Electrical power of pumps, fans and controls", "0 kW", low="0 kW",
               default="0 kW")


def _size_inputs(plan: Plan) -> None:
    positive = {"low_open": True}
    match plan.options["size_by"]:
        case "sink-duty":
            plan.input("Q_dot_sink", "power", "Heat given to the sink", "250 kW", low="0 kW", **positive)
        case "source-duty":
            plan.input("Q_dot_source", "power", "Heat taken from the source", "200 kW", low="0 kW", **positive)
        case "swept-volume":
            plan.input("V_dot_swept", "volume flow", "Swept volume flow of the compressor", "300 m3/h",
                       low="0 m3/h", **positive)
            plan.input("eta_v", "number", "Volumetric efficiency", "0.85", low="0", high="1", **positive)
        case _:
            plan.input("m_dot_wf", "mass flow", "Mass flow of the refrigerant", "1 kg/s", low="0 kg/s", **positive)


def _cycle(plan: Plan, source: Stream | None, sink: Stream | None) -> None:
    levels = plan.section("Evaporating and condensing levels")
    _level(plan, levels, "e", "evaporating", source)
    _level(plan, levels, "c", "condensing", sink)
    for tag, word, mode in (("e", "Evaporating", "evaporating"), ("c", "Condensing", "condensing")):
        saturation(levels, tag, "wf", plan.options[mode], word)
    _states(plan, plan.section("States of the refrigerant"))
    _duty(plan, plan.section("Refrigerant flow and heat duties"))
    condenser = _exchanger(plan, sink, "Condenser", _condenser_zones(plan), "Q_dot_sink") if sink else None
    evaporator = _exchanger(plan, source, "Evaporator", _evaporator_zones(plan), "Q_dot_source") if source else None
    plan.demand("p_c > p_e", "the condensing pressure is not above the evaporating pressure",
                "the source is warmer than the sink needs: no heat pump is called for")
    for one in filter(None, (condenser, evaporator)):
        require_pinch(plan, one)
    for one in filter(None, (condenser, evaporator)):
        conductance(plan.section(f"{one.title}: conductance"), one)


def _level(plan: Plan, section: Section, tag: str, side: str, it: Stream | None) -> None:
    """The unknown saturation temperature where the level hangs on the pinch."""
    if plan.options[side] != "pinch":
        return
    if it is None:
        # Only options decide the structure, so options that contradict are told before any number.
        from calcpack.errors import Fault, SpecError
        role = "source" if tag == "e" else "sink"
        raise SpecError(Fault(f"option {side}: pinch needs a {role} stream, and {role}_stream is none",
                              hint=f"set {side} to temperature or pressure, or give the stream"))
    section.property("T_crit_wf", "T_crit(wf)", "Critical temperature of the refrigerant") \
        if "T_crit_wf" not in {step.symbol for step in plan.steps} else None
    word = "evaporator" if tag == "e" else "condenser"
    inlet = it.name("T", "in")
    if tag == "e":
        bracket = (f"{inlet} - 90 K", f"min({inlet}, T_crit_wf - 5 K)")
    else:
        bracket = (f"{inlet}", "T_crit_wf - 2 K")
    section.root(f"T_{tag}", f"dT_min_{tag} - dT_pinch_{tag}", bracket,
                 f"{side.capitalize()} temperature at which the {word} has the wanted pinch", "degC",
                 note="the smallest difference is found along the whole exchanger, in the profile below")


def _states(plan: Plan, section: Section) -> None:
    if plan.options["suction"] == "superheated":
        section.formula("T_1", "T_e + dT_sh", "Temperature at the compressor inlet", "degC")
        state(section, "1", "wf", "at the compressor inlet", p="p_e", T="T_1")
    else:
        state(section, "1", "wf", "at the compressor inlet", p="p_e", x="1")
    section.property("rho_1", "rho(wf, p=p_e, h=h_1)", "Density at the compressor inlet")
    compressor(section, "wf", "1", "2", "p_c", "f_loss")
    section.property("T_bub", "T(wf, p=p_c, x=0)", "Bubble-point temperature at the condensing pressure")
    if plan.options["liquid"] == "subcooled":
        section.formula("T_3", "T_bub - dT_sc", "Temperature at the condenser outlet", "degC")
        state(section, "3", "wf", "at the condenser outlet", p="p_c", T="T_3")
    else:
        state(section, "3", "wf", "at the condenser outlet", p="p_c", x="0")
    valve(section, "wf", "3", "4", "p_e")


def _duty(plan: Plan, section: Section) -> None:
    q_sink, q_source = "h_2 - h_3", "h_1 - h_4"
    match plan.options["size_by"]:
        case "sink-duty":
            section.formula("m_dot_wf", f"Q_dot_sink / ({q_sink})", "Mass flow of the refrigerant", "kg/s")
        case "source-duty":
            section.formula("m_dot_wf", f"Q_dot_source / ({q_source})", "Mass flow of the refrigerant", "kg/s")
        case "swept-volume":
            section.formula("m_dot_wf", "eta_v * V_dot_swept * rho_1", "Mass flow of the refrigerant", "kg/s",
                            reference="volumetric efficiency: volume flow drawn over swept volume flow")
    if plan.options["size_by"] != "sink-duty":
        section.formula("Q_dot_sink", f"m_dot_wf * ({q_sink})", "Heat given to the sink", "kW")
    if plan.options["size_by"] != "source-duty":
        section.formula("Q_dot_source", f"m_dot_wf * ({q_source})", "Heat taken from the source", "kW")


def _condenser_zones(plan: Plan) -> tuple[Zone, ...]:
    zones = [Zone("condensing", "cc", "h_f_c", "h_g_c", "T_bub", "T_c"),
             Zone("desuperheating", "cd", "h_g_c", "h_2", "T_c", "T_2")]
    if plan.options["liquid"] == "subcooled":
        zones.insert(0, Zone("subcooling", "cs", "h_3", "h_f_c", "T_3", "T_bub"))
    return tuple(zones)


def _evaporator_zones(plan: Plan) -> tuple[Zone, ...]:
    zones = [Zone("evaporating", "ee", "h_4", "h_g_e", "T_4", "T_e")]
    if plan.options["suction"] == "superheated":
        zones.append(Zone("superheating", "es", "h_g_e", "h_1", "T_e", "T_1"))
    return tuple(zones)


def _exchanger(plan: Plan, it: Stream, title: str, zones: tuple[Zone, ...], duty: str) -> Exchanger:
    """Balance and profile of one exchanger; closes the level's root if the pinch sets it."""
    tag, side = ("c", "condensing") if title == "Condenser" else ("e", "evaporating")
    section = plan.section(f"{title}: balance and profile")
    if tag == "c":
        section.property("h_f_c", "h(wf, p=p_c, x=0)", "Enthalpy of the saturated liquid at the condensing pressure")
        section.property("h_g_c", "h(wf, p=p_c, x=1)", "Enthalpy of the dry vapour at the condensing pressure")
    else:
        section.property("h_g_e", "h(wf, p=p_e, x=1)", "Enthalpy of the dry vapour at the evaporating pressure")
    balance(section, it, duty)
    result = Exchanger(title, tag, "wf", f"p_{tag}", "m_dot_wf", duty, it, zones)
    profile(plan, section, result)
    if plan.options[side] == "pinch":
        plan.close(f"T_{tag}")
    return result


def _power(plan: Plan) -> None:
    section = plan.section("Power and coefficient of performance")
    section.formula("W_dot_shaft", "m_dot_wf * w_comp", "Power at the compressor shaft", "kW")
    section.formula("Q_dot_loss", "f_loss * W_dot_shaft", "Heat lost by the compressor to its surroundings", "kW")
    section.formula("W_dot_el", "W_dot_shaft / (eta_drive * eta_motor)", "Electrical power of the motor", "kW")
    section.formula("W_dot_net", "W_dot_el + W_dot_aux", "Electrical power drawn in all", "kW")
    useful = "Q_dot_sink" if plan.options["serves"] == "heating" else "Q_dot_source"
    word = plan.options["serves"]
    section.formula("COP", f"{useful} / W_dot_net", f"Coefficient of performance, {word}",
                    reference=f"EN 14511-1 definition of the {word} coefficient, auxiliaries as stated in the inputs")
    section.formula("r_p", "p_c / p_e", "Pressure ratio of the compressor")
    section.formula("V_dot_1", "m_dot_wf / rho_1", "Volume flow at the compressor inlet", "m3/h")


def _bound(plan: Plan, source: Stream, sink: Stream) -> None:
    section = plan.section("Reversible bound between the same streams")
    entropic_mean(section, source, "T_m_source")
    entropic_mean(section, sink, "T_m_sink")
    plan.demand("T_m_sink > T_m_source", "the source is warmer than the sink: no heat pump is needed",
                "check the temperatures of the two streams")
    upper = "T_m_sink" if plan.options["serves"] == "heating" else "T_m_source"
    section.formula("COP_rev", f"{upper} / (T_m_sink - T_m_source)", "Coefficient of performance of a reversible machine",
                    reference="Lorenz: Carnot's relation with the entropic mean temperatures of the streams")
    section.formula("g_rev", "COP / COP_rev", "Share of the reversible bound that the machine reaches")
    plan.facts.bounds.append(Bound("COP", "COP_rev", "the coefficient of performance stays below the reversible one"))


def _facts(plan: Plan, source: Stream | None, sink: Stream | None) -> None:
    facts = plan.facts
    labels = {"1": ("compressor inlet", "p_e"), "2": ("compressor outlet", "p_c"),
              "3": ("condenser outlet", "p_c"), "4": ("evaporator inlet", "p_e")}
    facts.states += [StatePoint(n, label, "wf", f"T_{n}", p, f"h_{n}", f"s_{n}") for n, (label, p) in labels.items()]
    flow = {n: Flow("m_dot_wf", f"h_{n}", f"s_{n}") for n in labels}
    facts.volumes += [
        Volume("compressor", (flow["1"],), (flow["2"],), work_in=("W_dot_shaft",), heat_out=(("Q_dot_loss", None),),
               scale="W_dot_shaft"),
        Volume("expansion valve", (flow["3"],), (flow["4"],), scale="W_dot_shaft"),
        _condenser_volume(flow, sink), _evaporator_volume(flow, source),
        Volume("whole machine", work_in=("W_dot_shaft",), heat_in=(("Q_dot_source", None),),
               heat_out=(("Q_dot_sink", None), ("Q_dot_loss", None)), scale="Q_dot_sink", cycle=True)]
    if source:
        facts.streams.append(line(source, "Source", "Q_dot_source"))
    if sink:
        facts.streams.append(line(sink, "Sink", "Q_dot_sink"))
    paths = (Path("1", "2", "straight"), Path("2", "3", "p"), Path("3", "4", "h"), Path("4", "1", "p"))
    facts.diagrams += [Diagram("T-s", "wf", paths), Diagram("log p-h", "wf", paths)]
    facts.roles.update({"discharge": "T_2", "evaporating": "T_e", "condensing": "T_c", "low pressure": "p_e",
                        "high pressure": "p_c", "pressure ratio": "r_p", "suction": "1"})
    facts.sketch = _sketch(source, sink)


def _condenser_volume(flow: Mapping[str, Flow], sink: Stream | None) -> Volume:
    if sink is None:
        return Volume("condenser", (flow["2"],), (flow["3"],), heat_out=(("Q_dot_sink", None),), scale="Q_dot_sink")
    return Volume("condenser", (flow["2"], sink.flow_in), (flow["3"], sink.flow_out), scale="Q_dot_sink")


def _evaporator_volume(flow: Mapping[str, Flow], source: Stream | None) -> Volume:
    if source is None:
        return Volume("evaporator", (flow["4"],), (flow["1"],), heat_in=(("Q_dot_source", None),),
                      scale="Q_dot_source")
    return Volume("evaporator", (flow["4"], source.flow_in), (flow["1"], source.flow_out), scale="Q_dot_source")


def _sketch(source: Stream | None, sink: Stream | None) -> Sketch:
    boxes = (Box("Condenser", "exchanger", 1, 0), Box("Compressor", "compressor", 2, 1),
             Box("Evaporator", "exchanger", 1, 2), Box("Expansion valve", "valve", 0, 1))
    links = [Link("Evaporator", "Compressor", "1"), Link("Compressor", "Condenser", "2"),
             Link("Condenser", "Expansion valve", "3"), Link("Expansion valve", "Evaporator", "4")]
    if sink:
        links += [Link("Sink in", "Condenser", "sink in", "stream"), Link("Condenser", "Sink out", "sink out", "stream")]
    if source:
        links += [Link("Source in", "Evaporator", "source in", "stream"),
                  Link("Evaporator", "Source out", "source out", "stream")]
    links.append(Link("Power", "Compressor", "power", "power"))
    return Sketch(boxes, tuple(links))


def _roles(options: Mapping[str, str]) -> tuple[Role, ...]:
    roles = [Role("wf", "Refrigerant", "R-1234ze(E)")]
    if options["source_stream"] != "none":
        roles.append(Role("source", "Source stream", "water"))
    if options["sink_stream"] != "none":
        roles.append(Role("sink", "Sink stream", "water"))
    return tuple(roles)


def _results(options: Mapping[str, str]) -> tuple[str, ...]:
    duty = "Q_dot_sink" if options["serves"] == "heating" else "Q_dot_source"
    shown = ["COP", duty, "W_dot_net", "T_2"]
    if "none" not in (options["source_stream"], options["sink_stream"]):
        shown.append("g_rev")
    return tuple(shown)


METHOD = Method(
    name="vapour-compression",
    title="Single-stage vapour compression between two finite streams",
    text="A refrigerant evaporates at the cost of a source stream, is compressed in one stage, condenses against a "
         "sink stream and is throttled back. The evaporating and condensing levels follow from the smallest "
         "temperature difference along each exchanger, or are given, and the difference is then reported.",
    options=OPTIONS, roles=_roles, lay=lay,
    assumes=("steady state", "no pressure drop in exchangers and pipes",
             "no heat exchanged with the surroundings but the compressor's stated loss",
             "counter-flow exchangers", "kinetic and potential energy neglected"),
    leaves_out=("internal heat exchanger, economiser, two-stage and transcritical arrangements",
                "part load, defrosting, starting and stopping", "sizing of exchangers beyond UA"),
    sketch="""
      sink in ──►┌───────────┐──► sink out
           3 ┌───┤ Condenser ├◄──┐ 2
             │   └───────────┘   │
           ┌─┴─┐               ┌─┴──────────┐
           │ X │ valve         │ Compressor │◄── power
           └─┬─┘               └─┬──────────┘
           4 │   ┌────────────┐  │ 1
             └──►┤ Evaporator ├──┘
   source out ◄──└────────────┘◄── source in
""",
    results=_results)
