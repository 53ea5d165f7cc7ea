"""What the rules see: a spec of the right shape, with what they need to know beside it."""
from __future__ import annotations

from dataclasses import dataclass

from calcpack.errors import Place
from calcpack.spec.nodes import Listing, Mapping, Scalar
from calcpack.spec.places import Path
from calcpack.spec.scalars import quantity
from calcpack.spec.schema import Document


@dataclass(frozen=True, slots=True)
class Draft:
    """A document whose shape is right.

    ``ids`` are those of all references and assumptions that were written,
    usable or not; ``touched`` are the paths where the shape had a fault, about
    which no rule complains again; ``p_atm`` in Pa.
    """

    document: Document
    ids: frozenset[str]
    touched: frozenset[Path]
    p_atm: float

    @classmethod
    def of(cls, document: Document, written: Mapping, touched: frozenset[Path]) -> Draft:
        """The draft of a document and of the tree as written."""
        return cls(document, written_ids(written), touched, quantity(document.sheet.p_atm, "pressure").value)

    def is_touched(self, *path: str | int) -> bool:
        """True if the shape had a fault at ``path``, above it or below it."""
        return any(path[:len(other)] == other[:len(path)] for other in self.touched)

    @staticmethod
    def column(at: int, length: int) -> Place:
        """A place inside a scalar, ``at`` counted from 0."""
        return Place("", 1, at + 1, length)


def written_ids(tree: Mapping) -> frozenset[str]:
    """The ids of references and assumptions in the tree."""
    listings = (tree.get(name) for name in ("references", "assumptions"))
    entries = (item for listing in listings if isinstance(listing, Listing)
               for item in listing.items if isinstance(item, Mapping))
    return frozenset(name.text for entry in entries if isinstance(name := entry.get("id"), Scalar))


SERIES = "case.series"
"""Stands among the symbols for a series, whose totals are not known before it is laid."""


def written_symbols(tree: Mapping) -> frozenset[str]:
    """The symbols of inputs and steps in the tree, and :data:`SERIES` where it has one."""
    case, steps = tree.get("case"), tree.get("steps")
    inputs = case.get("inputs") if isinstance(case, Mapping) else None
    names = {key.text for key, _ in inputs.entries} if isinstance(inputs, Mapping) else set()
    items = steps.items if isinstance(steps, Listing) else ()
    symbols = (item.get("symbol") for item in items if isinstance(item, Mapping))
    if isinstance(case, Mapping) and case.get("series") is not None:
        names.add(SERIES)
    return frozenset(names | {symbol.text for symbol in symbols if isinstance(symbol, Scalar)})
