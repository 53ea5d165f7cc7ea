"""A formula's tree to the markup of a typeset equation, the same for the HTML and the PDF.

In: trees of :mod:`tree`, and results as printed texts. Out: HTML of short
spans that templates/styles/equation.css draws. Nothing is rounded, reordered
or simplified: what stands in the tree is what is set.
"""
from __future__ import annotations

from collections.abc import Iterator

from calcpack.formula import boxes
from calcpack.formula.boxes import Box
from calcpack.formula.lines import break_lines
from calcpack.formula.nodes import quantity_box, set_node, unit_box
from calcpack.formula.symbols import symbol_box
from calcpack.formula.tree import Node

COLUMN = 44.0
"""Width that an equation may take, [em]: a 170 mm column at 10.5 pt is 45.9 em, less a margin at the left."""

EQUALS = boxes.text("= ")
ROW_GAP = 0.25
"""Room above and below each row, [em]; equation.css has the same."""
SLACK = 0.15
"""How far ink may stand out of its line into that room, [em]."""


def symbol_html(name: str) -> str:
    """A symbol inside running text: ``Q_dot_sink`` as a dotted Q with the subscript 'sink'."""
    return _inline(symbol_box(name).html)


def node_html(node: Node) -> str:
    """A formula or a condition inside running text, on one line."""
    return _inline(set_node(node).html)


def unit_html(unit_symbol: str) -> str:
    """A unit's symbol, upright; the thin space before it is not part of it."""
    return unit_box(unit_symbol).html


def quantity_html(shown: str, unit_symbol: str) -> str:
    """A printed value with its unit, thin space between; ``shown`` may be a word such as 'fails'."""
    html = quantity_box(shown, unit_symbol).html
    return _inline(html) if "<" in html else html


def step_equation_html(symbol: str, formula: Node, numbers: Node | None, result: str, unit: str,
                       also: str | None = None, *, twin: str = "", column: float = COLUMN) -> str:
    """A step as an equation of two or more rows that start at one equals sign.

    Rows are the symbols, the numbers (left out when ``numbers`` is None) and
    the result in bold, with ``also`` (a value and its unit, say '33.00 °C') in brackets behind it.
    A row wider than ``column``, [em], goes on in further rows. ``twin`` is
    the step's MathML from :func:`calcpack.formula.mathml.step_mathml`; with
    it, screen readers get the twin instead of the boxes.
    """
    left = symbol_box(symbol)
    room = column - left.width - EQUALS.width
    rows = list(_equal_rows(formula, room))
    if numbers is not None:
        rows += _equal_rows(numbers, room)
    answer = f"<b>{quantity_box(result, unit).html}</b>"
    twice = f" ({quantity_box(*also.split(' ', 1)).html})" if also else ""
    rows.append(f"<div>= {answer}{twice}</div>")
    hidden = ' aria-hidden="true"' if twin else ""
    return (f'{twin}<div class="equation"{hidden}><div>{left.html}</div>'
            f'<div>{"".join(rows)}</div></div>')


def equation_html(formula: Node, symbol: str | None = None, *, column: float = COLUMN) -> str:
    """One formula on rows of its own, after ``symbol`` and an equals sign where it has one."""
    if symbol is None:
        rows = [_row_html(line) for line in break_lines(formula, column)]
        return f'<div class="equation"><div>{"".join(rows)}</div></div>'
    left = symbol_box(symbol)
    rows = list(_equal_rows(formula, column - left.width - EQUALS.width))
    return f'<div class="equation"><div>{left.html}</div><div>{"".join(rows)}</div></div>'


def _equal_rows(node: Node, room: float) -> Iterator[str]:
    first, *others = break_lines(node, room)
    yield _row_html(boxes.row(EQUALS, first))
    for line in others:
        yield _row_html(line, "more")


def _row_html(line: Box, kind: str = "") -> str:
    """A row, with room for ink that stands above or below its line of text."""
    above = max(0.0, line.top - line.ascent - SLACK)
    below = max(0.0, line.bottom - line.descent - SLACK)
    style = (f' style="padding:{ROW_GAP + above:.2f}em 0 {ROW_GAP + below:.2f}em"'
             if max(above, below) > 0.02 else "")
    return f'<div{f" class={kind}" if kind else ""}{style}>{line.html}</div>'


def _inline(html: str) -> str:
    return f'<span class="math">{html}</span>'
