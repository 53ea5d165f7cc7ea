"""What one sheet takes from another: the value with its provenance, and its place in the record of the taking sheet."""
from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from calcpack.record.record import Record

Data = Mapping[str, Any]

ORIGIN = ("number", "revision", "title", "symbol", "step", "identity", "spec_sha256", "shown", "unit", "also_shown")
"""What a record says of where a value is from: the sheet, the symbol, its step (None for an input), its print there."""


@dataclass(frozen=True, slots=True)
class Carried:
    """A value of another sheet: SI ``value``, unit of print there, whether it is a temperature level.

    ``origin`` is what the taking record says of it, by the names of :data:`ORIGIN`.
    """

    value: float
    unit: str
    level: bool
    origin: Data

    @property
    def solving(self) -> tuple[str, str, bool]:
        """What of it the taking sheet is solved with, to the last bit; the rest is for print."""
        return repr(self.value), self.unit, self.level


def offered(record: Data, symbol: str) -> Carried | None:
    """The value of an input or a step of a record, for another sheet; None where it has no such symbol."""
    for entry in (*record["steps"], *record["inputs"]):
        if entry["symbol"] == symbol:
            sheet = record["sheet"]
            origin = {"number": sheet["number"], "revision": sheet["revision"], "title": sheet["title"],
                      "symbol": symbol, "step": entry.get("id"), "identity": entry["identity"],
                      "spec_sha256": record["spec_sha256"], "shown": entry["shown"], "unit": entry["unit"],
                      "also_shown": entry.get("also_shown")}
            return Carried(float(entry["value"]), entry["unit"], bool(entry.get("also_shown")), origin)
    return None


def carried_of(record: Data) -> dict[str, Carried]:
    """What a record says that its sheet has taken from others, by the input; to solve it again without those.

    An origin that is not told in full is left out: nothing can be solved from it.
    """
    found = {}
    for entry in record["inputs"]:
        origin = entry.get("from")
        if isinstance(origin, Mapping) and all(name in origin for name in ORIGIN):
            found[entry["symbol"]] = Carried(float(entry["value"]), origin["unit"], bool(origin.get("also_shown")),
                                             origin)
    return found


def with_origins(record: Record, carried: Mapping[str, Carried]) -> Record:
    """The record with the origin of each value that was taken from another sheet, in ``from`` and in ``source``.

    ``stated`` in ``from`` is the source that the spec names beside it, so that
    a record that has an origin can be given another one.
    """
    if not carried:
        return record
    return Record({**record.data, "inputs": [_with_origin(entry, carried.get(entry["symbol"]))
                                             for entry in record.data["inputs"]]})


def _with_origin(entry: Data, one: Carried | None) -> Data:
    if one is None:
        return entry
    stated = (entry.get("from") or {"stated": entry["source"]})["stated"]
    return {**entry, "from": {**one.origin, "stated": stated}, "source": source_words(one.origin, stated)}


def source_words(origin: Data, stated: str | None) -> str:
    """'MT-101 revision A, T_out, step 3.2', with the source that the spec states beside it."""
    where = f"step {origin['step']}" if origin["step"] else "design input"
    words = f"{origin['number']} revision {origin['revision']}, {origin['symbol']}, {where}"
    return f"{words}; {stated}" if stated else words
