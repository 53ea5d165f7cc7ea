"""What vapour-compression machines share: options, inputs, levels, exchangers, drive, reversible bound."""
from __future__ import annotations

from collections.abc import Mapping

from calcpack.errors import Fault, SpecError
from calcpack.methods import ladders
from calcpack.methods.method import Option, Role
from calcpack.plan.equipment import grounds
from calcpack.plan.equipment.exchanger import Exchanger, Zone, profile
from calcpack.plan.equipment.streams import Stream, balance, entropic_mean, inlet_state, stream
from calcpack.plan.facts import Bound, Flow, Link, Volume
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
SERVES = Option("serves", "Which coefficient of performance is the result", {
    "heating": "heat given to the sink over power drawn",
    "cooling": "heat taken from the source over power drawn"})
SUCTION = Option("suction", "State of the vapour at the evaporator outlet", {
    "superheated": "superheat at the evaporator outlet is an input",
    "saturated": "dry saturated vapour"})
LIQUID = Option("liquid", "State at the condenser outlet", {
    "subcooled": "subcooling is an input",
    "saturated": "saturated liquid"})
SHARE = {"low": "0", "low_open": True, "high": "1"}
POSITIVE = {"low": "0 K", "low_open": True}


def level_options(first: str = "pinch", without: str = "") -> tuple[Option, ...]:
    """Options of both levels and both streams; ``first`` is the levels' default, ``without`` a side to leave out."""
    values = {first: LEVEL[first]} | LEVEL
    return tuple(Option(name, title, meant) for name, title, meant in (
        ("evaporating", "How the evaporating level is set", values),
        ("condensing", "How the condensing level is set", values),
        ("source_stream", "What is known of the source stream", STREAM),
        ("sink_stream", "What is known of the sink stream", STREAM)) if name not in without.split())


def size_options(*extra: tuple[str, str]) -> Option:
    """What sets the size of the machine; ``extra`` are further values with their meaning."""
    return Option("size_by", "What sets the size of the machine", {
        "sink-duty": "the heat given to the sink is an input",
        "source-duty": "the heat taken from the source is an input", **dict(extra),
        "mass-flow": "the refrigerant's mass flow is an input"})


def streams(plan: Plan, source: dict[str, str] | None = None,
            sink: dict[str, str] | None = None) -> tuple[Stream | None, Stream | None]:
    """Source and sink with their inputs and typical values; None where the option says that there is none."""
    modes = plan.options["source_stream"], plan.options["sink_stream"]
    return (None if modes[0] == "none" else stream(plan, "source", gives_heat=True, mode=modes[0],
                                                   typical=source),
            None if modes[1] == "none" else stream(plan, "sink", gives_heat=False, mode=modes[1], typical=sink))


def ends(plan: Plan, *of: Stream | None) -> None:
    """The section of the streams' states at their ends, where there are streams."""
    present = [one for one in of if one]
    if present:
        section = plan.section("Streams at their ends")
        for one in present:
            inlet_state(section, one)


def level_inputs(plan: Plan, typical: Mapping[str, tuple[str, str]], tags: str = "ec") -> None:
    """Inputs of the levels ``tags``; ``typical`` gives a tag's usual temperature and pressure."""
    words = {"e": ("evaporating", "evaporator", "5 K"), "c": ("condensing", "condenser", "3 K")}
    for tag in tags:
        side, word, pinch = words[tag]
        mode = plan.options[side]
        if mode == "pinch":
            plan.input(f"dT_pinch_{tag}", "temperature difference",
                       f"Smallest temperature difference in the {word}",
                       pinch, **POSITIVE)
        elif mode == "temperature":
            plan.input(f"T_{tag}", "temperature", f"{side.capitalize()} temperature (dew point)",
                       typical[tag][0])
        else:
            plan.input(f"p_{tag}", "pressure", f"{side.capitalize()} pressure", typical[tag][1], low="0 bar",
                       low_open=True)


def end_inputs(plan: Plan, *, suction: str = "evaporator outlet") -> None:
    """Superheat and subcooling, where the options ask for them."""
    if plan.options["suction"] == "superheated":
        plan.input("dT_sh", "temperature difference", f"Superheat at the {suction}", "6 K",
                   note="for none, set the option suction to saturated", **POSITIVE)
    if plan.options.get("liquid") == "subcooled":
        plan.input("dT_sc", "temperature difference", "Subcooling at the condenser outlet", "4 K",
                   note="for none, set the option liquid to saturated", **POSITIVE)


def drive_inputs(plan: Plan, motor: str = "0.94", gear: str = "0.98") -> None:
    """Efficiencies of drive and motor, the compressor's loss, auxiliaries."""
    plan.input("eta_drive", "number", "Efficiency of the drive between motor and compressor", gear, **SHARE)
    plan.input("eta_motor", "number", "Efficiency of the motor with its converter", motor, **SHARE)
    plan.input("f_loss", "number", "Share of the shaft power that the compressor loses as heat", "0.02",
               low="0", high="0.5")
    plan.input("W_dot_aux", "power", "Electrical power of pumps, fans and controls", "0 kW", low="0 kW",
               default="0 kW")


def size_inputs(plan: Plan, flow: str = "m_dot_wf", title: str = "Mass flow of the refrigerant") -> None:
    """The duty or flow that sets the size; a method adds the inputs of its own values."""
    match plan.options["size_by"]:
        case "sink-duty":
            plan.input("Q_dot_sink", "power", "Heat given to the sink", "250 kW", low="0 kW", low_open=True)
        case "source-duty":
            plan.input("Q_dot_source", "power", "Heat taken from the source", "200 kW", low="0 kW",
                       low_open=True)
        case "mass-flow":
            plan.input(flow, "mass flow", title, "1 kg/s", low="0 kg/s", low_open=True)


def level(plan: Plan, section: Section, tag: str, side: str, it: Stream | None, fluid: str = "wf",
          far: int | None = None, floor: bool = False) -> None:
    """The unknown saturation temperature where the level hangs on the pinch.

    ``far`` bounds how many kelvin it is sought beyond the stream, for what
    cannot be evaluated farther out; ``floor`` seeks it above the lowest
    temperature of the refrigerant's equation only.
    """
    if plan.options[side] != "pinch":
        return
    if it is None:
        # Only options decide the structure, so options that contradict are told before any number.
        role = "source" if tag == "e" else "sink"
        raise SpecError(Fault(f"option {side}: pinch needs a {role} stream, and {role}_stream is none",
                              hint=f"set {side} to temperature or pressure, or give the stream"))
    critical = f"T_crit_{fluid}"
    if critical not in {step.symbol for step in plan.steps}:
        section.property(critical, f"T_crit({fluid})", "Critical temperature of the refrigerant")
    word = "evaporator" if tag == "e" else "condenser"
    low, high = _bracket(it, tag, critical, far)
    if floor and tag == "e":
        least = section.property(f"T_min_{fluid}", f"T_min({fluid})",
                                 "Lowest temperature of the refrigerant's equation")
        low = f"max({low}, {least} + 0.1 K)"
    section.root(f"T_{tag}", f"dT_min_{tag} - dT_pinch_{tag}", (low, high),
                 f"{side.capitalize()} temperature at which the {word} has the wanted pinch", "degC",
                 note="the smallest difference is found along the whole exchanger, in the profile below",
                 reference=grounds.PINCH)


def _bracket(it: Stream, tag: str, critical: str, far: int | None) -> tuple[str, str]:
    """Where the saturation temperature is sought."""
    inlet = it.name("T", "in")
    if far is None:
        return (f"{inlet} - 90 K", f"min({inlet}, {critical} - 5 K)") if tag == "e" else (inlet,
                                                                                          f"{critical} - 2 K")
    # Where the outlet is not known before the flow is, twice as far from the inlet reaches as far.
    edge, reach = (it.name("T", "out"), far) if it.mode == "outlet" else (inlet, 2 * far)
    if tag == "e":
        return f"{edge} - {reach} K", f"min({inlet}, {critical} - 5 K)"
    return inlet, f"min({critical} - 2 K, {edge} + {reach} K)"


def condenser(plan: Plan, sink: Stream, inlet: str, outlet: str, *, fluid: str = "wf", flow: str = "m_dot_wf",
              p_out: str = "p_c") -> Exchanger:
    """Balance and profile of the condenser from state ``inlet`` to ``outlet``; closes the level's root.

    The pressure ``p_c`` is that of the inlet; where ``p_out`` differs, the
    pressure falls while the refrigerant condenses.
    """
    section = plan.section("Condenser: balance and profile")
    section.property("h_f_c", f"h({fluid}, p={p_out}, x=0)",
                     "Enthalpy of the saturated liquid at the condensing pressure")
    section.property("h_g_c", f"h({fluid}, p=p_c, x=1)",
                     "Enthalpy of the dry vapour at the condensing pressure")
    zones = [Zone("condensing", "cc", "h_f_c", "h_g_c", "T_bub", "T_c"),
             Zone("desuperheating", "cd", "h_g_c", f"h_{inlet}", "T_c", f"T_{inlet}")]
    if plan.options["liquid"] == "subcooled":
        zones.insert(0, Zone("subcooling", "cs", f"h_{outlet}", "h_f_c", f"T_{outlet}", "T_bub"))
    falling = "" if p_out == "p_c" else (
        f"{p_out} + (p_c - {p_out}) * min(max(({{h}} - h_f_c) / (h_g_c - h_f_c), 0), 1)")
    return _exchanger(plan, section,
                      Exchanger("Condenser", "c", fluid, "p_c", flow, "Q_dot_sink", sink, tuple(zones),
                                               falling))


def evaporator(plan: Plan, source: Stream, inlet: str, outlet: str, *, fluid: str = "wf",
               flow: str = "m_dot_wf",
               p_in: str = "p_e") -> Exchanger:
    """The same for the evaporator; ``p_e`` is the pressure of its outlet, ``p_in`` that of its inlet."""
    section = plan.section("Evaporator: balance and profile")
    section.property("h_g_e", f"h({fluid}, p=p_e, x=1)",
                     "Enthalpy of the dry vapour at the evaporating pressure")
    zones = [Zone("evaporating", "ee", f"h_{inlet}", "h_g_e", f"T_{inlet}", "T_e")]
    if plan.options["suction"] == "superheated":
        zones.append(Zone("superheating", "es", "h_g_e", f"h_{outlet}", "T_e", f"T_{outlet}"))
    falling = "" if p_in == "p_e" else (
        f"{p_in} + (p_e - {p_in}) * min(({{h}} - h_{inlet}) / (h_g_e - h_{inlet}), 1)")
    return _exchanger(plan, section, Exchanger("Evaporator", "e", fluid, "p_e", flow, "Q_dot_source", source,
                                               tuple(zones), falling))


def _exchanger(plan: Plan, section: Section, result: Exchanger) -> Exchanger:
    balance(section, result.stream, result.duty)
    profile(plan, section, result)
    side = "condensing" if result.tag == "c" else "evaporating"
    if plan.options[side] == "pinch":
        plan.close(f"T_{result.tag}")
    return result


def require_lift(plan: Plan) -> None:
    """Stop where the condensing pressure is not above the evaporating pressure."""
    plan.demand("p_c > p_e", "the condensing pressure is not above the evaporating pressure",
                "the source is warmer than the sink needs: no heat pump is called for")


def electrical(plan: Plan, section: Section, heating: str = "Q_dot_sink") -> None:
    """Loss, electrical powers and coefficient of performance from the shaft power ``W_dot_shaft``."""
    section.formula("Q_dot_loss", "f_loss * W_dot_shaft", "Heat lost by the compressor to its surroundings",
                    "kW", reference=grounds.LOST_HEAT)
    section.formula("W_dot_el", "W_dot_shaft / (eta_drive * eta_motor)", "Electrical power of the motor", "kW",
                    reference=grounds.DRIVE)
    section.formula("W_dot_net", "W_dot_el + W_dot_aux", "Electrical power drawn in all", "kW",
                    reference=grounds.NET_POWER)
    word = plan.options["serves"]
    useful = heating if word == "heating" else "Q_dot_source"
    section.formula("COP", f"{useful} / W_dot_net", f"Coefficient of performance, {word}",
                    reference=f"EN 14511-1 definition of the {word} coefficient, auxiliaries as stated in the inputs")


def bound(plan: Plan, source: Stream, sink: Stream, hot: Stream | None = None, *, law: bool = True) -> None:
    """The reversible coefficient of performance between the streams; ``law`` adds it as a bound.

    ``hot`` is a second sink, which takes the heat ``Q_dot_hot``.
    """
    section = plan.section("Reversible bound between the same streams")
    entropic_mean(section, source, "T_m_source")
    entropic_mean(section, sink, "T_m_sink")
    upper = "T_m_sink"
    if hot:
        entropic_mean(section, hot, "T_m_hot")
        upper = section.formula(
            "T_m_heat", "Q_dot_heat / (Q_dot_sink / T_m_sink + Q_dot_hot / T_m_hot)",
            "Entropic mean temperature of both sinks", "degC",
            reference="heat over entropy received, both sinks")
    plan.demand(f"{upper} > T_m_source", "the source is warmer than the sink: no heat pump is needed",
                "check the temperatures of the two streams")
    wanted = upper if plan.options["serves"] == "heating" else "T_m_source"
    section.formula("COP_rev", f"{wanted} / ({upper} - T_m_source)",
                    "Coefficient of performance of a reversible machine",
                    reference="Lorenz: Carnot's relation with the entropic mean temperatures of the streams")
    section.formula("g_rev", "COP / COP_rev", "Share of the reversible bound that the machine reaches",
                    reference=grounds.SHARE_OF_BOUND)
    if law:
        plan.facts.bounds.append(Bound("COP", "COP_rev",
                                       "the coefficient of performance stays below the reversible one"))
    ladders.heat_pump(plan, hot=hot is not None)


def sink_volume(name: str, into: Flow, out: Flow, it: Stream | None, duty: str = "Q_dot_sink") -> Volume:
    """The control volume of an exchanger that gives the heat ``duty``, to a stream or as such."""
    if it is None:
        return Volume(name, (into,), (out,), heat_out=((duty, None),), scale=duty)
    return Volume(name, (into, it.flow_in), (out, it.flow_out), scale=duty)


def source_volume(name: str, into: Flow, out: Flow, it: Stream | None, duty: str = "Q_dot_source") -> Volume:
    """The control volume of an exchanger that takes the heat ``duty``, from a stream or as such."""
    if it is None:
        return Volume(name, (into,), (out,), heat_in=((duty, None),), scale=duty)
    return Volume(name, (into, it.flow_in), (out, it.flow_out), scale=duty)


def duties(plan: Plan, section: Section, word: str, sink: str, source: str) -> None:
    """Flows of two circuits or stages, named by ``word``, and the heats, from what sets the size.

    ``sink`` and ``source`` are the enthalpy falls, a kilogram of the high and of
    the low flow; ``r_m`` is the high flow over the low one.
    """
    match plan.options["size_by"]:
        case "sink-duty":
            section.formula("m_dot_high", f"Q_dot_sink / ({sink})", f"Mass flow of the high {word}", "kg/s",
                            reference=grounds.FLOW_FOR_HEAT)
            section.formula("m_dot_low", "m_dot_high / r_m", f"Mass flow of the low {word}", "kg/s",
                            reference="definition of the flow ratio, solved for the low side")
        case "source-duty":
            section.formula("m_dot_low", f"Q_dot_source / ({source})", f"Mass flow of the low {word}", "kg/s",
                            reference=grounds.FLOW_FOR_HEAT)
    if plan.options["size_by"] != "sink-duty":
        section.formula("m_dot_high", "r_m * m_dot_low", f"Mass flow of the high {word}", "kg/s",
                        reference="definition of the flow ratio, solved for the high side")
        section.formula("Q_dot_sink", f"m_dot_high * ({sink})", "Heat given to the sink", "kW",
                        reference=grounds.HEAT_OF_FLOW)
    if plan.options["size_by"] != "source-duty":
        section.formula("Q_dot_source", f"m_dot_low * ({source})", "Heat taken from the source", "kW",
                        reference=grounds.HEAT_OF_FLOW)


def stream_links(name: str, it: Stream | None, box: str) -> list[Link]:
    """The sketch's lines of a stream through ``box``; ``name`` is the stream's as the stream table has it."""
    if it is None:
        return []
    low = name[:1].lower() + name[1:]
    return [Link(f"{name} in", box, f"{low} in", "stream"), Link(box, f"{name} out", f"{low} out", "stream")]


def roles(options: Mapping[str, str], refrigerants: tuple[Role, ...], *, source: str = "water",
          sink: str = "water") -> tuple[Role, ...]:
    """The refrigerants, and the fluids of the streams that the options call for."""
    result = list(refrigerants)
    if options.get("source_stream", "none") != "none":
        result.append(Role("source", "Source stream", source))
    if options.get("sink_stream", "none") != "none":
        result.append(Role("sink", "Sink stream", sink))
    return tuple(result)


def results(options: Mapping[str, str], *more: str) -> tuple[str, ...]:
    """Coefficient of performance, duty, power, and the share of the bound where there are both streams."""
    duty = "Q_dot_sink" if options["serves"] == "heating" else "Q_dot_source"
    both = "none" not in (options.get("source_stream", "none"), options.get("sink_stream", "none"))
    return ("COP", duty, "W_dot_net", *more, *(("g_rev",) if both else ()))
