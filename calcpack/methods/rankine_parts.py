"""The parts of a Rankine engine's plan: levels, states, heater, condenser, power, bound."""
from __future__ import annotations

from calcpack.plan.equipment.exchanger import Exchanger, Zone, profile
from calcpack.plan.equipment.machines import expander, pump, saturation, state
from calcpack.plan.equipment.streams import Stream, balance, entropic_mean, line
from calcpack.plan.facts import Bound, Box, Diagram, Equal, Flow, Link, Path, Sketch, StatePoint, Volume
from calcpack.plan.plan import Plan, Section


def heater_inlet(plan: Plan) -> str:
    """The number of the state that enters the heater."""
    return "5" if plan.options["recuperator"] == "yes" else "2"


def condenser_inlet(plan: Plan) -> str:
    """The number of the state that enters the condenser."""
    return "6" if plan.options["recuperator"] == "yes" else "4"


def levels(plan: Plan, source: Stream | None, sink: Stream | None) -> None:
    """Pressures and saturation temperatures; unknowns where the pinch decides."""
    section = plan.section("Evaporating and condensing levels")
    section.property("T_crit_wf", "T_crit(wf)", "Critical temperature of the working fluid")
    if plan.options["condensing"] == "pinch":
        section.root("T_c", "dT_min_c - dT_pinch_c", (sink.name("T", "in"), "T_crit_wf - 20 K"),
                     "Condensing temperature at which the condenser has the wanted pinch", "degC",
                     note="the smallest difference is found along the whole condenser, in its profile below")
    if plan.options["evaporating"] == "pinch":
        section.root("T_e", "dT_min_h - dT_pinch_h",
                     (sink.name("T", "in") + " + 5 K" if sink else "T_c + 2 K",
                      f"min({source.name('T', 'in')}, T_crit_wf - 5 K)"),
                     "Evaporating temperature at which the heater has the wanted pinch", "degC",
                     note="the smallest difference is found along the whole heater, in its profile below")
    saturation(section, "e", "wf", plan.options["evaporating"], "Evaporating")
    saturation(section, "c", "wf", plan.options["condensing"], "Condensing")


def states(plan: Plan) -> None:
    """States 1 to 4, and 5 and 6 with a recuperator."""
    section = plan.section("States of the working fluid")
    section.property("T_bub_c", "T(wf, p=p_c, x=0)", "Bubble-point temperature at the condensing pressure")
    if plan.options["liquid"] == "subcooled":
        section.formula("T_1", "T_bub_c - dT_sc", "Temperature at the condenser outlet", "degC")
        state(section, "1", "wf", "at the condenser outlet", p="p_c", T="T_1")
    else:
        state(section, "1", "wf", "at the condenser outlet", p="p_c", x="0")
    pump(section, "wf", "1", "2", "p_e")
    if plan.options["expander_inlet"] == "superheated":
        section.formula("T_3", "T_e + dT_sh", "Temperature at the expander inlet", "degC")
        state(section, "3", "wf", "at the expander inlet", p="p_e", T="T_3")
    else:
        state(section, "3", "wf", "at the expander inlet", p="p_e", x="1")
    expander(section, "wf", "3", "4", "p_c")
    section.property("h_g_c", "h(wf, p=p_c, x=1)", "Enthalpy of the dry vapour at the condensing pressure")
    section.formula("dh_dry", "h_4 - h_g_c", "Enthalpy of the exhaust above dry vapour; below zero it is wet", "kJ/kg")
    if plan.options["recuperator"] == "yes":
        _recuperator(plan, plan.section("Recuperator"))


def _recuperator(plan: Plan, section: Section) -> None:
    section.formula("T_6", "T_2 + dT_rec", "Temperature of the vapour after the recuperator", "degC",
                    note="the difference is smallest at the cold end, since the liquid has the greater heat capacity; "
                         "the hot end is checked below")
    state(section, "6", "wf", "of the vapour after the recuperator", p="p_c", T="T_6")
    section.formula("h_5", "h_2 + (h_4 - h_6)", "Specific enthalpy of the liquid after the recuperator", "kJ/kg",
                    reference="energy balance of the recuperator, equal flows")
    state(section, "5", "wf", "of the liquid after the recuperator", p="p_e", h="h_5")
    section.formula("dT_rec_hot", "T_4 - T_5", "Temperature difference at the recuperator's hot end", "K")


def heater(plan: Plan, source: Stream | None) -> Exchanger | None:
    """Flow of working fluid and heat taken, with the heater's profile where there is a source."""
    inlet = heater_inlet(plan)
    section = plan.section("Heat taken from the source" if source else "Heat taken")
    section.property("h_f_e", "h(wf, p=p_e, x=0)", "Enthalpy of the saturated liquid at the evaporating pressure")
    if plan.options["expander_inlet"] == "superheated":
        section.property("h_g_e", "h(wf, p=p_e, x=1)", "Enthalpy of the dry vapour at the evaporating pressure")
    if source is None:
        section.formula("Q_dot_h", f"m_dot_wf * (h_3 - h_{inlet})", "Heat taken by the working fluid", "kW")
        return None
    section.property("T_bub_e", "T(wf, p=p_e, x=0)", "Bubble-point temperature at the evaporating pressure")
    if plan.options["evaporating"] == "pinch":
        return _heater_at_outlet(plan, section, source, inlet)
    return _heater_at_level(plan, section, source, inlet)


def _heater_at_outlet(plan: Plan, section: Section, source: Stream, inlet: str) -> Exchanger:
    """The outlet is set: heat and flow follow at once, the level is the unknown."""
    section.property("h_source_set", "h(source, p=p_source, T=T_source_set)", "Enthalpy of the source at the set outlet")
    section.formula("Q_dot_h", "m_dot_source * (h_source_in - h_source_set)", "Heat taken from the source", "kW")
    section.formula("m_dot_wf", f"Q_dot_h / (h_3 - h_{inlet})", "Mass flow of the working fluid", "kg/s")
    return _profile(plan, section, source, inlet, "T_e")


def _heater_at_level(plan: Plan, section: Section, source: Stream, inlet: str) -> Exchanger:
    """The level is set: the flow is the unknown, bounded by the pinch and by the lowest outlet."""
    plan.demand("T_source_in - T_3 > dT_pinch_h", "the source is not hot enough for the expander inlet and the pinch",
                "lower the evaporating level or the superheat, or take a smaller pinch")
    plan.demand("T_source_min < T_source_in", "the source's lowest outlet is not below its inlet",
                "check the two temperatures")
    section.property("h_source_low", f"h(source, p=p_source, T=T_{inlet})",
                     "Enthalpy of the source if it were cooled to the working fluid's inlet temperature")
    section.formula("m_dot_most", f"m_dot_source * (h_source_in - h_source_low) / (h_3 - h_{inlet})",
                    "Flow of working fluid that no exchanger could exceed", "kg/s")
    section.root("m_dot_wf", "min(dT_min_h - dT_pinch_h, T_source_out - T_source_min)",
                 ("0.01 * m_dot_most", "m_dot_most"),
                 "Mass flow of the working fluid at which the pinch or the lowest outlet is reached", "kg/s",
                 note="whichever is reached first governs; the smallest difference is found along the whole heater")
    section.formula("Q_dot_h", f"m_dot_wf * (h_3 - h_{inlet})", "Heat taken from the source", "kW")
    return _profile(plan, section, source, inlet, "m_dot_wf")


def _profile(plan: Plan, section: Section, source: Stream, inlet: str, unknown: str) -> Exchanger:
    balance(section, source, "Q_dot_h")
    zones = [Zone("preheating", "hp", f"h_{inlet}", "h_f_e", f"T_{inlet}", "T_bub_e")]
    if plan.options["expander_inlet"] == "superheated":
        zones += [Zone("evaporating", "he", "h_f_e", "h_g_e", "T_bub_e", "T_e"),
                  Zone("superheating", "hs", "h_g_e", "h_3", "T_e", "T_3")]
    else:
        zones.append(Zone("evaporating", "he", "h_f_e", "h_3", "T_bub_e", "T_3"))
    result = Exchanger("Heater", "h", "wf", "p_e", "m_dot_wf", "Q_dot_h", source, tuple(zones))
    profile(plan, section, result)
    plan.close(unknown)
    if unknown == "m_dot_wf":
        section.choice("dT_spare", (
            ("dT_min_h - dT_pinch_h <= T_source_out - T_source_min", "T_source_out - T_source_min",
             "the pinch governs; the outlet is this far above its lowest"),
            ("", "dT_min_h - dT_pinch_h", "the lowest outlet governs; the pinch is this much wider than wanted")),
            "What governs the heat taken, and what the other condition has to spare", "K")
    return result


def require_recuperation(plan: Plan) -> None:
    """Stop where a recuperator cannot do what is asked of it."""
    plan.demand("h_4 > h_6", "the exhaust vapour is too cold for the recuperator",
                "leave the recuperator out or take a smaller difference at its cold end")
    plan.demand("h_6 > h_g_c", "vapour would condense in the recuperator",
                "take a greater difference at the recuperator's cold end")
    plan.demand("dT_rec_hot > 0 K", "the temperatures cross at the recuperator's hot end",
                "take a greater difference at the recuperator's cold end")
    plan.demand("h_5 < h_f_e", "the liquid would boil in the recuperator",
                "take a greater difference at the recuperator's cold end")


def condenser(plan: Plan, sink: Stream | None) -> Exchanger | None:
    """Heat given to the sink, with the condenser's profile where there is a sink stream."""
    section = plan.section("Condenser: balance and profile" if sink else "Heat given to the sink")
    inlet = condenser_inlet(plan)
    section.formula("Q_dot_c", f"m_dot_wf * (h_{inlet} - h_1)", "Heat given to the sink", "kW")
    if sink is None:
        return None
    zones = _condenser_zones(plan, section, inlet)
    balance(section, sink, "Q_dot_c")
    result = Exchanger("Condenser", "c", "wf", "p_c", "m_dot_wf", "Q_dot_c", sink, zones)
    profile(plan, section, result)
    if plan.options["condensing"] == "pinch":
        plan.close("T_c")
    return result


def _condenser_zones(plan: Plan, section: Section, inlet: str) -> tuple[Zone, ...]:
    """The zone of condensation ends at dry vapour, or where a wet exhaust enters."""
    section.formula("h_cv", f"min(h_{inlet}, h_g_c)", "Enthalpy at which condensation begins", "kJ/kg")
    section.property("T_cv", "T(wf, p=p_c, h=h_cv)", "Temperature at which condensation begins")
    cold = "h_1"
    zones = []
    if plan.options["liquid"] == "subcooled":
        cold = section.property("h_f_c", "h(wf, p=p_c, x=0)", "Enthalpy of the saturated liquid at the condensing pressure")
        zones.append(Zone("subcooling", "cs", "h_1", "h_f_c", "T_1", "T_bub_c"))
    zones.append(Zone("condensing", "cc", cold, "h_cv", "T_bub_c", "T_cv"))
    zones.append(Zone("desuperheating", "cd", "h_cv", f"h_{inlet}", "T_cv", f"T_{inlet}"))
    return tuple(zones)


def power(plan: Plan) -> None:
    """Shaft and electrical powers, and the thermal efficiency on the net power."""
    section = plan.section("Power and efficiency")
    section.formula("W_dot_t", "m_dot_wf * w_t", "Shaft power of the expander", "kW")
    section.formula("W_dot_gen", "W_dot_t * eta_gen", "Electrical power of the generator", "kW")
    section.formula("W_dot_p", "m_dot_wf * w_p", "Shaft power of the pump", "kW")
    section.formula("W_dot_pm", "W_dot_p / eta_pm", "Electrical power of the pump's motor", "kW")
    section.formula("W_dot_net", "W_dot_gen - W_dot_pm - W_dot_aux", "Net electrical power", "kW")
    plan.demand("W_dot_net > 0 kW", "the net power is not above zero", "pump and auxiliaries draw all that is made")
    section.formula("eta_th", "W_dot_net / Q_dot_h", "Thermal efficiency on the net power")
    section.formula("r_bw", "W_dot_p / W_dot_t", "Back-work ratio: pump over expander, at the shafts")
    section.property("v_3", "v(wf, p=p_e, h=h_3)", "Specific volume at the expander inlet")
    section.property("v_4", "v(wf, p=p_c, h=h_4)", "Specific volume at the expander outlet")
    section.formula("r_v", "v_4 / v_3", "Volume ratio of the expansion")
    plan.facts.equals.append(Equal("Q_dot_h", "Q_dot_out_sum", "heat taken equals heat and work given", 1e-9))
    section.formula("Q_dot_out_sum", "Q_dot_c + W_dot_t - W_dot_p", "Heat to the sink and work at the shafts, for check",
                    "kW", note="must equal the heat taken")


def bound(plan: Plan, source: Stream, sink: Stream | None) -> None:
    """The reversible power of the same source stream against the dead state."""
    section = plan.section("Reversible bound of the same source")
    if sink:
        plan.demand(f"T_0 <= {sink.name('T', 'in')}", "the dead state is warmer than the sink's inlet",
                    "take the sink's inlet temperature or less for T_0")
    for letter, word in (("h", "Enthalpy"), ("s", "Entropy")):
        section.property(f"{letter}_source_0", f"{letter}(source, p=p_source, T=T_0)", f"{word} of the source at the dead state")
    section.formula("e_source", "(h_source_in - h_source_0) - T_0 * (s_source_in - s_source_0)",
                    "Specific flow exergy of the source at its inlet", "kJ/kg",
                    reference="flow exergy without kinetic, potential and chemical parts")
    section.formula("W_dot_rev", "m_dot_source * e_source",
                    "Reversible power of the source cooled to the dead state", "kW")
    section.formula("eta_ex", "W_dot_net / W_dot_rev", "Exergetic efficiency: net power over that reversible power")
    section.formula("W_dot_rev_taken",
                    "m_dot_source * ((h_source_in - h_source_out) - T_0 * (s_source_in - s_source_out))",
                    "Reversible power of the heat that is taken", "kW")
    section.formula("g_rev", "W_dot_net / W_dot_rev_taken", "Share of the reversible power of the heat taken")
    entropic_mean(section, source, "T_m_source")
    section.formula("eta_rev", "1 - T_0 / T_m_source", "Efficiency of a reversible engine on the heat taken",
                    reference="Carnot's relation with the source's entropic mean temperature")
    plan.facts.bounds += [
        Bound("W_dot_net", "W_dot_rev_taken", "the net power stays below the reversible power of the heat taken"),
        Bound("eta_th", "eta_rev", "the thermal efficiency stays below the reversible one")]


def facts(plan: Plan, source: Stream | None, sink: Stream | None) -> None:
    """States, balances, streams, diagrams and the sketch."""
    recuperated = plan.options["recuperator"] == "yes"
    labels = {"1": ("pump inlet", "p_c"), "2": ("pump outlet", "p_e"), "3": ("expander inlet", "p_e"),
              "4": ("expander outlet", "p_c")}
    if recuperated:
        labels |= {"5": ("liquid after recuperator", "p_e"), "6": ("vapour after recuperator", "p_c")}
    plan.facts.states += [StatePoint(n, label, "wf", f"T_{n}", p, f"h_{n}", f"s_{n}") for n, (label, p) in labels.items()]
    flow = {n: Flow("m_dot_wf", f"h_{n}", f"s_{n}") for n in labels}
    plan.facts.volumes += _volumes(plan, flow, source, sink)
    if source:
        plan.facts.streams.append(line(source, "Source", "Q_dot_h"))
    if sink:
        plan.facts.streams.append(line(sink, "Sink", "Q_dot_c"))
    warm, cold = heater_inlet(plan), condenser_inlet(plan)
    paths = [Path("1", "2", "straight"), Path(warm, "3", "p"), Path("3", "4", "straight"), Path(cold, "1", "p")]
    if recuperated:
        paths += [Path("2", "5", "p"), Path("4", "6", "p")]
    plan.facts.diagrams += [Diagram("T-s", "wf", tuple(paths)), Diagram("log p-h", "wf", tuple(paths))]
    plan.facts.roles.update({"expander inlet": "3", "expander outlet": "4", "evaporating": "T_e", "condensing": "T_c",
                             "low pressure": "p_c", "high pressure": "p_e", "exhaust dryness": "dh_dry",
                             "pump inlet": "1", "hottest": "T_3"})
    plan.facts.sketch = _sketch(recuperated, source, sink)


def _volumes(plan: Plan, flow: dict[str, Flow], source: Stream | None, sink: Stream | None) -> list[Volume]:
    warm, cold = flow[heater_inlet(plan)], flow[condenser_inlet(plan)]
    volumes = [
        Volume("pump", (flow["1"],), (flow["2"],), work_in=("W_dot_p",), scale="W_dot_p"),
        Volume("heater", (warm, source.flow_in), (flow["3"], source.flow_out), scale="Q_dot_h") if source else
        Volume("heater", (warm,), (flow["3"],), heat_in=(("Q_dot_h", None),), scale="Q_dot_h"),
        Volume("expander", (flow["3"],), (flow["4"],), work_out=("W_dot_t",), scale="W_dot_t"),
        Volume("condenser", (cold, sink.flow_in), (flow["1"], sink.flow_out), scale="Q_dot_c") if sink else
        Volume("condenser", (cold,), (flow["1"],), heat_out=(("Q_dot_c", None),), scale="Q_dot_c")]
    if "5" in flow:
        volumes.append(Volume("recuperator", (flow["2"], flow["4"]), (flow["5"], flow["6"]), scale="Q_dot_h"))
    volumes.append(Volume("whole engine", work_in=("W_dot_p",), work_out=("W_dot_t",), heat_in=(("Q_dot_h", None),),
                          heat_out=(("Q_dot_c", None),), scale="Q_dot_h", cycle=True))
    return volumes


def _sketch(recuperated: bool, source: Stream | None, sink: Stream | None) -> Sketch:
    boxes = [Box("Heater", "exchanger", 1, 0), Box("Expander", "expander", 2, 1), Box("Generator", "generator", 3, 1),
             Box("Condenser", "exchanger", 1, 2), Box("Pump", "pump", 0, 1)]
    links = [Link("Expander", "Generator", "", "power"), Link("Heater", "Expander", "3"), Link("Condenser", "Pump", "1")]
    if recuperated:
        boxes.append(Box("Recuperator", "recuperator", 1, 1))
        links += [Link("Pump", "Recuperator", "2"), Link("Recuperator", "Heater", "5"),
                  Link("Expander", "Recuperator", "4"), Link("Recuperator", "Condenser", "6")]
    else:
        links += [Link("Pump", "Heater", "2"), Link("Expander", "Condenser", "4")]
    for stream, box, name in ((source, "Heater", "Source"), (sink, "Condenser", "Sink")):
        if stream:
            links += [Link(f"{name} in", box, f"{name.lower()} in", "stream"),
                      Link(box, f"{name} out", f"{name.lower()} out", "stream")]
    return Sketch(tuple(boxes), tuple(links))
