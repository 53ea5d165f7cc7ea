"""Steps for a mass of ideal gas in a cylinder: corners, isentropic changes, heat at constant volume or pressure."""
from __future__ import annotations

from calcpack.plan.equipment import grounds
from calcpack.plan.equipment.gas import Gas
from calcpack.plan.plan import Plan, Section

WIDEST = "0.45"
"""Exponent of the volume ratio that bounds an isentropic temperature ratio: γ - 1 of air stays below 0.41."""

LAW = "ideal-gas law"
ADIABAT = "reversible adiabat of an ideal gas: T v^(γ-1) is constant"


def constants(section: Section, gas: Gas) -> None:
    """Gas constant, and what else the equations of the closed system need."""
    if gas.constant:
        section.formula("R", "cp * (gamma - 1) / gamma", "Gas constant", "kJ/(kg·K)",
                        reference="ideal gas: cp - cv = R")
        section.formula("cv", "cp / gamma", "Heat capacity at constant volume", "kJ/(kg·K)",
                        reference="definition of the heat capacity ratio: cp over cv")
        section.formula("T_z", "273.15 K", "Temperature at which energy and entropy are taken as zero", "degC",
                        reference=grounds.CELSIUS)
        section.formula("p_z", "1 bar", "Pressure at which entropy is taken as zero", "bar",
                        reference=grounds.ZERO_OF_PRESSURE)
        return
    section.formula("R_m", "8.314462618 J/(mol·K)", "Molar gas constant", "J/(mol·K)",
                    reference="CODATA 2018, exact, to ten digits")
    section.property("M", f"M({gas.role})", "Molar mass of the gas")
    section.formula("R", "R_m / M", "Gas constant of the gas", "kJ/(kg·K)",
                    reference="molar gas constant over molar mass")


def volume(section: Section, number: str) -> str:
    """The specific volume at a corner from pressure and temperature."""
    return section.formula(f"v_{number}", f"R * T_{number} / p_{number}", f"Specific volume at corner {number}",
                           "m³/kg", reference=LAW)


def pressure(section: Section, number: str) -> str:
    """The pressure at a corner from temperature and specific volume."""
    return section.formula(f"p_{number}", f"R * T_{number} / v_{number}", f"Pressure at corner {number}", "bar",
                           reference=LAW)


def energy(section: Section, gas: Gas, number: str) -> str:
    """The specific internal energy at a corner of known temperature."""
    title = f"Specific internal energy at corner {number}"
    if gas.constant:
        return section.formula(f"u_{number}", f"cv * (T_{number} - T_z)", title, "kJ/kg",
                               reference=grounds.HEAT_CAPACITY)
    return section.property(f"u_{number}", f"u({gas.role}, T=T_{number})", title)


def enthalpy(section: Section, gas: Gas, number: str) -> str:
    """The specific enthalpy at a corner of known temperature."""
    title = f"Specific enthalpy at corner {number}"
    if gas.constant:
        return section.formula(f"h_{number}", f"cp * (T_{number} - T_z)", title, "kJ/kg",
                               reference=grounds.HEAT_CAPACITY)
    return section.property(f"h_{number}", f"h({gas.role}, T=T_{number})", title)


def entropy(section: Section, gas: Gas, number: str) -> str:
    """The specific entropy at a corner of known pressure and temperature."""
    title = f"Specific entropy at corner {number}"
    if gas.constant:
        return section.formula(f"s_{number}", f"cp * ln(T_{number} / T_z) - R * ln(p_{number} / p_z)", title,
                               "kJ/(kg·K)", reference=grounds.HEAT_CAPACITY)
    return section.property(f"s_{number}", f"s({gas.role}, p=p_{number}, T=T_{number})", title)


def isentrope(plan: Plan, section: Section, gas: Gas, start: str, end: str, *, ratio: str,
              squeezes: bool) -> None:
    """Temperature, pressure and entropy at ``end``, whose specific volume is known, by a reversible adiabat.

    ``ratio`` is the formula of the greater volume over the smaller;
    ``squeezes`` for a compression. The entropy at ``start`` is known.
    """
    word = "compression" if squeezes else "expansion"
    title = f"Temperature at corner {end}, after isentropic {word}"
    sign = "*" if squeezes else "/"
    if gas.constant:
        section.formula(f"T_{end}", f"T_{start} {sign} ({ratio})^(gamma - 1)", title, "degC", reference=ADIABAT)
    else:
        far = f"T_{start} {sign} ({ratio})^{WIDEST}"
        section.root(f"T_{end}", f"s_{end} - s_{start}",
                     (f"T_{start}", far) if squeezes else (far, f"T_{start}"),
                     title, "degC", note="the temperature at which the entropy is that of the corner before",
                     reference="second law: a reversible adiabat keeps the entropy")
    pressure(section, end)
    entropy(section, gas, end)
    if not gas.constant:
        plan.close(f"T_{end}")


def heated_to_energy(plan: Plan, section: Section, gas: Gas, start: str, end: str, heat: str) -> None:
    """Temperature and internal energy at ``end``, reached at constant volume by the specific heat ``heat``."""
    title = f"Temperature at corner {end}, after the heat at constant volume"
    if gas.constant:
        section.formula(f"T_{end}", f"T_{start} + {heat} / cv", title, "degC",
                        reference="first law at constant volume: heat is the rise of u")
        energy(section, gas, end)
        return
    section.property(f"cv_{start}", f"cv({gas.role}, T=T_{start})",
                     f"Heat capacity at constant volume at corner {start}",
                     note="it rises with temperature, so that this value bounds the rise of temperature")
    section.property("T_most", f"T_max({gas.role})", "Highest temperature of the gas's equation")
    section.property("u_most", f"u({gas.role}, T=T_most)", "Specific internal energy at that temperature")
    plan.demand(f"{heat} < u_most - u_{start}", "the heat brings the gas above the range of its equation",
                "give less heat")
    section.root(f"T_{end}", f"u_{end} - u_{start} - {heat}",
                 (f"T_{start}", f"min(T_{start} + {heat} / cv_{start}, T_most)"),
                 title, "degC", reference="first law at constant volume: heat is the rise of u")
    energy(section, gas, end)
    plan.close(f"T_{end}")
