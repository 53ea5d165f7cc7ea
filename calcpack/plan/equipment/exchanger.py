"""A counter-flow exchanger between a working fluid and a stream: profile, pinch, conductance by zone."""
from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from calcpack.plan.equipment import grounds
from calcpack.plan.equipment.streams import Stream
from calcpack.plan.facts import ExchangerView
from calcpack.plan.plan import Plan, Section

PIECES = 4
"""Each zone's profile is tabulated in so many equal steps of enthalpy."""


@dataclass(frozen=True, slots=True)
class Zone:
    """A zone of an exchanger, from the working fluid's cold end to its warm end.

    ``cold_h`` and ``warm_h`` are the symbols of the working fluid's enthalpy at
    its ends, ``cold_T`` and ``warm_T`` of its temperature.
    """

    name: str
    tag: str
    cold_h: str
    warm_h: str
    cold_T: str
    warm_T: str


@dataclass(frozen=True, slots=True)
class Exchanger:
    """A counter-flow exchanger named by ``tag`` (``e`` gives ``dT_min_e``, ``UA_e``).

    ``zones`` run from the cold end to the warm end; ``pressure``, ``m_dot`` and
    ``duty`` are symbols; ``fluid`` is the working fluid's role. Where the
    pressure falls along the exchanger, ``pressure_at`` is its formula, with
    ``{h}`` in the place of the working fluid's enthalpy.
    """

    title: str
    tag: str
    fluid: str
    pressure: str
    m_dot: str
    duty: str
    stream: Stream
    zones: tuple[Zone, ...]
    pressure_at: str = ""

    @property
    def cold_h(self) -> str:
        return self.zones[0].cold_h

    def stream_enthalpy(self, h: str) -> str:
        """The stream's enthalpy where the working fluid's is ``h``, by balance from the cold end."""
        end = "out" if self.stream.gives_heat else "in"
        return f"{self.stream.name('h', end)} + ({h} - {self.cold_h}) * {self.m_dot} / {self.stream.name('m_dot')}"

    def difference(self, T_stream: str, T_fluid: str) -> str:
        return f"{T_stream} - {T_fluid}" if self.stream.gives_heat else f"{T_fluid} - {T_stream}"


def profile(plan: Plan, section: Section, it: Exchanger) -> str:
    """The table of temperatures along the exchanger; its value is the smallest difference, the pinch."""
    tag, role = it.tag, it.stream.role
    h, T, h_stream, T_stream, dT = (f"{name}_{tag}" for name in ("h_x", "T_x", f"h_{role}_x", f"T_{role}_x",
                                                                 "dT_x"))
    p, falling = it.pressure, []
    if it.pressure_at:
        p = f"p_x_{tag}"
        falling = [(p, "Working fluid, pressure", it.pressure_at.replace("{h}", h), None)]
    symbol = section.series(
        f"dT_min_{tag}", "min", dT, rows(it.zones), (
            (h, "Working fluid, enthalpy", "", "kJ/kg"),
            *falling,
            (T, "Working fluid, temperature", f"T({it.fluid}, p={p}, h={h})", None),
            (h_stream, f"{role.capitalize()}, enthalpy", it.stream_enthalpy(h), "kJ/kg"),
            (T_stream, f"{role.capitalize()}, temperature", f"T({role}, p={it.stream.name('p')}, h={h_stream})",
             None),
            (dT, "Difference", it.difference(T_stream, T), "K")),
        f"Smallest temperature difference in the {it.title.lower()}",
        note="Rows at the zone boundaries and between them in equal steps of enthalpy.", reference=grounds.PROFILE)
    hot, cold = (T_stream, T) if it.stream.gives_heat else (T, T_stream)
    plan.facts.exchangers.append(ExchangerView(it.title, symbol, it.duty, h, hot, cold, dT))
    return symbol


def rows(zones: Sequence[Zone]) -> list[tuple[str, str]]:
    """Label and enthalpy of each row of a profile along ``zones``."""
    result: list[tuple[str, str]] = [(f"{zones[0].name}, cold end", zones[0].cold_h)]
    for zone in zones:
        for piece in range(1, PIECES):
            share = piece / PIECES
            result.append((f"{zone.name}, {share:.2f}",
                           f"{zone.cold_h} + {share} * ({zone.warm_h} - {zone.cold_h})"))
        result.append((f"{zone.name}, warm end", zone.warm_h))
    return result


def require_pinch(plan: Plan, it: Exchanger) -> None:
    """Stop where the temperatures cross: no exchanger can do that."""
    plan.demand(f"dT_min_{it.tag} > 0 K", f"the temperatures cross in the {it.title.lower()}",
                "move the saturation temperature away from the stream, or change the stream's temperatures")


def conductance(section: Section, it: Exchanger) -> str:
    """UA of each zone from its heat and log-mean difference, and their sum."""
    boundary = _boundary_differences(section, it)
    parts = []
    for index, zone in enumerate(it.zones):
        Q = section.formula(f"Q_dot_{zone.tag}", f"{it.m_dot} * ({zone.warm_h} - {zone.cold_h})",
                            f"Heat of the zone: {zone.name}", "kW", reference=grounds.HEAT_OF_FLOW)
        mean = log_mean(section, f"LMTD_{zone.tag}", boundary[index], boundary[index + 1],
                        f"Log-mean temperature difference, {zone.name}")
        parts.append(section.formula(f"UA_{zone.tag}", f"{Q} / {mean}", f"Conductance of the zone: {zone.name}",
                                     "kW/K", reference=grounds.CONDUCTANCE))
    whole = parts[0] if len(parts) == 1 else section.formula(
        f"UA_{it.tag}", " + ".join(parts), f"Conductance of the {it.title.lower()}", "kW/K",
        reference=grounds.CONDUCTANCES)
    section.plan.facts.conductances[f"dT_min_{it.tag}"] = whole
    return whole


def _boundary_differences(section: Section, it: Exchanger) -> list[str]:
    """The temperature difference at each zone boundary, ends included."""
    ends = ("out", "in") if it.stream.gives_heat else ("in", "out")
    cold, warm = (it.stream.name("T", end) for end in ends)
    temperatures = [cold, *(_boundary_temperature(section, it, zone) for zone in it.zones[:-1]), warm]
    fluid = [it.zones[0].cold_T, *(zone.warm_T for zone in it.zones)]
    result = []
    for index, (T_stream, T_fluid) in enumerate(zip(temperatures, fluid, strict=True)):
        where = "cold end" if index == 0 else f"warm end of {it.zones[index - 1].name}"
        # Named by the zone, so that another zone before it does not rename it at the next revision.
        symbol = f"dT_{it.tag}_cold" if index == 0 else f"dT_{it.zones[index - 1].tag}"
        result.append(section.formula(symbol, it.difference(T_stream, T_fluid),
                                      f"Temperature difference, {where}", "K", reference=grounds.TWO_SIDES))
    return result


def _boundary_temperature(section: Section, it: Exchanger, zone: Zone) -> str:
    role = it.stream.role
    h = section.formula(f"h_{role}_{zone.tag}", it.stream_enthalpy(zone.warm_h),
                        f"{role.capitalize()} enthalpy at the warm end of {zone.name}", "kJ/kg",
                        reference=grounds.ALONG)
    return section.property(f"T_{role}_{zone.tag}", f"T({role}, p={it.stream.name('p')}, h={h})",
                            f"{role.capitalize()} temperature at the warm end of {zone.name}")


def log_mean(section: Section, symbol: str, a: str, b: str, title: str) -> str:
    """The log-mean of two differences; near equal ends, where 0/0 threatens, their mean."""
    return section.choice(symbol, (
        (f"abs({a} - {b}) < 0.001 * {b}", f"({a} + {b}) / 2", "ends equal within 0.1 %: arithmetic mean"),
        ("", f"({a} - {b}) / ln({a} / {b})", "ends differ")), title, "K",
        reference="log-mean temperature difference of a counter-flow exchanger")
