"""What a sheet says of itself: the list of points it satisfies, what computed it, how the program is verified."""
from __future__ import annotations

import hashlib
from collections.abc import Mapping
from itertools import groupby
from typing import Any

from calcpack.record import Record
from calcpack.render import quantities
from calcpack.render.pages import Ground, anchor, link
from calcpack.verification.statement import statement

Data = Mapping[str, Any]

SHARES = ("reckoned anew by a reader of this page from its printed inputs and formulas alone, without rounding on the "
          "way; it shares the inputs, the factors of the units and the equations of the fluids, no solver and no "
          "formula code")


def checklist(ground: Ground) -> dict[str, Any] | None:
    """The points by group, with their count by verdict, and the results reckoned anew; None before they are judged."""
    points = ground.extras.checklist
    if not points:
        return None
    counts: dict[str, int] = {}
    for one in points:
        counts[one.verdict] = counts.get(one.verdict, 0) + 1
    groups = [{"title": title, "rows": list(rows)} for title, rows in groupby(points, key=lambda one: one.group)]
    return {"groups": groups, "counts": counts, "count": len(points), "anew": _anew(ground), "shares": SHARES}


def _anew(ground: Ground) -> list[dict[str, Any]]:
    """The results beside themselves anew."""
    found = {one.place: one for one in ground.extras.anew}
    results = sorted(ground.record["results"].items(), key=lambda item: item[1].get("order", 0))
    return [{"symbol": quantities.symbol(symbol), "where": link(anchor("step", one["step"]), one["step"]),
             "printed": quantities.quantity(one["shown"], one["unit"]), "anew": quantities.written(again.again),
             "places": f"{again.places:.2f}", "agrees": again.agrees}
            for symbol, one in results if one["step"] and (again := found.get(f"step {one['step']}")) is not None]


def machine(ground: Ground) -> dict[str, Any] | None:
    """What computed the sheet: versions, hashes, command, and the verification of the program."""
    engine = ground.record["engine"]
    libraries = [f"{name} {version}" for name, version in sorted(engine["libraries"].items())]
    return {"engine": engine, "libraries": libraries, "spec_file": ground.record["spec_file"],
            "record_file": (ground.record.get("issue") or {}).get("record"),
            "spec_sha256": ground.record["spec_sha256"], "record_sha256": record_hash(ground.record),
            "tolerance": quantities.prose(engine.get("root_tolerance")),
            "iterated": any(one["kind"] in ("root", "optimum") for one in ground.items("steps")),
            "verified": statement(ground.record, ground.extras.verification)}


def record_hash(record: Data) -> str:
    """The SHA-256 of the record's file, in hexadecimal."""
    return hashlib.sha256(Record(record).to_json().encode()).hexdigest()
