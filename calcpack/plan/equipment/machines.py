"""Compressor, expander, pump and valve: adiabatic machines with an isentropic efficiency."""
from __future__ import annotations

from calcpack.plan.plan import Section


def saturation(section: Section, tag: str, fluid: str, mode: str, word: str, *, vapour_title: str = "dew") -> None:
    """Pressure from the saturation temperature, or the reverse: ``T_e`` and ``p_e`` for tag ``e``.

    ``mode`` 'pressure' has the pressure as an input; else the temperature has
    a value already. For blends the temperature is that of the dew point.
    """
    if mode == "pressure":
        section.property(f"T_{tag}", f"T({fluid}, p=p_{tag}, x=1)", f"{word} temperature ({vapour_title} point)")
    else:
        section.property(f"p_{tag}", f"p({fluid}, T=T_{tag}, x=1)", f"{word} pressure ({vapour_title} point)")


def state(section: Section, number: str, fluid: str, title: str, **known: str) -> None:
    """The remaining properties among h, s, T of state ``number`` from two known ones.

    ``known`` are two of ``p, T, h, s, x`` with their symbols or numbers.
    """
    arguments = ", ".join(f"{key}={value}" for key, value in known.items())
    names = {"T": ("T", "Temperature"), "h": ("h", "Specific enthalpy"), "s": ("s", "Specific entropy")}
    for key, (letter, word) in names.items():
        if key not in known:
            section.property(f"{letter}_{number}", f"{key}({fluid}, {arguments})", f"{word} {title}")


def compressor(section: Section, fluid: str, inlet: str, outlet: str, pressure: str, loss: str | None) -> None:
    """Isentropic efficiency from ``inlet`` to ``outlet``; ``loss`` is the share of work lost as heat.

    Adds ``w_comp``, the work at the shaft a kilogram, and the outlet state.
    """
    ideal = section.property(f"h_{outlet}s", f"h({fluid}, p={pressure}, s=s_{inlet})",
                             "Enthalpy after isentropic compression")
    work = section.formula("w_comp", f"({ideal} - h_{inlet}) / eta_is", "Specific work of compression", "kJ/kg",
                           reference="isentropic efficiency: isentropic work over work of compression")
    after = f"h_{inlet} + {work}" if loss is None else f"h_{inlet} + (1 - {loss}) * {work}"
    section.formula(f"h_{outlet}", after, "Specific enthalpy at the compressor outlet", "kJ/kg",
                    reference="energy balance of the compressor")
    state(section, outlet, fluid, "at the compressor outlet", p=pressure, h=f"h_{outlet}")


def expander(section: Section, fluid: str, inlet: str, outlet: str, pressure: str, eta: str = "eta_t") -> None:
    """Adiabatic expansion with isentropic efficiency ``eta``; adds ``w_t`` and the outlet state."""
    ideal = section.property(f"h_{outlet}s", f"h({fluid}, p={pressure}, s=s_{inlet})",
                             "Enthalpy after isentropic expansion")
    work = section.formula("w_t", f"(h_{inlet} - {ideal}) * {eta}", "Specific work of the expander", "kJ/kg",
                           reference="isentropic efficiency: work over isentropic work")
    section.formula(f"h_{outlet}", f"h_{inlet} - {work}", "Specific enthalpy at the expander outlet", "kJ/kg",
                    reference="energy balance of the expander")
    state(section, outlet, fluid, "at the expander outlet", p=pressure, h=f"h_{outlet}")


def pump(section: Section, fluid: str, inlet: str, outlet: str, pressure: str, eta: str = "eta_p") -> None:
    """Adiabatic pump with isentropic efficiency ``eta``; adds ``w_p`` and the outlet state."""
    ideal = section.property(f"h_{outlet}s", f"h({fluid}, p={pressure}, s=s_{inlet})",
                             "Enthalpy after isentropic pumping")
    work = section.formula("w_p", f"({ideal} - h_{inlet}) / {eta}", "Specific work of the pump", "kJ/kg",
                           reference="isentropic efficiency: isentropic work over work")
    section.formula(f"h_{outlet}", f"h_{inlet} + {work}", "Specific enthalpy at the pump outlet", "kJ/kg",
                    reference="energy balance of the pump")
    state(section, outlet, fluid, "at the pump outlet", p=pressure, h=f"h_{outlet}")


def valve(section: Section, fluid: str, inlet: str, outlet: str, pressure: str) -> None:
    """Adiabatic throttling from ``inlet`` to ``outlet``."""
    section.formula(f"h_{outlet}", f"h_{inlet}", "Specific enthalpy after the expansion valve", "kJ/kg",
                    reference="energy balance of an adiabatic valve")
    state(section, outlet, fluid, "after the expansion valve", p=pressure, h=f"h_{outlet}")
