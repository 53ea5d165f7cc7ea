"""The parts of a combined plant's plan: gas turbine, steam states, steam generator, turbine, powers, bound."""
from __future__ import annotations

from calcpack.plan.equipment import grounds
from calcpack.plan.equipment.exchanger import Exchanger, Zone, profile, require_pinch
from calcpack.plan.equipment.machines import pump, saturation, state
from calcpack.plan.equipment.streams import Stream, balance, entropic_mean
from calcpack.plan.facts import Bound, Equal, MachineEnds
from calcpack.plan.plan import Plan, Section

LEVELS = {"1": ("hp",), "2": ("hp", "lp")}
WORDS = {"hp": "high-pressure", "lp": "low-pressure"}
FEED = {"hp": "2", "lp": "3"}
STEAM = {"hp": "4", "lp": "5"}


def levels_of(plan: Plan) -> tuple[str, ...]:
    """The tags of the steam pressures, the highest first."""
    return LEVELS[plan.options["pressures"]]


def word(plan: Plan, tag: str) -> str:
    """``high-pressure `` before a noun where there are two pressures, else nothing."""
    return f"{WORDS[tag]} " if plan.options["pressures"] == "2" else ""


def gas_turbine(plan: Plan, gas: Stream) -> None:
    """The gas's state at the steam generator: from the stream as given, or from an air-standard gas turbine."""
    if plan.options["gas"] == "exhaust":
        section = plan.section("The gas at the steam generator's inlet")
        for letter, text in (("h", "enthalpy"), ("s", "entropy")):
            section.property(gas.name(letter, "in"), f"{letter}(gas, p=p_gas, T=T_gas_in)",
                             f"Specific {text} of the gas at the inlet")
        return
    section = plan.section("Gas turbine")
    state(section, "g1", "gas", "at the compressor inlet", p="p_gas", T="T_g1")
    section.formula("p_g2", "r_p * p_gas", "Pressure behind the compressor", "bar", reference=grounds.HIGH_PRESSURE)
    section.property("h_g2s", "h(gas, p=p_g2, s=s_g1)", "Enthalpy after isentropic compression")
    section.formula("h_g2", "h_g1 + (h_g2s - h_g1) / eta_c", "Specific enthalpy at the compressor outlet", "kJ/kg",
                    reference="isentropic efficiency: isentropic rise of enthalpy over rise")
    state(section, "g2", "gas", "at the compressor outlet", p="p_g2", h="h_g2")
    section.formula("p_g3", "p_g2 * (1 - f_p_cc)", "Pressure at the gas turbine's inlet", "bar",
                    reference=grounds.LOSS_OF_PRESSURE)
    state(section, "g3", "gas", "at the gas turbine's inlet", p="p_g3", T="T_g3")
    plan.demand("h_g3 > h_g2", "the compressed gas is hotter than the turbine inlet", "raise T_g3 or lower r_p")
    section.property("h_g4s", "h(gas, p=p_gas, s=s_g3)", "Enthalpy after isentropic expansion")
    section.formula("h_gas_in", "h_g3 - eta_gt * (h_g3 - h_g4s)", "Specific enthalpy of the exhaust", "kJ/kg",
                    reference="isentropic efficiency: fall of enthalpy over isentropic fall")
    plan.facts.machines += [
        MachineEnds("gas turbine's compressor", "gas", "h_g1", "s_g1", "p_g2", "h_g2 - h_g1", "eta_c", drives=True),
        MachineEnds("gas turbine", "gas", "h_g3", "s_g3", "p_gas", "h_g3 - h_gas_in", "eta_gt", drives=False)]
    section.property("T_gas_in", "T(gas, p=p_gas, h=h_gas_in)", "Temperature of the exhaust")
    section.property("s_gas_in", "s(gas, p=p_gas, T=T_gas_in)", "Specific entropy of the exhaust")
    section.formula("W_dot_gt", "m_dot_gas * ((h_g3 - h_gas_in) - (h_g2 - h_g1))",
                    "Shaft power of the gas turbine, its compressor taken off",
                    "kW", reference="first law at steady flow, adiabatic machines: turbine less compressor")
    section.formula("Q_dot_fuel", "m_dot_gas * (h_g3 - h_g2)", "Heat of the fuel", "kW",
                    reference="air-standard: the fuel counts as heat, the gas keeps its composition")


def steam_states(plan: Plan) -> None:
    """Condensate, feedwater and steam of each pressure."""
    section = plan.section("Water and steam")
    saturation(section, "c", "wf", plan.options["condensing"], "Condensing", vapour_title="saturation")
    state(section, "1", "wf", "of the condensate", p="p_c", x="0")
    for tag in levels_of(plan):
        which, end = word(plan, tag), "" if plan.options["pressures"] == "1" else f"_{tag}"
        below = "p_c" if tag == levels_of(plan)[-1] else "p_lp"
        plan.demand(f"p_{tag} > {below}", "the pressures do not fall from steam to condenser", "check the pressures")
        pump(section, "wf", "1", FEED[tag], f"p_{tag}", "eta_p", f"w_p{end}", f"{which}feed pump")
        section.property(f"T_s_{tag}", f"T(wf, p=p_{tag}, x=1)",
                         f"Saturation temperature of the {which}steam".replace("  ", " "))
        section.property(f"h_f_{tag}", f"h(wf, p=p_{tag}, x=0)",
                         f"Enthalpy of the saturated {which}water".replace("  ", " "))
        section.property(f"h_v_{tag}", f"h(wf, p=p_{tag}, x=1)",
                         f"Enthalpy of the saturated {which}steam".replace("  ", " "))
        plan.demand(f"T_{tag} > T_s_{tag}", f"the {which}steam is not superheated",
                    f"raise T_{tag} above its saturation temperature")
        plan.demand(f"T_gas_in > T_{tag}", f"the gas is colder than the {which}steam", f"lower T_{tag}")
        for letter, text in (("h", "enthalpy"), ("s", "entropy")):
            section.property(f"{letter}_{STEAM[tag]}", f"{letter}(wf, p=p_{tag}, T=T_{tag})",
                             f"Specific {text} of the {which}steam")


def steam_generator(plan: Plan, gas: Stream) -> None:
    """Steam flows from pinch and approach, or from the stack temperature; stack state; profile at one pressure."""
    section = plan.section("Heat-recovery steam generator")
    if plan.options["stack"] == "temperature":
        section.property("h_gas_set", "h(gas, p=p_gas, T=T_stack)", "Enthalpy of the gas at the set stack temperature")
        section.formula("m_dot_hp", "m_dot_gas * (h_gas_in - h_gas_set) / (h_4 - h_2)", "Mass flow of steam", "kg/s",
                        reference="energy balance of the steam generator")
    else:
        _high_pressure(plan, section)
        if plan.options["pressures"] == "2":
            _low_pressure(section)
    heat = " + ".join(f"m_dot_{tag} * (h_{STEAM[tag]} - h_{FEED[tag]})" for tag in levels_of(plan))
    for tag in levels_of(plan):
        plan.demand(f"m_dot_{tag} > 0 kg/s", f"no {word(plan, tag)}steam can be made",
                    "take a smaller pinch or a lower pressure")
    section.formula("Q_dot_hr", heat, "Heat taken from the gas", "kW", reference=grounds.HEAT_OF_FLOW)
    balance(section, gas, "Q_dot_hr")
    _ends(plan, section)
    if plan.options["pressures"] == "1":
        _profile(plan, section, gas)


def _high_pressure(plan: Plan, section: Section) -> None:
    which = word(plan, "hp")
    section.formula("T_pp_hp", "T_s_hp + dT_pinch_hp", f"Gas behind the {which}evaporator, at the pinch", "degC",
                    reference=grounds.PINCH_OF_STEAM)
    section.property("h_pp_hp", "h(gas, p=p_gas, T=T_pp_hp)", f"Enthalpy of the gas behind the {which}evaporator")
    section.formula("T_ec_hp", "T_s_hp - dT_app_hp", f"Water at the {which}economiser's outlet", "degC",
                    reference="approach: saturation temperature less that of the water entering the drum")
    section.property("h_ec_hp", "h(wf, p=p_hp, T=T_ec_hp)", f"Enthalpy of the water at the {which}economiser's outlet")
    plan.demand("T_gas_in > T_pp_hp", "the gas is colder than the evaporator's pinch asks", "lower p_hp or the pinch")
    section.formula("m_dot_hp", "m_dot_gas * (h_gas_in - h_pp_hp) / (h_4 - h_ec_hp)", f"Mass flow of {which}steam",
                    "kg/s",
                    reference="energy balance from the gas inlet to the pinch")


def _low_pressure(section: Section) -> None:
    """Between the two pinches the gas heats high-pressure water and makes low-pressure steam."""
    section.formula("T_pp_lp", "T_s_lp + dT_pinch_lp", "Gas behind the low-pressure evaporator, at the pinch", "degC",
                    reference=grounds.PINCH_OF_STEAM)
    section.property("h_pp_lp", "h(gas, p=p_gas, T=T_pp_lp)", "Enthalpy of the gas behind the low-pressure evaporator")
    section.formula("T_ec_lp", "T_s_lp - dT_app_lp", "Water at the outlet of the cold economisers", "degC",
                    reference="approach: saturation temperature less that of the water entering the drum")
    section.property("h_ec_lp", "h(wf, p=p_lp, T=T_ec_lp)",
                     "Enthalpy of low-pressure water at the outlet of its economiser")
    section.property("h_em_hp", "h(wf, p=p_hp, T=T_ec_lp)",
                     "Enthalpy of high-pressure water between its two economisers")
    section.formula("m_dot_lp", "(m_dot_gas * (h_pp_hp - h_pp_lp) - m_dot_hp * (h_ec_hp - h_em_hp)) / (h_5 - h_ec_lp)",
                    "Mass flow of low-pressure steam", "kg/s", reference="energy balance between the two pinches")


def _ends(plan: Plan, section: Section) -> None:
    section.formula("dT_hot", "T_gas_in - T_hp", "Temperature difference at the hot end", "K",
                    reference=grounds.TWO_SIDES)
    section.formula("dT_cold", "T_gas_out - T_2", "Temperature difference at the cold end", "K",
                    reference=grounds.TWO_SIDES)
    plan.demand("dT_cold > 0 K", "the temperatures cross at the cold end of the steam generator",
                "take a greater pinch, or a higher stack temperature")
    if plan.options["pressures"] == "2":
        section.formula("dT_lp", "T_pp_hp - T_lp",
                        "Temperature difference at the low-pressure superheater's hot end", "K",
                        reference=grounds.TWO_SIDES)
        plan.demand("dT_lp > 0 K", "the low-pressure steam is hotter than the gas that heats it", "lower T_lp")
    section.formula("eta_hr", "(h_gas_in - h_gas_out) / (h_gas_in - h_gas_0)",
                    "Heat taken over that down to the dead state",
                    reference="heat taken over heat down to the dead state, equal gas flow")


def _profile(plan: Plan, section: Section, gas: Stream) -> None:
    zones = [Zone("evaporating", "ev", "h_f_hp", "h_v_hp", "T_s_hp", "T_s_hp"),
             Zone("superheating", "su", "h_v_hp", "h_4", "T_s_hp", "T_hp")]
    if plan.options["stack"] == "pinch":
        zones = [Zone("economiser", "ec", "h_2", "h_ec_hp", "T_2", "T_ec_hp"),
                 Zone("up to boiling", "ap", "h_ec_hp", "h_f_hp", "T_ec_hp", "T_s_hp"), *zones]
    else:
        zones = [Zone("economiser", "ec", "h_2", "h_f_hp", "T_2", "T_s_hp"), *zones]
    it = Exchanger("Steam generator", "hr", "wf", "p_hp", "m_dot_hp", "Q_dot_hr", gas, tuple(zones))
    profile(plan, section, it)
    require_pinch(plan, it)


def dead_state(plan: Plan) -> None:
    """The gas at the temperature of the surroundings, at its own pressure."""
    section = plan.section("Dead state of the gas")
    for letter, text in (("h", "Enthalpy"), ("s", "Entropy")):
        section.property(f"{letter}_gas_0", f"{letter}(gas, p=p_gas, T=T_0)", f"{text} of the gas at the dead state")


def steam_turbine(plan: Plan) -> None:
    """Expansion of the steam, with the low-pressure steam mixed in at its pressure."""
    section = plan.section("Steam turbine")
    two = plan.options["pressures"] == "2"
    first, second = ("eta_t1", "eta_t2") if two else ("eta_t", "eta_t")
    inlet, flow = "4", "m_dot_hp"
    if two:
        _expansion(section, "4", "6", "p_lp", first, "high-pressure turbine")
        flow = section.formula("m_dot_s", "m_dot_hp + m_dot_lp", "Mass flow of steam in the low-pressure turbine",
                               "kg/s", reference=grounds.MASS)
        section.formula("h_7", "(m_dot_hp * h_6 + m_dot_lp * h_5) / m_dot_s", "Specific enthalpy of the mixed steam",
                        "kJ/kg",
                        reference="energy balance of the mixing")
        state(section, "7", "wf", "of the mixed steam", p="p_lp", h="h_7")
        inlet = "7"
    _expansion(section, inlet, "8", "p_c", second, "low-pressure turbine" if two else "turbine")
    section.property("x_ex", "x_eq(wf, p=p_c, h=h_8)", "Dryness at the exhaust; above 1 it is superheated")
    work = "m_dot_hp * (h_4 - h_6) + m_dot_s * (h_7 - h_8)" if two else "m_dot_hp * (h_4 - h_8)"
    section.formula("W_dot_st", work, "Shaft power of the steam turbine", "kW",
                    reference="first law at steady flow, adiabatic: mass flow times fall of enthalpy")
    pumps = "m_dot_hp * w_p_hp + m_dot_lp * w_p_lp" if two else "m_dot_hp * w_p"
    section.formula("W_dot_p", pumps, "Shaft power of the feed pumps" if two else "Shaft power of the feed pump", "kW",
                    reference=grounds.POWER_OF_FLOW)
    section.formula("Q_dot_c", f"{flow} * (h_8 - h_1)", "Heat given up in the condenser", "kW",
                    reference=grounds.HEAT_OF_FLOW)
    section.formula("Q_dot_out_sum", "Q_dot_c + W_dot_st - W_dot_p",
                    "Heat and work that leave the steam cycle, for check", "kW",
                    note="must equal the heat taken from the gas", reference=grounds.WHOLE)
    plan.facts.equals.append(Equal("Q_dot_hr", "Q_dot_out_sum",
                                   "heat taken equals heat and work that leave the steam cycle", 1e-9))


def _expansion(section: Section, inlet: str, outlet: str, pressure: str, eta: str, machine: str) -> None:
    ideal = section.property(f"h_{outlet}s", f"h(wf, p={pressure}, s=s_{inlet})", "Enthalpy after isentropic expansion")
    section.formula(f"h_{outlet}", f"h_{inlet} - {eta} * (h_{inlet} - {ideal})",
                    f"Specific enthalpy at the {machine} outlet", "kJ/kg",
                    reference="isentropic efficiency: fall of enthalpy over isentropic fall")
    section.plan.facts.machines.append(MachineEnds(
        machine, "wf", f"h_{inlet}", f"s_{inlet}", pressure, f"h_{inlet} - h_{outlet}", eta, drives=False))
    state(section, outlet, "wf", f"at the {machine} outlet", p=pressure, h=f"h_{outlet}")


def power(plan: Plan) -> None:
    """Net powers of the steam and gas sides and of the plant, and its efficiency where the fuel is known."""
    section = plan.section("Powers and efficiency")
    section.formula("W_dot_snet", "W_dot_st * eta_gen - W_dot_p / eta_pm", "Electrical power of the steam side", "kW",
                    reference=grounds.NET_POWER)
    plan.demand("W_dot_snet > 0 kW", "the steam side gives no power", "pumps draw all that the steam turbine makes")
    if plan.options["gas"] == "cycle":
        section.formula("W_dot_gnet", "W_dot_gt * eta_gen_g", "Electrical power of the gas turbine", "kW",
                        reference=grounds.GENERATOR)
        section.formula("W_dot_net", "W_dot_gnet + W_dot_snet - W_dot_aux", "Net electrical power of the plant", "kW",
                        reference=grounds.NET_POWER)
        section.formula("eta_cc", "W_dot_net / Q_dot_fuel", "Efficiency of the combined plant",
                        reference=grounds.EFFICIENCY)
        section.formula("eta_g", "W_dot_gnet / Q_dot_fuel", "Efficiency of the gas turbine alone",
                        reference=grounds.EFFICIENCY)
    else:
        section.formula("W_dot_net", "W_dot_snet - W_dot_aux", "Net electrical power of the plant", "kW",
                        reference=grounds.NET_POWER)
    plan.demand("W_dot_net > 0 kW", "the net power is not above zero", "pumps and auxiliaries draw all that is made")
    section.formula("eta_s", "W_dot_snet / Q_dot_hr", "Efficiency of the steam side on the heat taken from the gas",
                    reference=grounds.EFFICIENCY)


def bound(plan: Plan, gas: Stream) -> None:
    """What the exhaust could give, cooled reversibly to the dead state and to the stack."""
    section = plan.section("Reversible bound of the exhaust")
    section.formula("e_gas", "(h_gas_in - h_gas_0) - T_0 * (s_gas_in - s_gas_0)",
                    "Specific flow exergy of the gas at the inlet", "kJ/kg",
                    reference="flow exergy without kinetic, potential and chemical parts, at the gas's pressure")
    section.formula("W_dot_rev", "m_dot_gas * e_gas", "Reversible power of the gas cooled to the dead state", "kW",
                    reference=grounds.EXERGY_OF_FLOW)
    section.formula("E_dot_stack", "m_dot_gas * ((h_gas_out - h_gas_0) - T_0 * (s_gas_out - s_gas_0))",
                    "Exergy that leaves by the stack", "kW",
                    reference="flow exergy without kinetic, potential and chemical parts")
    section.formula("W_dot_rev_taken", "W_dot_rev - E_dot_stack", "Reversible power of the heat that is taken", "kW",
                    reference="exergy balance of the gas")
    section.formula("eta_ex", "W_dot_snet / W_dot_rev",
                    "Exergetic efficiency: power of the steam side over the exergy of the exhaust",
                    reference="definition of the exergetic efficiency: power over exergy supplied")
    entropic_mean(section, gas, "T_m_gas")
    plan.demand("T_0 <= T_c", "the dead state is warmer than the condenser", "lower T_0, or raise the condensing level")
    section.formula("eta_rev", "1 - T_0 / T_m_gas", "Efficiency of a reversible engine on the heat taken",
                    reference="Carnot's relation with the gas's entropic mean temperature")
    plan.facts.bounds += [Bound("W_dot_snet", "W_dot_rev_taken",
                                "the steam side stays below the reversible power of the heat taken"),
                          Bound("eta_s", "eta_rev", "the steam side's efficiency stays below the reversible one")]
    if plan.options["gas"] == "cycle":
        section.formula("eta_C", "1 - T_0 / T_g3", "Carnot's efficiency between the turbine inlet and the dead state",
                        reference=grounds.CARNOT)
        plan.facts.bounds.append(Bound("eta_cc", "eta_C", "the combined plant stays below Carnot's efficiency"))
