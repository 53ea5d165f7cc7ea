"""Steps for an ideal gas in steady flow: states, compression and expansion, heat capacities constant or varying."""
from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from calcpack.errors import Fault, SpecError
from calcpack.plan.equipment import grounds
from calcpack.plan.facts import Flow, MachineEnds, StatePoint
from calcpack.plan.plan import Plan, Section

GAS_VALUES: Mapping[str, str] = {
    "air-standard": "air as an ideal gas, heat capacities varying with temperature",
    "cold-air": "an ideal gas of constant heat capacities, which are inputs"}
"""Values of the option that says how a gas is described."""


@dataclass(frozen=True, slots=True)
class Gas:
    """An ideal gas: the fluid of ``role``, or one of constant heat capacities where ``role`` is empty."""

    role: str = ""

    @property
    def constant(self) -> bool:
        return not self.role


@dataclass(frozen=True, slots=True)
class GasState:
    """A numbered state of a gas; ``p`` and ``T`` are the symbols of its pressure and temperature."""

    number: str
    label: str
    gas: Gas
    p: str
    T: str
    m_dot: str = "m_dot"

    @property
    def h(self) -> str:
        return f"h_{self.number}"

    @property
    def s(self) -> str:
        return f"s_{self.number}"

    @property
    def flow(self) -> Flow:
        return Flow(self.m_dot, self.h, self.s)

    @property
    def point(self) -> StatePoint:
        return StatePoint(self.number, self.label, self.gas.role, self.T, self.p, self.h, self.s)


def gas_inputs(plan: Plan, role: str = "air") -> Gas:
    """The gas that the option ``gas`` asks for, with its heat capacities as inputs where they are constant.

    Raises
    ------
    SpecError
        Where the spec's fluid in ``role`` is not an ideal gas.
    """
    if plan.options["gas"] == "cold-air":
        plan.input("cp", "specific entropy", "Heat capacity of the gas at constant pressure", "1.005 kJ/(kg·K)",
                   low="0 kJ/(kg·K)", low_open=True)
        plan.input("gamma", "number", "Heat capacity ratio of the gas", "1.4", low="1", low_open=True, high="2")
        return Gas()
    require_ideal(plan, role)
    return Gas(role)


def require_ideal(plan: Plan, role: str) -> None:
    """Raise SpecError where the fluid of ``role`` is there and is not modelled as an ideal gas."""
    fluid = plan.fluids.get(role)
    if fluid is None:
        return
    from calcpack.fluids.gas import IdealGas
    if not isinstance(fluid, IdealGas):
        raise SpecError(Fault(f"the fluid {role!r} must be an ideal gas",
                              found=f"{fluid.designation}: {fluid.model}",
                              hint=f"write {{fluid: {fluid.designation}, model: ideal gas}}, or a composition"))


def zeros(section: Section, gas: Gas) -> None:
    """Where enthalpy and entropy of a gas of constant heat capacity are zero, and its gas constant."""
    if gas.constant:
        section.formula("R", "cp * (gamma - 1) / gamma", "Gas constant", "kJ/(kg·K)",
                        reference="ideal gas: cp - cv = R")
        section.formula("T_z", "273.15 K", "Temperature at which enthalpy and entropy are taken as zero",
                        "degC", reference=grounds.CELSIUS)
        section.formula("p_z", "1 bar", "Pressure at which entropy is taken as zero", "bar",
                        reference=grounds.ZERO_OF_PRESSURE)


def caloric(section: Section, it: GasState) -> None:
    """Enthalpy and entropy of a state whose pressure and temperature are known."""
    _enthalpy(section, it)
    _entropy(section, it)


def at_enthalpy(section: Section, it: GasState) -> None:
    """Temperature and entropy of a state whose pressure and enthalpy are known."""
    title = f"Temperature {it.label}"
    if it.gas.constant:
        section.formula(it.T, f"T_z + {it.h} / cp", title, "degC", reference=grounds.HEAT_CAPACITY)
    else:
        section.property(it.T, f"T({it.gas.role}, p={it.p}, h={it.h})", title)
    _entropy(section, it)


def _enthalpy(section: Section, it: GasState) -> None:
    title = f"Specific enthalpy {it.label}"
    if it.gas.constant:
        section.formula(it.h, f"cp * ({it.T} - T_z)", title, "kJ/kg", reference=grounds.HEAT_CAPACITY)
    else:
        section.property(it.h, f"h({it.gas.role}, p={it.p}, T={it.T})", title)


def _entropy(section: Section, it: GasState) -> None:
    title = f"Specific entropy {it.label}"
    if it.gas.constant:
        section.formula(it.s, f"cp * ln({it.T} / T_z) - R * ln({it.p} / p_z)", title, "kJ/(kg·K)",
                        reference=grounds.HEAT_CAPACITY)
    else:
        section.property(it.s, f"s({it.gas.role}, p={it.p}, T={it.T})", title)


def isentropic_enthalpy(section: Section, start: GasState, end: GasState, word: str) -> str:
    """The enthalpy after an isentropic change from ``start`` to the pressure of ``end``; gives its symbol."""
    symbol, title = f"h_{end.number}s", f"Specific enthalpy after isentropic {word}"
    if not end.gas.constant:
        return section.property(symbol, f"h({end.gas.role}, p={end.p}, s={start.s})", title)
    T = section.formula(f"T_{end.number}s", f"{start.T} * ({end.p} / {start.p})^((gamma - 1) / gamma)",
                        f"Temperature after isentropic {word}", "degC",
                        reference="reversible adiabat of an ideal gas: T p^((1-γ)/γ) is constant")
    return section.formula(symbol, f"cp * ({T} - T_z)", title, "kJ/kg", reference=grounds.HEAT_CAPACITY)


def compress(section: Section, start: GasState, end: GasState, work: str, machine: str,
             eta: str = "eta_c") -> None:
    """A compressor from ``start`` to the pressure of ``end``: its work a kilogram and the outlet state."""
    ideal = isentropic_enthalpy(section, start, end, "compression")
    section.formula(work, f"({ideal} - {start.h}) / {eta}", f"Specific work of the {machine}", "kJ/kg",
                    reference="isentropic efficiency: isentropic work over work of compression")
    section.formula(end.h, f"{start.h} + {work}", f"Specific enthalpy {end.label}", "kJ/kg",
                    reference=f"energy balance of the {machine}")
    at_enthalpy(section, end)
    _ends(section, machine, start, end, work, eta, drives=True)


def expand(section: Section, start: GasState, end: GasState, work: str, machine: str,
           eta: str = "eta_t") -> None:
    """A turbine from ``start`` to the pressure of ``end``: its work a kilogram and the outlet state."""
    ideal = isentropic_enthalpy(section, start, end, "expansion")
    section.formula(work, f"({start.h} - {ideal}) * {eta}", f"Specific work of the {machine}", "kJ/kg",
                    reference="isentropic efficiency: work over isentropic work")
    section.formula(end.h, f"{start.h} - {work}", f"Specific enthalpy {end.label}", "kJ/kg",
                    reference=f"energy balance of the {machine}")
    at_enthalpy(section, end)
    _ends(section, machine, start, end, work, eta, drives=False)


def _ends(section: Section, machine: str, start: GasState, end: GasState, work: str, eta: str, *,
          drives: bool) -> None:
    """Say between which ends the machine works; only a fluid's efficiency can be looked up again."""
    if not end.gas.constant:
        section.plan.facts.machines.append(
            MachineEnds(machine, end.gas.role, start.h, start.s, end.p, work, eta, drives))


def specific_volume(section: Section, it: GasState) -> str:
    """The specific volume of a state; gives its symbol."""
    symbol, title = f"v_{it.number}", f"Specific volume {it.label}"
    if it.gas.constant:
        return section.formula(symbol, f"R * {it.T} / {it.p}", title, "m³/kg", reference="ideal-gas law")
    return section.property(symbol, f"v({it.gas.role}, p={it.p}, T={it.T})", title)
