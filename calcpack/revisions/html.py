"""An outline to one small HTML page that needs no other file."""
from __future__ import annotations

import re
from collections.abc import Sequence
from html import escape

from calcpack.revisions.outline import Outline, Part, Row
from calcpack.revisions.share_table import HEADING, TOGETHER, ShareTable

_FOLDED = "Values that moved"
_CODE = ("Formulas and steps",)
_MINUS = re.compile(r"(?<![\w.])-(?=\d)")

STYLE = """
:root { color-scheme: light; }
body { font: 16px/1.45 "STIX Two Text", Georgia, serif; color: #1a1a1a; background: #fff;
       max-width: 62rem; margin: 2rem auto; padding: 0 1rem; }
h1 { font-size: 1.5rem; margin: 0 0 .25rem; } h2, h3 { font-size: 1.1rem; margin: 1.75rem 0 .4rem; }
p { margin: .25rem 0; } .summary { margin-top: 1rem; padding: .6rem .8rem; border: 1px solid #888; }
.wide { overflow-x: auto; } table { border-collapse: collapse; width: 100%; font-variant-numeric: tabular-nums; }
th, td { text-align: left; vertical-align: top; padding: .3rem .6rem .3rem 0; border-bottom: 1px solid #ccc; }
thead th { border-bottom: 1.5px solid #333; font-weight: 600; }
tbody th { font-weight: normal; } tbody th code { font-weight: 600; }
td.value { min-width: 8rem; } td.change { white-space: nowrap; } code { font-size: .9em; overflow-wrap: anywhere; }
.because { display: block; color: #444; font-size: .9em; padding-left: 1rem; } summary { cursor: pointer; }
tr { break-inside: avoid; } thead { display: table-header-group; }
@media (max-width: 40rem) {
  table, tbody, tr, th, td { display: block; } thead { display: none; }
  tr { border-bottom: 1px solid #ccc; padding: .3rem 0; } th, td { border: 0; padding: .1rem 0; }
  td::before { content: attr(data-name) "  "; color: #555; font-size: .9em; } td:empty { display: none; }
}
""".strip()


def as_html(outline: Outline) -> str:
    """The comparison as a page of its own; all text of the sheets is escaped."""
    return page(f"{outline.title}: {outline.compared}", [article(outline)])


def page(title: str, body: Sequence[str]) -> str:
    """Pieces of HTML as a page that needs no other file; ``title`` is plain text."""
    head = f'<meta charset="utf-8">\n<meta name="viewport" content="width=device-width, initial-scale=1">\n' \
           f"<title>{escape(title)}</title>\n<style>\n{STYLE}\n</style>"
    return f'<!DOCTYPE html>\n<html lang="en">\n<head>\n{head}\n</head>\n<body>\n' + "\n".join(body) \
        + "\n</body>\n</html>\n"


def article(outline: Outline, level: int = 1) -> str:
    """The comparison as a piece of a page, its title a heading of that ``level``."""
    return "\n".join([f"<h{level}>{escape(outline.title)}</h{level}>", f"<p>{escape(outline.compared)}</p>",
                      *(f"<p>{escape(note)}</p>" for note in outline.notes),
                      f'<p class="summary">{escape(outline.summary)}</p>',
                      *(_part(part, level + 1) for part in outline.parts)])


def _part(part: Part, level: int) -> str:
    changes = any(row.change for row in part.rows)
    head = "".join(f'<th scope="col">{name}</th>' for name in
                   ("What", "Old", "New", *(["Change"] if changes else [])))
    rows = "\n".join(_row(row, changes, part.heading in _CODE) for row in part.rows)
    table = f'<div class="wide"><table>\n<thead><tr>{head}</tr></thead>\n<tbody>\n{rows}\n</tbody>\n</table></div>'
    if part.heading == _FOLDED:
        table = f"<details><summary>{len(part.rows)} in all</summary>\n{table}\n</details>"
    shares = _shares(part.shares) if part.shares else ""
    return f"<section>\n<h{level}>{escape(part.heading)}</h{level}>\n{table}\n{shares}</section>"


def _shares(table: ShareTable) -> str:
    """A row a cause, a column a result."""
    notes = "".join(f"<p>{_text(note)}</p>\n" for note in table.notes)
    if not table.columns:
        return notes
    head = "".join(f'<th scope="col"><code>{escape(column.symbol)}</code> {escape(column.unit)}</th>'
                   for column in table.columns)
    rows = [(text, [number or "–" for number in numbers]) for text, numbers in table.rows]
    rows.append((TOGETHER, [column.whole for column in table.columns]))
    body = "\n".join(f'<tr><th scope="row">{_text(text)}</th>' + "".join(
        f'<td class="change" data-name="{escape(column.symbol)}">{_text(number)}</td>'
        for column, number in zip(table.columns, numbers, strict=True)) + "</tr>" for text, numbers in rows)
    return f'<div class="wide"><table>\n<thead><tr><th scope="col">{HEADING}</th>{head}</tr></thead>\n' \
           f"<tbody>\n{body}\n</tbody>\n</table></div>\n{notes}"


def _row(row: Row, changes: bool, formulas: bool) -> str:
    because = "".join(f'<span class="because">{"follows from" if not at else "and from"} {_text(cause)}</span>'
                      for at, cause in enumerate(row.because))
    sides = "".join(f'<td class="value" data-name="{name}">{_side(text, formulas)}</td>'
                    for name, text in (("Old", row.old), ("New", row.new)))
    change = f'<td class="change" data-name="Change">{_text(row.change)}</td>' if changes else ""
    return f'<tr><th scope="row"><code>{escape(row.name)}</code> {escape(row.title)}{because}</th>{sides}{change}</tr>'


def _side(text: str | None, formulas: bool) -> str:
    if text is None:
        return "–"
    return f"<code>{escape(text)}</code>" if formulas else _text(text)


def _text(text: str) -> str:
    """Escaped, with the minus sign of print before numbers."""
    return escape(_MINUS.sub("−", text))
