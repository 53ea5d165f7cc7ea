"""A companion file of published values to comparisons with what a record says.

Beside each spec ``NAME.yaml`` stands ``NAME.expected.yaml``: the ``row`` it
covers, ``source``, how the row is ``known`` (source, memory, or part memory
and which part), and ``cases``: inputs that are ``set`` to other values, with
the published ``values`` of symbols for them.

``within`` of a value is one of three: ``digits`` (half a unit in the last
printed digit), a percentage (relative to the published value), or a quantity
(absolute, a difference where the value is a temperature).
"""
from __future__ import annotations

import hashlib
import re
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from decimal import Decimal
from pathlib import Path
from typing import Any

import yaml

from calcpack.errors import Fault, MissingPartError
from calcpack.record import Record
from calcpack.units import read_quantity, unit

KNOWN = re.compile(r"source|memory|part memory: .+")


@dataclass(frozen=True, slots=True)
class Published:
    """One published value; ``value`` and ``within`` as written."""

    symbol: str
    value: str
    within: str
    note: str = ""


@dataclass(frozen=True, slots=True)
class Case:
    """A spec solved with the inputs in ``overrides`` replaced, and what is published for it.

    ``source`` and ``known`` say where the values are from and how far that is in hand.
    """

    row: str
    spec: Path
    overrides: Mapping[str, str]
    values: tuple[Published, ...]
    source: str
    known: str

    @property
    def name(self) -> str:
        """The spec's name with the inputs that are replaced."""
        given = ",".join(f"{symbol}={value}" for symbol, value in self.overrides.items())
        return self.spec.stem + (f"[{given}]" if given else "")


@dataclass(frozen=True, slots=True)
class Deviation:
    """A published value beside the computed one, both in the unit of the published value."""

    row: str
    symbol: str
    published: str
    computed: float
    deviation: float
    allowed: float
    scale: float

    @property
    def holds(self) -> bool:
        """Whether the deviation is within what is allowed."""
        return abs(self.deviation) <= self.allowed

    @property
    def share(self) -> float:
        """The deviation as a share of what is allowed."""
        return abs(self.deviation) / self.allowed

    def __str__(self) -> str:
        return (f"{self.row} {self.symbol}: published {self.published}, computed {self.computed:.10g}, "
                f"off by {self.deviation:.3g}, allowed {self.allowed:.3g}")


def published_folder() -> Path:
    """The folder of the published checks, in a wheel and in the source tree.

    Raises
    ------
    MissingPartError
        When the installation has none.
    """
    package = Path(__file__).resolve().parent.parent
    for folder in (package / "published", package.parent / "tests" / "published"):
        if folder.is_dir() and any(folder.glob("*.expected.yaml")):
            return folder
    raise MissingPartError(Fault("the published checks of calcpack are missing", expected="a folder 'published'",
                                 hint="install calcpack again"))


def companions() -> list[Path]:
    """The files of published values, in the order of their names."""
    return sorted(published_folder().glob("*.expected.yaml"))


def test_set() -> str:
    """What tells one set of checks from another: the first digits of a hash over all its files."""
    digest = hashlib.sha256()
    for path in companions():
        for one in (path, spec_of(path)):
            digest.update(one.name.encode() + b"\0" + one.read_bytes() + b"\0")
    return digest.hexdigest()[:12]


def spec_of(companion: Path) -> Path:
    """The spec beside a companion file."""
    return companion.with_name(companion.name.replace(".expected.yaml", ".yaml"))


def read_companion(path: Path) -> Mapping[str, Any]:
    """One file of published values as written; every scalar but the structure is a text."""
    return yaml.load(path.read_text("utf-8"), Loader=yaml.BaseLoader)


def read_known(text: str) -> str:
    """How a row is known: 'source', 'memory', or 'part memory: ' and which part; ValueError for anything else."""
    if not KNOWN.fullmatch(text):
        raise ValueError(f"known is {text!r}: 'source', 'memory' or 'part memory: which' is meant")
    return text


def cases() -> list[Case]:
    """Every case of every companion file."""
    found = []
    for path in companions():
        written = read_companion(path)
        for case in written["cases"]:
            found.append(Case(written["row"], spec_of(path), case.get("set") or {},
                              tuple(Published(**value) for value in case["values"]), written["source"],
                              read_known(written["known"])))
    return found


def method_of(spec: Path) -> str:
    """The method that a spec names."""
    return yaml.load(spec.read_text("utf-8"), Loader=yaml.BaseLoader)["case"]["method"]


def compare(case: Case, record: Record) -> list[Deviation]:
    """Each published value of ``case`` against the record."""
    return [_compare(case.row, one, record) for one in case.values]


def _compare(row: str, one: Published, record: Record) -> Deviation:
    reading = read_quantity(one.value)
    published = float(reading.text)
    found, in_unit = value_of(record, one.symbol)
    if unit(in_unit).dimension != reading.unit.dimension:
        raise ValueError(f"{row} {one.symbol}: published as {one.value}, the sheet gives it in {in_unit!r}")
    computed = reading.unit.from_si(found)
    return Deviation(row, one.symbol, one.value, computed, computed - published,
                     _allowed(one, reading.text, reading.unit.factor), abs(published))


def _allowed(one: Published, number: str, factor: float) -> float:
    """The deviation allowed, in the unit of the published value."""
    if one.within == "digits":
        return 0.5 * 10.0 ** Decimal(number).as_tuple().exponent * (1 + 1e-6)
    if one.within.endswith("%"):
        return float(one.within.removesuffix("%")) / 100.0 * abs(float(number))
    return read_quantity(one.within).value / factor


def value_of(record: Record, symbol: str) -> tuple[float, str]:
    """The SI value of a step or an input, and the unit it is printed in.

    Raises
    ------
    KeyError
        For a symbol that the sheet gives no value.
    """
    for item in (*record.data["steps"], *record.data["inputs"]):
        if item["symbol"] == symbol:
            return item["value"], item["unit"]
    raise KeyError(symbol)


def table(found: Iterable[Deviation]) -> list[str]:
    """The comparisons as lines of text: row, symbol, published, computed, deviation, allowed."""
    lines = [f"{'row':<6}{'symbol':<16}{'published':<24}{'computed':>16}{'deviation':>12}{'allowed':>12}"]
    for one in sorted(found, key=lambda each: row_order(each.row)):
        mark = "" if one.holds else "  beyond"
        lines.append(f"{one.row:<6}{one.symbol:<16}{one.published:<24}{one.computed:>16.9g}"
                     f"{relative(one.deviation, one.scale):>12}{relative(one.allowed, one.scale):>12}{mark}")
    return lines


def row_order(row: str) -> tuple[int, int]:
    """What rows are sorted by: 2.4 before 2.10."""
    section, number = row.split(".")
    return int(section), int(number)


def relative(difference: float, scale: float) -> str:
    """Relative to the published value in percent; absolute where that is zero."""
    return f"{difference:.2g}" if scale == 0 else f"{100.0 * difference / scale:.2g} %"
