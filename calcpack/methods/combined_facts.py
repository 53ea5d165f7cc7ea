"""What is said of a combined plant's steps: condenser, balances, states, diagrams, arrangement sketch."""
from __future__ import annotations

from calcpack.methods import ladders
from calcpack.methods.combined_parts import FEED, STEAM, levels_of
from calcpack.plan.equipment import grounds
from calcpack.plan.equipment.exchanger import Exchanger, Zone, conductance, profile, require_pinch
from calcpack.plan.equipment.streams import Stream, balance, line
from calcpack.plan.facts import Again, Box, Diagram, Flow, Link, Path, Sketch, StatePoint, Volume
from calcpack.plan.plan import Plan


def exhaust_flow(plan: Plan) -> str:
    """The mass flow through the condenser."""
    return "m_dot_s" if plan.options["pressures"] == "2" else "m_dot_hp"


def condenser(plan: Plan, sink: Stream) -> None:
    """Cooling water, temperature profile and conductance of the condenser."""
    section = plan.section("Condenser: balance and profile")
    section.property("h_g_c", "h(wf, p=p_c, x=1)", "Enthalpy of the dry vapour at the condensing pressure")
    section.formula("h_cv", "min(h_8, h_g_c)", "Enthalpy at which condensation begins", "kJ/kg",
                    reference=grounds.ONSET)
    section.property("T_cv", "T(wf, p=p_c, h=h_cv)", "Temperature at which condensation begins")
    balance(section, sink, "Q_dot_c")
    it = Exchanger("Condenser", "c", "wf", "p_c", exhaust_flow(plan), "Q_dot_c", sink, (
        Zone("condensing", "cc", "h_1", "h_cv", "T_1", "T_cv"), Zone("desuperheating", "cd", "h_cv", "h_8", "T_cv",
                                                                     "T_8")))
    profile(plan, section, it)
    require_pinch(plan, it)
    conductance(plan.section("Condenser: conductance"), it)


def facts(plan: Plan, gas: Stream, sink: Stream | None) -> None:
    """States, streams, balances, diagrams, parts and the sketch."""
    two, cycle = plan.options["pressures"] == "2", plan.options["gas"] == "cycle"
    plan.facts.states += _points(plan, two, cycle)
    plan.facts.streams.append(line(gas, "Gas", "Q_dot_hr"))
    if sink:
        plan.facts.streams.append(line(sink, "Cooling water", "Q_dot_c"))
    plan.facts.volumes += _volumes(plan, gas, sink, two, cycle)
    ladders.combined(plan, cycle=cycle, sink=sink is not None)
    paths = [Path("1", "2", "straight"), Path("2", "4", "p"), Path("8", "1", "p")]
    paths += [Path("1", "3", "straight"), Path("3", "5", "p"), Path("4", "6", "straight"), Path("6", "7", "p"),
              Path("5", "7", "p"),
              Path("7", "8", "straight")] if two else [Path("4", "8", "straight")]
    plan.facts.diagrams += [Diagram("T-s", "wf", tuple(paths)), Diagram("log p-h", "wf", tuple(paths))]
    if cycle:
        plan.facts.diagrams.append(Diagram("T-s", "gas", (
            Path("g1", "g2", "straight"), Path("g2", "g3", "p"), Path("g3", "g4", "straight"), Path("g4", "g5", "p"))))
    plan.facts.roles.update({"expander inlet": "4", "expander outlet": "8", "condensing": "T_c", "low pressure": "p_c",
                             "high pressure": "p_hp", "pump inlet": "1", "hottest": "T_hp"})
    plan.facts.again.append(Again(
        "W_dot_snet", "(Q_dot_hr - Q_dot_c) * eta_gen - W_dot_p * (1 / eta_pm - eta_gen)",
        "from heat taken less heat given, and the pumps' share"))
    plan.facts.sketch = _sketch(two, cycle, sink)


def _points(plan: Plan, two: bool, cycle: bool) -> list[StatePoint]:
    rows = [("1", "condensate", "T_1", "p_c"), ("2", "feedwater", "T_2", "p_hp"), ("4", "steam at the turbine inlet",
                                                                                   "T_hp", "p_hp"),
            ("8", "turbine exhaust", "T_8", "p_c")]
    if two:
        rows += [("3", "low-pressure feedwater", "T_3", "p_lp"), ("5", "low-pressure steam", "T_lp", "p_lp"),
                 ("6", "high-pressure turbine outlet", "T_6", "p_lp"), ("7", "mixed steam", "T_7", "p_lp")]
    found = [StatePoint(n, label, "wf", T, p, f"h_{n}", f"s_{n}") for n, label, T, p in sorted(rows)]
    if cycle:
        found += [StatePoint(n, label, "gas", f"T_{n}", p, f"h_{n}", f"s_{n}") for n, label, p in (
            ("g1", "compressor inlet", "p_gas"), ("g2", "compressor outlet", "p_g2"), ("g3", "gas turbine inlet",
                                                                                       "p_g3"))]
    return [*found, StatePoint("g4", "gas at the steam generator", "gas", "T_gas_in", "p_gas", "h_gas_in", "s_gas_in"),
            StatePoint("g5", "stack", "gas", "T_gas_out", "p_gas", "h_gas_out", "s_gas_out")]


def _at(number: str, m_dot: str) -> Flow:
    return Flow(m_dot, f"h_{number}", f"s_{number}")


def _volumes(plan: Plan, gas: Stream, sink: Stream | None, two: bool, cycle: bool) -> list[Volume]:
    levels, last = levels_of(plan), exhaust_flow(plan)
    feeds = tuple(_at(FEED[tag], f"m_dot_{tag}") for tag in levels)
    steams = tuple(_at(STEAM[tag], f"m_dot_{tag}") for tag in levels)
    condensed = tuple(_at("1", f"m_dot_{tag}") for tag in levels)
    rejected = (("Q_dot_c", None),)
    volumes = [
        Volume("feed pumps", condensed, feeds, work_in=("W_dot_p",), scale="W_dot_p"),
        Volume("steam generator", (*feeds, gas.flow_in), (*steams, gas.flow_out), scale="Q_dot_hr"),
        Volume("steam turbine", steams, (_at("8", last),), work_out=("W_dot_st",), scale="W_dot_st"),
        Volume("condenser", (_at("8", last), sink.flow_in), (*condensed, sink.flow_out), scale="Q_dot_c") if sink else
        Volume("condenser", (_at("8", last),), condensed, heat_out=rejected, scale="Q_dot_c"),
        Volume("steam cycle", work_in=("W_dot_p",), work_out=("W_dot_st",), heat_in=(("Q_dot_hr", None),),
               heat_out=rejected,
               scale="Q_dot_hr", cycle=True)]
    if cycle:
        volumes.append(Volume("gas turbine", (_at("g1", "m_dot_gas"),), (gas.flow_in,), work_out=("W_dot_gt",),
                              heat_in=(("Q_dot_fuel", None),), scale="Q_dot_fuel"))
    return volumes


def _sketch(two: bool, cycle: bool, sink: Stream | None) -> Sketch:
    boxes = [Box("Steam generator", "exchanger", 1, 1), Box("Turbine", "turbine", 2, 2), Box("Generator",
                                                                                             "generator", 3, 2),
             Box("Condenser", "exchanger", 1, 3), Box("Feed pump", "pump", 0, 2)]
    links = [Link("Condenser", "Feed pump", "1"), Link("Feed pump", "Steam generator", "2"), Link("Steam generator",
                                                                                                  "Turbine", "4"),
             Link("Turbine", "Condenser", "8"), Link("Turbine", "Generator", "", "power"),
             Link("Steam generator", "Stack", "g5", "stream")]
    if two:
        boxes.append(Box("Low-pressure pump", "pump", 0, 3))
        links += [Link("Condenser", "Low-pressure pump", "1"), Link("Low-pressure pump", "Steam generator", "3"),
                  Link("Steam generator", "Turbine", "5")]
    if cycle:
        boxes += [Box("Compressor", "compressor", 0, 0), Box("Combustor", "combustor", 1, 0),
                  Box("Gas turbine", "turbine", 2, 0)]
        links += [Link("Air", "Compressor", "g1", "stream"), Link("Compressor", "Combustor", "g2"),
                  Link("Combustor", "Gas turbine", "g3"),
                  Link("Gas turbine", "Steam generator", "g4", "stream")]
    else:
        links.append(Link("Exhaust", "Steam generator", "g4", "stream"))
    if sink:
        links += [Link("Water in", "Condenser", "water in", "stream"),
                  Link("Condenser", "Water out", "water out", "stream")]
    return Sketch(tuple(boxes), tuple(links))
