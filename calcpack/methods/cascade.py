"""Two vapour-compression circuits with refrigerants of their own, one above the other, to their plan."""
from __future__ import annotations

from collections.abc import Mapping

from calcpack.methods import vapour_parts as parts
from calcpack.methods.cascade_facts import facts
from calcpack.methods.method import Method, Option, Role
from calcpack.plan.equipment import grounds
from calcpack.plan.equipment.coupled import Coupled, Side, coupled_profile
from calcpack.plan.equipment.exchanger import Zone, conductance, require_pinch
from calcpack.plan.equipment.machines import compressor, saturation, state, valve
from calcpack.plan.equipment.streams import Stream
from calcpack.plan.plan import Plan, Section

HIGH = "wf_high"

OPTIONS = (
    Option("intermediate", "How the level between the circuits is set", {
        "given": "the low circuit's condensing temperature is an input",
        "optimum": "the temperature of the highest coefficient of performance"}),
    *parts.level_options("temperature"),
    parts.size_options(),
    parts.SUCTION,
    parts.LIQUID,
    Option("serves", parts.SERVES.title, dict(reversed(parts.SERVES.values.items()))),
)


def lay(plan: Plan) -> None:
    """Lay the plan: levels, both circuits, flows, exchangers, power, bound."""
    source, sink = parts.streams(plan,
                                 {"in": "-42 degC", "out": "-46 degC", "p": "1.013 bar", "m_dot": "40 kg/s"},
                                 {"in": "24 degC", "out": "29 degC"})
    _inputs(plan)
    parts.ends(plan, source, sink)
    _levels(plan, source, sink)
    _low_circuit(plan, plan.section("States of the low circuit"))
    _high_circuit(plan, plan.section("States of the high circuit"))
    if plan.options["intermediate"] == "optimum":
        plan.close("T_cl")
    _duty(plan, plan.section("Refrigerant flows and heat duties"))
    exchangers = [parts.condenser(plan, sink, "6", "7", fluid=HIGH, flow="m_dot_high")] if sink else []
    if source:
        exchangers.append(parts.evaporator(plan, source, "4", "1", flow="m_dot_low"))
    _cascade_exchanger(plan)
    _require(plan)
    for one in exchangers:
        require_pinch(plan, one)
    for one in exchangers:
        conductance(plan.section(f"{one.title}: conductance"), one)
    _power(plan)
    if source and sink:
        parts.bound(plan, source, sink)
    facts(plan, HIGH, source, sink)


def _inputs(plan: Plan) -> None:
    parts.level_inputs(plan, {"e": ("-50 degC", "6.8 bar"), "c": ("35 degC", "13.5 bar")})
    if plan.options["intermediate"] == "given":
        plan.input("T_cl", "temperature", "Condensing temperature of the low circuit (dew point)", "-8 degC")
    plan.input("dT_cas", "temperature difference",
               "Low circuit's condensing above high circuit's evaporating temperature",
               "5 K", **parts.POSITIVE)
    parts.end_inputs(plan)
    if plan.options["suction"] == "superheated":
        plan.input("dT_sh_high", "temperature difference",
                   "Superheat of the high circuit after the cascade exchanger",
                   "4 K", **parts.POSITIVE)
    for tag in ("low", "high"):
        plan.input(f"eta_{tag}", "number", f"Isentropic efficiency of the {tag} circuit's compressor", "0.7",
                   **parts.SHARE)
    parts.drive_inputs(plan)
    parts.size_inputs(plan, "m_dot_low", "Mass flow of the low circuit")


def _levels(plan: Plan, source: Stream | None, sink: Stream | None) -> None:
    section = plan.section("Levels of both circuits")
    parts.level(plan, section, "e", "evaporating", source, floor=True)
    parts.level(plan, section, "c", "condensing", sink, fluid=HIGH)
    saturation(section, "e", "wf", plan.options["evaporating"], "Evaporating")
    saturation(section, "c", HIGH, plan.options["condensing"], "Condensing")
    if plan.options["intermediate"] == "optimum":
        section.property("T_crit_low", "T_crit(wf)", "Critical temperature of the low circuit's refrigerant")
        section.optimum("T_cl", "k_circuits", ("T_e + dT_cas + 5 K", "min(T_c - 2 K, T_crit_low - 2 K)"),
                        "Condensing temperature of the low circuit of the highest coefficient of performance",
                        "degC", reference=grounds.BEST_COP)
    section.property("p_cl", "p(wf, T=T_cl, x=1)", "Condensing pressure of the low circuit (dew point)")
    section.formula("T_eh", "T_cl - dT_cas", "Evaporating temperature of the high circuit (dew point)", "degC",
                    reference="definition of the approach in the cascade exchanger")
    section.property("p_eh", f"p({HIGH}, T=T_eh, x=1)", "Evaporating pressure of the high circuit (dew point)")


def _suction(plan: Plan, section: Section, number: str, fluid: str, tags: tuple[str, str], where: str) -> None:
    """State at a compressor's inlet; ``tags`` are those of its level and of its superheat."""
    level, superheat = tags
    if plan.options["suction"] == "superheated":
        section.formula(f"T_{number}", f"T_{level} + {superheat}", f"Temperature {where}", "degC",
                        reference=grounds.SUPERHEAT)
        state(section, number, fluid, where, p=f"p_{level}", T=f"T_{number}")
    else:
        state(section, number, fluid, where, p=f"p_{level}", x="1")
    section.property(f"rho_{number}", f"rho({fluid}, p=p_{level}, h=h_{number})", f"Density {where}")


def _low_circuit(plan: Plan, section: Section) -> None:
    _suction(plan, section, "1", "wf", ("e", "dT_sh"), "at the low compressor's inlet")
    compressor(section, "wf", "1", "2", "p_cl", "f_loss", "eta_low", "w_low", "low compressor")
    section.property("T_bub_cl", "T(wf, p=p_cl, x=0)",
                     "Bubble-point temperature of the low circuit's condensation")
    state(section, "3", "wf", "of the low circuit's liquid", p="p_cl", x="0")
    valve(section, "wf", "3", "4", "p_e", "after the low circuit's valve")


def _high_circuit(plan: Plan, section: Section) -> None:
    _suction(plan, section, "5", HIGH, ("eh", "dT_sh_high"), "at the high compressor's inlet")
    compressor(section, HIGH, "5", "6", "p_c", "f_loss", "eta_high", "w_high", "high compressor")
    section.property("T_bub", f"T({HIGH}, p=p_c, x=0)", "Bubble-point temperature at the condensing pressure")
    if plan.options["liquid"] == "subcooled":
        section.formula("T_7", "T_bub - dT_sc", "Temperature at the condenser outlet", "degC",
                        reference=grounds.SUBCOOLING)
        state(section, "7", HIGH, "at the condenser outlet", p="p_c", T="T_7")
    else:
        state(section, "7", HIGH, "at the condenser outlet", p="p_c", x="0")
    valve(section, HIGH, "7", "8", "p_eh", "after the high circuit's valve")
    section.formula("r_m", "(h_2 - h_3) / (h_5 - h_8)", "Flow of the high circuit over that of the low circuit",
                    reference="energy balance of the cascade exchanger")
    heat = "r_m * (h_6 - h_7)" if plan.options["serves"] == "heating" else "h_1 - h_4"
    section.formula("k_circuits", f"({heat}) / (w_low + r_m * w_high)",
                    "Coefficient of performance on the work of the compressors",
                    reference="a kilogram of the low circuit")


def _duty(plan: Plan, section: Section) -> None:
    parts.duties(plan, section, "circuit", sink="h_6 - h_7", source="h_1 - h_4")
    section.formula("Q_dot_cas", "m_dot_low * (h_2 - h_3)", "Heat exchanged in the cascade exchanger", "kW",
                    reference=grounds.HEAT_OF_FLOW)


def _cascade_exchanger(plan: Plan) -> None:
    section = plan.section("Cascade exchanger: profile")
    section.property("h_g_cl", "h(wf, p=p_cl, x=1)", "Enthalpy of the low circuit's dry vapour as it condenses")
    zones = (Zone("condensing", "xc", "h_3", "h_g_cl", "T_bub_cl", "T_cl"),
             Zone("desuperheating", "xd", "h_g_cl", "h_2", "T_cl", "T_2"))
    coupled_profile(plan, section, Coupled(
        "Cascade exchanger", "x", "Q_dot_cas", Side("wf", "p_cl", "m_dot_low", "h_3", "h_2"),
        Side(HIGH, "p_eh", "m_dot_high", "h_8", "h_5"), zones))


def _require(plan: Plan) -> None:
    plan.demand("T_c > T_e", "the condensing temperature is not above the evaporating temperature",
                "the source is warmer than the sink needs: no machine is called for")
    plan.demand("T_cl > T_e and T_eh < T_c", "the level between the circuits is not between their outer levels",
                "give a condensing temperature of the low circuit above the evaporating temperature, and below the "
                "condensing temperature of the high circuit")
    plan.demand("dT_min_x > 0 K", "the temperatures cross in the cascade exchanger",
                "take a greater difference in the cascade exchanger, or less superheat of the high circuit")


def _power(plan: Plan) -> None:
    section = plan.section("Power and coefficient of performance")
    for tag in ("low", "high"):
        section.formula(f"W_dot_{tag}", f"m_dot_{tag} * w_{tag}", f"Power at the shaft of the {tag} circuit",
                        "kW", reference=grounds.POWER_OF_FLOW)
    section.formula("W_dot_shaft", "W_dot_low + W_dot_high", "Power at both shafts", "kW", reference=grounds.SUM)
    for tag in ("low", "high"):
        section.formula(f"Q_dot_loss_{tag}", f"f_loss * W_dot_{tag}",
                        f"Heat lost by the {tag} circuit's compressor",
                        "kW", reference=grounds.LOST_HEAT)
    parts.electrical(plan, section)
    section.formula("r_p_low", "p_cl / p_e", "Pressure ratio of the low circuit", reference=grounds.PRESSURE_RATIO)
    section.formula("r_p_high", "p_c / p_eh", "Pressure ratio of the high circuit", reference=grounds.PRESSURE_RATIO)
    section.formula("V_dot_1", "m_dot_low / rho_1", "Volume flow at the low compressor's inlet", "m3/h",
                    reference=grounds.VOLUME_FLOW)
    section.formula("V_dot_5", "m_dot_high / rho_5", "Volume flow at the high compressor's inlet", "m3/h",
                    reference=grounds.VOLUME_FLOW)


def _roles(options: Mapping[str, str]) -> tuple[Role, ...]:
    return parts.roles(options, (Role("wf", "Refrigerant of the low circuit", "R-744"),
                                 Role(HIGH, "Refrigerant of the high circuit", "R-717")), source="air")


def _results(options: Mapping[str, str]) -> tuple[str, ...]:
    return parts.results(options, "T_cl", "Q_dot_cas", "T_6")


METHOD = Method(
    name="cascade",
    title="Cascade of two vapour-compression circuits",
    text="A low circuit takes the heat of the source and condenses against a high circuit's evaporating refrigerant; "
         "the high circuit gives the heat to the sink. Each has its own refrigerant, so that neither works at an "
         "awkward pressure.",
    options=OPTIONS, roles=_roles, lay=lay,
    assumes=("steady state", "no pressure drop in exchangers and pipes",
             "the low circuit's liquid leaves the cascade exchanger saturated",
             "no heat exchanged with the surroundings but the compressors' stated loss",
             "counter-flow exchangers", "kinetic and potential energy neglected"),
    leaves_out=("internal heat exchangers", "the pressure at standstill of the low circuit",
                "part load and control",
                "cautions for the high circuit's refrigerant"),
    sketch="""
      sink in ──►┌───────────┐──► sink out
           7 ┌───┤ Condenser ├◄──┐ 6
           ┌─┴─┐ └───────────┘ ┌─┴──────────────┐
           │ X │               │ High compressor│◄── power
           └─┬─┘ ┌───────────┐ └─▲──────────────┘
           8 └──►│  Cascade  ├───┘ 5
           3 ┌───┤ exchanger │◄──┐ 2
           ┌─┴─┐ └───────────┘ ┌─┴──────────────┐
           │ X │               │ Low compressor │◄── power
           └─┬─┘ ┌────────────┐└─▲──────────────┘
           4 └──►│ Evaporator ├──┘ 1
   source out ◄──└────────────┘◄── source in
""",
    results=_results)
