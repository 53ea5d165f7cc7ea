"""The heat that a Rankine engine takes: from the source or by way of a carrier loop, below or above the dome."""
from __future__ import annotations

from calcpack.plan.equipment import grounds
from calcpack.plan.equipment.exchanger import Exchanger, Zone, profile
from calcpack.plan.equipment.streams import Stream, balance
from calcpack.plan.plan import Plan, Section

PARTS = 4
"""A heater above the critical pressure has no zones: it is cut into so many parts of equal heat."""


def heater_inlet(plan: Plan) -> str:
    """The number of the state that enters the heater."""
    return "5" if plan.options["recuperator"] == "yes" else "2"


def supercritical(plan: Plan) -> bool:
    """Whether the heater works above the critical pressure."""
    return plan.options["evaporating"] == "supercritical"


def loop_heater(plan: Plan, source: Stream, loop: Stream) -> Exchanger:
    """The heat that the source gives to a carrier loop of given temperatures, by the pinch or the lowest outlet."""
    section = plan.section("Heat taken from the source by the loop")
    plan.demand("T_source_in - T_loop_in > dT_pinch_l", "the source is not hot enough for the loop and the pinch",
                "lower the loop's supply temperature, or take a smaller pinch")
    plan.demand("T_source_min < T_source_in", "the source's lowest outlet is not below its inlet",
                "check the two temperatures")
    section.property("h_source_low", "h(source, p=p_source, T=T_loop_out)",
                     "Enthalpy of the source if it were cooled to the loop's return temperature")
    section.formula("Q_dot_most", "m_dot_source * (h_source_in - h_source_low)",
                    "Heat that no exchanger could exceed", "kW",
                    reference="heat given up down to the lowest temperature that the source could reach")
    section.root("Q_dot_h", "min(dT_min_l - dT_pinch_l, T_source_out - T_source_min)", ("0.01 * Q_dot_most",
                                                                                        "Q_dot_most"),
                 "Heat taken at which the pinch or the lowest outlet is reached", "kW",
                 note="whichever is reached first governs; the difference is sought along the whole loop heater",
                 reference="derived: the smaller of pinch and outlet to spare is zero")
    balance(section, loop, "Q_dot_h")
    balance(section, source, "Q_dot_h")
    zone = Zone("heating the loop", "lh", "h_loop_out", "h_loop_in", "T_loop_out", "T_loop_in")
    result = Exchanger("Loop heater", "l", "loop", "p_loop", "m_dot_loop", "Q_dot_h", source, (zone,))
    profile(plan, section, result)
    plan.close("Q_dot_h")
    _governing(section, "l")
    return result


def _governing(section: Section, tag: str) -> None:
    pinch = f"dT_min_{tag} - dT_pinch_{tag}"
    section.choice("dT_spare", (
        (f"{pinch} <= T_source_out - T_source_min", "T_source_out - T_source_min",
         "the pinch governs; the outlet is this far above its lowest"),
        ("", pinch, "the lowest outlet governs; the pinch is this much wider than wanted")),
        "What governs the heat taken, and what the other condition has to spare", "K",
                   reference="derived: what is left of the condition that does not govern")


def heater(plan: Plan, source: Stream | None, loop: Stream | None) -> Exchanger | None:
    """Flow of working fluid and heat taken, with the heater's profile where there is a stream that heats it."""
    inlet = heater_inlet(plan)
    section = plan.section("Heater" if loop else "Heat taken from the source" if source else "Heat taken")
    if not supercritical(plan):
        section.property("h_f_e", "h(wf, p=p_e, x=0)", "Enthalpy of the saturated liquid at the evaporating pressure")
        if plan.options["expander_inlet"] != "saturated":
            section.property("h_g_e", "h(wf, p=p_e, x=1)", "Enthalpy of the dry vapour at the evaporating pressure")
    if source is None:
        section.formula("Q_dot_h", f"m_dot_wf * (h_3 - h_{inlet})", "Heat taken by the working fluid", "kW",
                        reference=grounds.HEAT_OF_FLOW)
        return None
    if not supercritical(plan):
        section.property("T_bub_e", "T(wf, p=p_e, x=0)", "Bubble-point temperature at the evaporating pressure")
    if loop is not None:
        section.formula("m_dot_wf", f"Q_dot_h / (h_3 - h_{inlet})", "Mass flow of the working fluid", "kg/s",
                        reference="energy balance of the heater")
        return _profile(plan, section, loop, inlet, "T_e" if plan.options["evaporating"] == "pinch" else None)
    if plan.options["evaporating"] == "pinch":
        return _at_outlet(plan, section, source, inlet)
    return _at_level(plan, section, source, inlet)


def _at_outlet(plan: Plan, section: Section, source: Stream, inlet: str) -> Exchanger:
    """The outlet is set: heat and flow follow at once, the level is the unknown."""
    section.property("h_source_set", "h(source, p=p_source, T=T_source_set)",
                     "Enthalpy of the source at the set outlet")
    section.formula("Q_dot_h", "m_dot_source * (h_source_in - h_source_set)", "Heat taken from the source", "kW",
                    reference=grounds.HEAT_OF_FLOW)
    section.formula("m_dot_wf", f"Q_dot_h / (h_3 - h_{inlet})", "Mass flow of the working fluid", "kg/s",
                    reference=grounds.FLOW_FOR_HEAT)
    balance(section, source, "Q_dot_h")
    return _profile(plan, section, source, inlet, "T_e")


def _at_level(plan: Plan, section: Section, source: Stream, inlet: str) -> Exchanger:
    """The level is set: the flow is the unknown, bounded by the pinch and by the lowest outlet."""
    plan.demand("T_source_in - T_3 > dT_pinch_h", "the source is not hot enough for the expander inlet and the pinch",
                "lower the evaporating level or the superheat, or take a smaller pinch")
    plan.demand("T_source_min < T_source_in", "the source's lowest outlet is not below its inlet",
                "check the two temperatures")
    section.property("h_source_low", f"h(source, p=p_source, T=T_{inlet})",
                     "Enthalpy of the source if it were cooled to the working fluid's inlet temperature")
    section.formula("m_dot_most", f"m_dot_source * (h_source_in - h_source_low) / (h_3 - h_{inlet})",
                    "Flow of working fluid that no exchanger could exceed", "kg/s",
                    reference="energy balance with the source cooled as far as it could be")
    section.root("m_dot_wf", "min(dT_min_h - dT_pinch_h, T_source_out - T_source_min)",
                 ("0.01 * m_dot_most", "m_dot_most"),
                 "Mass flow of the working fluid at which the pinch or the lowest outlet is reached", "kg/s",
                 note="whichever is reached first governs; the smallest difference is found along the whole heater",
                 reference="derived: the smaller of pinch and outlet to spare is zero")
    section.formula("Q_dot_h", f"m_dot_wf * (h_3 - h_{inlet})", "Heat taken from the source", "kW",
                    reference=grounds.HEAT_OF_FLOW)
    balance(section, source, "Q_dot_h")
    result = _profile(plan, section, source, inlet, "m_dot_wf")
    _governing(section, "h")
    return result


def _profile(plan: Plan, section: Section, stream: Stream, inlet: str, unknown: str | None) -> Exchanger:
    zones = _parts(section, inlet) if supercritical(plan) else _zones(plan, inlet)
    result = Exchanger("Heater", "h", "wf", "p_e", "m_dot_wf", "Q_dot_h", stream, zones)
    profile(plan, section, result)
    if unknown:
        plan.close(unknown)
    return result


def _zones(plan: Plan, inlet: str) -> tuple[Zone, ...]:
    zones = [Zone("preheating", "hp", f"h_{inlet}", "h_f_e", f"T_{inlet}", "T_bub_e")]
    if plan.options["expander_inlet"] == "saturated":
        return (*zones, Zone("evaporating", "he", "h_f_e", "h_3", "T_bub_e", "T_3"))
    return (*zones, Zone("evaporating", "he", "h_f_e", "h_g_e", "T_bub_e", "T_e"),
            Zone("superheating", "hs", "h_g_e", "h_3", "T_e", "T_3"))


def _parts(section: Section, inlet: str) -> tuple[Zone, ...]:
    """Parts of equal heat, each with a conductance of its own, since the heat capacity has a peak on the way."""
    ends = [(f"h_{inlet}", f"T_{inlet}")]
    for index in range(1, PARTS):
        h = section.formula(f"h_h{index}", f"h_{inlet} + {index / PARTS:g} * (h_3 - h_{inlet})",
                            f"Enthalpy after {index} of {PARTS} parts of the heat", "kJ/kg",
                            reference=grounds.PARTS_OF_HEAT)
        ends.append((h, section.property(f"T_h{index}", f"T(wf, p=p_e, h={h})",
                                         f"Temperature after {index} of {PARTS} parts of the heat")))
    ends.append(("h_3", "T_3"))
    return tuple(Zone(f"part {index + 1} of {PARTS}", f"h{index + 1}p", ends[index][0], ends[index + 1][0],
                      ends[index][1], ends[index + 1][1]) for index in range(PARTS))
