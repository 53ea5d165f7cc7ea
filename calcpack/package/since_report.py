"""What changed of the sheets since a revision to one report: a table of all, then each comparison in full."""
from __future__ import annotations

import json
import textwrap
from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass
from html import escape
from typing import Any

from calcpack.package.since import SheetChange, Since
from calcpack.revisions import differs
from calcpack.revisions.html import article, page
from calcpack.revisions.markdown import as_markdown, code, escaped
from calcpack.revisions.outline import outline
from calcpack.revisions.text import COLUMNS, as_text
from calcpack.units import shown_with_unit

Data = Mapping[str, Any]
HEADS = ("Sheet", "Revision", "Key results", "Limits failing")


@dataclass(frozen=True, slots=True)
class Line:
    """A row of the table: the sheet, its revision, how its key results moved, which limits fail, what is said."""

    number: str
    title: str
    revision: str
    results: tuple[tuple[str, str], ...]
    limits: str
    note: str


def report(found: Since, shape: str) -> str:
    """The report as 'text', 'markdown', 'html' or 'json'; ends with a line end."""
    return FORMATS[shape](found)


def line_of(one: SheetChange) -> Line:
    """The row of the table for one sheet."""
    if one.record is None:
        return Line(one.number, "", "", (), "", f"removed: {one.file}")
    sheet = one.record["sheet"]
    if one.comparison is None:
        note = f"new: {one.file}" if one.kind == "new" else f"not compared, {one.reason}"
        return Line(one.number, sheet["title"], sheet["revision"], _values(one.record), _failing(one.record), note)
    before, now = one.comparison["against"]["revision"], one.comparison["of"]["revision"]
    return Line(one.number, sheet["title"], now if before == now else f"{before} → {now}", _moves(one.comparison),
                _failing(one.record, one.comparison), _note(one))


def _values(record: Data) -> tuple[tuple[str, str], ...]:
    ordered = sorted(record["results"].items(), key=lambda item: item[1].get("order", 0))
    return tuple((symbol, shown_with_unit(one["shown"], one["unit"])
                  + (f" ({one['also_shown']})" if one.get("also_shown") else "")) for symbol, one in ordered)


def _moves(comparison: Data) -> tuple[tuple[str, str], ...]:
    told = []
    for one in comparison["results"]:
        share = f" ({one['change_percent']})" if one.get("change_percent") else ""
        told.append((one["symbol"], f"{one['old'] or 'none'} → {one['new'] or 'none'}{share}"))
    return tuple(told)


def _failing(record: Data, comparison: Data | None = None) -> str:
    """The limits that fail now, and those that did and hold again."""
    limits = record["limits"]
    fail = [one["id"] + (" (waived)" if one.get("waiver") else "") for one in limits if one["status"] == "fails"]
    holds = {one["id"] for one in limits if one["status"] != "fails"}
    again = [one["id"] for one in (comparison or {}).get("limits", ())
             if one["verdict_changed"] and one["id"] in holds and one["kind"] in ("changed", "moved")]
    words = [f"{', '.join(fail)} FAIL{'S' if len(fail) == 1 else ''}"] if fail else \
        [f"none of {len(limits)}" if limits else "no limits"]
    return "; ".join([*words, *([f"{', '.join(again)} hold{'s' if len(again) == 1 else ''} again"] if again else [])])


def _note(one: SheetChange) -> str:
    renamed = f"was {one.was}" if one.was != one.file else ""
    same = "" if differs(one.comparison) else "says the same"
    return "; ".join(word for word in (renamed, same) if word)


def _counts(found: Since) -> str:
    kinds = [one.kind for one in found.sheets]
    words = [f"{kinds.count(kind)} {kind}" for kind in ("changed", "new", "removed", "not compared") if kind in kinds]
    return ", ".join([*words, f"{found.unchanged} unchanged"])


def _title(found: Since) -> str:
    return f"Calculation sheets since {found.revision}"


def _text(found: Since) -> str:
    blocks = [_title(found), f"({found.commit[:12]}) {_counts(found)}"]
    for one in map(line_of, found.sheets):
        blocks += ["", *_lines(one)]
    for one in found.sheets:
        if one.comparison is not None and differs(one.comparison):
            blocks += ["", "=" * COLUMNS, as_text(outline(one.comparison)).rstrip("\n")]
    return "\n".join(blocks) + "\n"


def _lines(one: Line) -> Iterable[str]:
    head = f"{one.number}  {one.title}".rstrip()
    yield from textwrap.wrap(head + (f", revision {one.revision}" if one.revision else ""), COLUMNS,
                             subsequent_indent="    ")
    if one.revision and not one.results:
        yield "    no key result moved"
    wide = max((len(symbol) for symbol, _ in one.results), default=0)
    for symbol, words in one.results:
        yield from textwrap.wrap(words, COLUMNS, initial_indent=f"    {symbol:<{wide}}  ",
                                 subsequent_indent=" " * (wide + 8))
    for words in (f"limits failing: {one.limits}" if one.limits else "", one.note):
        yield from textwrap.wrap(words, COLUMNS, initial_indent="    ", subsequent_indent="        ")


def _markdown(found: Since) -> str:
    blocks = [f"# {escaped(_title(found))}", f"{_counts(found)} (against `{found.commit[:12]}`)."]
    if found.sheets:
        rows = [f"| {' | '.join(HEADS)} |  |", "| --- | --- | --- | --- | --- |"]
        blocks.append("\n".join([*rows, *(_row(line_of(one)) for one in found.sheets)]))
    for one in found.sheets:
        if one.comparison is not None and differs(one.comparison):
            blocks.append(f"<details>\n<summary>{escape(one.number)}: what changed, and why</summary>\n\n"
                          f"{as_markdown(outline(one.comparison), level=2)}\n</details>")
    return "\n\n".join(blocks) + "\n"


def _row(one: Line) -> str:
    results = "<br>".join(f"{code(symbol)} {escaped(words)}" for symbol, words in one.results) or "none moved"
    sheet = f"**{escaped(one.number)}** {escaped(one.title)}".rstrip()
    limits = f"**{escaped(one.limits)}**" if "FAIL" in one.limits else escaped(one.limits)
    return f"| {sheet} | {escaped(one.revision)} | {results if one.revision else ''} | {limits} | {escaped(one.note)} |"


def _html(found: Since) -> str:
    cells = ("<tr>" + "".join(f'<td data-name="{name}">{text}</td>' for name, text in _cells(line_of(one))) + "</tr>"
             for one in found.sheets)
    head = "".join(f'<th scope="col">{name}</th>' for name in (*HEADS, ""))
    body = [f"<h1>{escape(_title(found))}</h1>", f"<p>{escape(_counts(found))} (against {found.commit[:12]})</p>"]
    if found.sheets:
        body.append(f'<div class="wide"><table>\n<thead><tr>{head}</tr></thead>\n<tbody>\n' + "\n".join(cells)
                    + "\n</tbody>\n</table></div>")
    body += [f"<details><summary>{escape(one.number)}: what changed, and why</summary>\n"
             f"{article(outline(one.comparison), level=2)}\n</details>"
             for one in found.sheets if one.comparison is not None and differs(one.comparison)]
    return page(_title(found), body)


def _cells(one: Line) -> Iterable[tuple[str, str]]:
    results = "<br>".join(f"<code>{escape(symbol)}</code> {escape(words)}" for symbol, words in one.results)
    yield "Sheet", f"<b>{escape(one.number)}</b> {escape(one.title)}"
    yield "Revision", escape(one.revision)
    yield "Key results", results or ("none moved" if one.revision else "")
    yield "Limits failing", f"<b>{escape(one.limits)}</b>" if "FAIL" in one.limits else escape(one.limits)
    yield "Note", escape(one.note)


def _json(found: Since) -> str:
    data = {"since": found.revision, "commit": found.commit, "unchanged": found.unchanged,
            "sheets": [{"kind": one.kind, "number": one.number, "file": one.file, "was": one.was,
                        "reason": one.reason, "comparison": one.comparison,
                        "failing": [limit["id"] for limit in (one.record or {}).get("limits", ())
                                    if limit["status"] == "fails"]} for one in found.sheets]}
    return json.dumps(data, ensure_ascii=False, indent=1, sort_keys=True, allow_nan=False) + "\n"


FORMATS: Mapping[str, Callable[[Since], str]] = {"text": _text, "markdown": _markdown, "html": _html, "json": _json}
