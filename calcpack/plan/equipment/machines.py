"""Compressor, expander, pump and valve: adiabatic machines with an isentropic efficiency."""
from __future__ import annotations

from calcpack.plan.facts import MachineEnds
from calcpack.plan.plan import Section


def saturation(section: Section, tag: str, fluid: str, mode: str, word: str, *,
               vapour_title: str = "dew") -> None:
    """Pressure from the saturation temperature, or the reverse: ``T_e`` and ``p_e`` for tag ``e``.

    ``mode`` 'pressure' has the pressure as an input; else the temperature has
    a value already. For blends the temperature is that of the dew point.
    """
    if mode == "pressure":
        section.property(f"T_{tag}", f"T({fluid}, p=p_{tag}, x=1)",
                         f"{word} temperature ({vapour_title} point)")
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


def compressor(section: Section, fluid: str, inlet: str, outlet: str, pressure: str, loss: str | None,
               eta: str = "eta_is", work: str = "w_comp", machine: str = "compressor") -> None:
    """Isentropic efficiency ``eta`` from ``inlet`` to ``outlet``; ``loss`` is the share of work lost as heat.

    Adds ``work``, the work at the shaft a kilogram, and the outlet state.
    """
    ideal = section.property(f"h_{outlet}s", f"h({fluid}, p={pressure}, s=s_{inlet})",
                             "Enthalpy after isentropic compression")
    title = "Specific work of compression" if machine == "compressor" else f"Specific work of the {machine}"
    section.formula(work, f"({ideal} - h_{inlet}) / {eta}", title, "kJ/kg",
                    reference="isentropic efficiency: isentropic work over work of compression")
    _ends(section, machine, fluid, inlet, pressure, work, eta, drives=True)
    discharge(section, fluid, inlet, outlet, pressure, loss, work, machine)


def discharge(section: Section, fluid: str, inlet: str, outlet: str, pressure: str, loss: str | None,
              work: str = "w_comp", machine: str = "compressor") -> None:
    """The state at a compressor's outlet from its work a kilogram, of which the share ``loss`` leaves as heat."""
    after = f"h_{inlet} + {work}" if loss is None else f"h_{inlet} + (1 - {loss}) * {work}"
    section.formula(f"h_{outlet}", after, f"Specific enthalpy at the {machine} outlet", "kJ/kg",
                    reference=f"energy balance of the {machine}")
    state(section, outlet, fluid, f"at the {machine} outlet", p=pressure, h=f"h_{outlet}")


def expander(section: Section, fluid: str, inlet: str, outlet: str, pressure: str, eta: str = "eta_t") -> None:
    """Adiabatic expansion with isentropic efficiency ``eta``; adds ``w_t`` and the outlet state."""
    ideal = section.property(f"h_{outlet}s", f"h({fluid}, p={pressure}, s=s_{inlet})",
                             "Enthalpy after isentropic expansion")
    work = section.formula("w_t", f"(h_{inlet} - {ideal}) * {eta}", "Specific work of the expander", "kJ/kg",
                           reference="isentropic efficiency: work over isentropic work")
    _ends(section, "expander", fluid, inlet, pressure, work, eta, drives=False)
    section.formula(f"h_{outlet}", f"h_{inlet} - {work}", "Specific enthalpy at the expander outlet", "kJ/kg",
                    reference="energy balance of the expander")
    state(section, outlet, fluid, "at the expander outlet", p=pressure, h=f"h_{outlet}")


def pump(section: Section, fluid: str, inlet: str, outlet: str, pressure: str, eta: str = "eta_p",
         work: str = "w_p", machine: str = "pump") -> None:
    """Adiabatic pump with isentropic efficiency ``eta``; adds ``work`` and the outlet state."""
    ideal = section.property(f"h_{outlet}s", f"h({fluid}, p={pressure}, s=s_{inlet})",
                             "Enthalpy after isentropic pumping")
    section.formula(work, f"({ideal} - h_{inlet}) / {eta}", f"Specific work of the {machine}", "kJ/kg",
                    reference="isentropic efficiency: isentropic work over work")
    _ends(section, machine, fluid, inlet, pressure, work, eta, drives=True)
    section.formula(f"h_{outlet}", f"h_{inlet} + {work}", f"Specific enthalpy at the {machine} outlet", "kJ/kg",
                    reference=f"energy balance of the {machine}")
    state(section, outlet, fluid, f"at the {machine} outlet", p=pressure, h=f"h_{outlet}")


def _ends(section: Section, machine: str, fluid: str, inlet: str, pressure: str, work: str, eta: str, *,
          drives: bool) -> None:
    """Say between which ends the machine works, so that its efficiency can be found back from them."""
    section.plan.facts.machines.append(
        MachineEnds(machine, fluid, f"h_{inlet}", f"s_{inlet}", pressure, work, eta, drives))


def valve(section: Section, fluid: str, inlet: str, outlet: str, pressure: str,
          where: str = "after the expansion valve",
          reference: str = "energy balance of an adiabatic valve") -> None:
    """Adiabatic throttling from ``inlet`` to ``outlet``, in a valve or in a line."""
    section.formula(f"h_{outlet}", f"h_{inlet}", f"Specific enthalpy {where}", "kJ/kg", reference=reference)
    state(section, outlet, fluid, where, p=pressure, h=f"h_{outlet}")
