"""The two-stage machine's states, balances, diagrams and sketch, by its arrangement."""
from __future__ import annotations

from calcpack.methods.vapour_parts import sink_volume, source_volume, stream_links
from calcpack.plan.equipment.streams import Stream, line
from calcpack.plan.facts import Box, Diagram, Flow, Link, Path, Sketch, StatePoint, Volume
from calcpack.plan.plan import Plan

LABELS = {"1": ("low stage inlet", "p_e"), "2": ("low stage outlet", "p_i"), "3": ("high stage inlet", "p_i"),
          "4": ("high stage outlet", "p_c"), "5": ("condenser outlet", "p_c"),
          "6": ("after the first valve", "p_i"),
          "7": ("liquid to the evaporator's valve", "p_i"), "8": ("evaporator inlet", "p_e"),
          "9": ("vapour between the stages", "p_i")}


def facts(plan: Plan, source: Stream | None, sink: Stream | None) -> None:
    """All that is said of the machine's steps."""
    arrangement = plan.options["arrangement"]
    closed = arrangement == "closed-economiser"
    labels = dict(LABELS)
    if closed:
        labels["7"] = ("subcooled liquid", "p_c")
    if arrangement == "flash-chamber":
        del labels["9"]
    it = plan.facts
    it.states += [StatePoint(n, label, "wf", f"T_{n}", p, f"h_{n}", f"s_{n}")
                  for n, (label, p) in labels.items()]
    it.volumes += _volumes(arrangement, source, sink)
    for one, name, duty in ((source, "Source", "Q_dot_source"), (sink, "Sink", "Q_dot_sink")):
        if one:
            it.streams.append(line(one, name, duty))
    paths = _paths(arrangement)
    it.diagrams += [Diagram("T-s", "wf", paths), Diagram("log p-h", "wf", paths)]
    it.roles.update({"discharge": "T_4", "evaporating": "T_e", "condensing": "T_c", "low pressure": "p_e",
                     "high pressure": "p_c", "pressure ratio": "r_p", "suction": "1"})
    it.sketch = Sketch(_boxes(arrangement), tuple(_links(arrangement, source, sink)))


def _volumes(arrangement: str, source: Stream | None, sink: Stream | None) -> list[Volume]:
    low = {n: Flow("m_dot_low", f"h_{n}", f"s_{n}") for n in "1278"}
    high = {n: Flow("m_dot_high", f"h_{n}", f"s_{n}") for n in "3456"}
    volumes = [
        Volume("low stage", (low["1"],), (low["2"],), work_in=("W_dot_low",),
               heat_out=(("Q_dot_loss_low", None),),
               scale="W_dot_low"),
        Volume("high stage", (high["3"],), (high["4"],), work_in=("W_dot_high",),
               heat_out=(("Q_dot_loss_high", None),), scale="W_dot_high"),
        sink_volume("condenser", high["4"], high["5"], sink),
        source_volume("evaporator", low["8"], low["1"], source),
        Volume("valve of the evaporator", (low["7"],), (low["8"],), scale="W_dot_low")]
    volumes += _between(arrangement, low, high)
    return [*volumes, Volume("whole machine", work_in=("W_dot_shaft",), heat_in=(("Q_dot_source", None),),
                             heat_out=(("Q_dot_sink", None), ("Q_dot_loss", None)), scale="Q_dot_sink",
                             cycle=True)]


def _between(arrangement: str, low: dict[str, Flow], high: dict[str, Flow]) -> list[Volume]:
    vapour = Flow("m_dot_9", "h_9", "s_9")
    mixing = Volume("mixing point", (low["2"], vapour), (high["3"],), scale="W_dot_shaft")
    first = Volume("first valve", (high["5"],), (high["6"],), scale="W_dot_low")
    match arrangement:
        case "flash-chamber":
            return [first, Volume("vessel", (low["2"], high["6"]), (high["3"], low["7"]), scale="W_dot_shaft")]
        case "flash-gas-removal":
            return [first, Volume("vessel", (high["6"],), (vapour, low["7"]), scale="W_dot_shaft"), mixing]
    # Only the part that is injected passes the first valve; the rest crosses the economiser as liquid.
    part, rest = Flow("m_dot_9", "h_5", "s_5"), Flow("m_dot_low", "h_5", "s_5")
    throttled = Flow("m_dot_9", "h_6", "s_6")
    return [Volume("first valve", (part,), (throttled,), scale="W_dot_low"),
            Volume("economiser", (throttled, rest), (vapour, low["7"]), scale="W_dot_shaft"), mixing]


def _paths(arrangement: str) -> tuple[Path, ...]:
    paths = [Path("1", "2", "straight"), Path("3", "4", "straight"), Path("4", "5", "p"), Path("5", "6", "h"),
             Path("7", "8", "h"), Path("8", "1", "p"), Path("2", "3", "p")]
    match arrangement:
        case "flash-chamber":
            paths += [Path("6", "7", "p"), Path("6", "3", "p")]
        case "flash-gas-removal":
            paths += [Path("6", "7", "p"), Path("6", "9", "p"), Path("9", "3", "p")]
        case _:
            paths += [Path("5", "7", "p"), Path("6", "9", "p"), Path("9", "3", "p")]
    return tuple(paths)


def _boxes(arrangement: str) -> tuple[Box, ...]:
    closed = arrangement == "closed-economiser"
    boxes = [Box("Condenser", "exchanger", 1, 0), Box("First valve", "valve", 0, 1),
             Box("High stage", "compressor", 3, 1), Box("Low stage", "compressor", 3, 3),
             Box("Evaporator", "exchanger", 1, 4), Box("Second valve", "valve", 0, 3)]
    boxes.append(Box("Economiser", "recuperator", 1, 2) if closed else Box("Vessel", "separator", 1, 2))
    if arrangement != "flash-chamber":
        boxes.append(Box("Mixing point", "mixer", 3, 2))
    return tuple(boxes)


def _links(arrangement: str, source: Stream | None, sink: Stream | None) -> list[Link]:
    middle = "Economiser" if arrangement == "closed-economiser" else "Vessel"
    links = [Link("Evaporator", "Low stage", "1"), Link("High stage", "Condenser", "4"),
             Link("Condenser", "First valve", "5"), Link("First valve", middle, "6"),
             Link(middle, "Second valve", "7"),
             Link("Second valve", "Evaporator", "8")]
    if arrangement == "flash-chamber":
        links += [Link("Low stage", "Vessel", "2"), Link("Vessel", "High stage", "3")]
    else:
        links += [Link("Low stage", "Mixing point", "2"), Link(middle, "Mixing point", "9"),
                  Link("Mixing point", "High stage", "3")]
    if arrangement == "closed-economiser":
        links.append(Link("Condenser", "Economiser", "5"))
    links += [*stream_links("Sink", sink, "Condenser"), *stream_links("Source", source, "Evaporator")]
    return [*links, Link("Power", "High stage", "power", "power"), Link("Power", "Low stage", "power", "power")]
