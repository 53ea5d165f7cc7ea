"""How the check stands to the part of the sheet that tells it, and to the title block's signatures."""
from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from typing import Any

from markupsafe import Markup

from calcpack.render import quantities
from calcpack.render.pages import Ground, anchor, link
from calcpack.review.marks import Mark, plain_name
from calcpack.review.standing import COMMENT, LAPSED, MISSING, SIGNED, STATES, UNBOUND, UNMARKED, Item, Standing
from calcpack.review.telling import (
    GONE_WORDS,
    PLURALS,
    STATE_WORDS,
    by_agreement,
    names_by_kind,
    open_words,
)

Data = Mapping[str, Any]

ROLES = (("prepared", "Prepared"), ("checked", "Checked"), ("approved", "Approved"))
SHORT = 12
"""Digits of a record's identity that the title block prints."""


def signature_rows(ground: Ground) -> list[dict[str, Any]]:
    """The title block's signatures: role, name, date, and whether each holds; empty words without a review file."""
    signoff = ground.record.get("signoff") or {}
    if ground.extras.review is None:
        return [{"title": title, "signature": signoff.get(role), "held": "", "void": False} for role, title in ROLES]
    rows = []
    for role, title in ROLES:
        one = ground.extras.review.signatures[role]
        words = {SIGNED: f"signed for this record, {(one.record or '')[:SHORT]}",
                 LAPSED: f"VOID: signed for record {(one.record or '')[:SHORT]}; the sheet has moved since",
                 UNBOUND: "named only, not signed", MISSING: "not signed"}
        rows.append({"title": title, "signature": {"name": one.name, "date": one.date or ""} if one.name else None,
                     "held": words[one.state], "void": one.state == LAPSED})
    return rows


def check_words(standing: Standing | None) -> dict[str, Any] | None:
    """A line on the check for title block and register; None without a review file."""
    if standing is None:
        return None
    return {"open": not standing.complete, "words": open_words(standing).rstrip(".").removeprefix("Open: ")}


def check(ground: Ground) -> dict[str, Any] | None:
    """The counts, comments with their resolution, what moved, and who checked; None without a review file."""
    standing: Standing | None = ground.extras.review
    if standing is None:
        return None
    items = (*standing.items, *standing.gone)
    return {"heads": [STATE_WORDS[state] for state in STATES], "counts": _counts(standing),
            "comments": [row for one in items for row in _comments(ground, one)],
            "lead": _lead(standing), "lapsed": _lapsed(ground, standing), "people": _people(items),
            "unmarked": _names(standing, standing.of(UNMARKED)), "conflicts": standing.conflicts,
            "record": standing.record}


def _lead(standing: Standing) -> str:
    total = len(standing.items)
    if standing.checked:
        return f"All {total} items are checked, and no comment is open."
    unmarked, moved, comments = len(standing.of(UNMARKED)), len(standing.lapsed), len(standing.open_comments)
    return (f"Of {total} items {_count(unmarked, 'is', 'are')} not checked; {_count(moved, 'was', 'were')} agreed and "
            f"moved since; {_count(comments, 'comment is', 'comments are', 'no')} open.")


def _count(count: int, one: str, several: str, nothing: str = "none") -> str:
    """'none are', '1 is', '2 are'."""
    return f"{count or nothing} {one if count == 1 else several}"


def _counts(standing: Standing) -> list[dict[str, Any]]:
    counts = standing.counts
    rows = [{"title": PLURALS[kind], "numbers": [counts[kind][state] for state in STATES]} for kind in counts]
    return [*rows, {"title": "all", "numbers": [sum(column) for column in zip(*(row["numbers"] for row in rows),
                                                                               strict=True)]}]


def _where(ground: Ground, item: Item) -> Markup:
    """The item's number and name, as a link to its place on the sheet."""
    target = item.target
    if item.kind in ("step", "input"):
        name = quantities.symbol(item.name)
        words = Markup("{} {}").format(target.number, name) if target is not None and target.number else name
    else:
        words = Markup("{}").format(item.name)
    if target is None:
        return Markup("{} <span class=\"note\">{}</span>").format(words, GONE_WORDS)
    place = target.number if item.kind == "step" else item.name
    return link(f"figure-{item.name}" if item.kind == "figure" else anchor(item.kind, place), words)


def _comments(ground: Ground, item: Item) -> Iterator[dict[str, Any]]:
    """A row for each mark of an item that says something, with what came of it."""
    history = item.history
    for index, mark in enumerate(history):
        if mark.text:
            following = history[index + 1] if index + 1 < len(history) else None
            # What people wrote stands as they wrote it, with nothing typeset.
            yield {"where": _where(ground, item), "verdict": mark.verdict, "said": _said(mark),
                   "text": mark.text, "answer": mark.answer,
                   "open": item.state == COMMENT and following is None, **_resolution(item, mark, following)}


def _resolution(item: Item, mark: Mark, following: Mark | None) -> dict[str, Any]:
    if following is not None:
        words = "commented again" if following.verdict == COMMENT else following.verdict
        return {"resolution": words, "resolved": _said(following)}
    if mark.verdict == COMMENT:
        return {"resolution": "open", "resolved": ""}
    return {"resolution": "moved since" if item.state == LAPSED else "stands", "resolved": ""}


def _said(mark: Mark) -> Markup:
    """Who said it, when, at which revision, of which number."""
    seen = Markup(", of {}").format(quantities.prose(mark.shown)) if mark.shown else Markup("")
    return Markup("{}, {}, revision {}{}").format(mark.by, mark.date, mark.revision, seen)


def _lapsed(ground: Ground, standing: Standing) -> list[dict[str, Any]]:
    """What moved since it was agreed, by who agreed it; what prints the same number as before by name alone."""
    groups = []
    for words, items in by_agreement(standing.lapsed).items():
        moved = [one for one in items if one.mark is not None and one.mark.shown != one.shown]
        rows = [{"where": _where(ground, one), "then": quantities.prose(one.mark.shown if one.mark else ""),
                 "now": quantities.prose(one.shown)} for one in moved]
        same = [one for one in items if all(one is not other for other in moved)]
        groups.append({"words": words, "rows": rows, "same": _names(standing, same)})
    return groups


def _names(standing: Standing, items: Sequence[Item]) -> list[dict[str, Any]]:
    """The names by kind; of inputs, as symbols."""
    return [{"kind": kind, "names": Markup(", ").join(
        quantities.symbol(name) if kind == PLURALS["input"] else Markup("{}").format(name.replace("-", "–"))
        if kind == PLURALS["step"] else Markup("{}").format(name) for name in names)}
        for kind, names in names_by_kind(standing, items).items()]


def _people(items: Sequence[Item]) -> list[dict[str, Any]]:
    """Who checked: name, marks that stand for an item, first and last day."""
    found: dict[str, list[Mark]] = {}
    for one in items:
        if one.mark is not None:
            found.setdefault(plain_name(one.mark.by), []).append(one.mark)
    rows = []
    for marks in found.values():
        days = sorted(one.date for one in marks)
        rows.append({"name": marks[0].by, "count": len(marks), "first": days[0], "last": days[-1]})
    return rows
