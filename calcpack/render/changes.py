"""A comparison with the revision before to the section that tells what changed and why results moved."""
from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

from markupsafe import Markup

from calcpack.render import quantities
from calcpack.render.pages import Ground, anchor, link
from calcpack.revisions.share_table import HEADING, TOGETHER, Column, share_table

Data = Mapping[str, Any]

NUMBERS = (("inputs", "Inputs"), ("results", "Results"))
"""What is told by number: before, now, change."""

TEXTS = (("sheet", "Title block"), ("options", "Options of the method"), ("fluids", "Fluids"),
         ("formulas", "Formulas"), ("choices", "Choices"), ("details", "Details of steps"),
         ("assumptions", "Assumptions"), ("references", "References"), ("limits", "Limits"),
         ("checks", "Checks"), ("cautions", "Cautions"), ("engine", "Program and libraries"))
"""What is told by text: before and now."""

ABREAST = 7
"""So many results stand side by side across a page."""

SAID_ABOVE = ("Title block", "Reference")
"""Titles of changes that only repeat the head of their table."""


def changes(ground: Ground) -> dict[str, Any] | None:
    """What changed since the revision that the sheet is compared with; None without a comparison."""
    comparison = ground.comparison
    if comparison is None:
        return None
    moved = [one for one in comparison.get("steps") or () if one.get("kind") == "moved"]
    return {"against": comparison["against"], "letter": comparison["letter"], "marks": ground.marks.count,
            "numbers": _tables(ground, NUMBERS), "shares": _shares(ground), "texts": _tables(ground, TEXTS),
            "moved": Markup(", ").join(link(anchor("step", one["step"]), one["step"]) for one in moved),
            "moved_count": len(moved), "notes": comparison.get("notes") or (),
            "figures": [one for one in ground.figures if is_waterfall(one)]}


def is_waterfall(figure: Any) -> bool:
    """Whether a figure is the one of what moved the results."""
    return figure.id == "waterfall"


def _shares(ground: Ground) -> dict[str, Any] | None:
    """How much each cause moved each result; None where no result was changed."""
    table = share_table(ground.comparison)
    if table is None:
        return None
    causes = [*map(ground.prose, table.causes), TOGETHER]
    tables = [_share_columns(ground, causes, table.columns[at:at + ABREAST])
              for at in range(0, len(table.columns), ABREAST)]
    return {"caption": HEADING, "tables": tables, "note": ground.prose(" ".join(table.notes))}


def _share_columns(ground: Ground, causes: Sequence[str], columns: Sequence[Column]) -> dict[str, Any]:
    """A table of so many results as stand abreast, a row a cause."""
    numbers = [[quantities.prose(number or "–") for number in (*column.numbers, column.whole)] for column in columns]
    return {"columns": [{"symbol": _what(ground, {"symbol": column.symbol}), "unit": quantities.unit(column.unit)}
                        for column in columns],
            "rows": [{"cause": cause, "numbers": row}
                     for cause, row in zip(causes, zip(*numbers, strict=True), strict=True)]}


def _tables(ground: Ground, kinds: tuple[tuple[str, str], ...]) -> list[dict[str, Any]]:
    return [_table(ground, key, title, rows) for key, title in kinds if (rows := ground.comparison.get(key))]


def _table(ground: Ground, key: str, title: str, changed: Sequence[Data]) -> dict[str, Any]:
    """A table of changes; causes that all its rows share are told once, below it."""
    rows = [_change(ground, key, one) for one in changed]
    shared = rows[0]["causes"] if len(rows) > 1 and all(row["causes"] == rows[0]["causes"] for row in rows) else []
    return {"title": title, "rows": [{**row, "causes": []} for row in rows] if shared else rows, "causes": shared}


def _change(ground: Ground, key: str, one: Data) -> dict[str, Any]:
    title = one.get("title") or one.get("text") or ""
    causes = [one["text"] for one in one.get("causes") or ()]
    return {"what": _what(ground, one), "aspect": ground.prose(_aspect(one)),
            "title": "" if title in (one.get("old"), one.get("new"), *SAID_ABOVE) else title,
            "old": _side(ground, key, one, one.get("old")),
            "new": _side(ground, key, one, one.get("new")),
            "change": quantities.prose(one.get("change")), "percent": quantities.prose(one.get("change_percent")),
            "kind": one.get("kind") or "changed", "causes": [ground.prose(text) for text in causes]}


def _aspect(one: Data) -> str:
    """What of a step or an input changed, where that is not its formula."""
    return "" if one.get("what") in (None, "formula", "step") else str(one["what"])


def _what(ground: Ground, one: Data) -> Markup:
    """The symbol, the id or the name of what changed, as a link where the sheet has it."""
    name = one.get("symbol")
    if name and not one.get("id"):
        shown = quantities.symbol(name)
        return link(ground.anchors[name], shown) if name in ground.anchors else shown
    word = str(one.get("id") or one.get("name") or one.get("role") or one.get("key") or "")
    return link(ground.sources[word], word) if word in ground.sources else Markup("{}").format(word)


def _definition(text: str) -> Markup:
    """A formula; of a choice, each branch with its condition."""
    pieces = []
    for branch in text.split("; "):
        value, word, condition = branch.partition(" if ")
        value, otherwise, _ = value.partition(" otherwise")
        pieces.append(Markup("{}{}{}").format(
            quantities.formula(value), word or otherwise, quantities.formula(condition) if word else ""))
    return Markup("; ").join(pieces)


def _side(ground: Ground, key: str, one: Data, value: Any) -> Markup:
    """One side of a change; a dash where there was nothing."""
    if value in (None, ""):
        return Markup("–")
    if key == "formulas" and one.get("what", "formula").split(" ")[0] in ("formula", "step", "column"):
        return _definition(str(value))
    return ground.prose(str(value))
