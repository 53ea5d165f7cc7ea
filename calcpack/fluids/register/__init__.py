"""Turn a designation in any usual spelling into its entry and its cited facts.

The two tables beside this module hold the entries (names, and molar mass,
critical point and range as computed with CoolProp 8.0.0 for the equation
named by ``library_name``) and the facts, each with its source and with how
far that source has been confirmed: "yes", "derived", "second-hand" or "no".
"""
from __future__ import annotations

import csv
from dataclasses import dataclass
from functools import cache
from pathlib import Path

from calcpack.errors import Fault, SpecError, nearest

_HERE = Path(__file__).parent


@dataclass(frozen=True, slots=True)
class Fact:
    """One fact of a fluid: ``value`` as text in ``unit``, and where it is from."""

    quantity: str
    value: str
    unit: str
    source: str
    confirmed: str
    note: str

    @property
    def number(self) -> float:
        """The value as a number, in ``unit``; ValueError for a class such as 'A2L'."""
        return float(self.value)


@dataclass(frozen=True, slots=True)
class Entry:
    """One fluid of the register; the numbers are in the units their names say."""

    designation: str
    library_name: str
    chemical_name: str
    aliases: tuple[str, ...]
    CAS: str
    molar_mass_g_mol: float
    T_crit_K: float
    p_crit_bar: float
    T_min_K: float
    T_max_K: float
    p_max_bar: float

    @property
    def names(self) -> tuple[str, ...]:
        """Every name by which the entry is found."""
        chemical = () if self.chemical_name.startswith(("blend ", "azeotrope ")) else (self.chemical_name,)
        plain = self.library_name.removesuffix(".mix")
        return (self.designation, plain, *chemical, *self.aliases)


def folded(name: str) -> str:
    """A name without case, hyphens, spaces and brackets: 'R-1234ze(E)' → 'r1234zee'."""
    return "".join(letter for letter in name.casefold() if letter.isalnum())


def designations() -> tuple[str, ...]:
    """The designations of all fluids in the register, in the order of its table."""
    return tuple(entry.designation for entry in entries())


@cache
def entries() -> tuple[Entry, ...]:
    """All entries of the register."""
    return tuple(_entry(row) for row in _rows("fluids.csv"))


def find(name: str) -> Entry | None:
    """The entry that ``name`` means, in any usual spelling, or None."""
    return _by_name().get(folded(name))


def lookup(name: str) -> Entry:
    """The entry that ``name`` means; SpecError with the nearest name if none."""
    entry = find(name)
    if entry is None:
        known = [known for each in entries() for known in each.names]
        raise SpecError(Fault(f"no fluid {name!r} in the register", found=name,
                              expected="a designation such as R-290, or a chemical name",
                              hint=nearest(name, known)))
    return entry


def facts_for(name: str) -> tuple[Fact, ...]:
    """The facts of the fluid that ``name`` means; SpecError if it is unknown."""
    return _facts().get(lookup(name).designation, ())


def fact(owner: object, quantity: str) -> Fact | None:
    """The fact about ``quantity`` of a fluid or a designation, or None.

    ``owner`` is a designation or anything with ``facts``. The quantities are
    those of the table, such as 'LFL', 'autoignition temperature' [degC],
    'thermal-stability guide temperature' [degC], 'PED fluid group',
    'practical limit (EN 378)', 'ATEL/ODL', 'safety class (ISO 817 / ASHRAE 34)';
    a word before the bracket is enough.
    """
    facts = facts_for(owner) if isinstance(owner, str) else owner.facts
    for each in facts:
        if quantity in (each.quantity, each.quantity.partition(" (")[0]):
            return each
    return None


def quantities() -> tuple[str, ...]:
    """The names of all quantities that the facts speak of."""
    return tuple(sorted({each.quantity for facts in _facts().values() for each in facts}))


def _rows(name: str) -> list[dict[str, str]]:
    with (_HERE / name).open(encoding="utf-8", newline="") as table:
        return list(csv.DictReader(table))


def _entry(row: dict[str, str]) -> Entry:
    aliases = tuple(alias.strip() for alias in row["aliases"].split(";") if alias.strip())
    numbers = ("molar_mass_g_mol", "T_crit_K", "p_crit_bar", "T_min_K", "T_max_K", "p_max_bar")
    return Entry(row["designation"], row["library_name"], row["chemical_name"], aliases, row["CAS"],
                 *(float(row[name]) for name in numbers))


@cache
def _by_name() -> dict[str, Entry]:
    return {folded(name): entry for entry in entries() for name in entry.names}


@cache
def _facts() -> dict[str, tuple[Fact, ...]]:
    found: dict[str, list[Fact]] = {}
    for row in _rows("facts.csv"):
        owner = found.setdefault(row.pop("designation"), [])
        owner.append(Fact(**row))
    return {designation: tuple(facts) for designation, facts in found.items()}
