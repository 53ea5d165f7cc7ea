"""The sheets of a bound package to where one of them took a value from another that says something else here."""
from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import Any

from calcpack.record.carried import offered
from calcpack.units import shown_with_unit

Data = Mapping[str, Any]


def at_odds(record: Data, bound: Mapping[str, Data]) -> list[str]:
    """In words, each value that a sheet took from another and that is not what is bound of it.

    ``bound`` has the record of each sheet of the package by its number. What a
    sheet that is not in the package gives cannot be looked at; that is told too.
    """
    lines, missing = [], []
    for entry in record["inputs"]:
        origin = entry.get("from")
        if origin and origin["number"] not in bound:
            missing.append(origin["number"])
        elif origin:
            lines += _differing(entry, origin, bound[origin["number"]])
    return [*lines, *(f"takes values from {number}, which is not in this package" for number in dict.fromkeys(missing))]


def _differing(entry: Data, origin: Data, source: Data) -> Iterator[str]:
    here, revision = offered(source, origin["symbol"]), source["sheet"]["revision"]
    where = f"{origin['number']}.{origin['symbol']}"
    taken = f"{entry['symbol']} was taken as {where} = {_shown(origin)} of revision {origin['revision']}"
    if here is None:
        yield f"{taken}; revision {revision}, bound here, has no such value"
    elif here.value != float(entry["value"]):
        yield f"{taken}; revision {revision}, bound here, has {_shown(here.origin)}"


def _shown(origin: Data) -> str:
    return shown_with_unit(origin["shown"], origin["unit"])
