"""The step kinds: what a plan is made of."""
from __future__ import annotations

from dataclasses import dataclass

from calcpack.errors import Place


@dataclass(frozen=True, slots=True)
class Step:
    """One numbered line of a calculation.

    ``unit`` is the spelling of the unit it is printed in; None takes the
    customary one of its kind. ``place`` and ``path`` are where the spec wrote
    its formula, None and empty for a method's own step. ``formula`` is what gives the value, as text.
    """

    symbol: str
    title: str
    formula: str = ""
    unit: str | None = None
    reference: str = ""
    note: str = ""
    section: int = 0
    place: Place | None = None
    path: tuple[str | int, ...] = ()

    kind = "formula"


@dataclass(frozen=True, slots=True)
class PropertyStep(Step):
    """``formula`` is a property call: ``h(wf, p=p_c, s=s_1)``."""

    kind = "property"


@dataclass(frozen=True, slots=True)
class RootStep(Step):
    """An unknown, found where ``formula`` is zero between ``low`` and ``high``.

    ``formula`` may use the unknown and any step up to the plan's
    :class:`Closing` of it; ``low`` and ``high`` use steps before it only.
    """

    low: str = ""
    high: str = ""

    kind = "root"


@dataclass(frozen=True, slots=True)
class OptimumStep(Step):
    """A free value, chosen where ``formula``, the objective, is greatest (or least) between ``low`` and ``high``.

    As with a root, the objective may use the free value and any step up to the
    plan's :class:`Closing` of it. ``sense`` is ``greatest`` or ``least``.
    """

    low: str = ""
    high: str = ""
    sense: str = "greatest"

    kind = "optimum"


@dataclass(frozen=True, slots=True)
class Closing:
    """Here the steps that a root's equation or an optimum's objective needs are complete."""

    symbol: str


@dataclass(frozen=True, slots=True)
class Demand:
    """What must hold for the calculation to go on; not printed, it stops the solution.

    ``condition`` is a condition; ``text`` says what is wrong where it does not
    hold, ``hint`` what the engineer can change.
    """

    condition: str
    text: str
    hint: str

    symbol = ""


@dataclass(frozen=True, slots=True)
class Branch:
    """One case of a choice; an empty ``when`` is the case 'otherwise'."""

    when: str
    value: str
    label: str = ""


@dataclass(frozen=True, slots=True)
class ChoiceStep(Step):
    """The value of the first branch whose condition holds; ``formula`` is empty."""

    branches: tuple[Branch, ...] = ()

    kind = "choice"


@dataclass(frozen=True, slots=True)
class LookupStep(Step):
    """Linear interpolation in a table of the engineer's.

    ``formula`` is the symbol looked up; ``points`` are pairs of quantities as
    written, ascending; ``source`` says where the table comes from.
    """

    points: tuple[tuple[str, str], ...] = ()
    source: str = ""

    kind = "lookup"


@dataclass(frozen=True, slots=True)
class Column:
    """A column of a series: ``formula`` uses columns to its left, and the plan's symbols."""

    symbol: str
    title: str
    formula: str = ""
    unit: str | None = None


@dataclass(frozen=True, slots=True)
class Row:
    """A row of a series; ``first`` is the formula of the first column in this row."""

    label: str
    first: str


@dataclass(frozen=True, slots=True)
class SeriesStep(Step):
    """A table, a row an item; its value is ``reduction`` of ``column``.

    ``reduction`` is ``min``, ``max``, ``sum`` or ``mean``.
    """

    rows: tuple[Row, ...] = ()
    columns: tuple[Column, ...] = ()
    reduction: str = "min"
    column: str = ""

    kind = "series"


@dataclass(frozen=True, slots=True)
class CaseRow:
    """A row that the whole calculation is solved for: what each given column is there, as quantities."""

    label: str
    values: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class CasesStep(Step):
    """A table of the calculation solved once a row; its value is the number of rows.

    ``given`` are the symbols of the steps that each row sets, ``bound`` of those
    that follow from them and take the place of inputs, ``columns`` all symbols
    of the table, the given first. The steps before this one are those of the
    row ``shown``; ``source`` says where the rows are from.
    """

    given: tuple[str, ...] = ()
    bound: tuple[str, ...] = ()
    columns: tuple[str, ...] = ()
    rows: tuple[CaseRow, ...] = ()
    shown: int = 0
    source: str = ""

    kind = "cases"


@dataclass(frozen=True, slots=True)
class TotalStep(Step):
    """The ``reduction`` (``sum``, ``min``, ``max`` or ``mean``) of the ``column`` of the cases step ``table``."""

    table: str = ""
    column: str = ""
    reduction: str = "sum"

    kind = "total"
