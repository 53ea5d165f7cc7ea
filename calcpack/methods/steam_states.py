"""The states of a steam plant: along the turbine, along the feedwater, and of the heaters' drains."""
from __future__ import annotations

from dataclasses import dataclass, field

from calcpack.methods.steam_arrangement import Arrangement, Station
from calcpack.plan.equipment import grounds
from calcpack.plan.equipment.machines import pump, saturation, state
from calcpack.plan.facts import Flow, MachineEnds, Path, StatePoint
from calcpack.plan.plan import Plan, Section

_ORDINALS = ("first", "second", "third", "fourth", "fifth", "sixth", "seventh", "eighth", "ninth", "tenth")


def ordinal(number: int) -> str:
    """``first`` to ``tenth``, then ``11th`` …; numbers stay far below 21."""
    return _ORDINALS[number - 1] if number <= len(_ORDINALS) else f"{number}th"


@dataclass(frozen=True, slots=True)
class At:
    """A numbered state of the water; ``T`` and ``p`` are symbols, h and s follow from the number."""

    number: str
    T: str
    p: str

    @property
    def h(self) -> str:
        return f"h_{self.number}"

    @property
    def s(self) -> str:
        return f"s_{self.number}"

    def flow(self, m_dot: str) -> Flow:
        """This state flowing at ``m_dot``."""
        return Flow(m_dot, self.h, self.s)


@dataclass(frozen=True, slots=True)
class Expansion:
    """One step of the expansion, from state to state."""

    inlet: At
    outlet: At

    @property
    def work(self) -> str:
        return f"({self.inlet.h} - {self.outlet.h})"


@dataclass(slots=True)
class Water:
    """All states laid so far, by where they are; heaters count from the highest pressure, pumps from the condenser.

    ``feed_in`` and ``feed_out`` are the feedwater before and after a heater
    (before its pumped drains join), ``after`` what goes on to the next one.
    """

    plan: Plan
    arranged: Arrangement
    losses: bool
    count: int = 0
    points: list[StatePoint] = field(default_factory=list)
    paths: list[Path] = field(default_factory=list)
    expansions: list[Expansion] = field(default_factory=list)
    taps: dict[str, At] = field(default_factory=dict)
    cold: dict[int, At] = field(default_factory=dict)
    hot: dict[int, At] = field(default_factory=dict)
    pumped: dict[int, tuple[At, At]] = field(default_factory=dict)
    feed_in: dict[int, At] = field(default_factory=dict)
    feed_out: dict[int, At] = field(default_factory=dict)
    after: dict[int, At] = field(default_factory=dict)
    drain: dict[int, At] = field(default_factory=dict)
    drain_pumped: dict[int, At] = field(default_factory=dict)
    inlet: At | None = None
    boiler_out: At | None = None

    def new(self, label: str, p: str, T: str | None = None) -> At:
        """The next state's number, with its row of the state table."""
        self.count += 1
        number = str(self.count)
        made = At(number, T or f"T_{number}", p)
        self.points.append(StatePoint(number, label, "wf", made.T, p, made.h, made.s))
        return made

    def path(self, start: At, end: At, along: str) -> None:
        """A line of the diagrams."""
        self.paths.append(Path(start.number, end.number, along))

    def part_name(self, symbol: str, part: int) -> str:
        """``eta_t`` of a plant without reheat, ``eta_t1`` … of one with."""
        return f"{symbol}{part}" if self.arranged.reheats else symbol

    def shell(self, heater: int) -> str:
        """The symbol of the pressure in a heater."""
        return f"p_h{heater}" if self.losses else f"p_x{heater}"

    def feed_pressure(self, heater: int) -> str:
        """The symbol of the feedwater's pressure at a heater: that of the next open heater above, or the boiler's."""
        above = [one for one in self.arranged.opens if one < heater]
        return self.shell(above[-1]) if above else self.boiler_pressure

    @property
    def boiler_pressure(self) -> str:
        return "p_f" if self.losses else "p_1"

    @property
    def exhaust(self) -> At:
        return self.expansions[-1].outlet

    @property
    def condensate(self) -> At:
        return self.pumped[1][0]

    @property
    def feedwater(self) -> At:
        """What enters the boiler."""
        return self.after[1] if self.arranged.heaters and self.arranged.kind(1) != "open" \
            else self.pumped[self.arranged.pumps][1]


def pressures(plan: Plan, water: Water) -> None:
    """Condensing level, and the pressures that line losses lead to."""
    section = plan.section("Pressures")
    saturation(section, "c", "wf", plan.options["condensing"], "Condensing", vapour_title="saturation")
    if not water.losses:
        return
    section.formula("p_b", "p_1 / (1 - f_p_main)", "Pressure at the boiler outlet", "bar",
                    reference=grounds.LOSS_OF_PRESSURE)
    section.formula("p_f", "p_b / (1 - f_p_b)", "Pressure of the feedwater at the boiler inlet", "bar",
                    reference=grounds.LOSS_OF_PRESSURE)
    for station in water.arranged.stations:
        if station.kind == "heater":
            section.formula(f"p_h{station.index}", f"{station.pressure} * (1 - f_p_x)",
                            f"Pressure in heater {station.index}", "bar", reference=grounds.LOSS_OF_PRESSURE)
        if station.reheat:
            section.formula(f"p_hr{station.reheat}", f"{station.pressure} * (1 - f_p_rh)",
                            f"Pressure behind reheater {station.reheat}, at the turbine", "bar",
                            reference=grounds.LOSS_OF_PRESSURE)


def turbine(plan: Plan, water: Water) -> None:
    """States from the boiler outlet to the exhaust, station by station."""
    section = plan.section("Steam through the turbine")
    here = _turbine_inlet(plan, section, water)
    before, part = "p_1", 1
    for number, station in enumerate((*water.arranged.stations, None), start=1):
        pressure = station.pressure if station else "p_c"
        plan.demand(f"{before} > {pressure}", "the pressures do not fall along the turbine",
                    "give the pressures of extractions, reheats and condenser in falling order")
        here = _expanded(section, water, here, pressure, number, part, station)
        before = pressure
        if station and station.kind != "reheat":
            water.taps[station.pressure] = here
        if station is None or station.reheat:
            _dryness(section, water, here, part)
        if station and station.reheat:
            here = _reheated(plan, section, water, here, station.reheat)
            before, part = here.p, part + 1


def _turbine_inlet(plan: Plan, section: Section, water: Water) -> At:
    if plan.options["steam"] == "superheated":
        here = water.new("turbine inlet", "p_1")
        state(section, "1", "wf", "at the turbine inlet", p="p_1", T="T_1")
    else:
        here = water.new("turbine inlet", "p_1")
        state(section, "1", "wf", "at the turbine inlet", p="p_1", x="1")
    section.property("v_1", "v(wf, p=p_1, h=h_1)", "Specific volume at the turbine inlet")
    plan.demand("v_1 > 0.0032 m3/kg", "the water at the turbine inlet is no steam: T_1 lies below saturation at p_1",
                "raise T_1 or lower p_1")
    water.inlet = water.boiler_out = here
    if water.losses:
        section.formula("h_2", "h_1 + q_l_main", "Specific enthalpy at the boiler outlet", "kJ/kg",
                        reference="energy balance of the main steam line")
        water.boiler_out = water.new("boiler outlet", "p_b")
        state(section, "2", "wf", "at the boiler outlet", p="p_b", h="h_2")
        water.path(water.boiler_out, here, "straight")
    return here


def _expanded(section: Section, water: Water, here: At, pressure: str, number: int, part: int,
              station: Station | None) -> At:
    label = f"turbine, towards {station.name}" if station else "turbine exhaust"
    there = water.new(label, pressure)
    ideal = section.property(f"{there.h}s", f"h(wf, p={pressure}, s={here.s})", "Enthalpy after isentropic expansion")
    machine = f"{ordinal(number)} turbine part" if water.arranged.stations else "turbine"
    # Work is not a step of its own: a chain of differences would need a digit more at every extraction.
    section.formula(there.h, f"{here.h} - {water.part_name('eta_t', part)} * ({here.h} - {ideal})",
                    f"Specific enthalpy at the {machine} outlet", "kJ/kg",
                    reference="isentropic efficiency: fall of enthalpy over isentropic fall")
    section.plan.facts.machines.append(MachineEnds(
        machine, "wf", here.h, here.s, pressure, f"{here.h} - {there.h}", water.part_name("eta_t", part), drives=False))
    state(section, there.number, "wf", f"at the {machine} outlet", p=pressure, h=there.h)
    water.expansions.append(Expansion(here, there))
    water.path(here, there, "straight")
    return there


def _dryness(section: Section, water: Water, here: At, part: int) -> None:
    name = water.part_name("x_ex", part)
    which = f" of turbine section {part}" if water.arranged.reheats else ""
    section.property(name, f"x_eq(wf, p={here.p}, h={here.h})",
                     f"Dryness at the exhaust{which}; above 1 it is superheated")
    section.formula(water.part_name("y_ex", part), f"max(0, 1 - {name})", f"Moisture at the exhaust{which}",
                    reference="definition of moisture: one less the dryness, none where superheated")


def _reheated(plan: Plan, section: Section, water: Water, cold: At, number: int) -> At:
    pressure = f"p_hr{number}" if water.losses else cold.p
    hot = water.new(f"turbine inlet after reheater {number}", pressure, f"T_rh{number}")
    state(section, hot.number, "wf", f"after reheater {number}", p=pressure, T=hot.T)
    plan.demand(f"{hot.h} > {cold.h}", f"reheat {number} does not heat the steam", f"raise T_rh{number}")
    water.cold[number], water.hot[number] = cold, hot
    water.path(cold, hot, "p")
    return hot


def feedwater(plan: Plan, water: Water) -> None:
    """States from the condensate to the boiler, and the drains; no flow is needed but where drains are mixed in."""
    arranged = water.arranged
    section = plan.section("Feedwater and drains" if arranged.heaters else "Feedwater")
    condensate = water.new("condensate", "p_c")
    state(section, condensate.number, "wf", "of the condensate", p="p_c", x="0")
    water.path(water.exhaust, condensate, "p")
    here = _pumped(section, water, condensate, 1, arranged.opens[-1] if arranged.opens else 0)
    for heater in range(len(arranged.heaters), 0, -1):
        water.feed_in[heater] = here
        if arranged.kind(heater) == "open":
            here = _open(section, water, heater)
            above = [one for one in arranged.opens if one < heater]
            water.after[heater] = here
            here = _pumped(section, water, here, arranged.pump_above(heater), above[-1] if above else 0)
        else:
            here = _closed(section, water, heater)
            water.after[heater] = here
    water.path(water.feedwater, water.boiler_out, "p")


def _pumped(section: Section, water: Water, here: At, number: int, towards: int) -> At:
    """Through feedwater pump ``number`` towards open heater ``towards`` (0: the boiler)."""
    pressure = water.shell(towards) if towards else water.boiler_pressure
    single = water.arranged.pumps == 1
    tag = "" if single else str(number)
    work = "w_p" if water.arranged.only_pump else f"w_p{number}"
    there = water.new("after the feed pump" if single else f"after pump {number}", pressure)
    pump(section, "wf", here.number, there.number, pressure, f"eta_p{tag}", work,
         "feed pump" if single else f"{ordinal(number)} pump")
    water.pumped[number] = (here, there)
    water.path(here, there, "straight")
    return there


def _open(section: Section, water: Water, heater: int) -> At:
    here = water.new(f"water from open heater {heater}", water.shell(heater))
    state(section, here.number, "wf", f"of the water leaving open heater {heater}", p=here.p, x="0")
    water.path(water.feed_in[heater], here, "p")
    water.path(water.taps[f"p_x{heater}"], here, "p")
    return here


def _closed(section: Section, water: Water, heater: int) -> At:
    """Drain and heated feedwater of a closed heater; with its drains pumped forward, the mixture as well."""
    shell, pressure = water.shell(heater), water.feed_pressure(heater)
    drain = water.new(f"drains of heater {heater}", shell)
    state(section, drain.number, "wf", f"of the drains of heater {heater}", p=shell, x="0")
    water.drain[heater] = drain
    water.path(water.taps[f"p_x{heater}"], drain, "p")
    out = water.new(f"feedwater after heater {heater}", pressure)
    section.formula(out.T, f"{drain.T} - dT_ttd_{heater}", f"Temperature of the feedwater after heater {heater}",
                    "degC",
                    reference="terminal temperature difference against the saturation temperature in the heater")
    state(section, out.number, "wf", f"of the feedwater after heater {heater}", p=pressure, T=out.T)
    water.feed_out[heater] = out
    water.path(water.feed_in[heater], out, "p")
    if water.arranged.kind(heater) == "closed-trap":
        return out
    pumped = water.new(f"drains of heater {heater}, pumped", pressure)
    pump(section, "wf", drain.number, pumped.number, pressure, f"eta_d{heater}", f"w_d{heater}",
         f"drain pump of heater {heater}")
    water.drain_pumped[heater] = pumped
    water.path(drain, pumped, "straight")
    mixed = water.new(f"feedwater after the drains of heater {heater}", pressure)
    if not water.arranged.coupled(heater):
        _local_mixture(section, water, heater, mixed)
    return mixed


def _local_mixture(section: Section, water: Water, heater: int, mixed: At) -> None:
    """No drains come in from above: the heater's share of the feedwater after it is its own affair."""
    into, out, drain, pumped, tap = (water.feed_in[heater].h, water.feed_out[heater].h, water.drain[heater].h,
                                     water.drain_pumped[heater].h, water.taps[f"p_x{heater}"].h)
    section.formula(f"z_{heater}", f"({out} - {into}) / (({tap} - {drain}) + ({out} - {into}))",
                    f"Steam of heater {heater} a kilogram of feedwater after it",
                    reference=f"energy balance of heater {heater}, its drains joining the feedwater behind it")
    section.formula(mixed.h, f"{out} + z_{heater} * ({pumped} - {out})",
                    f"Specific enthalpy of the feedwater after the drains of heater {heater}", "kJ/kg",
                    reference="energy balance of the mixing")
    state(section, mixed.number, "wf", f"after the drains of heater {heater}", p=mixed.p, h=mixed.h)
