"""What a Rankine engine's plan says about its steps: states, balances, streams, diagrams, sketch."""
from __future__ import annotations

from calcpack.methods.rankine_heater import heater_inlet, supercritical
from calcpack.methods.rankine_parts import condenser_inlet
from calcpack.plan.equipment.streams import Stream, line
from calcpack.plan.facts import Box, Diagram, Flow, Link, Path, Sketch, StatePoint, Volume
from calcpack.plan.plan import Plan


def facts(plan: Plan, source: Stream | None, sink: Stream | None, loop: Stream | None) -> None:
    """States, balances, streams, diagrams and the sketch."""
    recuperated = plan.options["recuperator"] == "yes"
    labels = {"1": ("pump inlet", "p_c"), "2": ("pump outlet", "p_e"), "3": ("expander inlet", "p_e"),
              "4": ("expander outlet", "p_c")}
    if recuperated:
        labels |= {"5": ("liquid after recuperator", "p_e"), "6": ("vapour after recuperator", "p_c")}
    plan.facts.states += [StatePoint(n, label, "wf", f"T_{n}", p, f"h_{n}", f"s_{n}") for n, (label,
                                                                                              p) in labels.items()]
    flow = {n: Flow("m_dot_wf", f"h_{n}", f"s_{n}") for n in labels}
    plan.facts.volumes += _volumes(plan, flow, source, sink, loop)
    for one, name, duty in ((source, "Source", "Q_dot_h"), (loop, "Loop", "Q_dot_h"), (sink, "Sink", "Q_dot_c")):
        if one:
            plan.facts.streams.append(line(one, name, duty))
    warm, cold = heater_inlet(plan), condenser_inlet(plan)
    paths = [Path("1", "2", "straight"), Path(warm, "3", "p"), Path("3", "4", "straight"), Path(cold, "1", "p")]
    if recuperated:
        paths += [Path("2", "5", "p"), Path("4", "6", "p")]
    plan.facts.diagrams += [Diagram("T-s", "wf", tuple(paths)), Diagram("log p-h", "wf", tuple(paths))]
    plan.facts.roles.update({"expander inlet": "3", "expander outlet": "4", "condensing": "T_c",
                             "low pressure": "p_c", "high pressure": "p_e", "exhaust dryness": "dh_dry",
                             "pump inlet": "1", "hottest": "T_3"})
    if not supercritical(plan):
        plan.facts.roles["evaporating"] = "T_e"
    plan.facts.sketch = _sketch(recuperated, source, sink, loop)


def _volumes(plan: Plan, flow: dict[str, Flow], source: Stream | None, sink: Stream | None,
             loop: Stream | None) -> list[Volume]:
    warm, cold = flow[heater_inlet(plan)], flow[condenser_inlet(plan)]
    heats = loop or source
    volumes = [
        Volume("pump", (flow["1"],), (flow["2"],), work_in=("W_dot_p",), scale="W_dot_p"),
        Volume("heater", (warm, heats.flow_in), (flow["3"], heats.flow_out), scale="Q_dot_h") if heats else
        Volume("heater", (warm,), (flow["3"],), heat_in=(("Q_dot_h", None),), scale="Q_dot_h"),
        Volume("expander", (flow["3"],), (flow["4"],), work_out=("W_dot_t",), scale="W_dot_t"),
        Volume("condenser", (cold, sink.flow_in), (flow["1"], sink.flow_out), scale="Q_dot_c") if sink else
        Volume("condenser", (cold,), (flow["1"],), heat_out=(("Q_dot_c", None),), scale="Q_dot_c")]
    if loop:
        volumes.append(Volume("loop heater", (source.flow_in, loop.flow_out), (source.flow_out, loop.flow_in),
                              scale="Q_dot_h"))
    if "5" in flow:
        volumes.append(Volume("recuperator", (flow["2"], flow["4"]), (flow["5"], flow["6"]), scale="Q_dot_h"))
    volumes.append(Volume("whole engine", work_in=("W_dot_p",), work_out=("W_dot_t",), heat_in=(("Q_dot_h", None),),
                          heat_out=(("Q_dot_c", None),), scale="Q_dot_h", cycle=True))
    return volumes


def _sketch(recuperated: bool, source: Stream | None, sink: Stream | None, loop: Stream | None) -> Sketch:
    boxes = [Box("Heater", "exchanger", 1, 0), Box("Expander", "expander", 2, 1), Box("Generator", "generator", 3, 1),
             Box("Condenser", "exchanger", 1, 2), Box("Pump", "pump", 0, 1)]
    links = [Link("Expander", "Generator", "", "power"), Link("Heater", "Expander", "3"), Link("Condenser", "Pump",
                                                                                               "1")]
    if recuperated:
        boxes.append(Box("Recuperator", "recuperator", 1, 1))
        links += [Link("Pump", "Recuperator", "2"), Link("Recuperator", "Heater", "5"),
                  Link("Expander", "Recuperator", "4"), Link("Recuperator", "Condenser", "6")]
    else:
        links += [Link("Pump", "Heater", "2"), Link("Expander", "Condenser", "4")]
    if loop:
        boxes = [Box(box.name, box.shape, box.column, box.row + 1) for box in boxes]
        boxes.append(Box("Loop heater", "exchanger", 1, 0))
        links += [Link("Loop heater", "Heater", "loop supply", "stream"), Link("Heater", "Loop heater", "loop return",
                                                                               "stream")]
    taker = "Loop heater" if loop else "Heater"
    for stream, box, name in ((source, taker, "Source"), (sink, "Condenser", "Sink")):
        if stream:
            links += [Link(f"{name} in", box, f"{name.lower()} in", "stream"),
                      Link(box, f"{name} out", f"{name.lower()} out", "stream")]
    return Sketch(tuple(boxes), tuple(links))
