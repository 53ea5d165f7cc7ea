"""Evaporation of water by mechanical vapour recompression, to its plan."""
from __future__ import annotations

from collections.abc import Mapping

from calcpack.methods import ladders
from calcpack.methods import vapour_parts as parts
from calcpack.methods.method import Method, Option, Role
from calcpack.plan.equipment import grounds
from calcpack.plan.equipment.machines import compressor, state
from calcpack.plan.facts import Bound, Box, Diagram, Equal, Flow, Link, Path, Sketch, StatePoint, Volume
from calcpack.plan.plan import Plan, Section

OPTIONS = (
    Option("size_by", "What sets the size of the plant", {
        "feed": "the mass flow of the feed is an input",
        "evaporation": "the mass flow of evaporated water is an input"}),
    Option("desuperheating", "State of the compressed vapour at the heating surface", {
        "injection": "condensate is sprayed in until the vapour is saturated",
        "none": "superheated as compressed"}),
    Option("preheating", "What warms the feed", {
        "condensate": "the condensate, down to a given difference above the feed", "none": "nothing"}),
)


def lay(plan: Plan) -> None:
    """Lay the plan: vapour and levels, compression, flows, heat of the evaporator, power, reversible bound."""
    _inputs(plan)
    _vapour(plan, plan.section("Boiling solution and its vapour"))
    _compression(plan, plan.section("Compression of the vapour"))
    _flows(plan, plan.section("Flows of the plant"))
    _feed(plan, plan.section("Feed and concentrate"))
    _heat(plan, plan.section("Heat of the evaporator"))
    _power(plan)
    _bound(plan, plan.section("Reversible bound"))
    _facts(plan)


def _inputs(plan: Plan) -> None:
    if plan.options["size_by"] == "feed":
        plan.input("m_dot_feed", "mass flow", "Mass flow of the feed", "5 kg/s", low="0 kg/s", low_open=True)
    else:
        plan.input("m_dot_v", "mass flow", "Mass flow of evaporated water", "4 kg/s", low="0 kg/s",
                   low_open=True)
    plan.input("w_feed", "number", "Mass fraction of solids in the feed", "0.1", low="0", high="1")
    plan.input("w_conc", "number", "Mass fraction of solids in the concentrate", "0.5", low="0", low_open=True,
               high="1")
    plan.input("T_feed", "temperature", "Temperature of the feed", "60 degC")
    plan.input("cp_feed", "specific entropy", "Specific heat capacity of the feed", "3.9 kJ/(kg·K)",
               low="0 kJ/(kg·K)", low_open=True)
    plan.input("T_b", "temperature", "Boiling temperature of the solution", "85 degC")
    plan.input("dT_bpe", "temperature difference", "Boiling-point elevation of the solution", "2 K", low="0 K",
               low_open=True, note="that of the concentrate that boils in the plant, also where it is small")
    plan.input("dp_v", "pressure", "Pressure drop of the vapour up to the compressor", "0.005 bar", low="0 bar")
    plan.input("dT_hs", "temperature difference", "Condensation above boiling at the heating surface", "5 K",
               **parts.POSITIVE)
    if plan.options["preheating"] == "condensate":
        plan.input("dT_pre", "temperature difference",
                   "Condensate leaving the preheater above the entering feed",
                   "5 K",
                   **parts.POSITIVE)
    plan.input("eta_is", "number", "Isentropic efficiency of the compressor", "0.75", **parts.SHARE)
    parts.drive_inputs(plan)


def _vapour(plan: Plan, section: Section) -> None:
    plan.demand("w_conc > w_feed", "the concentrate is not richer than the feed",
                "check the two mass fractions")
    plan.demand("T_feed < T_b", "the feed is not colder than the solution boils", "check the two temperatures")
    section.formula("T_v", "T_b - dT_bpe", "Saturation temperature of the vapour above the solution", "degC",
                    reference="boiling-point elevation: solution above pure water at the same pressure")
    section.property("p_v", "p(wf, T=T_v, x=1)", "Pressure above the solution")
    section.property("h_v", "h(wf, p=p_v, T=T_b)",
                     "Specific enthalpy of the vapour, superheated by the elevation")
    section.property("s_v", "s(wf, p=p_v, T=T_b)", "Specific entropy of that vapour")
    section.formula("p_1", "p_v - dp_v", "Pressure at the compressor inlet", "bar", reference=grounds.DROP)
    plan.demand("p_1 > 0 bar", "the pressure drop is not less than the pressure above the solution",
                "give a smaller pressure drop")
    section.formula("h_1", "h_v", "Specific enthalpy at the compressor inlet", "kJ/kg",
                    reference="adiabatic vapour line")
    state(section, "1", "wf", "at the compressor inlet", p="p_1", h="h_1")
    section.property("rho_1", "rho(wf, p=p_1, h=h_1)", "Density at the compressor inlet")


def _compression(plan: Plan, section: Section) -> None:
    section.formula("T_c", "T_b + dT_hs", "Condensing temperature at the heating surface", "degC",
                    reference=grounds.APPROACH)
    section.property("p_c", "p(wf, T=T_c, x=1)", "Condensing pressure")
    compressor(section, "wf", "1", "2", "p_c", "f_loss")
    state(section, "4", "wf", "of the condensate", p="p_c", x="0")
    if plan.options["desuperheating"] == "injection":
        state(section, "3", "wf", "of the vapour at the heating surface", p="p_c", x="1")
        section.formula("r_inj", "(h_2 - h_3) / (h_3 - h_4)", "Condensate sprayed in a kilogram of vapour",
                        reference="energy balance of the injection")


def _flows(plan: Plan, section: Section) -> None:
    share = "1 - w_feed / w_conc"
    if plan.options["size_by"] == "feed":
        section.formula("m_dot_v", f"m_dot_feed * ({share})", "Mass flow of evaporated water", "kg/s",
                        reference="balance of the solids")
    else:
        section.formula("m_dot_feed", f"m_dot_v / ({share})", "Mass flow of the feed", "kg/s",
                        reference="balance of the solids")
    section.formula("m_dot_conc", "m_dot_feed - m_dot_v", "Mass flow of the concentrate", "kg/s",
                    reference=grounds.MASS)
    if plan.options["desuperheating"] == "injection":
        section.formula("m_dot_inj", "r_inj * m_dot_v", "Mass flow of the condensate sprayed in", "kg/s",
                        reference="flow ratio of the energy balance of the injection")
        section.formula("m_dot_h", "m_dot_v + m_dot_inj", "Mass flow at the heating surface", "kg/s",
                        reference=grounds.MASS)


def _feed(plan: Plan, section: Section) -> None:
    section.property("h_b", "h(wf, T=T_b, x=0)",
                     "Enthalpy of water at the boiling temperature, taken for the solution's",
                     note="only differences count: the heat of mixing is neglected")
    section.property("s_b", "s(wf, T=T_b, x=0)",
                     "Entropy of water at the boiling temperature, taken for the solution's")
    section.formula("h_feed", "h_b - cp_feed * (T_b - T_feed)", "Specific enthalpy of the feed", "kJ/kg",
                    reference="constant heat capacity up to the boiling temperature")
    section.formula("s_feed", "s_b - cp_feed * ln(T_b / T_feed)", "Specific entropy of the feed", "kJ/(kg·K)",
                    reference="constant heat capacity up to the boiling temperature")
    if plan.options["preheating"] == "none":
        return
    section.formula("T_5", "T_feed + dT_pre", "Temperature of the condensate after the preheater", "degC",
                    reference=grounds.APPROACH)
    plan.demand("T_5 < T_c", "the condensate has nothing to give to the feed",
                "take a smaller difference in the preheater, or set preheating to none")
    state(section, "5", "wf", "of the condensate after the preheater", p="p_c", T="T_5")
    section.formula("Q_dot_pre", "m_dot_v * (h_4 - h_5)", "Heat exchanged in the preheater", "kW",
                    reference=grounds.HEAT_OF_FLOW)
    section.formula("h_pre", "h_feed + Q_dot_pre / m_dot_feed", "Specific enthalpy of the preheated feed",
                    "kJ/kg",
                    reference="energy balance of the preheater")
    section.formula("T_pre", "T_feed + Q_dot_pre / (m_dot_feed * cp_feed)", "Temperature of the preheated feed",
                    "degC", reference="energy balance of the feed, constant heat capacity")
    plan.demand("T_pre < T_c and T_pre <= T_b", "the preheater would warm the feed beyond what is possible",
                "take a greater difference in the preheater, or check the heat capacity of the feed")
    section.formula("s_pre", "s_b - cp_feed * ln(T_b / T_pre)", "Specific entropy of the preheated feed",
                    "kJ/(kg·K)",
                    reference="constant heat capacity: Δs = cp ln(T ratio), pressure without effect on a liquid")
    section.formula("dT_pre_hot", "T_c - T_pre", "Temperature difference at the preheater's warm end", "K",
                    reference=grounds.TWO_SIDES)


def _heat(plan: Plan, section: Section) -> None:
    feed = "h_pre" if plan.options["preheating"] == "condensate" else "h_feed"
    section.formula("Q_dot_need", f"m_dot_v * h_v + m_dot_conc * h_b - m_dot_feed * {feed}",
                    "Heat that the evaporator needs", "kW", reference="energy balance of the solution")
    warm, flow = ("h_3", "m_dot_h") if plan.options["desuperheating"] == "injection" else ("h_2", "m_dot_v")
    section.formula("Q_dot_hs", f"{flow} * ({warm} - h_4)", "Heat of the compressed vapour as it condenses",
                    "kW", reference=grounds.HEAT_OF_FLOW)
    section.formula("Q_dot_add", "Q_dot_need - Q_dot_hs",
                    "Heat to be added from outside; below zero it is left over",
                    "kW",
                    note="added as live steam or by another preheater; what is left over is vented or lost",
                    reference="energy balance of the evaporator")
    section.formula("Q_dot_parts", f"m_dot_v * (h_v - h_b) + m_dot_feed * (h_b - {feed})",
                    "Heat needed by its parts: evaporation and warming of the feed, for check", "kW",
                    note="must equal the heat that the evaporator needs", reference=grounds.WHOLE)
    plan.facts.equals.append(Equal("Q_dot_need", "Q_dot_parts",
                                   "heat of the evaporator by balance and by its parts"))


def _power(plan: Plan) -> None:
    section = plan.section("Power and its yield")
    section.formula("W_dot_shaft", "m_dot_v * w_comp", "Power at the compressor shaft", "kW",
                    reference=grounds.POWER_OF_FLOW)
    section.formula("Q_dot_loss", "f_loss * W_dot_shaft", "Heat lost by the compressor to its surroundings",
                    "kW", reference=grounds.LOST_HEAT)
    section.formula("W_dot_el", "W_dot_shaft / (eta_drive * eta_motor)", "Electrical power of the motor", "kW",
                    reference=grounds.DRIVE)
    section.formula("W_dot_net", "W_dot_el + W_dot_aux", "Electrical power drawn in all", "kW",
                    reference=grounds.NET_POWER)
    section.formula("e_v", "W_dot_net / m_dot_v", "Electrical work for a kilogram of evaporated water", "kJ/kg",
                    reference="derived: power over flow of evaporated water")
    section.formula("COP", "Q_dot_hs / W_dot_net",
                    "Coefficient of performance: heat at the heating surface over power", reference=grounds.COP)
    section.formula("r_p", "p_c / p_1", "Pressure ratio of the compressor", reference=grounds.PRESSURE_RATIO)
    section.formula("dT_lift", "T_c - T_v", "Rise of the saturation temperature, with elevation", "K",
                    reference="derived: condensing temperature less that of the vapour's saturation")
    section.formula("V_dot_1", "m_dot_v / rho_1", "Volume flow at the compressor inlet", "m3/h",
                    reference=grounds.VOLUME_FLOW)


def _bound(plan: Plan, section: Section) -> None:
    """The open cycle closed in thought: condensate flashed to the inlet's pressure and evaporated again."""
    section.property("s_6", "s(wf, p=p_1, h=h_4)",
                     "Entropy of the condensate flashed to the compressor's inlet pressure")
    section.formula("T_m_cold", "(h_1 - h_4) / (s_1 - s_6)",
                    "Entropic mean temperature of evaporating that condensate",
                    "degC", reference="thermodynamic mean temperature Δh/Δs at constant pressure")
    section.formula("T_m_warm", "(h_2 - h_4) / (s_2 - s_4)",
                    "Entropic mean temperature of the condensing vapour",
                    "degC",
                    reference="thermodynamic mean temperature Δh/Δs at constant pressure")
    section.formula("COP_rev", "T_m_warm / (T_m_warm - T_m_cold)",
                    "Coefficient of performance of a reversible machine",
                    reference="Carnot's relation with entropic mean temperatures")
    section.formula("g_rev", "COP / COP_rev", "Share of the reversible bound that the plant reaches",
                    reference=grounds.SHARE_OF_BOUND)
    plan.facts.bounds.append(Bound("COP", "COP_rev",
                                   "the coefficient of performance stays below the reversible one"))


def _facts(plan: Plan) -> None:
    labels = {"1": ("compressor inlet", "p_1"), "2": ("compressor outlet", "p_c")}
    if plan.options["desuperheating"] == "injection":
        labels["3"] = ("vapour at the heating surface", "p_c")
    labels["4"] = ("condensate", "p_c")
    if plan.options["preheating"] == "condensate":
        labels["5"] = ("condensate after the preheater", "p_c")
    it = plan.facts
    it.states += [StatePoint(n, label, "wf", f"T_{n}", p, f"h_{n}", f"s_{n}")
                  for n, (label, p) in labels.items()]
    it.volumes += _volumes(plan.options)
    ladders.recompression(plan, it.volumes)
    paths = [Path("1", "2", "straight"), Path("2", "4", "p")]
    if "5" in labels:
        paths.append(Path("4", "5", "p"))
    it.diagrams += [Diagram("T-s", "wf", tuple(paths)), Diagram("log p-h", "wf", tuple(paths))]
    it.roles.update({"discharge": "T_2", "evaporating": "T_v", "condensing": "T_c", "low pressure": "p_1",
                     "high pressure": "p_c", "pressure ratio": "r_p", "suction": "1"})
    it.sketch = _sketch(plan.options)


def _volumes(options: Mapping[str, str]) -> list[Volume]:
    vapour = {n: Flow("m_dot_v", f"h_{n}", f"s_{n}") for n in ("1", "2", "4", "5")}
    feed, concentrate = Flow("m_dot_feed", "h_feed", "s_feed"), Flow("m_dot_conc", "h_b", "s_b")
    volumes = [Volume("compressor", (vapour["1"],), (vapour["2"],), work_in=("W_dot_shaft",),
                      heat_out=(("Q_dot_loss", None),), scale="W_dot_shaft")]
    warm, wet = vapour["2"], vapour["4"]
    if options["desuperheating"] == "injection":
        warm, wet, spray = Flow("m_dot_h", "h_3", "s_3"), Flow("m_dot_h", "h_4", "s_4"), Flow("m_dot_inj",
                                                                                              "h_4", "s_4")
        volumes.append(Volume("injection", (vapour["2"], spray), (warm,), scale="Q_dot_hs"))
    into = feed
    if options["preheating"] == "condensate":
        into = Flow("m_dot_feed", "h_pre", "s_pre")
        volumes.append(Volume("preheater", (vapour["4"], feed), (vapour["5"], into), scale="Q_dot_hs"))
    volumes.append(Volume("heating surface", (warm,), (wet,), heat_out=(("Q_dot_hs", "T_b"),),
                          scale="Q_dot_hs"))
    volumes.append(Volume("boiling solution", (into,), (Flow("m_dot_v", "h_v", "s_v"), concentrate),
                          heat_in=(("Q_dot_hs", "T_b"), ("Q_dot_add", None)), scale="Q_dot_hs"))
    return volumes


def _sketch(options: Mapping[str, str]) -> Sketch:
    injection, preheated = options["desuperheating"] == "injection", options["preheating"] == "condensate"
    boxes = [Box("Evaporator", "exchanger", 1, 1), Box("Compressor", "compressor", 1, 0)]
    links = [Link("Evaporator", "Compressor", "1"),
             Link("Evaporator", "Concentrate out", "concentrate out", "stream")]
    if injection:
        boxes.append(Box("Injection", "mixer", 2, 0))
        links += [Link("Compressor", "Injection", "2"), Link("Injection", "Evaporator", "3"),
                  Link("Condensate in", "Injection", "4")]
    else:
        links.append(Link("Compressor", "Evaporator", "2"))
    if preheated:
        boxes.append(Box("Preheater", "exchanger", 0, 1))
        links += [Link("Evaporator", "Preheater", "4"), Link("Preheater", "Condensate out", "5"),
                  Link("Feed in", "Preheater", "feed in", "stream"),
                  Link("Preheater", "Evaporator", "preheated feed", "stream")]
    else:
        links += [Link("Evaporator", "Condensate out", "4"), Link("Feed in", "Evaporator", "feed in", "stream")]
    return Sketch(tuple(boxes), (*links, Link("Power", "Compressor", "power", "power")))


METHOD = Method(
    name="vapour-recompression",
    title="Evaporation of water by mechanical vapour recompression",
    text="Water is boiled off a solution, its vapour is compressed and condenses on the other side of the heating "
         "surface, so that the heat of evaporation goes round. What the compressor and the condensate do not cover is "
         "stated as heat to be added.",
    options=OPTIONS, roles=lambda options: (Role("wf", "Vapour: water", "water"),), lay=lay,
    assumes=("steady state", "the vapour carries no solids", "one boiling temperature in the whole evaporator",
             "the solution's heat capacity is constant and its heat of mixing is neglected",
             "no heat exchanged with the surroundings but the compressor's stated loss",
             "kinetic and potential energy neglected"),
    leaves_out=("gases that do not condense, and the vapour vented with them",
                "several effects and several compressors",
                "area of the heating surface, circulation and fouling", "start-up with live steam"),
    sketch="""
        1 ┌────────────┐ 2
       ┌──┤ Compressor ├──┐   injection of condensate
       │  └────────────┘  ▼ 3
     ┌─┴──────────────────┴─┐
     │ solution │ condensing │ 4   ┌───────────┐
     │ boils    │ vapour     ├────►│ Preheater ├──► 5 condensate out
     └─┬──────────────────▲─┘     └──▲─────┬──┘
       ▼ concentrate      └──────────│─────┘ preheated feed
                                   feed in
""",
    results=lambda options: ("e_v", "W_dot_net", "m_dot_v", "Q_dot_add", "COP", "T_2"))
