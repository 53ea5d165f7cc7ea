"""What a plan says about its steps besides computing them.

State points, streams, exchangers and control volumes name symbols only; tables,
diagrams, balances and cautions read the values of those symbols later.
"""
from __future__ import annotations

from dataclasses import dataclass, field


@dataclass(frozen=True, slots=True)
class InputNeed:
    """An input that a method takes.

    ``kind`` is a name of :data:`calcpack.units.KINDS`; ``low`` and ``high`` are
    quantities, limits that the value must keep (``low_open``: must exceed);
    ``typical`` is common practice, written by ``calcpack new``; ``default`` is
    taken where the spec is silent, and the sheet says so.
    """

    symbol: str
    kind: str
    title: str
    typical: str
    low: str | None = None
    high: str | None = None
    low_open: bool = False
    default: str | None = None
    note: str = ""

    @property
    def bounds(self) -> str:
        """The limits in words, such as 'above 0 to 1'; empty where there are none."""
        low = self.low and f"{'above' if self.low_open else 'from'} {self.low}"
        high = self.high and (f"to {self.high}" if low else f"up to {self.high}")
        return " ".join(word for word in (low, high) if word)


@dataclass(frozen=True, slots=True)
class StatePoint:
    """A numbered state; each field names the symbol of a property, or None."""

    number: str
    label: str
    fluid: str
    T: str
    p: str
    h: str | None = None
    s: str | None = None
    v: str | None = None


@dataclass(frozen=True, slots=True)
class StreamLine:
    """A secondary stream between its inlet and outlet."""

    name: str
    role: str
    m_dot: str | None
    T_in: str
    T_out: str
    p: str | None
    h_in: str | None
    h_out: str | None
    Q_dot: str


@dataclass(frozen=True, slots=True)
class ExchangerView:
    """An exchanger's profile: a series step whose columns give the Q̇–T lines."""

    name: str
    series: str
    duty: str
    enthalpy: str
    hot: str
    cold: str
    pinch: str


@dataclass(frozen=True, slots=True)
class Flow:
    """A mass flow through a boundary, with its enthalpy and, where known, its entropy."""

    m_dot: str
    h: str
    s: str | None = None


@dataclass(frozen=True, slots=True)
class Volume:
    """A control volume: what enters and leaves; the signs are those of the words.

    ``heat`` pairs name a heat flow that leaves (or enters) and the symbol of the
    absolute temperature at the boundary where it does; a temperature of None
    leaves the heat out of the entropy balance's reversible part.
    """

    name: str
    flows_in: tuple[Flow, ...] = ()
    flows_out: tuple[Flow, ...] = ()
    work_in: tuple[str, ...] = ()
    work_out: tuple[str, ...] = ()
    heat_in: tuple[tuple[str, str | None], ...] = ()
    heat_out: tuple[tuple[str, str | None], ...] = ()
    scale: str = ""
    cycle: bool = False


@dataclass(frozen=True, slots=True)
class Bound:
    """``symbol`` must not exceed ``limit`` (or fall below it where ``above``): a law, not a wish."""

    symbol: str
    limit: str
    text: str
    above: bool = False


@dataclass(frozen=True, slots=True)
class Equal:
    """Two symbols that must agree, found by two ways."""

    symbol: str
    other: str
    text: str
    relative: float = 1e-9


@dataclass(frozen=True, slots=True)
class Again:
    """A result found again: ``formula`` must give the value of ``symbol``, by the way that ``text`` says.

    ``scale`` is the symbol that rounding is measured by, where the value itself may be zero.
    """

    symbol: str
    formula: str
    text: str
    scale: str = ""


@dataclass(frozen=True, slots=True)
class MachineEnds:
    """A machine between two states, whose isentropic efficiency can be found back from them.

    ``h_in``, ``s_in`` and ``p_out`` name what fixes the isentropic outlet,
    ``work`` is the work a kilogram at the shaft, a formula; ``drives`` where it draws work.
    """

    name: str
    fluid: str
    h_in: str
    s_in: str
    p_out: str
    work: str
    eta: str
    drives: bool


@dataclass(frozen=True, slots=True)
class Rung:
    """A share of the way from the reversible figure to the net one, lost outside the control volumes.

    ``formula`` gives it [W]; beside the sheet's symbols it may use ``T_dead``,
    the temperature of the dead state. ``either`` allows it to be below zero.
    """

    label: str
    formula: str
    either: bool = False


@dataclass(frozen=True, slots=True)
class Ladder:
    """The way from a reversible figure, ``start`` (a formula like a rung's), to the net figure ``end``.

    Between ``before`` and ``after`` stand the control volumes, each with its
    exergy destruction, but for those of ``skip``, which lie before the start.
    ``upward`` where the losses add to the power (it is drawn, not given).
    ``room`` names the heats that go to the surroundings, at the dead state's
    temperature; ``Q_dot_loss`` stands for ``Q_dot_loss_low`` as well.
    """

    title: str
    start: str
    start_label: str
    end: str
    end_label: str
    before: tuple[Rung, ...] = ()
    after: tuple[Rung, ...] = ()
    upward: bool = False
    room: tuple[str, ...] = ()
    skip: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Path:
    """A line of a diagram between two states: at constant ``p``, ``s``, ``h``, ``v``, ``T`` or straight."""

    start: str
    end: str
    along: str
    role: str = ""
    real: bool = True


@dataclass(frozen=True, slots=True)
class Diagram:
    """A property diagram: ``kind`` is 'T-s', 'log p-h' or 'p-V'."""

    kind: str
    fluid: str
    paths: tuple[Path, ...] = ()
    streams: tuple[tuple[str, str], ...] = ()


@dataclass(frozen=True, slots=True)
class Box:
    """A piece of equipment on the arrangement sketch, at a column and row of a grid."""

    name: str
    shape: str
    column: float
    row: float


@dataclass(frozen=True, slots=True)
class Link:
    """A line of the sketch from box to box (or from a grid point), labelled with a state."""

    start: str
    end: str
    label: str = ""
    style: str = "fluid"


@dataclass(frozen=True, slots=True)
class Sketch:
    """The arrangement: boxes and links."""

    boxes: tuple[Box, ...] = ()
    links: tuple[Link, ...] = ()


@dataclass(slots=True)
class Facts:
    """All that a plan says about its steps.

    ``conductances`` maps an exchanger's series to the symbol of its conductance.
    """

    states: list[StatePoint] = field(default_factory=list)
    streams: list[StreamLine] = field(default_factory=list)
    exchangers: list[ExchangerView] = field(default_factory=list)
    volumes: list[Volume] = field(default_factory=list)
    bounds: list[Bound] = field(default_factory=list)
    equals: list[Equal] = field(default_factory=list)
    again: list[Again] = field(default_factory=list)
    machines: list[MachineEnds] = field(default_factory=list)
    conductances: dict[str, str] = field(default_factory=dict)
    ladder: Ladder | None = None
    diagrams: list[Diagram] = field(default_factory=list)
    sketch: Sketch = field(default_factory=Sketch)
    roles: dict[str, str] = field(default_factory=dict)
