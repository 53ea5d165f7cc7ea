"""The parts of a reciprocating engine's plan: corners, processes, efficiency, bound, and what is said of them."""
from __future__ import annotations

from dataclasses import dataclass

from calcpack.plan.equipment import closed_gas as closed
from calcpack.plan.equipment import grounds
from calcpack.plan.equipment.gas import Gas
from calcpack.plan.facts import Again, Bound, Box, Diagram, Equal, Link, Path, Sketch, StatePoint, Volume
from calcpack.plan.plan import Plan, Section


@dataclass(frozen=True, slots=True)
class Process:
    """A change from corner ``start`` to corner ``end`` at constant ``along``: v, p or s."""

    start: str
    end: str
    along: str

    @property
    def tag(self) -> str:
        return self.start + self.end

    @property
    def heat(self) -> str:
        letter = "h" if self.along == "p" else "u"
        return f"{letter}_{self.end} - {letter}_{self.start}"


def _chain(kinds: str) -> tuple[Process, ...]:
    last = len(kinds)
    return tuple(Process(str(i + 1), str((i + 1) % last + 1), kind) for i, kind in enumerate(kinds))


@dataclass(frozen=True, slots=True)
class Cycle:
    """A cycle's processes in order; ``closed_form`` is its efficiency for constant heat capacities."""

    processes: tuple[Process, ...]
    closed_form: str

    @property
    def heating(self) -> tuple[Process, ...]:
        return tuple(one for one in self.processes[:-1] if one.along != "s")

    @property
    def cooling(self) -> Process:
        return self.processes[-1]

    @property
    def hottest(self) -> str:
        return self.heating[-1].end

    @property
    def expanded(self) -> str:
        return self.cooling.start

    @property
    def cut_off(self) -> bool:
        """Whether heat is taken at constant pressure."""
        return self.heating[-1].along == "p"

    @property
    def steps_up(self) -> bool:
        """Whether heat is taken at constant volume first, at constant pressure after."""
        return len(self.heating) == 2


CYCLES = {
    "otto": Cycle(_chain("svsv"), "1 - r^(1 - gamma)"),
    "diesel": Cycle(_chain("spsv"), "1 - r^(1 - gamma) * (r_c^gamma - 1) / (gamma * (r_c - 1))"),
    "dual": Cycle(_chain("svpsv"),
                  "1 - r^(1 - gamma) * (r_h * r_c^gamma - 1) / (r_h - 1 + gamma * r_h * (r_c - 1))"),
    "atkinson": Cycle(_chain("svsp"), "1 - gamma * (r_e - r) / (r_e^gamma - r^gamma)"),
}


def corners(plan: Plan, gas: Gas, cycle: Cycle) -> None:
    """Pressure, temperature, volume, energy and entropy at every corner."""
    section = plan.section("Compression")
    closed.volume(section, "1")
    closed.entropy(section, gas, "1")
    closed.energy(section, gas, "1")
    section.formula("v_2", "v_1 / r", "Specific volume at corner 2", "m³/kg",
                    reference="definition of the compression ratio: greatest volume over smallest")
    closed.isentrope(plan, section, gas, "1", "2", ratio="r", squeezes=True)
    closed.energy(section, gas, "2")
    section = plan.section("Heat taken")
    for process in cycle.heating:
        if process.along == "v":
            _heated_at_volume(plan, section, gas, cycle, process)
        else:
            _heated_at_pressure(plan, section, gas, cycle, process)
        closed.entropy(section, gas, process.end)
    if plan.options["heat"] != "heat":
        section.formula("q_in", " + ".join(f"q_{one.tag}" for one in cycle.heating), "Heat taken", "kJ/kg",
                        reference=grounds.SUM)
    _expansion(plan, gas, cycle)


def _heated_at_volume(plan: Plan, section: Section, gas: Gas, cycle: Cycle, it: Process) -> None:
    section.formula(f"v_{it.end}", f"v_{it.start}", f"Specific volume at corner {it.end}", "m³/kg",
                    reference="constant volume")
    if cycle.steps_up:
        section.formula(f"T_{it.end}", f"r_h * T_{it.start}", f"Temperature at corner {it.end}", "degC",
                        reference="ideal gas at constant volume: T rises as p")
        closed.energy(section, gas, it.end)
    elif plan.options["heat"] == "heat":
        closed.heated_to_energy(plan, section, gas, it.start, it.end, "q_in")
    else:
        _require_hotter(plan, it)
        closed.energy(section, gas, it.end)
    closed.pressure(section, it.end)
    if cycle.steps_up or plan.options["heat"] != "heat":
        section.formula(f"q_{it.tag}", it.heat, "Heat taken at constant volume", "kJ/kg",
                        reference="first law, no work")


def _heated_at_pressure(plan: Plan, section: Section, gas: Gas, cycle: Cycle, it: Process) -> None:
    start, end = it.start, it.end
    section.formula(f"p_{end}", f"p_{start}", f"Pressure at corner {end}", "bar", reference="constant pressure")
    closed.enthalpy(section, gas, start)
    match plan.options["heat"]:
        case "cut-off":
            section.formula(f"v_{end}", f"r_c * v_{start}", f"Specific volume at corner {end}", "m³/kg",
                            reference="definition of the cut-off ratio, solved for the volume")
            section.formula(f"T_{end}", f"r_c * T_{start}", f"Temperature at corner {end}", "degC",
                            reference="ideal gas at constant pressure: T rises as v")
            closed.enthalpy(section, gas, end)
        case "heat":
            _heated_to_enthalpy(plan, section, gas, cycle, it)
            closed.volume(section, end)
        case _:
            _require_hotter(plan, it)
            closed.enthalpy(section, gas, end)
            closed.volume(section, end)
    closed.energy(section, gas, end)
    if plan.options["heat"] != "heat":
        section.formula(f"q_{it.tag}", it.heat, "Heat taken at constant pressure", "kJ/kg",
                        reference="first law at constant pressure: the rise of enthalpy")
    if plan.options["heat"] != "cut-off":
        section.formula("r_c", f"v_{end} / v_{start}",
                        "Cut-off ratio: volume after the heat at constant pressure over before",
                        reference="definition of the cut-off ratio")
    plan.demand("r_c < r", "the heat at constant pressure lasts beyond the end of the stroke",
                "give less heat, or a greater compression ratio")


def _heated_to_enthalpy(plan: Plan, section: Section, gas: Gas, cycle: Cycle, it: Process) -> None:
    heat = "q_in"
    if cycle.steps_up:
        before = cycle.heating[0].tag
        plan.demand(f"q_in > q_{before}", "the heat at constant volume is more than all the heat",
                    "give more heat, or lower r_h")
        heat = section.formula(f"q_{it.tag}", f"q_in - q_{before}", "Heat left for constant pressure", "kJ/kg",
                               reference="derived: whole heat less heat at constant volume")
    section.formula(f"h_{it.end}", f"h_{it.start} + {heat}", f"Specific enthalpy at corner {it.end}", "kJ/kg",
                    reference="first law at constant pressure")
    title = f"Temperature at corner {it.end}"
    if gas.constant:
        section.formula(f"T_{it.end}", f"T_z + h_{it.end} / cp", title, "degC", reference=grounds.HEAT_CAPACITY)
    else:
        section.property(f"T_{it.end}", f"T({gas.role}, h=h_{it.end})", title)


def _require_hotter(plan: Plan, it: Process) -> None:
    plan.demand(f"T_{it.end} > T_{it.start}",
                "the highest temperature is not above that before the heat is taken",
                f"raise T_{it.end}, or lower the compression ratio")


def _expansion(plan: Plan, gas: Gas, cycle: Cycle) -> None:
    section = plan.section("Expansion and heat given away")
    start, end = cycle.hottest, cycle.expanded
    if cycle.cooling.along == "v":
        section.formula(f"v_{end}", "v_1", f"Specific volume at corner {end}", "m³/kg",
                        reference="end of the stroke")
        closed.isentrope(plan, section, gas, start, end, ratio="r / r_c" if cycle.cut_off else "r",
                         squeezes=False)
    else:
        _expansion_to_pressure(section, gas, start, end)
        closed.enthalpy(section, gas, end)
        closed.enthalpy(section, gas, "1")
    closed.energy(section, gas, end)
    lower, word = ("h", "pressure") if cycle.cooling.along == "p" else ("u", "volume")
    section.formula("q_out", f"{lower}_{end} - {lower}_1", f"Heat given away at constant {word}", "kJ/kg",
                    reference="first law")


def _expansion_to_pressure(section: Section, gas: Gas, start: str, end: str) -> None:
    section.formula(f"p_{end}", "p_1", f"Pressure at corner {end}", "bar",
                    reference="expansion to the first pressure")
    title = f"Temperature at corner {end}, after isentropic expansion"
    if gas.constant:
        section.formula(f"T_{end}", f"T_{start} * (p_{end} / p_{start})^((gamma - 1) / gamma)", title, "degC",
                        reference="reversible adiabat of an ideal gas: T p^((1-γ)/γ) is constant")
    else:
        section.property(f"T_{end}", f"T({gas.role}, p=p_{end}, s=s_{start})", title)
    closed.volume(section, end)
    closed.entropy(section, gas, end)
    section.formula("r_e", f"v_{end} / v_2", "Expansion ratio, greater than the compression ratio",
                    reference="definition of the expansion ratio: volume at its end over smallest volume")


def processes(plan: Plan, cycle: Cycle) -> None:
    """Work of each process, net work and net heat."""
    section = plan.section("Work of each process")
    works = []
    for it in cycle.processes:
        if it.along == "s":
            works.append(section.formula(f"w_{it.tag}", f"u_{it.start} - u_{it.end}",
                                         f"Work on the adiabat from {it.start} to {it.end}", "kJ/kg",
                                         note="given; below zero it is drawn",
                                         reference="first law, closed system, adiabatic: work is the fall of u"))
        elif it.along == "p":
            works.append(section.formula(f"w_{it.tag}", f"p_{it.start} * (v_{it.end} - v_{it.start})",
                                         f"Work at constant pressure from {it.start} to {it.end}", "kJ/kg",
                                         note="given; below zero it is drawn",
                                         reference="work of a moving boundary at constant pressure: p Δv"))
    section.formula("w_net", " + ".join(works), "Net work of a kilogram", "kJ/kg", reference=grounds.SUM)
    plan.demand("w_net > 0 kJ/kg", "the cycle gives no work", "take more heat")
    section.formula("q_net", "q_in - q_out", "Heat taken less heat given away", "kJ/kg",
                    note="equal to the net work", reference=grounds.FIRST_LAW_OF_CYCLE)
    plan.facts.equals.append(Equal("w_net", "q_net", "net work equals net heat", 1e-8))


def efficiency(plan: Plan, gas: Gas, cycle: Cycle) -> None:
    """Efficiency and mean effective pressure."""
    section = plan.section("Efficiency and mean effective pressure")
    section.formula("eta", "w_net / q_in", "Thermal efficiency", reference=grounds.EFFICIENCY)
    widest = "1" if cycle.cooling.along == "v" else cycle.expanded
    section.formula("p_m", f"w_net / (v_{widest} - v_2)", "Mean effective pressure", "bar",
                    reference="net work over the volume swept")
    section.formula("p_most", f"p_{cycle.hottest}", "Highest pressure", "bar",
                    reference="the pressure after the last heat is the highest of the cycle")
    if gas.constant:
        plan.facts.again.append(Again("eta", cycle.closed_form,
                                      "the cycle's relation for constant heat capacities"))


def bound(plan: Plan, cycle: Cycle) -> None:
    """The efficiency from entropic mean temperatures, and Carnot's between the extremes."""
    section = plan.section("Mean temperatures and Carnot's bound")
    section.formula("T_m_in", f"q_in / (s_{cycle.hottest} - s_2)",
                    "Entropic mean temperature of the heat taken", "degC", reference=grounds.MEAN_OF_HEAT)
    section.formula("T_m_out", f"q_out / (s_{cycle.expanded} - s_1)",
                    "Entropic mean temperature of the heat given away",
                    "degC", reference=grounds.MEAN_OF_HEAT)
    section.formula("eta_m", "1 - T_m_out / T_m_in", "Efficiency from the mean temperatures",
                    reference="a reversible cycle between two mean temperatures")
    section.formula("eta_C", f"1 - T_1 / T_{cycle.hottest}",
                    "Carnot's efficiency between the extreme temperatures", reference=grounds.CARNOT)
    section.formula("g_C", "eta / eta_C", "Share of Carnot's efficiency that is reached",
                    reference=grounds.SHARE_OF_CARNOT)
    plan.facts.equals.append(Equal("eta", "eta_m", "efficiency from work and heat, and from mean temperatures",
                                   1e-8))
    plan.facts.bounds.append(Bound("eta", "eta_C",
                                   "the cycle stays below Carnot's efficiency between its extremes"))
    plan.facts.volumes.append(Volume("whole cycle", work_out=("w_net",), heat_in=(("q_in", "T_m_in"),),
                                     heat_out=(("q_out", "T_m_out"),), scale="q_in", cycle=True))


def facts(plan: Plan, gas: Gas, cycle: Cycle) -> None:
    """State table, diagrams and sketch."""
    labels = {"1": "start of compression", "2": "end of compression", cycle.hottest: "start of expansion",
              cycle.expanded: "end of expansion"}
    for number in (one.start for one in cycle.processes):
        plan.facts.states.append(StatePoint(number, labels.get(number, "end of heat at constant volume"),
                                            gas.role,
                                            f"T_{number}", f"p_{number}", None, f"s_{number}", f"v_{number}"))
    paths = tuple(Path(one.start, one.end, one.along) for one in cycle.processes)
    plan.facts.diagrams += [Diagram("p-v", gas.role, paths), Diagram("T-s", gas.role, paths)]
    plan.facts.sketch = engine_sketch("q_in", "q_out")


def engine_sketch(taken: str, given: str) -> Sketch:
    """An engine between two reservoirs."""
    boxes = (Box("Heat source", "reservoir", 1, 0), Box("Engine", "engine", 1, 1),
             Box("Heat sink", "reservoir", 1, 2))
    return Sketch(boxes,
                  (Link("Heat source", "Engine", taken, "heat"), Link("Engine", "Heat sink", given, "heat"),
                          Link("Engine", "Work out", "work", "power")))
