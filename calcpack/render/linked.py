"""The sheets around a sheet, ready for print: what it takes from others, what others take from it."""
from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

from markupsafe import Markup

from calcpack.render import quantities
from calcpack.render.pages import Ground, anchor

Data = Mapping[str, Any]


def family(ground: Ground) -> dict[str, Any] | None:
    """The sheets before and after this one; None where nobody has looked for them."""
    around = ground.extras.family
    if around is None:
        return None
    return {"upstream": [_source(ground, one) for one in around["upstream"]],
            "downstream": [_taker(ground, one) for one in around["downstream"]],
            # What an earlier issue took is no matter of the issue that takes its place.
            "stale": [] if ground.record.get("issue") else [quantities.prose(text) for text in around["stale"]]}


def _source(ground: Ground, one: Data) -> dict[str, Any]:
    values = [{"input": quantities.symbol(value["input"]), "anchor": anchor("input", value["input"]),
               "symbol": _symbol(ground, one["page"], value["symbol"], value["step"]),
               "value": quantities.quantity(value["shown"], value["unit"]), "also": value["also_shown"] or "",
               "where": f"step {value['step']}" if value["step"] else "design input"} for value in one["values"]]
    return {**_sheet(ground, one), "taken": values, "concerns": one["concerns"]}


def _taker(ground: Ground, one: Data) -> dict[str, Any]:
    symbols = [quantities.symbol(name) for name in one["symbols"]]
    return {**_sheet(ground, one), "symbols": Markup(", ").join(symbols)}


def _sheet(ground: Ground, one: Data) -> dict[str, Any]:
    return {"name": _linked(ground, one["page"], one["number"]), "revision": one["revision"] or "not stated",
            "title": one["title"] or "not stated", "status": (one["status"] or "not known").replace("-", " ")}


def source_cell(ground: Ground, origin: Data) -> Markup:
    """The source of an input that another sheet gives: 'MT-101 revision A, T_out, step 3.2', with links on a screen."""
    around: Sequence[Data] = (ground.extras.family or {}).get("upstream") or ()
    page = next((one["page"] for one in around if one["number"] == origin["number"]), None)
    where = f"step {origin['step']}" if origin["step"] else "design input"
    words = Markup("{} revision {}, {}, {}").format(
        _linked(ground, page, origin["number"]), origin["revision"],
        quantities.symbol(origin["symbol"]), _linked(ground, page, where, _place(origin["symbol"], origin["step"])))
    return Markup("{}; {}").format(words, ground.sourced(origin["stated"])) if origin.get("stated") else words


def _symbol(ground: Ground, page: str | None, symbol: str, step: str | None) -> Markup:
    return _linked(ground, page, quantities.symbol(symbol), _place(symbol, step))


def _place(symbol: str, step: str | None) -> str:
    """The anchor of a value on its own sheet's page."""
    return anchor("step", step) if step else anchor("input", symbol)


def _linked(ground: Ground, page: str | None, words: str | Markup, place: str = "") -> Markup:
    """A link to another page of the site, on a screen; the words alone on paper, and where the site lacks the page."""
    if page is None or ground.for_print:
        return Markup("{}").format(words)
    return Markup('<a href="{}.html{}">{}</a>').format(page, f"#{place}" if place else "", words)
