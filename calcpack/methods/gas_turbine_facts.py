"""What is said of a gas turbine's steps: balances, ladder, states, diagram, arrangement sketch."""
from __future__ import annotations

from itertools import pairwise

from calcpack.methods.gas_turbine_train import Train
from calcpack.plan.equipment.gas import GasState
from calcpack.plan.facts import Box, Diagram, Flow, Ladder, Link, Path, Rung, Sketch, Volume
from calcpack.plan.plan import Plan


def facts(plan: Plan, train: Train) -> None:
    """States, balances, diagram and sketch; the ladder where fuel counts as heat."""
    plan.facts.states += [one.point for one in train.states()]
    plan.facts.volumes += _volumes(plan, train)
    if plan.options["gas"] != "products":
        plan.facts.ladder = _ladder(train)
        plan.facts.diagrams.append(Diagram("T-s", train.exhaust.gas.role, _paths(train)))
    plan.facts.roles.update({"hottest": "T_t", "pressure ratio": "r_p"})
    plan.facts.sketch = _sketch(train)


def _volumes(plan: Plan, train: Train) -> list[Volume]:
    found = []
    for tag, name, (inlet, outlet) in zip(train.tags("c"), train.names("compressor"), train.compressors,
                                          strict=True):
        found.append(Volume(name, (inlet.flow,), (outlet.flow,), work_in=(f"W_dot_{tag}",),
                            scale=f"W_dot_{tag}"))
    for k, ((_, warm), (cool, _)) in enumerate(pairwise(train.compressors), start=1):
        found.append(Volume(f"intercooler {k}", (warm.flow,), (cool.flow,), heat_out=((f"Q_dot_ic{k}", "T_0"),),
                            scale=f"Q_dot_ic{k}"))
    if train.regenerated:
        found.append(Volume("regenerator", (train.compressed.flow, train.expanded.flow),
                            (train.regenerated.flow, train.exhaust.flow), scale="Q_dot_reg"))
    found.append(_combustor(plan, train))
    for tag, name, (inlet, outlet) in zip(train.tags("t"), train.names("turbine"), train.turbines, strict=True):
        found.append(Volume(name, (inlet.flow,), (outlet.flow,), work_out=(f"W_dot_{tag}",),
                            scale=f"W_dot_{tag}"))
    for k, ((_, cold), (hot, _)) in enumerate(pairwise(train.turbines), start=1):
        found.append(Volume(f"reheater {k}", (cold.flow,), (hot.flow,), heat_in=((f"Q_dot_rh{k}", "T_rh"),),
                            scale=f"Q_dot_rh{k}"))
    return found


def _combustor(plan: Plan, train: Train) -> Volume:
    """Heat comes from a source as hot as the turbine inlet; of a fuel the entropy is not known here."""
    start, end = train.to_combustor, train.turbines[0][0]
    if plan.options["gas"] == "products":
        return Volume("combustor", (start.flow, Flow("m_dot_f", "h_f")), (end.flow,),
                      heat_in=(("Q_dot_in", None),),
                      scale="Q_dot_in")
    heat = "Q_dot_cc" if len(train.turbines) > 1 else "Q_dot_in"
    return Volume("combustor", (start.flow,), (end.flow,), heat_in=((heat, "T_t"),), scale=heat)


def _ladder(train: Train) -> Ladder:
    """From the exergy of the heat, taken at the temperatures of the turbine inlets, to the net power."""
    inlet, out = train.compressors[0][0], train.exhaust
    heats = [("Q_dot_in" if len(train.turbines) == 1 else "Q_dot_cc", "T_t")]
    heats += [(f"Q_dot_rh{k}", "T_rh") for k in range(1, len(train.turbines))]
    return Ladder(
        "From the exergy of the heat to the net power",
        " + ".join(f"{Q} * (1 - T_dead / {T})" for Q, T in heats),
        "Reversible power of the heat from a source as hot as the turbine inlets", "W_dot_net",
        "Net electrical power",
        after=(Rung("exhaust leaves warmer than the air came",
                    f"m_dot * ({out.h} - {inlet.h} - T_dead * ({out.s} - {inlet.s}))", either=True),
               Rung("generator and gear", "W_dot_s - W_dot_net")))


def _paths(train: Train) -> tuple[Path, ...]:
    found = [Path(a.number, b.number, "straight") for a, b in (*train.compressors, *train.turbines)]
    chain = [(warm, cool) for (_, warm), (cool, _) in pairwise(train.compressors)]
    chain += list(pairwise(filter(None, (train.compressed, train.regenerated, train.turbines[0][0]))))
    chain += [(cold, hot) for (_, cold), (hot, _) in pairwise(train.turbines)]
    chain += list(pairwise((train.expanded, train.exhaust))) if train.regenerated else []
    found += [Path(a.number, b.number, _along(a, b)) for a, b in chain]
    return tuple(sorted(found, key=lambda path: int(path.start)))


def _along(a: GasState, b: GasState) -> str:
    return "p" if a.p == b.p else "straight"


def _sketch(train: Train) -> Sketch:
    """Compressors in the lower row, turbines in the upper, heat exchangers between and above."""
    boxes, links = [], []

    def place(name: str, shape: str, column: float, row: float) -> None:
        boxes.append(Box(name, shape, column, row))

    compressors = [name.capitalize() for name in train.names("compressor")]
    turbines = [name.capitalize() for name in train.names("turbine")]
    for k, name in enumerate(compressors):
        place(name, "compressor", 2 * k, 2)
    for k in range(1, len(compressors)):
        place(f"Intercooler {k}", "exchanger", 2 * k - 1, 2)
    base = 2 * len(compressors) - 1
    if train.regenerated:
        place("Regenerator", "recuperator", base, 0)
    place("Combustor", "combustor", base + 1, 1 if train.regenerated else 0)
    for k, name in enumerate(turbines):
        place(name, "turbine", base + 2 + 2 * k, 2)
    for k in range(1, len(turbines)):
        place(f"Reheater {k}", "combustor", base + 1 + 2 * k, 1)
    place("Generator", "generator", base + 1 + 2 * len(turbines), 2)
    links += _links(train, compressors, turbines)
    return Sketch(tuple(boxes), tuple(links))


def _links(train: Train, compressors: list[str], turbines: list[str]) -> list[Link]:
    line = ["Air"]
    for k, name in enumerate(compressors, start=1):
        line += [name, *([f"Intercooler {k}"] if k < len(compressors) else [])]
    line += ["Regenerator"] if train.regenerated else []
    line.append("Combustor")
    for k, name in enumerate(turbines, start=1):
        line += [name, *([f"Reheater {k}"] if k < len(turbines) else [])]
    line += ["Regenerator"] if train.regenerated else []
    line.append("Exhaust")
    numbers = [one.number for one in train.states()]
    links = [Link(a, b, number) for (a, b), number in zip(pairwise(line), numbers, strict=True)]
    return [*links, Link("Fuel", "Combustor", "", "stream"), Link(turbines[-1], "Generator", "", "power")]
