"""What a sheet reaches of its reversible bound, and where the rest is lost, ready for print."""
from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from calcpack.render import quantities
from calcpack.render.pages import Ground, anchor, link

Data = Mapping[str, Any]

SHARES = ("g_rev", "g_Carnot")
BOUND_SYMBOLS = ("COP_rev", "COP_Carnot", "eta_rev", "eta_Carnot", "W_dot_rev", "W_dot_rev_taken", "COP", "eta_th",
                 "eta_net", "eta_real", "eta_ex", "W_dot_net", "g_rev", "g_Carnot")
"""The symbols that a method names the bound and the figure set against it by, in the order of print."""

KINDS = {"destruction": "destroyed", "loss": "lost unused"}


def bound(ground: Ground) -> dict[str, Any] | None:
    """The bound with the share of it that is reached, the ladder of losses, and the flows' exergy."""
    rows, ladder = _bound_rows(ground), ground.record.get("ladder")
    exergy = ground.record.get("exergy")
    if not rows and not ladder:
        return None
    return {"rows": rows, "ladder": _ladder(ladder) if ladder else None, "dead": _dead(exergy) if exergy else None,
            "flows": _flows(exergy) if exergy and ladder else [],
            "figures": [one for one in ground.figures if is_ladder(one)]}


def is_ladder(figure: Any) -> bool:
    """Whether a figure is the ladder of losses."""
    return figure.id == "ladder"


def _bound_rows(ground: Ground) -> list[dict[str, Any]]:
    """The bound and what is set against it, where the record has both."""
    steps = {one["symbol"]: one for one in ground.items("steps")}
    if not any(name in steps for name in SHARES):
        return []
    return [{"symbol": quantities.symbol(name), "title": steps[name]["title"], "value": quantities.shown(steps[name]),
             "where": link(anchor("step", steps[name]["id"]), steps[name]["id"])}
            for name in BOUND_SYMBOLS if name in steps]


def _ladder(ladder: Data) -> dict[str, Any]:
    sign = "+" if ladder["upward"] else "\u2212"
    rungs = [{"label": _upper(one["label"]), "kind": KINDS[one["kind"]], "sign": sign,
              "how": quantities.formula(one["formula"]) if one["formula"] else quantities.formula("T_dead * S_dot_gen"),
              "value": quantities.number(one["shown"]), "share": quantities.written(one["share_shown"])}
             for one in ladder["rungs"]]
    start, end = ladder["start"], ladder["end"]
    return {"title": ladder["title"], "unit": quantities.unit(ladder["unit"]), "rungs": rungs,
            "start": {"label": start["label"], "value": quantities.number(start["shown"]),
                      "how": quantities.formula(start["formula"])},
            "end": {"label": end["label"], "value": quantities.number(end["shown"]),
                    "share": quantities.written(end["share_shown"]), "how": quantities.symbol(end["symbol"])},
            "whole": "the power drawn in all" if ladder["upward"] else "the figure it starts from"}


def _dead(exergy: Data) -> dict[str, Any]:
    dead = exergy["dead_state"]
    return {"symbol": quantities.symbol("T_dead"), "T": quantities.prose(dead["T"]["shown"]),
            "source": quantities.prose(dead["source"], ("T_0",)),
            "p": quantities.quantity(dead["p"]["shown"], dead["p"]["unit"])}


def _flows(exergy: Data) -> list[dict[str, Any]]:
    return [{"label": _upper(one["label"]), "m_dot": quantities.symbol(one["m_dot"]), "e": quantities.shown(one["e"]),
             "E_dot": quantities.shown(one["E_dot"])} for one in exergy["streams"]]


def _upper(text: str) -> str:
    return text[:1].upper() + text[1:]
