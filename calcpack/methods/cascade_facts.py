"""The cascade's states, balances, diagrams and sketch."""
from __future__ import annotations

from calcpack.methods.vapour_parts import sink_volume, source_volume, stream_links
from calcpack.plan.equipment.streams import Stream, line
from calcpack.plan.facts import Box, Diagram, Flow, Link, Path, Sketch, StatePoint, Volume
from calcpack.plan.plan import Plan

LOW = {"1": ("low compressor inlet", "p_e"), "2": ("low compressor outlet", "p_cl"),
       "3": ("low circuit's liquid", "p_cl"), "4": ("evaporator inlet", "p_e")}
HIGH = {"5": ("high compressor inlet", "p_eh"), "6": ("high compressor outlet", "p_c"),
        "7": ("condenser outlet", "p_c"), "8": ("cascade exchanger inlet", "p_eh")}


def facts(plan: Plan, high: str, source: Stream | None, sink: Stream | None) -> None:
    """All that is said of both circuits' steps; ``high`` is the role of the high circuit's refrigerant."""
    it = plan.facts
    for fluid, labels in (("wf", LOW), (high, HIGH)):
        it.states += [StatePoint(n, label, fluid, f"T_{n}", p, f"h_{n}", f"s_{n}")
                      for n, (label, p) in labels.items()]
        paths = _paths(*labels)
        it.diagrams += [Diagram("T-s", fluid, paths), Diagram("log p-h", fluid, paths)]
    it.volumes += _volumes(source, sink)
    for one, name, duty in ((source, "Source", "Q_dot_source"), (sink, "Sink", "Q_dot_sink")):
        if one:
            it.streams.append(line(one, name, duty))
    it.roles.update({"discharge": "T_2", "evaporating": "T_e", "low pressure": "p_e", "high pressure": "p_cl",
                     "pressure ratio": "r_p_low", "suction": "1", "condensing": "T_cl"})
    it.sketch = _sketch(source, sink)


def _paths(inlet: str, outlet: str, liquid: str, mixture: str) -> tuple[Path, ...]:
    return (Path(inlet, outlet, "straight"), Path(outlet, liquid, "p"), Path(liquid, mixture, "h"),
            Path(mixture, inlet, "p"))


def _volumes(source: Stream | None, sink: Stream | None) -> list[Volume]:
    flow = {n: Flow("m_dot_low" if n in LOW else "m_dot_high", f"h_{n}", f"s_{n}") for n in (*LOW, *HIGH)}
    volumes = [
        Volume(f"{tag} compressor", (flow[into],), (flow[out],), work_in=(f"W_dot_{tag}",),
               heat_out=((f"Q_dot_loss_{tag}", None),), scale=f"W_dot_{tag}")
        for tag, into, out in (("low", "1", "2"), ("high", "5", "6"))]
    volumes += [
        Volume("cascade exchanger", (flow["2"], flow["8"]), (flow["3"], flow["5"]), scale="Q_dot_cas"),
        Volume("low circuit's valve", (flow["3"],), (flow["4"],), scale="W_dot_low"),
        Volume("high circuit's valve", (flow["7"],), (flow["8"],), scale="W_dot_high"),
        sink_volume("condenser", flow["6"], flow["7"], sink),
        source_volume("evaporator", flow["4"], flow["1"], source)]
    return [*volumes, Volume("whole machine", work_in=("W_dot_shaft",), heat_in=(("Q_dot_source", None),),
                             heat_out=(("Q_dot_sink", None), ("Q_dot_loss", None)), scale="Q_dot_sink",
                             cycle=True)]


def _sketch(source: Stream | None, sink: Stream | None) -> Sketch:
    boxes = (Box("Condenser", "exchanger", 1, 0), Box("High compressor", "compressor", 2, 1),
             Box("High valve", "valve", 0, 1), Box("Cascade exchanger", "exchanger", 1, 2),
             Box("Low compressor", "compressor", 2, 3), Box("Low valve", "valve", 0, 3),
             Box("Evaporator", "exchanger", 1, 4))
    ways = (("Evaporator", "Low compressor", "1"), ("Low compressor", "Cascade exchanger", "2"),
            ("Cascade exchanger", "Low valve", "3"), ("Low valve", "Evaporator", "4"),
            ("Cascade exchanger", "High compressor", "5"), ("High compressor", "Condenser", "6"),
            ("Condenser", "High valve", "7"), ("High valve", "Cascade exchanger", "8"))
    links = [Link(*way) for way in ways]
    links += [*stream_links("Sink", sink, "Condenser"), *stream_links("Source", source, "Evaporator")]
    links += [Link("Power", f"{tag} compressor", "power", "power") for tag in ("High", "Low")]
    return Sketch(boxes, tuple(links))
