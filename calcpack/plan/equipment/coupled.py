"""A counter-flow exchanger between two working fluids: profile, smallest difference, conductance."""
from __future__ import annotations

from dataclasses import dataclass

from calcpack.plan.equipment import grounds
from calcpack.plan.equipment.exchanger import Zone, rows
from calcpack.plan.facts import ExchangerView
from calcpack.plan.plan import Plan, Section


@dataclass(frozen=True, slots=True)
class Side:
    """One side: the fluid's role, its pressure and flow, and its states at the cold and the warm end by symbol."""

    fluid: str
    pressure: str
    m_dot: str
    cold_h: str
    warm_h: str


@dataclass(frozen=True, slots=True)
class Coupled:
    """The exchanger named by ``tag``; ``zones`` are those of the hot side, from its cold end."""

    title: str
    tag: str
    duty: str
    hot: Side
    cold: Side
    zones: tuple[Zone, ...]


def coupled_profile(plan: Plan, section: Section, it: Coupled) -> str:
    """The table of both temperatures along the exchanger; its value is the smallest difference."""
    h, T, h_cold, T_cold, dT = (f"{name}_{it.tag}" for name in ("h_x", "T_x", "h_cold_x", "T_cold_x", "dT_x"))
    beside = f"{it.cold.cold_h} + ({h} - {it.hot.cold_h}) * {it.hot.m_dot} / {it.cold.m_dot}"
    symbol = section.series(
        f"dT_min_{it.tag}", "min", dT, rows(it.zones), (
            (h, "Hot side, enthalpy", "", "kJ/kg"),
            (T, "Hot side, temperature", f"T({it.hot.fluid}, p={it.hot.pressure}, h={h})", None),
            (h_cold, "Cold side, enthalpy", beside, "kJ/kg"),
            (T_cold, "Cold side, temperature", f"T({it.cold.fluid}, p={it.cold.pressure}, h={h_cold})", None),
            (dT, "Difference", f"{T} - {T_cold}", "K")),
        f"Smallest temperature difference in the {it.title.lower()}",
        note="Rows at the zone boundaries of the hot side and between them in equal steps of enthalpy.",
        reference=grounds.PROFILE)
    plan.facts.exchangers.append(ExchangerView(it.title, symbol, it.duty, h, T, T_cold, dT))
    return symbol
