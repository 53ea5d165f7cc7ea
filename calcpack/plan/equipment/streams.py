"""Secondary streams: their states, flow and balance, for a source or a sink."""
from __future__ import annotations

from dataclasses import dataclass

from calcpack.plan.facts import Flow, StreamLine
from calcpack.plan.plan import Plan, Section


@dataclass(frozen=True, slots=True)
class Stream:
    """A finite stream of the role ``role``; ``gives_heat`` where it cools down.

    ``mode`` is 'outlet' (the outlet temperature is an input and the flow
    follows) or 'flow' (the flow is an input and the outlet follows).
    """

    role: str
    gives_heat: bool
    mode: str

    def name(self, quantity: str, end: str = "") -> str:
        """A symbol of the stream: ``name('T', 'in')`` is ``T_source_in``."""
        return "_".join(part for part in (quantity, self.role, end) if part)

    @property
    def flow_in(self) -> Flow:
        return Flow(self.name("m_dot"), self.name("h", "in"), self.name("s", "in"))

    @property
    def flow_out(self) -> Flow:
        return Flow(self.name("m_dot"), self.name("h", "out"), self.name("s", "out"))


TYPICAL = {
    ("source", "in"): "12 degC", ("source", "out"): "7 degC", ("sink", "in"): "30 degC", ("sink", "out"): "35 degC"}


def stream(plan: Plan, role: str, *, gives_heat: bool, mode: str, typical: dict[str, str] | None = None) -> Stream:
    """Declare a stream's inputs: inlet, pressure, and outlet temperature or flow."""
    word = "source" if gives_heat else "sink"
    usual = {"in": TYPICAL[word, "in"], "out": TYPICAL[word, "out"], "m_dot": "10 kg/s", "p": "3 bar"} | (typical or {})
    result = Stream(role, gives_heat, mode)
    plan.input(result.name("T", "in"), "temperature", f"{role.capitalize()} inlet temperature", usual["in"])
    if mode == "outlet":
        plan.input(result.name("T", "out"), "temperature", f"{role.capitalize()} outlet temperature", usual["out"])
    else:
        plan.input(result.name("m_dot"), "mass flow", f"{role.capitalize()} mass flow", usual["m_dot"],
                   low="0 kg/s", low_open=True)
    plan.input(result.name("p"), "pressure", f"{role.capitalize()} pressure, taken constant", usual["p"],
               low="0 bar", low_open=True)
    return result


def inlet_state(section: Section, it: Stream) -> None:
    """Enthalpy and entropy at the inlet, and at the outlet where its temperature is an input."""
    ends = ("in", "out") if it.mode == "outlet" else ("in",)
    for end in ends:
        _state(section, it, end)
    if it.mode == "outlet":
        warm, cool = ("in", "out") if it.gives_heat else ("out", "in")
        section.plan.demand(f"{it.name('T', warm)} > {it.name('T', cool)}",
                            f"the {it.role} does not {'cool down' if it.gives_heat else 'warm up'}",
                            "check inlet and outlet temperature")


def _state(section: Section, it: Stream, end: str) -> None:
    word = {"in": "inlet", "out": "outlet"}[end]
    for quantity, title in (("h", "Specific enthalpy"), ("s", "Specific entropy")):
        section.property(it.name(quantity, end), f"{quantity}({it.role}, p={it.name('p')}, T={it.name('T', end)})",
                         f"{title} of the {it.role} at the {word}")


def balance(section: Section, it: Stream, duty: str) -> None:
    """The flow, or the outlet state, from the heat ``duty`` that the stream gives or takes."""
    h_in, h_out, m_dot = it.name("h", "in"), it.name("h", "out"), it.name("m_dot")
    if it.mode == "outlet":
        drop = f"{h_in} - {h_out}" if it.gives_heat else f"{h_out} - {h_in}"
        section.formula(m_dot, f"{duty} / ({drop})", f"Mass flow of the {it.role}", "kg/s",
                        reference="energy balance of the stream")
    else:
        sign = "-" if it.gives_heat else "+"
        section.formula(h_out, f"{h_in} {sign} {duty} / {m_dot}", f"Specific enthalpy of the {it.role} at the outlet",
                        "kJ/kg", reference="energy balance of the stream")
        section.property(it.name("T", "out"), f"T({it.role}, p={it.name('p')}, h={h_out})",
                         f"Outlet temperature of the {it.role}")
        section.property(it.name("s", "out"), f"s({it.role}, p={it.name('p')}, T={it.name('T', 'out')})",
                         f"Specific entropy of the {it.role} at the outlet")


def entropic_mean(section: Section, it: Stream, symbol: str) -> str:
    """The entropic mean temperature of the heat given or taken by the stream."""
    warm, cool = ("in", "out") if it.gives_heat else ("out", "in")
    return section.formula(
        symbol, f"({it.name('h', warm)} - {it.name('h', cool)}) / ({it.name('s', warm)} - {it.name('s', cool)})",
        f"Entropic mean temperature of the {it.role}", "degC",
        reference="thermodynamic mean temperature Δh/Δs at constant pressure")


def line(it: Stream, name: str, duty: str) -> StreamLine:
    """The stream's row of the stream table."""
    return StreamLine(name, it.role, it.name("m_dot"), it.name("T", "in"), it.name("T", "out"), it.name("p"),
                      it.name("h", "in"), it.name("h", "out"), duty)
