"""The parts of a Rankine engine's plan: levels, states, condenser, power, bound."""
from __future__ import annotations

from calcpack.methods import ladders
from calcpack.methods.rankine_heater import supercritical
from calcpack.plan.equipment import grounds
from calcpack.plan.equipment.exchanger import Exchanger, Zone, profile
from calcpack.plan.equipment.machines import expander, pump, saturation, state
from calcpack.plan.equipment.streams import Stream, balance, entropic_mean
from calcpack.plan.facts import Again, Bound, Equal
from calcpack.plan.plan import Plan, Section


def condenser_inlet(plan: Plan) -> str:
    """The number of the state that enters the condenser."""
    return "6" if plan.options["recuperator"] == "yes" else "4"


def free_value(plan: Plan) -> str | None:
    """The symbol that is chosen so that the net power is greatest, if one is."""
    if plan.options["evaporating"] == "optimum":
        return "T_e"
    return "dT_sh" if plan.options["expander_inlet"] == "optimum" else None


def levels(plan: Plan, source: Stream | None, sink: Stream | None, loop: Stream | None) -> None:
    """Pressures and saturation temperatures; unknowns where the pinch or the greatest power decides."""
    section = plan.section("High and low pressure" if supercritical(plan) else "Evaporating and condensing levels")
    section.property("T_crit_wf", "T_crit(wf)", "Critical temperature of the working fluid")
    first = free_value(plan) is not None
    if first:
        # What is optimised stands around every other unknown, since each of its trials needs them all.
        _optimum(plan, section, sink)
    if plan.options["condensing"] == "pinch":
        # Where the outlet of what heats it is set, the liquid must come in colder than that.
        coldest = "T_loop_out" if loop else "T_source_set" if plan.options["evaporating"] == "pinch" else None
        top = f"min(T_crit_wf - 20 K, {coldest})" if coldest else "T_crit_wf - 20 K"
        section.root("T_c", "dT_min_c - dT_pinch_c", (sink.name("T", "in"), top),
                     "Condensing temperature at which the condenser has the wanted pinch", "degC",
                     note="the smallest difference is found along the whole condenser, in its profile below",
                     reference=grounds.PINCH)
    saturation(section, "c", "wf", plan.options["condensing"], "Condensing")
    if supercritical(plan):
        section.property("p_crit_wf", "p_crit(wf)", "Critical pressure of the working fluid")
        plan.demand("p_e > p_crit_wf", "the high pressure is not above the critical pressure",
                    "raise it, or choose another way to set the evaporating level")
        return
    if plan.options["evaporating"] == "pinch":
        hottest = (loop or source).name("T", "in")
        section.root("T_e", "dT_min_h - dT_pinch_h",
                     (sink.name("T", "in") + " + 5 K" if sink and not loop else "T_c + 2 K",
                      f"min({hottest}, T_crit_wf - 5 K)"),
                     "Evaporating temperature at which the heater has the wanted pinch", "degC",
                     note="the smallest difference is found along the whole heater, in its profile below",
                     reference=grounds.PINCH)
    if not first:
        saturation(section, "e", "wf", plan.options["evaporating"], "Evaporating")


def _optimum(plan: Plan, section: Section, sink: Stream | None) -> None:
    """The evaporating temperature, or the superheat, at which the net power is greatest."""
    if plan.options["evaporating"] == "optimum":
        low = f"{sink.name('T', 'in')} + 25 K" if sink else f"{_condensing(plan, section)} + 15 K"
        over = "10 K" if plan.options["expander_inlet"] == "saturated" else "dT_sh + 10 K"
        section.optimum("T_e", "W_dot_net", (low, f"min(T_source_in - dT_pinch_h - {over}, T_crit_wf - 5 K)"),
                        "Evaporating temperature at which the net power is greatest", "degC",
                        note="each trial finds the flow of working fluid anew", reference=grounds.BEST_POWER)
        saturation(section, "e", "wf", "temperature", "Evaporating")
        return
    saturation(section, "e", "wf", plan.options["evaporating"], "Evaporating")
    section.optimum("dT_sh", "W_dot_net", ("0.01 K", "T_source_in - dT_pinch_h - T_e - 5 K"),
                    "Superheat at which the net power is greatest", "K",
                    note="a value at the lower bound says that superheating does not pay", reference=grounds.BEST_POWER)


def _condensing(plan: Plan, section: Section) -> str:
    """The condensing temperature as far as it is known before any unknown: the input, or from the input pressure."""
    if plan.options["condensing"] == "temperature":
        return "T_c"
    return section.property("T_c_low", "T(wf, p=p_c, x=1)", "Condensing temperature, for the lower bound")


def states(plan: Plan) -> None:
    """States 1 to 4, and 5 and 6 with a recuperator."""
    section = plan.section("States of the working fluid")
    section.property("T_bub_c", "T(wf, p=p_c, x=0)", "Bubble-point temperature at the condensing pressure")
    if plan.options["liquid"] == "subcooled":
        section.formula("T_1", "T_bub_c - dT_sc", "Temperature at the condenser outlet", "degC",
                        reference=grounds.SUBCOOLING)
        state(section, "1", "wf", "at the condenser outlet", p="p_c", T="T_1")
    else:
        state(section, "1", "wf", "at the condenser outlet", p="p_c", x="0")
    pump(section, "wf", "1", "2", "p_e")
    if plan.options["expander_inlet"] == "temperature":
        if not supercritical(plan):
            plan.demand("T_3 > T_e", "the expander inlet is not warmer than the evaporating temperature",
                        "raise T_3, or set the option expander_inlet to saturated")
        state(section, "3", "wf", "at the expander inlet", p="p_e", T="T_3")
    elif plan.options["expander_inlet"] in ("superheated", "optimum"):
        section.formula("T_3", "T_e + dT_sh", "Temperature at the expander inlet", "degC", reference=grounds.SUPERHEAT)
        state(section, "3", "wf", "at the expander inlet", p="p_e", T="T_3")
    else:
        state(section, "3", "wf", "at the expander inlet", p="p_e", x="1")
    expander(section, "wf", "3", "4", "p_c")
    section.property("h_g_c", "h(wf, p=p_c, x=1)", "Enthalpy of the dry vapour at the condensing pressure")
    section.formula("dh_dry", "h_4 - h_g_c", "Enthalpy of the exhaust above dry vapour; below zero it is wet", "kJ/kg",
                    reference="derived: enthalpy of the exhaust less that of dry vapour at its pressure")
    plan.facts.again.append(Again("dh_dry", "h_3 - w_t - h_g_c", "from the expander's inlet and its work"))
    if plan.options["recuperator"] == "yes":
        _recuperator(plan, plan.section("Recuperator"))


def _recuperator(plan: Plan, section: Section) -> None:
    section.formula("T_6", "T_2 + dT_rec", "Temperature of the vapour after the recuperator", "degC",
                    note="the difference is smallest at the cold end, since the liquid has the greater heat capacity; "
                         "the hot end is checked below", reference=grounds.APPROACH)
    state(section, "6", "wf", "of the vapour after the recuperator", p="p_c", T="T_6")
    section.formula("h_5", "h_2 + (h_4 - h_6)", "Specific enthalpy of the liquid after the recuperator", "kJ/kg",
                    reference="energy balance of the recuperator, equal flows")
    state(section, "5", "wf", "of the liquid after the recuperator", p="p_e", h="h_5")
    section.formula("dT_rec_hot", "T_4 - T_5", "Temperature difference at the recuperator's hot end", "K",
                    reference=grounds.TWO_SIDES)


def require_recuperation(plan: Plan) -> None:
    """Stop where a recuperator cannot do what is asked of it."""
    plan.demand("h_4 > h_6", "the exhaust vapour is too cold for the recuperator",
                "leave the recuperator out or take a smaller difference at its cold end")
    plan.demand("h_6 > h_g_c", "vapour would condense in the recuperator",
                "take a greater difference at the recuperator's cold end")
    plan.demand("dT_rec_hot > 0 K", "the temperatures cross at the recuperator's hot end",
                "take a greater difference at the recuperator's cold end")
    if not supercritical(plan):
        plan.demand("h_5 < h_f_e", "the liquid would boil in the recuperator",
                    "take a greater difference at the recuperator's cold end")


def condenser(plan: Plan, sink: Stream | None) -> Exchanger | None:
    """Heat given to the sink, with the condenser's profile where there is a sink stream."""
    section = plan.section("Condenser: balance and profile" if sink else "Heat given to the sink")
    inlet = condenser_inlet(plan)
    section.formula("Q_dot_c", f"m_dot_wf * (h_{inlet} - h_1)", "Heat given to the sink", "kW",
                    reference=grounds.HEAT_OF_FLOW)
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
    section.formula("h_cv", f"min(h_{inlet}, h_g_c)", "Enthalpy at which condensation begins", "kJ/kg",
                    reference=grounds.ONSET)
    section.property("T_cv", "T(wf, p=p_c, h=h_cv)", "Temperature at which condensation begins")
    cold = "h_1"
    zones = []
    if plan.options["liquid"] == "subcooled":
        cold = section.property("h_f_c", "h(wf, p=p_c, x=0)",
                                "Enthalpy of the saturated liquid at the condensing pressure")
        zones.append(Zone("subcooling", "cs", "h_1", "h_f_c", "T_1", "T_bub_c"))
    zones.append(Zone("condensing", "cc", cold, "h_cv", "T_bub_c", "T_cv"))
    zones.append(Zone("desuperheating", "cd", "h_cv", f"h_{inlet}", "T_cv", f"T_{inlet}"))
    return tuple(zones)


def power(plan: Plan, moved: tuple[Stream, ...]) -> None:
    """Shaft and electrical powers, size of the expander, and the thermal efficiency on the net power.

    ``moved`` are the streams whose pump or fan is computed.
    """
    section = plan.section("Power and efficiency")
    section.formula("W_dot_t", "m_dot_wf * w_t", "Shaft power of the expander", "kW", reference=grounds.POWER_OF_FLOW)
    section.formula("W_dot_gen", "W_dot_t * eta_gen", "Electrical power of the generator", "kW",
                    reference=grounds.GENERATOR)
    section.formula("W_dot_p", "m_dot_wf * w_p", "Shaft power of the pump", "kW", reference=grounds.POWER_OF_FLOW)
    section.formula("W_dot_pm", "W_dot_p / eta_pm", "Electrical power of the pump's motor", "kW",
                    reference="definition of the motor's efficiency: power at the shaft over electrical power")
    if moved:
        section.formula("W_dot_aux", " + ".join(("W_dot_other", *[_mover(section, one) for one in moved])),
                        "Electrical power of the auxiliaries", "kW", reference=grounds.SUM)
    section.formula("W_dot_net", "W_dot_gen - W_dot_pm - W_dot_aux", "Net electrical power", "kW",
                    reference=grounds.NET_POWER)
    free = free_value(plan)
    if free:
        plan.close(free)
    plan.demand("W_dot_net > 0 kW", "the net power is not above zero", "pump and auxiliaries draw all that is made")
    section.formula("eta_th", "W_dot_net / Q_dot_h", "Thermal efficiency on the net power",
                    reference=grounds.EFFICIENCY)
    section.formula("r_bw", "W_dot_p / W_dot_t", "Back-work ratio: pump over expander, at the shafts",
                    reference=grounds.BACK_WORK)
    section.property("v_3", "v(wf, p=p_e, h=h_3)", "Specific volume at the expander inlet")
    section.property("v_4", "v(wf, p=p_c, h=h_4)", "Specific volume at the expander outlet")
    section.formula("r_v", "v_4 / v_3", "Volume ratio of the expansion",
                    reference="definition of the volume ratio: specific volume at the outlet over that at the inlet")
    section.formula("V_dot_4", "m_dot_wf * v_4", "Volume flow at the expander outlet", "m³/s",
                    reference="volume flow is mass flow times specific volume")
    section.formula("SP", "sqrt(V_dot_4) / (h_3 - h_4s)^0.25", "Size parameter of the expander", "m",
                    reference="square root of the outlet's volume flow over the fourth root of the isentropic work")
    plan.facts.equals.append(Equal("Q_dot_h", "Q_dot_out_sum", "heat taken equals heat and work given", 1e-9))
    section.formula("Q_dot_out_sum", "Q_dot_c + W_dot_t - W_dot_p",
                    "Heat to the sink and work at the shafts, for check",
                    "kW", note="must equal the heat taken", reference=grounds.WHOLE)


def _mover(section: Section, it: Stream) -> str:
    """Electrical power of the pump or fan that moves a stream."""
    rho = section.property(f"rho_{it.role}", f"rho({it.role}, p={it.name('p')}, T={it.name('T', 'in')})",
                           f"Density of the {it.role} at its pump or fan, taken at the inlet")
    return section.formula(f"W_dot_{it.role}_aux", f"{it.name('m_dot')} / {rho} * dp_{it.role} / eta_{it.role}_aux",
                           f"Electrical power of the pump or fan of the {it.role}", "kW",
                           reference="volume flow times pressure rise over the efficiency of the drive train")


def bound(plan: Plan, source: Stream, sink: Stream | None) -> None:
    """The reversible power of the same source stream against the dead state."""
    section = plan.section("Reversible bound of the same source")
    if sink:
        plan.demand(f"T_0 <= {sink.name('T', 'in')}", "the dead state is warmer than the sink's inlet",
                    "take the sink's inlet temperature or less for T_0")
    for letter, word in (("h", "Enthalpy"), ("s", "Entropy")):
        section.property(f"{letter}_source_0", f"{letter}(source, p=p_source, T=T_0)",
                         f"{word} of the source at the dead state")
    section.formula("e_source", "(h_source_in - h_source_0) - T_0 * (s_source_in - s_source_0)",
                    "Specific flow exergy of the source at its inlet", "kJ/kg",
                    reference="flow exergy without kinetic, potential and chemical parts")
    section.formula("W_dot_rev", "m_dot_source * e_source",
                    "Reversible power of the source cooled to the dead state", "kW", reference=grounds.EXERGY_OF_FLOW)
    section.formula("eta_ex", "W_dot_net / W_dot_rev", "Exergetic efficiency: net power over that reversible power",
                    reference="definition of the exergetic efficiency: net power over exergy supplied")
    section.formula("W_dot_rev_taken",
                    "m_dot_source * ((h_source_in - h_source_out) - T_0 * (s_source_in - s_source_out))",
                    "Reversible power of the heat that is taken", "kW",
                    reference="flow exergy given up, without kinetic, potential and chemical parts")
    section.formula("g_rev", "W_dot_net / W_dot_rev_taken", "Share of the reversible power of the heat taken",
                    reference=grounds.SHARE_OF_BOUND)
    ladders.rankine(plan, sink=sink is not None)
    entropic_mean(section, source, "T_m_source")
    section.formula("eta_rev", "1 - T_0 / T_m_source", "Efficiency of a reversible engine on the heat taken",
                    reference="Carnot's relation with the source's entropic mean temperature")
    plan.facts.bounds += [
        Bound("W_dot_net", "W_dot_rev_taken", "the net power stays below the reversible power of the heat taken"),
        Bound("eta_th", "eta_rev", "the thermal efficiency stays below the reversible one")]
