"""The single-stage machine's states, balances, diagrams and sketch."""
from __future__ import annotations

from calcpack.methods.vapour_parts import sink_volume, source_volume, stream_links
from calcpack.methods.vapour_states import Route
from calcpack.plan.equipment.streams import Stream, line
from calcpack.plan.facts import Box, Diagram, Flow, Link, Path, Sketch, StatePoint, Volume
from calcpack.plan.plan import Plan

Streams = tuple[Stream | None, Stream | None, Stream | None]


def facts(plan: Plan, way: Route, of: Streams) -> None:
    """All that is said of the machine's steps; ``of`` are source, sink and hot stream."""
    source, sink, hot = of
    it = plan.facts
    it.states += [StatePoint(n, label, "wf", f"T_{n}", way.p(n), f"h_{n}", f"s_{n}")
                  for n, label in way.labels().items()]
    it.volumes += _volumes(way, of)
    for one, name, duty in ((source, "Source", "Q_dot_source"), (sink, "Sink", "Q_dot_sink"), (hot, "Hot",
                                                                                               "Q_dot_hot")):
        if one:
            it.streams.append(line(one, name, duty))
    paths = _paths(way)
    it.diagrams += [Diagram("T-s", "wf", paths), Diagram("log p-h", "wf", paths)]
    it.roles.update({"discharge": "T_2", "evaporating": "T_e", "condensing": "T_c", "low pressure": way.p("1"),
                     "high pressure": way.p("2"), "pressure ratio": "r_p", "suction": "1"})
    it.sketch = Sketch(_boxes(way), tuple(_links(way, of)))


def _volumes(way: Route, of: Streams) -> list[Volume]:
    source, sink, hot = of
    flow = {n: Flow("m_dot_wf", f"h_{n}", f"s_{n}") for n in way.labels()}
    volumes = [
        Volume("compressor", (flow["1"],), (flow["2"],), work_in=("W_dot_shaft",),
               heat_out=(("Q_dot_loss", None),),
               scale="W_dot_shaft"),
        Volume("expansion valve", (flow[way.valve_inlet],), (flow["4"],), scale="W_dot_shaft"),
        sink_volume("condenser", flow[way.condenser_inlet], flow["3"], sink),
        source_volume("evaporator", flow["4"], flow[way.evaporator_outlet], source)]
    if way.exchanger:
        volumes.append(Volume("internal exchanger", (flow[way.evaporator_outlet], flow["3"]),
                              (flow[way.line_inlet], flow["7"]), scale="W_dot_shaft"))
    if way.line:
        warmed = (("Q_dot_line", None),) if way.warmed else ()
        volumes.append(Volume("suction line", (flow[way.line_inlet],), (flow["1"],), heat_in=warmed,
                              scale="W_dot_shaft"))
    if way.losses:
        volumes.append(Volume("discharge line", (flow["2"],), (flow["9"],), scale="W_dot_shaft"))
    if hot:
        volumes.append(sink_volume("desuperheater", flow[way.discharge], flow["8"], hot, "Q_dot_hot"))
    heat_in = (("Q_dot_source", None), *((("Q_dot_line", None),) if way.warmed else ()))
    heat_out = (("Q_dot_sink", None), ("Q_dot_loss", None), *((("Q_dot_hot", None),) if hot else ()))
    return [*volumes, Volume("whole machine", work_in=("W_dot_shaft",), heat_in=heat_in, heat_out=heat_out,
                             scale="Q_dot_sink", cycle=True)]


def _paths(way: Route) -> tuple[Path, ...]:
    paths = [Path("1", "2", "straight")]
    if way.losses:
        paths.append(Path("2", "9", "h"))
    if way.hot:
        paths.append(Path(way.discharge, "8", "p"))
    paths.append(Path(way.condenser_inlet, "3", "p"))
    if way.exchanger:
        paths.append(Path("3", "7", "p"))
    paths += [Path(way.valve_inlet, "4", "h"), Path("4", way.evaporator_outlet, "p")]
    if way.exchanger:
        paths.append(Path(way.evaporator_outlet, way.line_inlet, "p"))
    if way.line:
        paths.append(Path(way.line_inlet, "1", "p" if way.warmed else "h"))
    return tuple(paths)


def _boxes(way: Route) -> tuple[Box, ...]:
    boxes = [Box("Condenser", "exchanger", 1, 0), Box("Compressor", "compressor", 2, 1),
             Box("Evaporator", "exchanger", 1, 2), Box("Expansion valve", "valve", 0, 1)]
    if way.exchanger:
        boxes.append(Box("Internal exchanger", "recuperator", 1, 1))
    if way.hot:
        boxes.append(Box("Desuperheater", "exchanger", 2, 0))
    return tuple(boxes)


def _links(way: Route, of: Streams) -> list[Link]:
    """Lines of the sketch; a line in which the state changes carries the number at its end."""
    source, sink, hot = of
    links = []
    if way.exchanger:
        links += [Link("Evaporator", "Internal exchanger", "5"), Link("Internal exchanger", "Compressor", "1"),
                  Link("Condenser", "Internal exchanger", "3"),
                  Link("Internal exchanger", "Expansion valve", "7")]
    else:
        links.append(Link("Evaporator", "Compressor", "1"))
    if way.hot:
        links += [Link("Compressor", "Desuperheater", way.discharge), Link("Desuperheater", "Condenser", "8")]
    else:
        links.append(Link("Compressor", "Condenser", way.discharge))
    if not way.exchanger:
        links.append(Link("Condenser", "Expansion valve", "3"))
    links.append(Link("Expansion valve", "Evaporator", "4"))
    links += [*stream_links("Sink", sink, "Condenser"), *stream_links("Source", source, "Evaporator"),
              *stream_links("Hot", hot, "Desuperheater")]
    return [*links, Link("Power", "Compressor", "power", "power")]
