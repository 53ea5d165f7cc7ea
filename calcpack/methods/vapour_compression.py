"""Single-stage vapour-compression heat pump or refrigerator between two finite streams."""
from __future__ import annotations

from collections.abc import Mapping

from calcpack.methods import vapour_parts as parts
from calcpack.methods.method import Method, Option, Role
from calcpack.methods.vapour_facts import facts
from calcpack.methods.vapour_states import Route, pressures, require_exchange, route, state_inputs, states
from calcpack.plan.equipment import grounds
from calcpack.plan.equipment.exchanger import Exchanger, Zone, conductance, profile, require_pinch
from calcpack.plan.equipment.machines import saturation
from calcpack.plan.equipment.polynomial import polynomial_inputs, require_sound
from calcpack.plan.equipment.streams import Stream, balance, stream
from calcpack.plan.plan import Plan, Section

OPTIONS = (
    *parts.level_options(),
    parts.size_options(
        ("swept-volume", "swept volume flow and volumetric efficiency are inputs"),
        ("compressors",
         "the number of compressors is an input, and the flow of one where no polynomial gives it")),
    Option("suction", "State of the vapour at the evaporator outlet", parts.SUCTION.values),
    parts.LIQUID,
    parts.SERVES,
    Option("compressor", "How the compressor is described", {
        "efficiency": "isentropic efficiency is an input",
        "polynomial-en": "ten coefficients each for power and flow, EN 12900: °C, W, kg/h",
        "polynomial-ahri": "ten coefficients each for power and flow, ANSI/AHRI 540: °F, W, lb/h"}),
    Option("polynomial_levels", "Which temperatures the polynomials take", {
        "dew": "dew points at the compressor's inlet and outlet",
        "mid": "means of evaporation and of condensation"}),
    Option("internal_exchanger", "Heat from the liquid to the suction vapour", {
        "none": "no internal exchanger", "effectiveness": "an internal exchanger of given effectiveness"}),
    Option("suction_line", "Heat taken up between evaporator and compressor", {
        "adiabatic": "none", "warmed": "the vapour warms up in the line, of no use to the source's duty"}),
    Option("pressure_losses", "Pressure drops in exchangers and lines", {
        "none": "no pressure drop",
        "given": "of evaporator, condenser, suction and discharge line, as inputs"}),
    Option("desuperheater", "A second sink for the heat of the hot gas", {
        "none": "no desuperheater", "outlet": "a stream of its own: inlet and outlet temperature are inputs",
        "flow": "a stream of its own: inlet temperature and flow are inputs"}),
)


def lay(plan: Plan) -> None:
    """Lay the plan: states, duty, exchangers, power, and the reversible figure between the same streams."""
    source, sink = parts.streams(plan)
    hot = None
    if plan.options["desuperheater"] != "none":
        hot = stream(plan, "hot", gives_heat=False, mode=plan.options["desuperheater"],
                     typical={"in": "32 degC", "out": "38 degC", "m_dot": "0.3 kg/s"})
    way = route(plan.options)
    _inputs(plan, way)
    parts.ends(plan, source, sink, hot)
    _cycle(plan, way, source, sink, hot)
    _power(plan, way)
    if source and sink:
        # Heat from the surroundings is free to a heat pump: then the streams alone set no bound.
        parts.bound(plan, source, sink, hot, law=not (way.warmed and plan.options["serves"] == "heating"))
    facts(plan, way, (source, sink, hot))


def _inputs(plan: Plan, way: Route) -> None:
    parts.level_inputs(plan, {"e": ("2 degC", "2.2 bar"), "c": ("40 degC", "9 bar")})
    parts.end_inputs(plan, suction=way.labels()[way.evaporator_outlet])
    state_inputs(plan, way)
    if plan.options["compressor"] == "efficiency":
        plan.input("eta_is", "number", "Isentropic efficiency of the compressor", "0.72", **parts.SHARE)
        parts.drive_inputs(plan)
    else:
        polynomial_inputs(plan, plan.options["compressor"])
        # The coefficients of an enclosed machine give electrical power: motor and drive are in it.
        parts.drive_inputs(plan, motor="1", gear="1")
    parts.size_inputs(plan)
    _more_size_inputs(plan)


def _more_size_inputs(plan: Plan) -> None:
    match plan.options["size_by"]:
        case "swept-volume":
            plan.input("V_dot_swept", "volume flow", "Swept volume flow of the compressor", "300 m3/h",
                       low="0 m3/h", low_open=True)
            plan.input("eta_v", "number", "Volumetric efficiency", "0.85", low="0", high="1", low_open=True)
        case "compressors":
            plan.input("n_comp", "number", "Number of compressors at work", "2", low="0", low_open=True)
            if plan.options["compressor"] == "efficiency":
                plan.input("m_dot_one", "mass flow", "Flow of one compressor", "0.6 kg/s", low="0 kg/s",
                           low_open=True)


def _cycle(plan: Plan, way: Route, source: Stream | None, sink: Stream | None, hot: Stream | None) -> None:
    levels = plan.section("Evaporating and condensing levels")
    # Far from the streams polynomials mean nothing, a drop leaves no pressure, an internal exchanger overheats the gas.
    plain = plan.options["compressor"] == "efficiency" and not (way.losses or way.exchanger)
    far = None if plain else 35
    parts.level(plan, levels, "e", "evaporating", source, far=far)
    parts.level(plan, levels, "c", "condensing", sink, far=far)
    for tag, word, mode in (("e", "Evaporating", "evaporating"), ("c", "Condensing", "condensing")):
        saturation(levels, tag, "wf", plan.options[mode], word)
    pressures(levels, way)
    states(plan, plan.section("States of the refrigerant"), way)
    _duty(plan, way, plan.section("Refrigerant flow and heat duties"), hot)
    condenser = parts.condenser(plan, sink, way.condenser_inlet, "3", p_out=way.p("3")) if sink else None
    evaporator = parts.evaporator(plan, source, "4", way.evaporator_outlet, p_in=way.p("4")) if source else None
    parts.require_lift(plan)
    _require(plan, way)
    desuperheater = _desuperheater(plan, way, hot) if hot else None
    for one in filter(None, (condenser, evaporator, desuperheater)):
        require_pinch(plan, one)
    for one in filter(None, (condenser, evaporator, desuperheater)):
        conductance(plan.section(f"{one.title}: conductance"), one)


def _require(plan: Plan, way: Route) -> None:
    """What must hold of the pieces beside the exchangers, once the levels are found."""
    if way.losses:
        plan.demand("p_1 > 0 bar and p_3 > p_e", "the pressure drops are greater than the pressures allow",
                    "give smaller pressure drops")
    if way.exchanger:
        require_exchange(plan)
    if plan.options["compressor"] != "efficiency":
        require_sound(plan)
    if way.hot:
        plan.demand(f"h_{way.discharge} > h_8", "the hot gas has no superheat left for the desuperheater",
                    "leave less superheat after the desuperheater, or leave it out")


FLOW_GROUNDS = {"swept-volume": "volumetric efficiency: volume flow drawn over swept volume flow",
                "compressors": "mass balance: compressors side by side, each with the flow of one"}
"""What the flow stands on where it does not follow from a duty."""


def _duty(plan: Plan, way: Route, section: Section, hot: Stream | None) -> None:
    q_sink, q_source = f"h_{way.condenser_inlet} - h_3", f"h_{way.evaporator_outlet} - h_4"
    flow = {"sink-duty": f"Q_dot_sink / ({q_sink})", "source-duty": f"Q_dot_source / ({q_source})",
            "swept-volume": "eta_v * V_dot_swept * rho_1", "compressors": "n_comp * m_dot_one"}
    by = plan.options["size_by"]
    if by in flow:
        section.formula("m_dot_wf", flow[by], "Mass flow of the refrigerant", "kg/s",
                        reference=FLOW_GROUNDS.get(by, grounds.FLOW_FOR_HEAT))
    if plan.options["compressor"] != "efficiency" and by != "compressors":
        section.formula("n_comp", "m_dot_wf / m_dot_one", "Number of such compressors that the flow calls for",
                        note="a fraction is a share of the time, or of the speed where flow follows speed",
                        reference="mass balance: flow of the circuit over flow of one compressor")
    if by != "sink-duty":
        section.formula("Q_dot_sink", f"m_dot_wf * ({q_sink})", "Heat given to the sink", "kW",
                        reference=grounds.HEAT_OF_FLOW)
    if by != "source-duty":
        section.formula("Q_dot_source", f"m_dot_wf * ({q_source})", "Heat taken from the source", "kW",
                        reference=grounds.HEAT_OF_FLOW)
    if way.warmed:
        section.formula("Q_dot_line", f"m_dot_wf * (h_1 - h_{way.line_inlet})",
                        "Heat taken up by the suction line from its surroundings", "kW", reference=grounds.HEAT_OF_FLOW)
    if way.exchanger:
        section.formula("Q_dot_ihx", f"m_dot_wf * (h_{way.line_inlet} - h_5)",
                        "Heat exchanged in the internal exchanger",
                        "kW", reference=grounds.HEAT_OF_FLOW)
    if hot:
        section.formula("Q_dot_hot", f"m_dot_wf * (h_{way.discharge} - h_8)", "Heat given to the hot stream",
                        "kW", reference=grounds.HEAT_OF_FLOW)
        section.formula("Q_dot_heat", "Q_dot_sink + Q_dot_hot", "Heat given to both sinks", "kW", reference=grounds.SUM)


def _desuperheater(plan: Plan, way: Route, hot: Stream) -> Exchanger:
    section = plan.section("Desuperheater: balance and profile")
    balance(section, hot, "Q_dot_hot")
    inlet = way.discharge
    zone = Zone("desuperheating", "dd", "h_8", f"h_{inlet}", "T_8", f"T_{inlet}")
    result = Exchanger("Desuperheater", "d", "wf", "p_c", "m_dot_wf", "Q_dot_hot", hot, (zone,))
    profile(plan, section, result)
    return result


def _power(plan: Plan, way: Route) -> None:
    section = plan.section("Power and coefficient of performance")
    section.formula("W_dot_shaft", "m_dot_wf * w_comp", "Power at the compressor shaft", "kW",
                    reference=grounds.POWER_OF_FLOW)
    parts.electrical(plan, section, heating="Q_dot_heat" if way.hot else "Q_dot_sink")
    section.formula("r_p", f"{way.p('2')} / {way.p('1')}", "Pressure ratio of the compressor",
                    reference=grounds.PRESSURE_RATIO)
    section.formula("V_dot_1", "m_dot_wf / rho_1", "Volume flow at the compressor inlet", "m3/h",
                    reference=grounds.VOLUME_FLOW)


def _roles(options: Mapping[str, str]) -> tuple[Role, ...]:
    roles = parts.roles(options, (Role("wf", "Refrigerant", "R-1234ze(E)"),))
    return roles if options["desuperheater"] == "none" else (*roles, Role("hot", "Hot stream", "water"))


def _results(options: Mapping[str, str]) -> tuple[str, ...]:
    hot = () if options["desuperheater"] == "none" else ("Q_dot_hot",)
    return parts.results(options, "T_2", *hot)


METHOD = Method(
    name="vapour-compression",
    title="Single-stage vapour compression between two finite streams",
    text="A refrigerant evaporates at the cost of a source stream, is compressed in one stage, condenses against a "
         "sink stream and is throttled back. The evaporating and condensing levels follow from the smallest "
         "temperature difference along each exchanger, or are given, and the difference is then reported.",
    options=OPTIONS, roles=_roles, lay=lay,
    assumes=("steady state", "no pressure drop in exchangers and pipes but those given",
             "a given drop in an exchanger falls where the refrigerant evaporates or condenses, in step with its heat",
             "no heat exchanged with the surroundings but the compressor's stated loss and the suction line's warming",
             "counter-flow exchangers", "kinetic and potential energy neglected"),
    leaves_out=("economiser, two-stage and transcritical arrangements, which have methods of their own",
                "part load, defrosting, starting and stopping", "sizing of exchangers beyond UA",
                "losses of the internal exchanger beyond its effectiveness"),
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
      (with an internal exchanger, 3 and 5 meet in it; a desuperheater takes 2 before the condenser)
""",
    results=_results)
