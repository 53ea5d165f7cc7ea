"""Two-stage vapour compression with flash chamber, flash-gas removal or closed economiser, to its plan."""
from __future__ import annotations

from collections.abc import Mapping

from calcpack.methods import vapour_parts as parts
from calcpack.methods.method import Method, Option, Role
from calcpack.methods.two_stage_facts import facts
from calcpack.plan.equipment import grounds
from calcpack.plan.equipment.exchanger import conductance, require_pinch
from calcpack.plan.equipment.machines import compressor, saturation, state, valve
from calcpack.plan.equipment.streams import Stream
from calcpack.plan.plan import Plan, Section

OPTIONS = (
    Option("arrangement", "What stands between the stages", {
        "flash-chamber": "a vessel that also cools the low stage's gas down to saturation (flash intercooler)",
        "flash-gas-removal": "a vessel whose flash gas mixes with the low stage's gas",
        "closed-economiser": "an exchanger that subcools the liquid by evaporating a part of it, which is injected"}),
    Option("intermediate", "How the pressure between the stages is set", {
        "geometric-mean": "geometric mean of condensing and evaporating pressure",
        "given": "an input",
        "optimum": "the pressure of the highest coefficient of performance"}),
    *parts.level_options("temperature"),
    parts.size_options(),
    parts.SUCTION,
    parts.LIQUID,
    Option("serves", parts.SERVES.title, dict(reversed(parts.SERVES.values.items()))),
)


def lay(plan: Plan) -> None:
    """Lay the plan: levels, states, flows of both stages, exchangers, power, one stage for comparison, bound."""
    source, sink = parts.streams(plan, {"in": "-18 degC", "out": "-22 degC"},
                                 {"in": "24 degC", "out": "29 degC"})
    _inputs(plan)
    parts.ends(plan, source, sink)
    _levels(plan, source, sink)
    _states(plan, plan.section("States of the refrigerant"))
    if plan.options["intermediate"] == "optimum":
        plan.close("p_i")
    _duty(plan, plan.section("Refrigerant flows and heat duties"))
    exchangers = [parts.condenser(plan, sink, "4", "5", flow="m_dot_high")] if sink else []
    if source:
        exchangers.append(parts.evaporator(plan, source, "8", "1", flow="m_dot_low"))
    _require(plan)
    for one in exchangers:
        require_pinch(plan, one)
    for one in exchangers:
        conductance(plan.section(f"{one.title}: conductance"), one)
    _power(plan)
    _one_stage(plan)
    if source and sink:
        parts.bound(plan, source, sink)
    facts(plan, source, sink)


def _inputs(plan: Plan) -> None:
    parts.level_inputs(plan, {"e": ("-30 degC", "1.2 bar"), "c": ("35 degC", "13.5 bar")})
    if plan.options["intermediate"] == "given":
        plan.input("p_i", "pressure", "Pressure between the stages", "4 bar", low="0 bar", low_open=True)
    parts.end_inputs(plan)
    if plan.options["arrangement"] == "closed-economiser":
        plan.input("dT_eco", "temperature difference",
                   "Liquid above the injected part's saturation temperature", "5 K",
                   **parts.POSITIVE)
        plan.input("dT_sh_i", "temperature difference", "Superheat of the injected vapour", "3 K",
                   **parts.POSITIVE)
    for tag, word in (("low", "low"), ("high", "high")):
        plan.input(f"eta_{tag}", "number", f"Isentropic efficiency of the {word} stage", "0.72", **parts.SHARE)
    parts.drive_inputs(plan)
    parts.size_inputs(plan, "m_dot_low", "Mass flow of the low stage")


def _levels(plan: Plan, source: Stream | None, sink: Stream | None) -> None:
    section = plan.section("Evaporating, intermediate and condensing levels")
    parts.level(plan, section, "e", "evaporating", source)
    parts.level(plan, section, "c", "condensing", sink)
    for tag, word, mode in (("e", "Evaporating", "evaporating"), ("c", "Condensing", "condensing")):
        saturation(section, tag, "wf", plan.options[mode], word)
    match plan.options["intermediate"]:
        case "geometric-mean":
            section.formula("p_i", "sqrt(p_e * p_c)", "Pressure between the stages: the geometric mean", "bar",
                            reference="equal pressure ratios of both stages")
        case "optimum":
            section.optimum("p_i", "k_stages", ("1.1 * p_e", "0.9 * p_c"),
                            "Pressure between the stages of the highest coefficient of performance", "bar",
                            reference=grounds.BEST_COP)
    section.property("T_i", "T(wf, p=p_i, x=1)", "Saturation temperature between the stages (dew point)")


def _states(plan: Plan, section: Section) -> None:
    if plan.options["suction"] == "superheated":
        section.formula("T_1", "T_e + dT_sh", "Temperature at the low stage's inlet", "degC",
                        reference=grounds.SUPERHEAT)
        state(section, "1", "wf", "at the low stage's inlet", p="p_e", T="T_1")
    else:
        state(section, "1", "wf", "at the low stage's inlet", p="p_e", x="1")
    section.property("rho_1", "rho(wf, p=p_e, h=h_1)", "Density at the low stage's inlet")
    compressor(section, "wf", "1", "2", "p_i", "f_loss", "eta_low", "w_low", "low stage")
    section.property("T_bub", "T(wf, p=p_c, x=0)", "Bubble-point temperature at the condensing pressure")
    if plan.options["liquid"] == "subcooled":
        section.formula("T_5", "T_bub - dT_sc", "Temperature at the condenser outlet", "degC",
                        reference=grounds.SUBCOOLING)
        state(section, "5", "wf", "at the condenser outlet", p="p_c", T="T_5")
    else:
        state(section, "5", "wf", "at the condenser outlet", p="p_c", x="0")
    valve(section, "wf", "5", "6", "p_i", "after the first valve")
    _between(plan, section)
    valve(section, "wf", "7", "8", "p_e", "after the valve of the evaporator")
    compressor(section, "wf", "3", "4", "p_c", "f_loss", "eta_high", "w_high", "high stage")
    heat = "r_m * (h_4 - h_5)" if plan.options["serves"] == "heating" else "h_1 - h_8"
    section.formula("k_stages", f"({heat}) / (w_low + r_m * w_high)",
                    "Coefficient of performance on the work of the stages",
                    reference="a kilogram of the low stage")


def _between(plan: Plan, section: Section) -> None:
    """Liquid to the evaporator (7), vapour between the stages (9), the high stage's flow and inlet (3)."""
    arrangement = plan.options["arrangement"]
    if arrangement == "closed-economiser":
        section.formula("T_7", "T_6 + dT_eco", "Temperature of the subcooled liquid", "degC",
                        note="cooled towards the injected part as that enters the economiser",
                        reference=grounds.APPROACH)
        if plan.options["intermediate"] != "optimum":
            _require_economiser(plan)
        state(section, "7", "wf", "of the subcooled liquid", p="p_c", T="T_7")
        section.formula("T_9", "T_i + dT_sh_i", "Temperature of the injected vapour", "degC",
                        reference=grounds.SUPERHEAT)
        state(section, "9", "wf", "of the injected vapour", p="p_i", T="T_9")
    else:
        section.property("T_bub_i", "T(wf, p=p_i, x=0)", "Bubble-point temperature between the stages")
        plan.demand("T_i - T_bub_i < 1 K", "a blend with glide does not leave the vessel with one composition",
                    "use the closed-economiser arrangement, or a refrigerant without glide")
        state(section, "7", "wf", "of the liquid in the vessel", p="p_i", x="0")
        state(section, "3" if arrangement == "flash-chamber" else "9", "wf",
              "of the vapour in the vessel", p="p_i", x="1")
    title = "Flow of the high stage over that of the low stage"
    if arrangement == "flash-chamber":
        section.formula("r_m", "(h_2 - h_7) / (h_3 - h_6)", title, reference="energy balance of the vessel")
        return
    piece = "economiser" if arrangement == "closed-economiser" else "vessel"
    section.formula("r_m", "(h_9 - h_7) / (h_9 - h_5)", title, reference=f"energy balance of the {piece}")
    section.formula("h_3", "(h_2 + (r_m - 1) * h_9) / r_m", "Specific enthalpy at the high stage's inlet",
                    "kJ/kg",
                    reference="energy balance of the mixing point")
    state(section, "3", "wf", "at the high stage's inlet", p="p_i", h="h_3")


def _duty(plan: Plan, section: Section) -> None:
    parts.duties(plan, section, "stage", sink="h_4 - h_5", source="h_1 - h_8")
    if plan.options["arrangement"] != "flash-chamber":
        section.formula("m_dot_9", "m_dot_high - m_dot_low", "Mass flow of the vapour between the stages",
                        "kg/s", reference=grounds.MASS)


def _require(plan: Plan) -> None:
    parts.require_lift(plan)
    plan.demand("p_i > p_e and p_i < p_c", "the pressure between the stages is not between the levels",
                "give a pressure above the evaporating and below the condensing pressure")
    if plan.options["arrangement"] == "closed-economiser":
        if plan.options["intermediate"] == "optimum":
            _require_economiser(plan)
        plan.demand("T_9 < T_5", "the injected vapour would be warmer than the liquid that warms it",
                    "take less superheat of the injected vapour or a lower pressure between the stages")
    elif plan.options["liquid"] == "subcooled":
        plan.demand("h_6 > h_7", "the liquid reaches the vessel colder than it boils there",
                    "take less subcooling or a lower pressure between the stages")


def _require_economiser(plan: Plan) -> None:
    plan.demand("T_7 < T_5", "the economiser has no liquid to cool: it enters as cold as it should leave",
                "take a lower pressure between the stages or a smaller difference in the economiser")


def _power(plan: Plan) -> None:
    section = plan.section("Power and coefficient of performance")
    section.formula("W_dot_low", "m_dot_low * w_low", "Power at the shaft of the low stage", "kW",
                    reference=grounds.POWER_OF_FLOW)
    section.formula("W_dot_high", "m_dot_high * w_high", "Power at the shaft of the high stage", "kW",
                    reference=grounds.POWER_OF_FLOW)
    section.formula("W_dot_shaft", "W_dot_low + W_dot_high", "Power at both shafts", "kW", reference=grounds.SUM)
    for tag in ("low", "high"):
        section.formula(f"Q_dot_loss_{tag}", f"f_loss * W_dot_{tag}", f"Heat lost by the {tag} stage", "kW",
                        reference=grounds.LOST_HEAT)
    parts.electrical(plan, section)
    section.formula("r_p_low", "p_i / p_e", "Pressure ratio of the low stage", reference=grounds.PRESSURE_RATIO)
    section.formula("r_p_high", "p_c / p_i", "Pressure ratio of the high stage", reference=grounds.PRESSURE_RATIO)
    section.formula("r_p", "max(r_p_low, r_p_high)", "The greater pressure ratio",
                    reference="derived: the stage that the limits of a machine meet first")
    section.formula("V_dot_1", "m_dot_low / rho_1", "Volume flow at the low stage's inlet", "m3/h",
                    reference=grounds.VOLUME_FLOW)


def _one_stage(plan: Plan) -> None:
    """The same levels and the low stage's efficiency in one stage, to judge what the second brings."""
    section = plan.section("One stage between the same levels, for comparison")
    section.property("h_1s", "h(wf, p=p_c, s=s_1)", "Enthalpy after isentropic compression in one stage")
    section.formula("w_one", "(h_1s - h_1) / eta_low", "Specific work of one stage", "kJ/kg",
                    reference="isentropic efficiency: isentropic work over work of compression")
    section.formula("h_d_one", "h_1 + (1 - f_loss) * w_one", "Specific enthalpy after one stage", "kJ/kg",
                    reference="energy balance of the compressor, its loss taken off")
    section.property("T_d_one", "T(wf, p=p_c, h=h_d_one)", "Temperature after one stage")
    heat = "h_d_one - h_5" if plan.options["serves"] == "heating" else "h_1 - h_5"
    section.formula("k_one", f"({heat}) / w_one", "Coefficient of performance of one stage, on its work",
                    reference=grounds.COP)
    section.formula("g_stages", "k_stages / k_one - 1", "What the second stage brings, relative to one",
                    reference="derived: figure of two stages over that of one, less one")


def _roles(options: Mapping[str, str]) -> tuple[Role, ...]:
    cold = "{fluid: ethylene glycol, mass_fraction: 45 %, model: incompressible}"
    return parts.roles(options, (Role("wf", "Refrigerant", "R-717"),), source=cold)


def _results(options: Mapping[str, str]) -> tuple[str, ...]:
    return parts.results(options, "p_i", "T_4", "g_stages")


METHOD = Method(
    name="two-stage-compression",
    title="Two-stage vapour compression",
    text="The vapour is compressed in two stages. Between them the liquid on its way to the evaporator is cooled: in "
         "a vessel at the intermediate pressure, or in an exchanger by evaporating a part of it. One stage between "
         "the same levels is calculated beside it.",
    options=OPTIONS, roles=_roles, lay=lay,
    assumes=("steady state", "no pressure drop in exchangers and pipes", "vessel and mixing point adiabatic",
             "vapour and liquid leave the vessel saturated",
             "no heat exchanged with the surroundings but the compressors' stated loss",
             "counter-flow exchangers", "kinetic and potential energy neglected"),
    leaves_out=("the closed economiser's temperatures between its ends", "separate drives of the stages",
                "oil, part load and control"),
    sketch="""
      sink in ──►┌───────────┐──► sink out
           5 ┌───┤ Condenser ├◄──────────┐ 4
           ┌─┴─┐ └───────────┘   ┌───────┴────┐
           │ X │                 │ High stage │◄── power
           └─┬─┘   ┌────────┐ 3  └───────▲────┘
           6 └────►│ Vessel ├────────────┘
           7 ┌─────┤        │◄───────────┐ 2
           ┌─┴─┐   └────────┘    ┌───────┴───┐
           │ X │                 │ Low stage │◄── power
           └─┬─┘ ┌────────────┐  └───────▲───┘
           8 └──►┤ Evaporator ├──────────┘ 1
   source out ◄──└────────────┘◄── source in
""",
    results=_results)
