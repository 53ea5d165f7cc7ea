"""The transcritical machine's states, balances, diagrams and sketch."""
from __future__ import annotations

from calcpack.methods.vapour_parts import sink_volume, source_volume, stream_links
from calcpack.plan.equipment.streams import Stream, line
from calcpack.plan.facts import Box, Diagram, Flow, Link, Path, Sketch, StatePoint, Volume
from calcpack.plan.plan import Plan

LABELS = {"1": ("compressor inlet", "p_e"), "2": ("compressor outlet", "p_2"),
          "3": ("gas-cooler outlet", "p_2"),
          "4": ("evaporator inlet", "p_e"), "5": ("evaporator outlet", "p_e"),
          "6": ("cooled gas after the internal exchanger", "p_2")}


def facts(plan: Plan, numbers: tuple[str, str], source: Stream | None, sink: Stream | None) -> None:
    """All that is said of the machine's steps; ``numbers`` are the evaporator's outlet and the valve's inlet."""
    labels = {n: LABELS[n] for n in sorted({"1", "2", "3", "4", *numbers})}
    it = plan.facts
    it.states += [StatePoint(n, label, "wf", f"T_{n}", p, f"h_{n}", f"s_{n}")
                  for n, (label, p) in labels.items()]
    it.volumes += _volumes(numbers, {n: Flow("m_dot_wf", f"h_{n}", f"s_{n}") for n in labels}, source, sink)
    for one, name, duty in ((source, "Source", "Q_dot_source"), (sink, "Sink", "Q_dot_sink")):
        if one:
            it.streams.append(line(one, name, duty))
    outlet, inlet = numbers
    paths = [Path("1", "2", "straight"), Path("2", "3", "p"), Path(inlet, "4", "h"), Path("4", outlet, "p")]
    if outlet == "5":
        paths += [Path("3", "6", "p"), Path("5", "1", "p")]
    it.diagrams += [Diagram("T-s", "wf", tuple(paths)), Diagram("log p-h", "wf", tuple(paths))]
    it.roles.update({"discharge": "T_2", "evaporating": "T_e", "low pressure": "p_e", "high pressure": "p_2",
                     "pressure ratio": "r_p", "suction": "1"})
    it.sketch = _sketch(numbers, source, sink)


def _volumes(numbers: tuple[str, str], flow: dict[str, Flow], source: Stream | None,
             sink: Stream | None) -> list[Volume]:
    outlet, inlet = numbers
    volumes = [
        Volume("compressor", (flow["1"],), (flow["2"],), work_in=("W_dot_shaft",),
               heat_out=(("Q_dot_loss", None),),
               scale="W_dot_shaft"),
        Volume("expansion valve", (flow[inlet],), (flow["4"],), scale="W_dot_shaft"),
        sink_volume("gas cooler", flow["2"], flow["3"], sink),
        source_volume("evaporator", flow["4"], flow[outlet],
                                                                             source)]
    if outlet == "5":
        volumes.append(Volume("internal exchanger", (flow["3"], flow["5"]), (flow["6"], flow["1"]),
                              scale="W_dot_shaft"))
    return [*volumes, Volume("whole machine", work_in=("W_dot_shaft",), heat_in=(("Q_dot_source", None),),
                             heat_out=(("Q_dot_sink", None), ("Q_dot_loss", None)), scale="Q_dot_sink",
                             cycle=True)]


def _sketch(numbers: tuple[str, str], source: Stream | None, sink: Stream | None) -> Sketch:
    boxes = [Box("Gas cooler", "exchanger", 1, 0), Box("Compressor", "compressor", 2, 1),
             Box("Evaporator", "exchanger", 1, 2), Box("Expansion valve", "valve", 0, 1)]
    links = [Link("Compressor", "Gas cooler", "2"), Link("Expansion valve", "Evaporator", "4")]
    if numbers[0] == "5":
        middle = "Internal exchanger"
        boxes.append(Box(middle, "recuperator", 1, 1))
        links += [Link("Gas cooler", middle, "3"), Link(middle, "Expansion valve", "6"),
                  Link("Evaporator", middle, "5"), Link(middle, "Compressor", "1")]
    else:
        links += [Link("Gas cooler", "Expansion valve", "3"), Link("Evaporator", "Compressor", "1")]
    links += [*stream_links("Sink", sink, "Gas cooler"), *stream_links("Source", source, "Evaporator")]
    return Sketch(tuple(boxes), (*links, Link("Power", "Compressor", "power", "power")))
