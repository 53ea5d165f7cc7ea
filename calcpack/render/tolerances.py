"""The record's entry on tolerances to the part 'Uncertainty and sensitivity'."""
from __future__ import annotations

from typing import Any

from calcpack.render import quantities
from calcpack.render.pages import Ground


def uncertainty(ground: Ground) -> dict[str, Any] | None:
    """Effects of each tolerance on each result, combined, and against the limits; None without tolerances."""
    entry = ground.record.get("uncertainty")
    if not entry:
        return None
    tolerances = {one["symbol"]: one for one in ground.items("inputs")}
    heads = [quantities.symbol(row["symbol"]) for row in entry["results"]]
    names = [row["symbol"] for row in entry["results"]]
    rows = [{"symbol": quantities.symbol(row["symbol"]),
             "tolerance": ground.prose(_tolerance(tolerances, row["symbol"])),
             "effects": [_effect(ground, row["effects"][name]) for name in names]} for row in entry["inputs"]]
    return {"heads": heads, "rows": rows,
            "combined": [_cell(ground, row["combined"], row["percent"]) for row in entry["results"]],
            "sums": [_cell(ground, row["sum"], None) for row in entry["results"]],
            "limits": [{"id": row["id"], "symbol": quantities.symbol(row["symbol"]),
                        "margin": ground.prose(row["margin"]), "combined": _cell(ground, row["combined"], None),
                        "verdict": row["verdict"]} for row in entry["limits"]]}


def _tolerance(inputs: dict[str, Any], symbol: str) -> str:
    tolerance = inputs[symbol]["tol"]
    return f"± {tolerance['shown']} {tolerance['unit']}".rstrip()


def _effect(ground: Ground, effect: dict[str, Any] | None) -> list[Any]:
    """Two lines, for the low and the high end of the tolerance."""
    if effect is None:
        return [ground.prose("no answer")]
    return [ground.prose(effect["low"]), ground.prose(effect["high"])]


def _cell(ground: Ground, text: str | None, percent: str | None) -> dict[str, Any]:
    return {"text": ground.prose(f"± {text}" if text is not None else "no answer"), "percent": percent}
