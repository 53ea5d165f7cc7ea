"""What a spec means: defaults filled in, values still as written, every part frozen.

Quantities stay texts: their kind is the method's to say. Formulas stay texts
that are known to parse. Where each is written, :meth:`Spec.place` tells.
"""
from __future__ import annotations

from dataclasses import dataclass, field
from typing import Literal

from calcpack.errors import Fault, Place
from calcpack.fluids.definition import FluidDefinition
from calcpack.spec.nodes import Mapping
from calcpack.spec.places import located, place_of
from calcpack.spec.source import Source


@dataclass(frozen=True, slots=True)
class Sheet:
    """The title block; ``p_atm`` in Pa, ``p_atm_text`` and ``T_dead`` as written; ``date`` is ISO."""

    number: str
    title: str
    project: str
    revision: str
    status: str
    purpose: str | None
    scope: str | None
    date: str | None
    p_atm: float
    p_atm_text: str
    T_dead: str | None
    units: Literal["si", "us"]
    page: Literal["A4", "Letter"]
    grade: str | None
    codes: tuple[str, ...]
    baseline: str | None

    @property
    def draft(self) -> bool:
        return self.status == "draft"


@dataclass(frozen=True, slots=True)
class Signature:
    """Who signed, and on which day (ISO)."""

    name: str
    date: str


@dataclass(frozen=True, slots=True)
class Signoff:
    """The three signatures, each None while it is open."""

    prepared: Signature | None = None
    checked: Signature | None = None
    approved: Signature | None = None


@dataclass(frozen=True, slots=True)
class Link:
    """A value of another sheet, by the sheet's number and the symbol there."""

    number: str
    symbol: str

    def __str__(self) -> str:
        return f"{self.number}.{self.symbol}"


@dataclass(frozen=True, slots=True)
class Input:
    """A design input: ``value`` and ``tol`` as written, quantities whose kind is not known yet.

    Where ``link`` says which sheet the value is taken from, ``value`` is empty.
    """

    symbol: str
    value: str
    tol: str | None = None
    source: str | None = None
    title: str | None = None
    note: str | None = None
    link: Link | None = None


@dataclass(frozen=True, slots=True)
class Safety:
    """What cautions alone read: texts of :data:`calcpack.spec.safety.QUANTITIES` by name, where the room lies."""

    values: dict[str, str] = field(default_factory=dict)
    room_level: str | None = None
    source: str | None = None
    fluid_group: str | None = None


@dataclass(frozen=True, slots=True)
class Total:
    """What the column ``of`` comes to, ``by`` its sum, its extreme or its mean."""

    symbol: str
    title: str
    of: str
    by: Literal["sum", "min", "max", "mean"]


@dataclass(frozen=True, slots=True)
class Series:
    """The rows that the calculation is solved for, and what is summed up of them.

    ``rows`` as written: a season's name, a file's, or a table; ``inputs`` are
    formula texts by the symbol of the input; ``heat`` and ``power`` are given
    unless ``account`` is none.
    """

    rows: str
    shown: str
    inputs: dict[str, str]
    account: Literal["none", "heating", "output"]
    heat: str | None
    power: str | None
    cycling: Literal["none", "water", "air"]
    backup: Literal["electric", "fuel"]
    emissions: Literal["no", "yes"]
    costs: Literal["no", "yes"]
    columns: tuple[str, ...]
    totals: tuple[Total, ...]


@dataclass(frozen=True, slots=True)
class Case:
    """What is calculated: the method's name, its options, the fluid of each role, the inputs by symbol."""

    method: str
    options: dict[str, str]
    fluids: dict[str, FluidDefinition]
    inputs: dict[str, Input]
    safety: Safety = field(default_factory=Safety)
    series: Series | None = None


@dataclass(frozen=True, slots=True)
class Branch:
    """A branch of a choice; ``when`` is None in the last one, which holds otherwise."""

    when: str | None
    value: str
    label: str | None = None


@dataclass(frozen=True, slots=True)
class Root:
    """The equation that is zero at the step's symbol, and the ends of the bracket; formula texts."""

    equation: str
    low: str
    high: str


@dataclass(frozen=True, slots=True)
class Lookup:
    """A table entered with the symbol ``of``; ``points`` are pairs of quantities, ascending."""

    of: str
    points: tuple[tuple[str, str], ...]
    source: str


@dataclass(frozen=True, slots=True)
class Step:
    """A step of the engineer's own.

    The field that ``kind`` names holds its content; the other three are None.
    """

    symbol: str
    title: str
    kind: Literal["formula", "choice", "root", "lookup"]
    formula: str | None = None
    choice: tuple[Branch, ...] | None = None
    root: Root | None = None
    lookup: Lookup | None = None
    unit: str | None = None
    reference: str | None = None
    note: str | None = None


@dataclass(frozen=True, slots=True)
class Waiver:
    """Why a limit may fail, who answers for it, and since when (ISO)."""

    reason: str
    name: str
    date: str


@dataclass(frozen=True, slots=True)
class Limit:
    """What must hold: ``symbol`` is ``sense`` ``bound``, a quantity or a symbol as written."""

    id: str
    symbol: str
    sense: Literal["at most", "at least"]
    bound: str
    why: str
    source: str | None = None
    waiver: Waiver | None = None

    @property
    def key(self) -> str:
        """The key that the bound stands under in the spec."""
        return self.sense.replace(" ", "_")


@dataclass(frozen=True, slots=True)
class Assumption:
    """What is taken as true; while its ``status`` is 'open' it is a hold. ``due`` is ISO."""

    id: str
    text: str
    basis: str
    effect: str | None
    status: Literal["confirmed", "open"]
    owner: str | None
    due: str | None


@dataclass(frozen=True, slots=True)
class Reference:
    """A document that values and formulas are taken from."""

    id: str
    text: str


@dataclass(frozen=True, slots=True)
class Result:
    """A result for the title page; ``title`` None means the step's own."""

    symbol: str
    title: str | None = None


@dataclass(frozen=True, slots=True)
class Revision:
    """A line of the revision history."""

    revision: str
    date: str
    note: str
    by: str | None = None
    checked: str | None = None
    approved: str | None = None


@dataclass(frozen=True, slots=True)
class Spec:
    """One calculation sheet as the engineer wrote it.

    ``dropped`` names the inputs and steps that a faulty spec lost on the way,
    so that a later stage does not call them unknown; it is empty in a spec
    without faults.
    """

    sheet: Sheet
    signoff: Signoff
    case: Case
    steps: tuple[Step, ...]
    limits: tuple[Limit, ...]
    assumptions: tuple[Assumption, ...]
    references: tuple[Reference, ...]
    results: tuple[Result, ...]
    revisions: tuple[Revision, ...]
    source: Source = field(repr=False)
    tree: Mapping = field(repr=False)
    dropped: frozenset[str] = frozenset()

    @property
    def text(self) -> str:
        """The text of the file."""
        return self.source.text

    @property
    def file(self) -> str:
        """The name of the file, as messages show it."""
        return self.source.file

    @property
    def sha256(self) -> str:
        """The SHA-256 of the file's bytes, in hexadecimal."""
        return self.source.sha256

    def place(self, *path: str | int, key: bool = False) -> Place:
        """Where the value at ``path`` is written, such as ``("steps", 2, "formula")``; with ``key`` its key.

        Of a path that is not written, the place of the longest part that is.
        """
        return place_of(self.source, self.tree, path, key=key)

    def located(self, fault: Fault, *path: str | int) -> Fault:
        """A fault inside the text at ``path`` (its place in file ``""``), at its place in the file."""
        return located(self.source, self.tree, fault, path)
