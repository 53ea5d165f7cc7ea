"""A gas turbine's options to its train: states in the order of the flow, and the pressures between them."""
from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from itertools import count, pairwise

from calcpack.plan.equipment import grounds
from calcpack.plan.equipment.gas import Gas, GasState
from calcpack.plan.plan import Plan, Section

Stage = tuple[GasState, GasState]


@dataclass(frozen=True, slots=True)
class Train:
    """Machines as pairs of inlet and outlet; ``regenerated`` is the air behind the regenerator's cold side."""

    compressors: tuple[Stage, ...]
    regenerated: GasState | None
    turbines: tuple[Stage, ...]
    exhaust: GasState

    @property
    def compressed(self) -> GasState:
        return self.compressors[-1][1]

    @property
    def to_combustor(self) -> GasState:
        return self.regenerated or self.compressed

    @property
    def expanded(self) -> GasState:
        return self.turbines[-1][1]

    def names(self, machine: str) -> list[str]:
        """The names of the machines, numbered where there are several."""
        found = len(self.compressors if machine == "compressor" else self.turbines)
        return [machine] if found == 1 else [f"{machine} {k}" for k in range(1, found + 1)]

    def tags(self, letter: str) -> list[str]:
        """Tags such as c1, c2 of compressors (``c``) or turbines (``t``); the letter alone for one."""
        found = len(self.compressors if letter == "c" else self.turbines)
        return [letter] if found == 1 else [f"{letter}{k}" for k in range(1, found + 1)]

    def states(self) -> Iterator[GasState]:
        """Every state once, in the order of the flow."""
        for stage in self.compressors:
            yield from stage
        if self.regenerated:
            yield self.regenerated
        for stage in self.turbines:
            yield from stage
        if self.exhaust is not self.expanded:
            yield self.exhaust


def arrange(plan: Plan, air: Gas, hot: Gas) -> Train:
    """The train that the options ask for; ``hot`` is the gas behind the combustor."""
    numbers = map(str, count(1))
    compressors = _compressors(plan, air, numbers)
    before, regenerated = compressors[-1][1], None
    if plan.options["regenerator"] == "yes":
        number = next(numbers)
        regenerated = GasState(number, "of the air behind the regenerator", air, _after(plan, number, before.p),
                               f"T_{number}")
        before = regenerated
    turbines = _turbines(plan, hot, numbers, before)
    exhaust = turbines[-1][1]
    if regenerated:
        number = next(numbers)
        exhaust = GasState(number, "of the exhaust behind the regenerator", hot, "p_1", f"T_{number}",
                           exhaust.m_dot)
    return Train(compressors, regenerated, turbines, exhaust)


def _after(plan: Plan, number: str, before: str) -> str:
    """The symbol of a pressure that would be ``before`` but for a loss."""
    return f"p_{number}" if plan.options["losses"] == "given" else before


def _compressors(plan: Plan, air: Gas, numbers: Iterator[str]) -> tuple[Stage, ...]:
    stages: list[Stage] = []
    last = int(plan.options["compressors"])
    for k in range(1, last + 1):
        which = f" {k}" if last > 1 else ""
        a, b = next(numbers), next(numbers)
        p_in = "p_1" if k == 1 else _after(plan, a, stages[-1][1].p)
        given = plan.options["split"] == "given" and k < last
        stages.append((
            GasState(a, f"at the inlet of compressor{which}", air, p_in, "T_1" if k == 1 else "T_ic"),
            GasState(b, f"at the outlet of compressor{which}", air, f"p_ic{k}" if given else f"p_{b}",
                     f"T_{b}")))
    return tuple(stages)


def _turbines(plan: Plan, hot: Gas, numbers: Iterator[str], before: GasState) -> tuple[Stage, ...]:
    stages: list[Stage] = []
    last = int(plan.options["reheats"]) + 1
    m_dot = "m_dot_g" if plan.options["gas"] == "products" else "m_dot"
    for k in range(1, last + 1):
        which = f" {k}" if last > 1 else ""
        a, b = next(numbers), next(numbers)
        p_in = _after(plan, a, before.p if k == 1 else stages[-1][1].p)
        p_out = _after(plan, b,
                       "p_1") if k == last else f"p_rh{k}" if plan.options["split"] == "given" else f"p_{b}"
        stages.append((
            GasState(a, f"at the inlet of turbine{which}", hot, p_in, "T_t" if k == 1 else "T_rh", m_dot),
            GasState(b, f"at the outlet of turbine{which}", hot, p_out, f"T_{b}", m_dot)))
    return tuple(stages)


def pressures(plan: Plan, train: Train) -> None:
    """Every pressure of the train, from the pressure ratio, the split and the losses."""
    section = plan.section("Pressures")
    _compressor_pressures(plan, section, train)
    if plan.options["losses"] == "given":
        before = train.compressed.p
        if train.regenerated:
            section.formula(train.regenerated.p, f"{before} * (1 - f_rc)",
                            "Pressure of the air behind the regenerator", "bar", reference=grounds.LOSS_OF_PRESSURE)
            before = train.regenerated.p
        section.formula(train.turbines[0][0].p, f"{before} * (1 - f_cc)", "Pressure behind the combustor",
                        "bar", reference=grounds.LOSS_OF_PRESSURE)
        section.formula(train.expanded.p, "p_1 / (1 - f_ex)", "Pressure at the last turbine's outlet", "bar",
                        note="the exhaust leaves at the pressure of the compressor inlet",
                        reference=grounds.LOSS_OF_PRESSURE)
    _turbine_pressures(plan, section, train)


def _compressor_pressures(plan: Plan, section: Section, train: Train) -> None:
    losses, stages = plan.options["losses"] == "given", len(train.compressors)
    if stages > 1 and plan.options["split"] == "equal":
        whole = f"(r_p / (1 - f_ic)^{stages - 1})" if losses else "r_p"
        section.formula("r_c", f"{whole}^(1 / {stages})", "Pressure ratio of each compressor",
                        reference=grounds.EQUAL_RATIOS)
    for k, (inlet, outlet) in enumerate(train.compressors):
        if losses and k:
            section.formula(inlet.p, f"{train.compressors[k - 1][1].p} * (1 - f_ic)", f"Pressure {inlet.label}",
                            "bar", reference=grounds.LOSS_OF_PRESSURE)
        if k == stages - 1:
            section.formula(outlet.p, "r_p * p_1", f"Pressure {outlet.label}", "bar", reference=grounds.HIGH_PRESSURE)
        elif plan.options["split"] == "equal":
            section.formula(outlet.p, f"r_c * {inlet.p}", f"Pressure {outlet.label}", "bar",
                            reference=grounds.HIGH_PRESSURE)


def _turbine_pressures(plan: Plan, section: Section, train: Train) -> None:
    losses, reheats = plan.options["losses"] == "given", len(train.turbines) - 1
    first, last = train.turbines[0][0].p, train.expanded.p
    if reheats and plan.options["split"] == "equal":
        whole = f"({first} / {last} * (1 - f_rh)^{reheats})" if losses else f"({first} / {last})"
        section.formula("r_t", f"{whole}^(1 / {reheats + 1})", "Pressure ratio of each turbine",
                        reference=grounds.EQUAL_RATIOS)
    for (inlet, outlet), (following, _) in pairwise(train.turbines):
        if plan.options["split"] == "equal":
            section.formula(outlet.p, f"{inlet.p} / r_t", f"Pressure {outlet.label}", "bar",
                            reference="definition of the pressure ratio, solved for the outlet pressure")
        if losses:
            section.formula(following.p, f"{outlet.p} * (1 - f_rh)", f"Pressure {following.label}", "bar",
                            reference=grounds.LOSS_OF_PRESSURE)
