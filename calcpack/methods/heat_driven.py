"""The reversible bound of a machine driven by heat between three temperatures: chiller, heat pump or transformer."""
from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from calcpack.methods.method import Method, Option, Role
from calcpack.plan.equipment import grounds
from calcpack.plan.equipment.streams import Stream, entropic_mean, inlet_state, line, stream
from calcpack.plan.facts import Bound, Box, Equal, Link, Sketch, Volume
from calcpack.plan.plan import Plan, Section

OPTIONS = (
    Option("machine", "What the machine does with the driving heat", {
        "chiller": "takes heat at the cold side; driven at the hot side, it rejects at the middle one",
        "heat-pump": "gives useful heat at the middle side; driven at the hot side, it takes heat at the cold one",
        "transformer": "gives useful heat at the hot side; driven at the middle side, it rejects at the cold one"}),
    Option("between", "What the machine works between", {
        "reservoirs": "three reservoirs of constant temperature",
        "streams": "three finite streams with given inlet and outlet temperatures"}),
    Option("real", "A real machine set against the bound", {
        "none": "no real machine", "heat": "the real machine's driving heat is an input"}),
)

SIDES = ("hot", "middle", "cold")
LETTERS = {"hot": "h", "middle": "m", "cold": "c"}


@dataclass(frozen=True, slots=True)
class Machine:
    """The side that is useful, the side that drives, the third side, and the sides where heat enters."""

    useful: str
    drive: str
    third: str
    enters: tuple[str, ...]
    coefficient: str

    def heat(self, side: str, real: bool = False) -> str:
        """The symbol of the heat at a side."""
        return f"Q_dot_{LETTERS[side]}{'_real' if real else ''}"


MACHINES = {
    "chiller": Machine("cold", "hot", "middle", ("hot", "cold"), "eta_rev * COP_part"),
    "heat-pump": Machine("middle", "hot", "cold", ("hot", "cold"), "1 - eta_rev + eta_rev * COP_part"),
    "transformer": Machine("hot", "middle", "cold", ("middle",), "eta_rev * COP_part"),
}


def lay(plan: Plan) -> None:
    """Lay the plan: temperatures, the two reversible parts, the coefficient, heats, and a real machine's share."""
    machine = MACHINES[plan.options["machine"]]
    levels = _reservoirs(plan) if plan.options["between"] == "reservoirs" else _streams(plan, machine)
    plan.input(machine.heat(machine.useful), "power", f"Useful heat at the {machine.useful} side", "100 kW",
               low="0 kW", low_open=True)
    _order(plan, levels)
    section = plan.section("Reversible figure")
    _parts(section, levels)
    section.formula("COP_rev", machine.coefficient, "Useful heat over driving heat of the reversible machine",
                    reference="energy and entropy balance of a machine between three temperatures, without work")
    _heats(section, machine, "COP_rev", real=False)
    _entropy(section, machine, levels, real=False)
    plan.facts.equals.append(Equal("S_dot_in", "S_dot_out", "a reversible machine makes no entropy"))
    if plan.options["between"] == "streams":
        for side in SIDES:
            _flow(section, machine, side)
    if plan.options["real"] == "heat":
        _real(plan, machine, levels)
    plan.facts.sketch = _sketch(machine, plan.options)


TYPICAL = {"chiller": ("90 degC", "30 degC", "10 degC"), "heat-pump": ("160 degC", "45 degC", "8 degC"),
           "transformer": ("120 degC", "80 degC", "25 degC")}
STREAM_TYPICAL = {"chiller": (("95 degC", "85 degC"), ("27 degC", "33 degC"), ("12 degC", "7 degC")),
                  "heat-pump": (("165 degC", "155 degC"), ("35 degC", "45 degC"), ("12 degC", "7 degC")),
                  "transformer": (("110 degC", "120 degC"), ("85 degC", "75 degC"), ("20 degC", "28 degC"))}


def _reservoirs(plan: Plan) -> dict[str, str]:
    typical = TYPICAL[plan.options["machine"]]
    return {side: plan.input(f"T_{LETTERS[side]}", "temperature", f"Temperature of the {side} reservoir", usual)
            for side, usual in zip(SIDES, typical, strict=True)}


def _streams(plan: Plan, machine: Machine) -> dict[str, str]:
    """Three streams; their entropic mean temperatures stand for the reservoirs."""
    made: list[Stream] = []
    for side, (warm, cool) in zip(SIDES, STREAM_TYPICAL[plan.options["machine"]], strict=True):
        made.append(stream(plan, side, gives_heat=side in machine.enters, mode="outlet",
                           typical={"in": warm, "out": cool, "p": "10 bar" if side == "hot" else "3 bar"}))
    section = plan.section("Streams at their ends")
    for it in made:
        inlet_state(section, it)
        plan.facts.streams.append(line(it, it.role.capitalize(), machine.heat(it.role)))
    means = plan.section("Entropic mean temperatures")
    return {it.role: entropic_mean(means, it, f"T_m_{it.role}") for it in made}


def _order(plan: Plan, levels: Mapping[str, str]) -> None:
    plan.demand(f"{levels['hot']} > {levels['middle']}", "the hot side is not above the middle one",
                "check the temperatures")
    plan.demand(f"{levels['middle']} > {levels['cold']}", "the middle side is not above the cold one",
                "check the temperatures")


def _parts(section: Section, levels: Mapping[str, str]) -> None:
    """The machine taken apart: an engine on the driving heat and what its work does."""
    hot, middle, cold = (levels[side] for side in SIDES)
    carnot = "Carnot: absolute temperatures"
    if section.plan.options["machine"] == "transformer":
        section.formula("eta_rev", f"1 - {cold} / {middle}", "Reversible engine between middle and cold side",
                        reference=carnot)
        section.formula("COP_part", f"{hot} / ({hot} - {cold})",
                        "Reversible heat pump from the cold to the hot side, driven by that engine", reference=carnot)
        return
    section.formula("eta_rev", f"1 - {middle} / {hot}", "Reversible engine between hot and middle side",
                    reference=carnot)
    if section.plan.options["machine"] == "chiller":
        section.formula("COP_part", f"{cold} / ({middle} - {cold})",
                        "Reversible refrigerator between cold and middle side, driven by that engine", reference=carnot)
    else:
        section.formula("COP_part", f"{middle} / ({middle} - {cold})",
                        "Reversible heat pump between cold and middle side, driven by that engine", reference=carnot,
                        note="the engine's own heat is useful as well: it leaves at the middle side")


def _heats(section: Section, machine: Machine, coefficient: str, *, real: bool) -> None:
    """The driving heat (unless it is an input) and the third heat, by the energy balance."""
    useful, drive, third = (machine.heat(side, real and side != machine.useful)
                            for side in (machine.useful, machine.drive, machine.third))
    if not real:
        section.formula(drive, f"{useful} / {coefficient}", "Least driving heat", "kW",
                        reference="definition of the coefficient of performance, solved for the driving heat")
    if machine.third in machine.enters:
        section.formula(third, f"{useful} - {drive}", f"Heat taken at the {machine.third} side", "kW",
                        reference="energy balance of the machine")
    elif machine.useful in machine.enters:
        section.formula(third, f"{useful} + {drive}", f"Heat given at the {machine.third} side", "kW",
                        reference="energy balance of the machine")
    else:
        section.formula(third, f"{drive} - {useful}", f"Heat given at the {machine.third} side", "kW",
                        reference="energy balance of the machine")


def _entropy(section: Section, machine: Machine, levels: Mapping[str, str], *, real: bool) -> None:
    """Entropy that enters and leaves with the heats, and the machine as a control volume."""
    tag = "_real" if real else ""
    heat = {side: machine.heat(side, real and side != machine.useful) for side in SIDES}
    gone = [side for side in SIDES if side not in machine.enters]
    for symbol, sides, word in ((f"S_dot_in{tag}", machine.enters, "enters"), (f"S_dot_out{tag}", gone, "leaves")):
        section.formula(symbol, " + ".join(f"{heat[side]} / {levels[side]}" for side in sides),
                        f"Entropy flow that {word} with heat", "kW/K", reference=grounds.ENTROPY_OF_HEAT)
    pairs = {True: tuple((heat[side], levels[side]) for side in machine.enters),
             False: tuple((heat[side], levels[side]) for side in gone)}
    section.plan.facts.volumes.append(Volume("real machine" if real else "reversible machine", heat_in=pairs[True],
                                             heat_out=pairs[False], scale=heat[machine.drive], cycle=True))


def _flow(section: Section, machine: Machine, side: str) -> None:
    warm, cool = ("in", "out") if side in machine.enters else ("out", "in")
    section.formula(f"m_dot_{side}", f"{machine.heat(side)} / (h_{side}_{warm} - h_{side}_{cool})",
                    f"Mass flow of the {side} stream at the reversible machine's heat", "kg/s",
                    reference="energy balance of the stream")


def _real(plan: Plan, machine: Machine, levels: Mapping[str, str]) -> None:
    """What a real machine reaches of the bound, and the entropy that it makes."""
    drive = machine.heat(machine.drive, real=True)
    typical = {"chiller": "140 kW", "heat-pump": "60 kW", "transformer": "210 kW"}[plan.options["machine"]]
    plan.input(drive, "power", "Driving heat of the real machine", typical, low="0 kW", low_open=True)
    section = plan.section("A real machine against the bound")
    useful = machine.heat(machine.useful)
    section.formula("COP_real", f"{useful} / {drive}", "Useful heat over driving heat of the real machine",
                    reference=grounds.COP)
    section.formula("g_rev", "COP_real / COP_rev", "Share of the bound that it reaches",
                    reference=grounds.SHARE_OF_BOUND)
    plan.facts.bounds.append(Bound("COP_real", "COP_rev", "the real machine does no better than the reversible one"))
    if machine.third in machine.enters:
        plan.demand(f"{useful} > {drive}", "the real machine takes no heat at the cold side",
                    "a driving heat as great as the useful heat is plain heating: check the driving heat")
    _heats(section, machine, "COP_real", real=True)
    _entropy(section, machine, levels, real=True)
    section.formula("S_dot_gen", "S_dot_out_real - S_dot_in_real", "Entropy that the real machine makes", "kW/K",
                    reference="second law: entropy that leaves less entropy that enters")
    section.formula("Q_dot_more", f"{drive} - {machine.heat(machine.drive)}", "Driving heat above the least", "kW",
                    reference="derived: driving heat less least driving heat")


def _sketch(machine: Machine, options: Mapping[str, str]) -> Sketch:
    word = "reservoir" if options["between"] == "reservoirs" else "stream"
    name = {side: f"{side.capitalize()} {word}" for side in SIDES}
    middle = {"chiller": "Chiller", "heat-pump": "Heat pump", "transformer": "Transformer"}[options["machine"]]
    boxes = (Box(name["hot"], "reservoir", 1, 0), Box(middle, "heat pump", 1, 1), Box(name["middle"], "reservoir", 2,
                                                                                      1),
             Box(name["cold"], "reservoir", 1, 2))
    links = tuple(Link(name[side], middle, machine.heat(side), "heat") if side in machine.enters else
                  Link(middle, name[side], machine.heat(side), "heat") for side in SIDES)
    return Sketch(boxes, links)


def _roles(options: Mapping[str, str]) -> tuple[Role, ...]:
    if options["between"] == "reservoirs":
        return ()
    return tuple(Role(side, f"Stream at the {side} side", "water") for side in SIDES)


def _results(options: Mapping[str, str]) -> tuple[str, ...]:
    machine = MACHINES[options["machine"]]
    shown = ("COP_rev", machine.heat(machine.drive))
    return (*shown, "COP_real", "g_rev", "S_dot_gen") if options["real"] == "heat" else shown


METHOD = Method(
    name="heat-driven",
    title="Reversible bound of a machine driven by heat",
    text="What no absorption or adsorption machine between the same three temperatures can exceed, whatever its "
         "working pair: a reversible engine on the driving heat and a reversible machine driven by its work, taken "
         "together. Finite streams enter by their entropic mean temperatures. A real machine's figure can be set "
         "against it.",
    options=OPTIONS, roles=_roles, lay=lay,
    assumes=("steady state", "no work crosses the boundary", "streams at constant pressure",
             "kinetic, potential and chemical exergy left out"),
    leaves_out=("the working pair, its concentrations and its crystallisation", "power of pumps and fans",
                "finite temperature differences of a real machine"),
    sketch="""
   ┌────────────┐
   │  hot side  │
   └─────┬──────┘
         │ Q_dot_h
     ┌───┴───┐ Q_dot_m  ┌─────────────┐
     │machine├──────────┤ middle side │
     └───┬───┘          └─────────────┘
         │ Q_dot_c
   ┌─────┴──────┐
   │  cold side │
   └────────────┘
""",
    results=_results)
