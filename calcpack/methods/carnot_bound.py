"""The reversible bound between two reservoirs, two finite streams, or a stream and the dead state."""
from __future__ import annotations

from collections.abc import Mapping

from calcpack.errors import Fault, SpecError
from calcpack.methods import ladders
from calcpack.methods.method import Method, Option, Role
from calcpack.plan.equipment import grounds
from calcpack.plan.equipment.streams import Stream, entropic_mean, inlet_state, line, stream
from calcpack.plan.facts import Again, Bound, Box, Equal, Link, Sketch, StreamLine
from calcpack.plan.plan import Plan, Section

OPTIONS = (
    Option("machine", "What the reversible machine does", {
        "engine": "takes heat at the hot side and gives work",
        "heat-pump": "draws work and gives heat at the hot side",
        "refrigerator": "draws work and takes heat at the cold side"}),
    Option("between", "What the machine works between", {
        "reservoirs": "two reservoirs of constant temperature",
        "streams": "two finite streams with given inlet and outlet temperatures",
        "dead-state": "a finite stream cooled to the dead state; engines only"}),
    Option("real", "A real machine set against the bound", {
        "none": "no real machine", "power": "the real machine's power is an input"}),
)


def lay(plan: Plan) -> None:
    """Lay the plan: temperatures, heats, the reversible figure, and a real machine's share of it."""
    engine = plan.options["machine"] == "engine"
    if plan.options["between"] == "dead-state":
        if not engine:
            raise SpecError(Fault("option between: dead-state is for engines",
                                  hint="choose reservoirs or streams for a heat pump or a refrigerator"))
        _dead_state(plan)
    else:
        hot, cold = _reservoirs(plan) if plan.options["between"] == "reservoirs" else _streams(plan)
        _bound(plan, hot, cold)
    if plan.options["real"] == "power":
        _real(plan)
    plan.facts.sketch = _sketch(plan.options)


def _given_heat(plan: Plan) -> None:
    """The heat that is an input: at the hot side, for a refrigerator at the cold side."""
    if plan.options["machine"] == "refrigerator":
        plan.input("Q_dot_c", "power", "Heat taken at the cold side", "100 kW", low="0 kW", low_open=True)
    else:
        verb = "taken" if plan.options["machine"] == "engine" else "given"
        plan.input("Q_dot_h", "power", f"Heat {verb} at the hot side", "500 kW", low="0 kW", low_open=True)


def _reservoirs(plan: Plan) -> tuple[str, str]:
    hot, cold = {"engine": ("350 degC", "15 degC"), "heat-pump": ("60 degC", "10 degC"),
                 "refrigerator": ("35 degC", "2 degC")}[plan.options["machine"]]
    plan.input("T_h", "temperature", "Temperature of the hot reservoir", hot)
    plan.input("T_c", "temperature", "Temperature of the cold reservoir", cold)
    _given_heat(plan)
    return "T_h", "T_c"


def _streams(plan: Plan) -> tuple[str, str]:
    """Two streams; their entropic mean temperatures stand for the reservoirs."""
    engine = plan.options["machine"] == "engine"
    usual = ({"in": "180 degC", "out": "120 degC", "p": "12 bar"}, {"in": "20 degC", "out": "30 degC"}) if engine else (
        {"in": "12 degC", "out": "7 degC"}, {"in": "50 degC", "out": "60 degC"})
    source = stream(plan, "source", gives_heat=True, mode="outlet", typical=usual[0])
    sink = stream(plan, "sink", gives_heat=False, mode="outlet", typical=usual[1])
    _given_heat(plan)
    section = plan.section("Streams at their ends")
    inlet_state(section, source)
    inlet_state(section, sink)
    means = plan.section("Entropic mean temperatures")
    entropic_mean(means, source, "T_m_source")
    entropic_mean(means, sink, "T_m_sink")
    hot, cold = (source, sink) if engine else (sink, source)
    _stream_facts(plan, hot, cold)
    return f"T_m_{hot.role}", f"T_m_{cold.role}"


def _stream_facts(plan: Plan, hot: Stream, cold: Stream) -> None:
    for it, duty in ((hot, "Q_dot_h"), (cold, "Q_dot_c")):
        plan.facts.streams.append(line(it, it.role.capitalize(), duty))


def _bound(plan: Plan, hot: str, cold: str) -> None:
    section = plan.section("Reversible figure")
    plan.demand(f"{hot} > {cold}", "the hot side is not above the cold side", "check the temperatures")
    match plan.options["machine"]:
        case "engine":
            section.formula("eta_rev", f"1 - {cold} / {hot}", "Efficiency of the reversible engine", reference=CARNOT)
            section.formula("W_dot_rev", "eta_rev * Q_dot_h", "Reversible power", "kW",
                            reference="definition of efficiency, solved for the power")
            section.formula("Q_dot_c", "Q_dot_h - W_dot_rev", "Heat given at the cold side", "kW",
                            reference=grounds.FIRST_LAW_OF_CYCLE)
        case "heat-pump":
            section.formula("COP_rev", f"{hot} / ({hot} - {cold})",
                            "Coefficient of performance of the reversible heat pump",
                            reference=CARNOT)
            section.formula("W_dot_rev", "Q_dot_h / COP_rev", "Least power for this heat", "kW",
                            reference="definition of the coefficient of performance, solved for the power")
            section.formula("Q_dot_c", "Q_dot_h - W_dot_rev", "Heat taken at the cold side", "kW",
                            reference=grounds.FIRST_LAW_OF_CYCLE)
        case _:
            section.formula("COP_rev", f"{cold} / ({hot} - {cold})",
                            "Coefficient of performance of the reversible refrigerator", reference=CARNOT)
            section.formula("W_dot_rev", "Q_dot_c / COP_rev", "Least power for this cold", "kW",
                            reference="definition of the coefficient of performance, solved for the power")
            section.formula("Q_dot_h", "Q_dot_c + W_dot_rev", "Heat given at the hot side", "kW",
                            reference=grounds.FIRST_LAW_OF_CYCLE)
    section.formula("S_dot_h", f"Q_dot_h / {hot}", "Entropy flow with the heat at the hot side", "kW/K",
                    reference=grounds.ENTROPY_OF_HEAT)
    section.formula("S_dot_c", f"Q_dot_c / {cold}", "Entropy flow with the heat at the cold side", "kW/K",
                    note="equal to that at the hot side: the machine makes no entropy",
                    reference=grounds.ENTROPY_OF_HEAT)
    ladders.carnot(plan, hot, cold)
    plan.facts.equals.append(Equal("S_dot_h", "S_dot_c", "a reversible machine makes no entropy", 1e-9))
    if plan.options["between"] == "streams":
        _flows(plan, section)


CARNOT = "Carnot: the bound holds for absolute temperatures, whatever the fluid"


def _flows(plan: Plan, section: Section) -> None:
    """The streams' flows that go with the heats."""
    engine = plan.options["machine"] == "engine"
    for role, heat in (("source", "Q_dot_h" if engine else "Q_dot_c"), ("sink", "Q_dot_c" if engine else "Q_dot_h")):
        warm, cool = ("in", "out") if role == "source" else ("out", "in")
        section.formula(f"m_dot_{role}", f"{heat} / (h_{role}_{warm} - h_{role}_{cool})", f"Mass flow of the {role}",
                        "kg/s", reference="energy balance of the stream")


def _dead_state(plan: Plan) -> None:
    """Maximum work of a stream cooled reversibly to the dead state, by two ways."""
    plan.input("T_source_in", "temperature", "Source inlet temperature", "280 degC")
    plan.input("m_dot_source", "mass flow", "Source mass flow", "10 kg/s", low="0 kg/s", low_open=True)
    plan.input("p_source", "pressure", "Source pressure, taken constant", "1.013 bar", low="0 bar", low_open=True)
    plan.input("T_0", "temperature", "Temperature of the dead state", "15 degC")
    ends = plan.section("Stream at its inlet and at the dead state")
    plan.demand("T_source_in > T_0", "the stream is not warmer than the dead state", "check the two temperatures")
    for tag, temperature, word in (("in", "T_source_in", "at the inlet"), ("0", "T_0", "at the dead state")):
        for letter, name in (("h", "enthalpy"), ("s", "entropy")):
            ends.property(f"{letter}_source_{tag}", f"{letter}(source, p=p_source, T={temperature})",
                          f"Specific {name} of the source {word}")
    section = plan.section("Maximum work")
    section.formula("Q_dot_h", "m_dot_source * (h_source_in - h_source_0)",
                    "Heat given up down to the dead state", "kW", reference=grounds.HEAT_OF_FLOW)
    section.formula("e_source", "(h_source_in - h_source_0) - T_0 * (s_source_in - s_source_0)",
                    "Specific flow exergy of the source", "kJ/kg",
                    reference="flow exergy without kinetic, potential and chemical parts")
    section.formula("W_dot_rev", "m_dot_source * e_source", "Maximum power", "kW", reference=grounds.EXERGY_OF_FLOW)
    section.formula("Q_dot_c", "Q_dot_h - W_dot_rev", "Heat given at the dead state", "kW",
                    reference=grounds.FIRST_LAW_OF_CYCLE)
    second = plan.section("The same by the entropic mean temperature")
    second.formula("T_m_source", "(h_source_in - h_source_0) / (s_source_in - s_source_0)",
                   "Entropic mean temperature of the heat given up", "degC", reference=grounds.MEAN_TEMPERATURE)
    second.formula("eta_rev", "1 - T_0 / T_m_source", "Efficiency of the reversible engine", reference=CARNOT)
    second.formula("W_dot_rev_2", "eta_rev * Q_dot_h", "Maximum power, second way", "kW",
                   reference="definition of efficiency, solved for the power")
    plan.facts.streams.append(StreamLine("Source, cooled to the dead state", "source", "m_dot_source",
                                         "T_source_in", "T_0",
                                         "p_source", "h_source_in", "h_source_0", "Q_dot_h"))
    plan.facts.again.append(Again("Q_dot_c", "T_0 * m_dot_source * (s_source_in - s_source_0)",
                                  "the entropy that the stream gives up, at the dead state's temperature"))
    plan.facts.equals.append(Equal("W_dot_rev", "W_dot_rev_2", "maximum power by exergy and by mean temperature"))


def _real(plan: Plan) -> None:
    """What a real machine reaches of the bound, and the power that it gives away."""
    engine = plan.options["machine"] == "engine"
    typical = {"engine": "120 kW", "heat-pump": "160 kW", "refrigerator": "25 kW"}[plan.options["machine"]]
    plan.input("W_dot_real", "power", "Power of the real machine", typical, low="0 kW", low_open=True)
    ladders.bound(plan, engine=engine)
    section = plan.section("A real machine against the bound")
    if engine:
        section.formula("eta_real", "W_dot_real / Q_dot_h", "Efficiency of the real machine",
                        reference=grounds.EFFICIENCY)
        section.formula("g_rev", "W_dot_real / W_dot_rev", "Share of the bound that it reaches",
                        reference=grounds.SHARE_OF_BOUND)
        section.formula("W_dot_lost", "W_dot_rev - W_dot_real", "Power given away", "kW",
                        reference="derived: greatest power less power reached")
        plan.facts.bounds.append(Bound(
            "W_dot_real", "W_dot_rev", "the real engine gives no more than the reversible one"))
        return
    heat = "Q_dot_h" if plan.options["machine"] == "heat-pump" else "Q_dot_c"
    section.formula("COP_real", f"{heat} / W_dot_real", "Coefficient of performance of the real machine",
                    reference=grounds.COP)
    section.formula("g_rev", "COP_real / COP_rev", "Share of the bound that it reaches",
                    reference=grounds.SHARE_OF_BOUND)
    section.formula("W_dot_lost", "W_dot_real - W_dot_rev", "Power drawn above the least", "kW",
                    reference="derived: power drawn less least power")
    plan.facts.bounds.append(Bound("COP_real", "COP_rev", "the real machine does no better than the reversible one"))


def _sketch(options: Mapping[str, str]) -> Sketch:
    engine = options["machine"] == "engine"
    middle = {"engine": "Engine", "heat-pump": "Heat pump", "refrigerator": "Refrigerator"}[options["machine"]]
    hot, cold = ("Hot reservoir", "Cold reservoir") if options["between"] == "reservoirs" else \
        ("Source stream", "Dead state") if options["between"] == "dead-state" else \
        ("Source stream", "Sink stream") if engine else ("Sink stream", "Source stream")
    boxes = (Box(hot, "reservoir", 1, 0), Box(middle, "engine" if engine else "heat pump", 1, 1),
             Box(cold, "reservoir", 1, 2))
    down, up = ((hot, middle), (middle, cold)) if engine else ((middle, hot), (cold, middle))
    work = Link(middle, "Power out", "power", "power") if engine else Link("Power", middle, "power", "power")
    return Sketch(boxes, (Link(*down, "Q_dot_h", "heat"), Link(*up, "Q_dot_c", "heat"), work))


def _roles(options: Mapping[str, str]) -> tuple[Role, ...]:
    if options["between"] == "reservoirs":
        return ()
    if options["between"] == "dead-state":
        return (Role("source", "Source stream", "air"),)
    return (Role("source", "Source stream", "water"), Role("sink", "Sink stream", "water"))


def _results(options: Mapping[str, str]) -> tuple[str, ...]:
    figure = "eta_rev" if options["machine"] == "engine" else "COP_rev"
    return (figure, "W_dot_rev", "g_rev", "W_dot_lost") if options["real"] == "power" else (figure, "W_dot_rev")


METHOD = Method(
    name="carnot-bound",
    title="Reversible bound of an engine, heat pump or refrigerator",
    text="What no machine between the same two sides can exceed: Carnot's relation for reservoirs, the same with "
         "entropic mean temperatures for finite streams (Lorenz), and the maximum work of a stream cooled to the "
         "dead state. A real machine's figure can be set against it.",
    options=OPTIONS, roles=_roles, lay=lay,
    assumes=("steady state", "streams at constant pressure", "kinetic, potential and chemical exergy left out"),
    leaves_out=("finite temperature differences and every loss of a real machine",),
    sketch="""
      ┌───────────────┐
      │   hot side    │
      └───────┬───────┘
              │ Q_dot_h
          ┌───┴────┐
          │machine ├── W_dot
          └───┬────┘
              │ Q_dot_c
      ┌───────┴───────┐
      │   cold side   │
      └───────────────┘
""",
    results=_results)
