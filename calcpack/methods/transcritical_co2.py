"""Single-stage carbon-dioxide machine that rejects its heat above the critical pressure, to its plan."""
from __future__ import annotations

from collections.abc import Mapping
from itertools import pairwise

from calcpack.methods import vapour_parts as parts
from calcpack.methods.method import Method, Option, Role
from calcpack.methods.transcritical_facts import facts
from calcpack.methods.vapour_states import internal_exchanger
from calcpack.plan.equipment import grounds
from calcpack.plan.equipment.exchanger import Exchanger, Zone, conductance, profile, require_pinch
from calcpack.plan.equipment.machines import compressor, saturation, state, valve
from calcpack.plan.equipment.streams import Stream, balance, stream
from calcpack.plan.plan import Plan, Section

OPTIONS = (
    Option("high_side", "How the pressure of the gas cooler is set", {
        "given": "an input", "optimum": "the pressure of the highest coefficient of performance"}),
    Option("gas_cooler", "How the state after the gas cooler is set", {
        "approach": "above the sink's inlet temperature by a given difference",
        "pinch": "found from the smallest temperature difference in the gas cooler",
        "outlet": "its temperature is an input; there is no sink stream"}),
    Option("internal_exchanger", "Heat from the cooled gas to the suction vapour", {
        "none": "no internal exchanger", "effectiveness": "an internal exchanger of given effectiveness"}),
    *parts.level_options("temperature", without="condensing sink_stream"),
    parts.size_options(),
    parts.SUCTION,
    parts.SERVES,
)

CORRELATIONS = (
    ("p_Liao", "(2.778 - 0.0157 * t_e) * t_gc + (0.381 * t_e - 9.34)", "Liao, Zhao & Jakobsen",
     "Appl. Therm. Eng. 20 (2000) 831 (formula from memory)"),
    ("p_Chen", "2.68 * t_gc - 6.797", "Chen & Gu", "Int. J. Refrig. 28 (2005) 1238 (formula from memory)"),
    ("p_Kauf", "2.6 * (t_gc - 2.9) + 7.54", "Kauf",
     "Int. J. Therm. Sci. 38 (1999) 325, gas-cooler outlet 2.9 K above the ambient (formula from memory)"),
    ("p_Sarkar", "4.9 + 2.256 * t_gc - 0.17 * t_e + 0.002 * t_gc^2", "Sarkar, Bhattacharyya & Ram Gopal",
     "Int. J. Refrig. 27 (2004) 830, heating and cooling together (formula from memory)"),
)
"""Published fits of the optimum pressure in bar, temperatures in °C, all for 30 to 50 °C after the gas cooler or so."""


def exchanger_numbers(options: Mapping[str, str]) -> tuple[str, str]:
    """The states at the evaporator outlet and at the valve inlet."""
    return ("5", "6") if options["internal_exchanger"] != "none" else ("1", "3")


def lay(plan: Plan) -> None:
    """Lay the plan: levels, states, gas cooler, evaporator, power, published optima, bound."""
    source = None if plan.options["source_stream"] == "none" else stream(
        plan, "source", gives_heat=True, mode=plan.options["source_stream"])
    sink = None if plan.options["gas_cooler"] == "outlet" else stream(
        plan, "sink", gives_heat=False, mode="outlet", typical={"in": "28 degC", "out": "45 degC"})
    _inputs(plan)
    parts.ends(plan, source, sink)
    _levels(plan, source)
    _cycle(plan, plan.section("States of the refrigerant"), sink)
    chosen, found = plan.options["high_side"] == "optimum", plan.options["gas_cooler"] == "pinch"
    # Only a pinch makes the coefficient of performance hang on the profile, which is slow to tabulate.
    if chosen and not found:
        plan.close("p_2")
    gas_cooler = _gas_cooler(plan, sink)
    if chosen and found:
        plan.close("p_2")
    evaporator = parts.evaporator(plan, source, "4", exchanger_numbers(plan.options)[0]) if source else None
    _require(plan, sink)
    if evaporator:
        require_pinch(plan, evaporator)
    for one in filter(None, (gas_cooler, evaporator)):
        conductance(plan.section(f"{one.title}: conductance"), one)
    _power(plan)
    _published(plan)
    if source and sink:
        parts.bound(plan, source, sink)
    facts(plan, exchanger_numbers(plan.options), source, sink)


def _inputs(plan: Plan) -> None:
    parts.level_inputs(plan, {"e": ("0 degC", "35 bar")}, tags="e")
    if plan.options["high_side"] == "given":
        plan.input("p_2", "pressure", "Pressure of the gas cooler", "95 bar", low="73.8 bar",
                   note="above the critical pressure of carbon dioxide, 73.77 bar")
    else:
        plan.input("p_high_max", "pressure", "Highest pressure that the high side allows", "130 bar",
                   low="80 bar")
    match plan.options["gas_cooler"]:
        case "approach":
            plan.input("dT_app", "temperature difference", "Gas-cooler outlet above the sink's inlet", "5 K",
                       **parts.POSITIVE)
        case "pinch":
            plan.input("dT_pinch_g", "temperature difference",
                       "Smallest temperature difference in the gas cooler",
                       "4 K", **parts.POSITIVE)
        case _:
            plan.input("T_3", "temperature", "Temperature after the gas cooler", "35 degC")
    parts.end_inputs(plan)
    if plan.options["internal_exchanger"] != "none":
        plan.input("epsilon_ihx", "number", "Effectiveness of the internal exchanger, by temperatures", "0.5",
                   **parts.SHARE)
    plan.input("eta_is", "number", "Isentropic efficiency of the compressor", "0.7", **parts.SHARE)
    parts.drive_inputs(plan)
    parts.size_inputs(plan)


def _levels(plan: Plan, source: Stream | None) -> None:
    section = plan.section("Evaporating level and pressure of the gas cooler")
    parts.level(plan, section, "e", "evaporating", source, floor=True)
    saturation(section, "e", "wf", plan.options["evaporating"], "Evaporating")
    section.property("p_crit_wf", "p_crit(wf)", "Critical pressure of the refrigerant")
    if plan.options["high_side"] == "optimum":
        section.optimum("p_2", "k_cycle", ("1.01 * p_crit_wf", "p_high_max"),
                        "Gas-cooler pressure of the highest coefficient of performance", "bar",
                        note="an optimum at an end of its bounds is a limit, not a summit: see the curve",
                        reference=grounds.BEST_COP)
    section.formula("r_crit", "p_2 / p_crit_wf", "Gas-cooler pressure over the critical pressure",
                    reference="derived: above 1 there is no condensation")


def _cycle(plan: Plan, section: Section, sink: Stream | None) -> None:
    outlet, inlet = exchanger_numbers(plan.options)
    where = "at the evaporator outlet" if outlet == "5" else "at the compressor inlet"
    if plan.options["suction"] == "superheated":
        section.formula(f"T_{outlet}", "T_e + dT_sh", f"Temperature {where}", "degC", reference=grounds.SUPERHEAT)
        state(section, outlet, "wf", where, p="p_e", T=f"T_{outlet}")
    else:
        state(section, outlet, "wf", where, p="p_e", x="1")
    _gas_cooler_outlet(plan, section, sink)
    if outlet == "5":
        internal_exchanger(section, "wf", vapour=("5", "1"), liquid=("3", "6"), p_vapour="p_e", p_liquid="p_2",
                           word="cooled gas")
    section.property("rho_1", "rho(wf, p=p_e, h=h_1)", "Density at the compressor inlet")
    compressor(section, "wf", "1", "2", "p_2", "f_loss")
    valve(section, "wf", inlet, "4", "p_e")
    heat = "h_2 - h_3" if plan.options["serves"] == "heating" else f"h_{outlet} - h_4"
    section.formula("k_cycle", f"({heat}) / w_comp", "Coefficient of performance on the work of compression",
                    reference=grounds.COP)


def _gas_cooler_outlet(plan: Plan, section: Section, sink: Stream | None) -> None:
    if plan.options["gas_cooler"] == "approach":
        section.formula("T_3", f"{sink.name('T', 'in')} + dT_app", "Temperature after the gas cooler", "degC",
                        reference=grounds.APPROACH)
    elif plan.options["gas_cooler"] == "pinch":
        inlet = sink.name("T", "in")
        section.root("T_3", "dT_min_g - dT_pinch_g", (inlet, f"{inlet} + 60 K"),
                     "Temperature after the gas cooler at which it has the wanted pinch", "degC",
                     note="the smallest difference is found along the whole gas cooler, in the profile below",
                     reference=grounds.PINCH)
    state(section, "3", "wf", "after the gas cooler", p="p_2", T="T_3")


def _gas_cooler(plan: Plan, sink: Stream | None) -> Exchanger | None:
    """Flow and duties, and the profile of the gas cooler where there is a sink stream."""
    section = plan.section("Refrigerant flow and heat duties")
    q_source = f"h_{exchanger_numbers(plan.options)[0]} - h_4"
    flow = {"sink-duty": "Q_dot_sink / (h_2 - h_3)", "source-duty": f"Q_dot_source / ({q_source})"}
    by = plan.options["size_by"]
    if by in flow:
        section.formula("m_dot_wf", flow[by], "Mass flow of the refrigerant", "kg/s", reference=grounds.FLOW_FOR_HEAT)
    if by != "sink-duty":
        section.formula("Q_dot_sink", "m_dot_wf * (h_2 - h_3)", "Heat given to the sink", "kW",
                        reference=grounds.HEAT_OF_FLOW)
    if by != "source-duty":
        section.formula("Q_dot_source", f"m_dot_wf * ({q_source})", "Heat taken from the source", "kW",
                        reference=grounds.HEAT_OF_FLOW)
    if sink is None:
        return None
    section = plan.section("Gas cooler: balance and profile")
    balance(section, sink, "Q_dot_sink")
    zones = []
    for index, share in enumerate((0.25, 0.5, 0.75), start=1):
        # The heat capacity swings widely near the critical point: conductance needs more than the two ends.
        section.formula(f"h_g{index}", f"h_3 + {share} * (h_2 - h_3)", f"Enthalpy at {share:.0%} of the heat",
                        "kJ/kg", reference=grounds.PARTS_OF_HEAT)
        section.property(f"T_g{index}", f"T(wf, p=p_2, h=h_g{index})",
                         f"Temperature at {share:.0%} of the heat")
    ways = ("3", "g1", "g2", "g3", "2")
    for index, (cold, warm) in enumerate(pairwise(ways), start=1):
        zones.append(Zone(f"quarter {index}", f"g{index}", f"h_{cold}", f"h_{warm}", f"T_{cold}", f"T_{warm}"))
    result = Exchanger("Gas cooler", "g", "wf", "p_2", "m_dot_wf", "Q_dot_sink", sink, tuple(zones))
    profile(plan, section, result)
    if plan.options["gas_cooler"] == "pinch":
        plan.close("T_3")
    return result


def _require(plan: Plan, sink: Stream | None) -> None:
    plan.demand("p_2 > p_crit_wf", "the gas-cooler pressure is not above the critical pressure",
                "give a higher pressure, or use vapour-compression for a machine that condenses")
    plan.demand("p_e < p_crit_wf and p_2 > p_e", "the evaporating pressure is not below that of the gas cooler",
                "check the evaporating level")
    plan.demand("h_2 > h_3", "the compressed gas is no warmer than the gas-cooler outlet",
                "raise the pressure of the gas cooler or lower the temperature after it")
    if plan.options["internal_exchanger"] != "none":
        plan.demand("dT_ihx_hot >= 0 K and dT_ihx_cold > 0 K",
                    "the internal exchanger has no temperature difference left",
                    "the cooled gas must be warmer than the vapour: take a smaller effectiveness or less superheat, "
                    "or set internal_exchanger to none")
    if sink:
        plan.demand("dT_min_g > 0 K", "the temperatures cross in the gas cooler",
                    "raise the gas-cooler pressure, lower the sink's outlet, or set gas_cooler to pinch, which lets "
                    "the temperature after the gas cooler give way")


def _power(plan: Plan) -> None:
    section = plan.section("Power and coefficient of performance")
    section.formula("W_dot_shaft", "m_dot_wf * w_comp", "Power at the compressor shaft", "kW",
                    reference=grounds.POWER_OF_FLOW)
    parts.electrical(plan, section)
    section.formula("r_p", "p_2 / p_e", "Pressure ratio of the compressor", reference=grounds.PRESSURE_RATIO)
    section.formula("V_dot_1", "m_dot_wf / rho_1", "Volume flow at the compressor inlet", "m3/h",
                    reference=grounds.VOLUME_FLOW)


def _published(plan: Plan) -> None:
    """Published fits of the optimum pressure beside the pressure of this sheet; nothing hangs on them."""
    section = plan.section("Published optimum pressures, for comparison")
    section.formula("t_e", "(T_e - 273.15 K) / 1 K", "Evaporating temperature in °C, as the fits take it",
                    reference=grounds.CELSIUS)
    section.formula("t_gc", "(T_3 - 273.15 K) / 1 K",
                    "Temperature after the gas cooler in °C, as the fits take it", reference=grounds.CELSIUS)
    for symbol, formula, who, where in CORRELATIONS:
        section.formula(symbol, f"({formula}) * 1 bar", f"Optimum pressure by {who}", "bar",
                        reference=f"{who}, {where}")
        section.formula(symbol.replace("p_", "r_"), f"p_2 / {symbol}",
                        f"Pressure of this sheet over that by {who}",
                        reference="derived: pressure of this sheet over that of the fit")


def _roles(options: Mapping[str, str]) -> tuple[Role, ...]:
    with_sink = dict(options) | {"sink_stream": "none" if options["gas_cooler"] == "outlet" else "outlet"}
    return parts.roles(with_sink, (Role("wf", "Refrigerant: carbon dioxide", "R-744"),))


def _results(options: Mapping[str, str]) -> tuple[str, ...]:
    with_sink = dict(options) | {"sink_stream": "none" if options["gas_cooler"] == "outlet" else "outlet"}
    return parts.results(with_sink, "p_2", "T_2", "T_3")


METHOD = Method(
    name="transcritical-co2",
    title="Transcritical carbon-dioxide machine",
    text="Carbon dioxide evaporates at the cost of a source stream, is compressed above its critical pressure and "
         "gives its heat in a gas cooler, where it glides and does not condense. The high pressure is free: given, or "
         "chosen for the highest coefficient of performance, with published fits of that optimum beside it.",
    options=OPTIONS, roles=_roles, lay=lay,
    assumes=("steady state", "no pressure drop in exchangers and pipes",
             "no heat exchanged with the surroundings but the compressor's stated loss",
             "counter-flow exchangers", "kinetic and potential energy neglected"),
    leaves_out=("expander, ejector, parallel compression and intermediate pressure vessel",
                "operation below the critical pressure: vapour-compression has it",
                "part load, defrosting, starting and stopping"),
    sketch="""
      sink in ──►┌────────────┐──► sink out
           3 ┌───┤ Gas cooler ├◄─┐ 2
             │   └────────────┘  │
           ┌─┴─┐               ┌─┴──────────┐
           │ X │ valve         │ Compressor │◄── power
           └─┬─┘               └─┬──────────┘
           4 │   ┌────────────┐  │ 1
             └──►┤ Evaporator ├──┘
   source out ◄──└────────────┘◄── source in
      (with an internal exchanger, 3 and 5 meet in it: 6 goes to the valve, 1 to the compressor)
""",
    results=_results)
