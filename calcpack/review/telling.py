"""How a check stands to text of 80 columns, and to plain data for JSON."""
from __future__ import annotations

import textwrap
from collections.abc import Callable, Iterator, Sequence
from dataclasses import asdict
from typing import Any

from calcpack.review.marks import ROLES, Mark
from calcpack.review.naming import called
from calcpack.review.standing import LAPSED, MISSING, SIGNED, STATES, UNBOUND, UNMARKED, Item, SignatureState, Standing

WIDTH = 80
STATE_WORDS = {"agreed": "agreed", "corrected": "corrected", "comment": "comment", LAPSED: "moved since",
               UNMARKED: "not checked"}
"""The states in the words of the reader."""

PLURALS = {"limit": "limits", "input": "inputs", "assumption": "assumptions", "step": "steps", "figure": "figures"}
SIGNATURE_WORDS = {SIGNED: "signed, holds", LAPSED: "VOID: the sheet moved after it was signed",
                   UNBOUND: "named in the spec, not signed", MISSING: "not signed"}
GONE_WORDS = "its step is gone"


def standing_text(standing: Standing, title: str, place: str, *, every: bool = False) -> str:
    """What is open, as lines for a terminal; with ``every`` all marks too. ``place`` says where the marks are kept."""
    lines = [f"{standing.number}  {title}", *_wrapped(f"revision {standing.revision}; {place}", 0), "",
             *_counts(standing), ""]
    lines += _section("Open comments", standing.open_comments, _comment)
    lines += _lapsed(standing)
    unmarked = standing.of(UNMARKED)
    if unmarked:
        lines += [f"Not checked ({len(unmarked)})", *_grouped(standing, unmarked, 2), ""]
    if every:
        lines += _section("All marks", [one for one in (*standing.items, *standing.gone) if one.history], _history)
    lines += ["Signatures", *_signatures(standing), ""]
    lines += [line for text in standing.conflicts for line in _wrapped(f"Against the rules: {text}.", 0)]
    return "\n".join([*lines, *_wrapped(open_words(standing), 0)]) + "\n"


def open_words(standing: Standing) -> str:
    """One line: what is open, or that nothing is."""
    if standing.complete:
        return "Nothing is open."
    counts = [(len(standing.open_comments), "comment", "comments"),
              (len(standing.lapsed), "moved since", "moved since"),
              (len(standing.of(UNMARKED)), "not checked", "not checked"),
              (sum(one.state != SIGNED for one in standing.signatures.values()), "signature", "signatures"),
              (len(standing.conflicts), "rule broken", "rules broken")]
    return "Open: " + ", ".join(f"{count} {one if count == 1 else several}" for count, one, several in counts
                                if count) + "."


def was(mark: Mark) -> str:
    """What stood: 'was agreed at revision A by S. Virta, 2026-09-22'."""
    return f"was {mark.verdict} at revision {mark.revision} by {mark.by}, {mark.date}"


def ranges(names: Sequence[str], whole: Sequence[str]) -> list[str]:
    """Names with runs of ``whole`` as first-last; two in a row stay two names."""
    order = {name: index for index, name in enumerate(whole)}
    runs: list[list[str]] = []
    for name in names:
        if runs and order[name] == order[runs[-1][-1]] + 1:
            runs[-1].append(name)
        else:
            runs.append([name])
    return [part for run in runs for part in ([f"{run[0]}-{run[-1]}"] if len(run) > 2 else run)]


def _counts(standing: Standing) -> list[str]:
    heads = [STATE_WORDS[state] for state in STATES]
    counts = standing.counts
    rows = [(PLURALS[kind], [counts[kind][state] for state in STATES]) for kind in counts]
    rows.append(("all", [sum(row[1][index] for row in rows) for index in range(len(STATES))]))
    lines = [f"{'':<12}" + "".join(f"{head:>13}" for head in heads)]
    return lines + [f"{name:<12}" + "".join(f"{count or '-':>13}" for count in row) for name, row in rows]


def _section(title: str, items: Sequence[Item], body: Callable[[Item], Iterator[str]]) -> list[str]:
    if not items:
        return []
    lines = [f"{title} ({len(items)})"]
    for item in items:
        what = item.target.label if item.target is not None else GONE_WORDS
        lines += [*_wrapped(f"{called(item)}  {what}", 2), *body(item)]
    return [*lines, ""]


def _comment(item: Item) -> Iterator[str]:
    if item.mark is not None:
        yield from _said(item.mark, item.shown)


def _said(mark: Mark, now: str | None) -> Iterator[str]:
    seen = f", of {mark.shown}" if mark.shown else ""
    moved = f" (now {now})" if now and mark.shown and now != mark.shown else ""
    yield from _wrapped(f"{mark.verdict}, {mark.by}, {mark.date}, revision {mark.revision}{seen}{moved}", 6)
    if mark.text:
        yield from _wrapped(mark.text, 8)
    if mark.answer is not None:
        yield from _wrapped(f"answer, {mark.answer.by}, {mark.answer.date}", 6)
        yield from _wrapped(mark.answer.text, 8)


def _lapsed(standing: Standing) -> list[str]:
    """What moved since it was agreed, by who agreed it: numbers then and now; the same numbers as ranges."""
    if not standing.lapsed:
        return []
    lines = [f"Moved since they were agreed ({len(standing.lapsed)})"]
    for words, items in by_agreement(standing.lapsed).items():
        lines.append(f"  {words}")
        for item in items:
            if item.mark is not None and item.mark.shown != item.shown:
                lines += _wrapped(f"{called(item):<18} {item.mark.shown or 'none'} → {item.shown or 'none'}", 4)
        same = [one for one in items if one.mark is not None and one.mark.shown == one.shown]
        if same:
            lines += ["    the same number or none, but what they hang on has moved:", *_grouped(standing, same, 4)]
    return [*lines, ""]


def by_agreement(items: Sequence[Item]) -> dict[str, list[Item]]:
    """The items by what stood: 'was agreed at revision A by S. Virta, 2026-09-22, moved since'."""
    found: dict[str, list[Item]] = {}
    for one in items:
        if one.mark is not None:
            found.setdefault(f"{was(one.mark)}, moved since", []).append(one)
    return found


def _history(item: Item) -> Iterator[str]:
    for mark in item.history:
        yield from _said(mark, None)
    if item.state == LAPSED:
        yield from _wrapped(f"moved since, now {item.shown or 'otherwise'}", 6)


def _grouped(standing: Standing, items: Sequence[Item], indent: int) -> list[str]:
    """The names by kind, a line each, in the form in which --agree takes them."""
    return [line for plural, names in names_by_kind(standing, items).items()
            for line in textwrap.wrap(", ".join(names), WIDTH, initial_indent=f"{'':<{indent}}{plural:<13}",
                                      subsequent_indent=" " * (indent + 13), break_long_words=False,
                                      break_on_hyphens=False)]


def names_by_kind(standing: Standing, items: Sequence[Item]) -> dict[str, list[str]]:
    """The names of items by kind, in words; step numbers and ids that follow each other as ranges."""
    found = {}
    for kind, plural in PLURALS.items():
        own = [_short(one) for one in items if one.kind == kind]
        if own:
            whole = [_short(one) for one in standing.items if one.kind == kind]
            found[plural] = ranges(own, whole) if kind in ("step", "limit", "assumption") else own
    return found


def _short(item: Item) -> str:
    return item.target.number or item.name if item.target is not None else item.name


def _signatures(standing: Standing) -> list[str]:
    return [line for role in ROLES for line in _wrapped(_signature(standing.signatures[role]), 2)]


def _signature(one: SignatureState) -> str:
    who = f"{one.name}, {one.date or 'not dated'}: " if one.name else ""
    return f"{one.role:<10}{who}{SIGNATURE_WORDS[one.state]}"


def _wrapped(text: str, indent: int) -> list[str]:
    """The text's own lines, each wrapped to the width behind the indent."""
    edge = " " * indent
    return [line for row in text.splitlines()
            for line in textwrap.wrap(row, WIDTH, initial_indent=edge, subsequent_indent=edge, break_on_hyphens=False)
            or [""]]


def standing_data(standing: Standing) -> dict[str, Any]:
    """The standing as plain data, for scripts."""
    return {"sheet": standing.number, "revision": standing.revision, "record": standing.record,
            "complete": standing.complete, "checked": standing.checked, "counts": standing.counts,
            "items": [_item_data(one) for one in standing.items], "gone": [_item_data(one) for one in standing.gone],
            "signatures": {role: asdict(one) for role, one in standing.signatures.items()},
            "conflicts": list(standing.conflicts)}


def _item_data(item: Item) -> dict[str, Any]:
    target = item.target
    return {"kind": item.kind, "name": item.name, "state": item.state if target is not None else f"gone, {item.state}",
            "number": target.number if target is not None else "", "label": target.label if target is not None else "",
            "identity": target.identity if target is not None else None, "shown": item.shown,
            "marks": [asdict(one) for one in item.history]}
