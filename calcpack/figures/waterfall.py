"""A comparison's attribution to its figure: each moved result from before to now, one bar a cause.

The results stand side by side over the same causes, each along a scale of its
own: bars show how a move is shared out, the numbers above them how large it is.
"""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from itertools import pairwise
from typing import Any

from matplotlib.figure import Figure as Page
from matplotlib.patches import Rectangle
from matplotlib.transforms import IdentityTransform

from calcpack.figures import canvas, marks
from calcpack.figures.figure import Figure
from calcpack.figures.words import GAP, plain, symbol_text
from calcpack.revisions.share_table import by_result

IDENT, TITLE = "waterfall", "What moved the results"
WIDTH_MM = 165.0
TALLEST_MM = 230.0
"""A figure that would be taller than a page has room for is left out: the table of parts says the same."""

MOST_RESULTS = 6
NAMES_PT = 158.0
LINE_PT = 9.6
HEAD_PT = 24.0
ROW_PT = 25.0
BAR_PT = 8.0
EDGE_PT = 3.0
GAP_PT = 8.0
"""Room beside the bars of a result [pt]."""

NUMBER_PT = 4.6
"""Half the room that a number takes in height [pt]."""

TALL_CAUSE = 4
"""So many lines a cause may take; the table of parts has the whole of it."""

BEFORE_UNIT = re.compile(r"(?<=\d) (?=[^\s(→\d])")
"""The blank between a number and its unit, which stay on one line."""

ARROW = r"$\rightarrow$"
"""The text font has no arrow: it is drawn from the fonts of formulas."""

KEYS = (("up", "raises the result"), ("down", "lowers it"))
FILL = {"up": canvas.ACCENT, "down": "white"}


@dataclass(frozen=True, slots=True)
class Bar:
    """What one cause did to a result: from ``start`` to ``end`` [SI], and the number of print."""

    start: float
    end: float
    number: str


@dataclass(frozen=True, slots=True)
class Fall:
    """A result: its values before and now [SI] as printed in ``unit``, and a bar for each cause or None."""

    symbol: str
    unit: str
    ends: tuple[float, float]
    numbers: tuple[str, str]
    bars: tuple[Bar | None, ...]

    @property
    def levels(self) -> list[float]:
        """Every value that the bars pass through [SI]."""
        return [*self.ends, *(one for bar in self.bars if bar for one in (bar.start, bar.end))]


def waterfall(comparison: Mapping[str, Any] | None) -> Figure | None:
    """The figure of a comparison; None where no result was moved, or too much moved it to be drawn."""
    attributed = list(by_result(comparison or {}).items())[:MOST_RESULTS]
    if not attributed:
        return None
    causes = _causes([one for _, one in attributed])
    with canvas.settings():
        falls = _fitting([_fall(symbol, one, causes) for symbol, one in attributed])
        names = [_lines(text, _symbols(comparison)) for text in causes]
        rows = [ROW_PT, *(max(ROW_PT, LINE_PT * len(lines) + 6.0) for lines in names), ROW_PT]
        height = HEAD_PT + sum(rows) + LINE_PT + 4 * EDGE_PT
        if height / canvas.POINTS_PER_MM > TALLEST_MM:
            return None
        drawn = canvas.page(WIDTH_MM, height / canvas.POINTS_PER_MM)
        ends = [[f"Revision {comparison[key]['revision']}"] for key in ("against", "of")]
        _draw(drawn, falls, [ends[0], *names, ends[1]], rows, height)
        text = canvas.svg_text(drawn, TITLE)
    return Figure(IDENT, TITLE, _caption(len(falls), len(comparison["attribution"])), _alt(falls, causes, comparison),
                  text, WIDTH_MM, height / canvas.POINTS_PER_MM)


def _fitting(falls: Sequence[Fall]) -> Sequence[Fall]:
    """So many results, from the first, as leave each number the room of its column."""
    def crowded(falls: Sequence[Fall]) -> bool:
        numbers = [text for fall in falls for text in (*fall.numbers, fall.unit,
                                                       *(bar.number for bar in fall.bars if bar))]
        return max(marks.extent(text).width for text in numbers) > _room(len(falls)) - 4.0
    while len(falls) > 1 and crowded(falls):
        falls = falls[:-1]
    return falls


def _room(count: int) -> float:
    """The width of one of ``count`` columns [pt]."""
    return (WIDTH_MM * canvas.POINTS_PER_MM - NAMES_PT - EDGE_PT) / count


def _told(one: Mapping[str, Any]) -> list[Mapping[str, Any]]:
    """A result's parts, the program's among them, without those that are nothing."""
    return [part for part in (*one["parts"], one["program"]) if part["number"] != "0"]


def _causes(results: Sequence[Mapping[str, Any]]) -> list[str]:
    """The causes that moved one of the results, in the order in which they were taken."""
    moved = {part["text"] for one in results for part in _told(one)}
    found = dict.fromkeys(part["text"] for one in results for part in one["parts"] if part["text"] in moved)
    return [*found, *dict.fromkeys(one["program"]["text"] for one in results if one["program"]["text"] in moved)]


def _fall(symbol: str, one: Mapping[str, Any], causes: Sequence[str]) -> Fall:
    parts = {part["text"]: part for part in _told(one)}
    level, bars = one["ends"][0]["value"], []
    for text in causes:
        part = parts.get(text)
        bars.append(Bar(level, level + part["part_value"], part["number"]) if part else None)
        level += part["part_value"] if part else 0.0
    old, new = one["ends"]
    return Fall(symbol, one["ends_unit"], (old["value"], new["value"]), (old["number"], new["number"]), tuple(bars))


def _symbols(comparison: Mapping[str, Any]) -> set[str]:
    return {one["symbol"] for key in ("inputs", "formulas") for one in comparison[key]}


def _lines(text: str, symbols: set[str]) -> list[str]:
    """A cause in lines that fit the room for names, with what was edited set as a symbol."""
    lines = [line for piece in text.split("; ") for line in _wrapped(list(_words(piece, symbols)))]
    return lines if len(lines) <= TALL_CAUSE else [*lines[:TALL_CAUSE - 1], lines[TALL_CAUSE - 1] + " …"]


def _words(piece: str, symbols: set[str]) -> Iterator[str]:
    """The words of an edit; its name before the colon is one of them, set as a symbol where it is one."""
    name, colon, rest = piece.partition(": ")
    if not colon:
        name, rest = "", piece
    else:
        yield f"{symbol_text(name) if name in symbols else plain(name)}:"
    for word in BEFORE_UNIT.sub(GAP, rest.replace("-", "\u2212" if name in symbols else "-")).split(" "):
        yield ARROW if word == "→" else plain(word)


def _wrapped(words: Sequence[str]) -> list[str]:
    room, lines = NAMES_PT - EDGE_PT - 10.0, [""]
    for word in words:
        longer = f"{lines[-1]} {word}".strip()
        if lines[-1] and marks.extent(longer).width > room - marks.extent(" …").width:
            lines.append(_cut(word, room))
        else:
            lines[-1] = _cut(longer, room)
    return lines


def _cut(line: str, room: float) -> str:
    """A line without a blank that is wider than the room, cut; a symbol is never cut."""
    if line.startswith("$") or marks.extent(line).width <= room - marks.extent(" …").width:
        return line
    while marks.extent(f"{line}…").width > room - marks.extent(" …").width:
        line = line[:-1]
    return f"{line}…"


def _draw(drawn: Page, falls: Sequence[Fall], names: Sequence[Sequence[str]], rows: Sequence[float],
          height: float) -> None:
    tops = [height - EDGE_PT - HEAD_PT - sum(rows[:at]) for at in range(len(rows) + 1)]
    width = WIDTH_MM * canvas.POINTS_PER_MM
    room = _room(len(falls))
    for at, lines in enumerate(names):
        _name(drawn, lines, (tops[at] + tops[at + 1]) / 2, at)
    for at in (0, 1, len(rows) - 1):
        marks.thin_line(drawn, (EDGE_PT, tops[at]), (width - EDGE_PT, tops[at]), 0.6 if at == 0 else 0.3)
    middles = [(top + below) / 2 for top, below in pairwise(tops)]
    for at, fall in enumerate(falls):
        left = NAMES_PT + at * room
        marks.write(drawn, left + room / 2, tops[0] + 17.0, symbol_text(fall.symbol), gid=f"result-{at}")
        marks.write(drawn, left + room / 2, tops[0] + 6.0, fall.unit, gid=f"unit-{at}", ink=canvas.SOFT)
        _result(drawn, fall, (left + GAP_PT, left + room - GAP_PT), middles, at)
    _key(drawn, EDGE_PT + LINE_PT / 2 + 1.0)


def _name(drawn: Page, lines: Sequence[str], middle: float, row: int) -> None:
    for at, line in enumerate(lines):
        up = LINE_PT * ((len(lines) - 1) / 2 - at)
        marks.write(drawn, EDGE_PT + marks.extent(line).width / 2, middle + up, line, gid=f"cause-{row}-{at}")


def _result(drawn: Page, fall: Fall, span: tuple[float, float], middles: Sequence[float], column: int) -> None:
    """One result from the top down: its value before, the bars, its value now; a line leads on from each."""
    low, high = min(fall.levels), max(fall.levels)
    scale = (span[1] - span[0]) / ((high - low) or 1.0)

    def across(value: float) -> float:
        return span[0] + (value - low) * scale

    def number(row: int, text: str) -> None:
        marks.write(drawn, sum(span) / 2, middles[row] + 6.0, text.replace("-", "\u2212"), gid=f"number-{column}-{row}")

    def hidden(text: str, x: float) -> bool:
        return abs(x - sum(span) / 2) < marks.extent(text).width / 2 + 2.0

    last = len(middles) - 1
    above, x = 0, across(fall.ends[0])
    number(0, fall.numbers[0])
    _end(drawn, x, middles[0])
    for row, bar in enumerate(fall.bars, start=1):
        if bar is not None:
            number(row, bar.number)
            _lead(drawn, x, middles[above], middles[row], hidden(bar.number, x))
            _box(drawn, across(bar.start), across(bar.end), middles[row] - 6.0, "up" if bar.end > bar.start else "down")
            above, x = row, across(bar.end)
    number(last, fall.numbers[1])
    _lead(drawn, x, middles[above], middles[last], hidden(fall.numbers[1], x))
    _end(drawn, across(fall.ends[1]), middles[last])


def _lead(drawn: Page, x: float, above: float, below: float, hidden: bool) -> None:
    """A fine line from where a bar ends down to where the next begins; where it meets a number it stops short."""
    stretches = [(above - 6.0, below - 6.0)]
    if hidden:
        stretches = [(above - 6.0, below + 6.0 + NUMBER_PT), (below + 6.0 - NUMBER_PT, below - 6.0)]
    for high, low in stretches:
        drawn.add_artist(Rectangle((x - 0.15, low), 0.3, high - low, facecolor=canvas.SOFT, edgecolor="none",
                                   transform=IdentityTransform(), zorder=3))


def _end(drawn: Page, x: float, middle: float) -> None:
    """Where a result stands before all bars and after them: a stroke as tall as a bar."""
    y = middle - 6.0
    marks.thin_line(drawn, (x, y - BAR_PT / 2), (x, y + BAR_PT / 2), 2.2)


def _box(drawn: Page, start: float, end: float, y: float, kind: str) -> None:
    left, right = sorted((start, end))
    # A part too small for the scale still shows as a line.
    drawn.add_artist(Rectangle((left, y - BAR_PT / 2), max(right - left, 0.4), BAR_PT, facecolor=FILL[kind],
                               edgecolor=canvas.INK, linewidth=0.6, transform=IdentityTransform(), zorder=5))


def _key(drawn: Page, y: float) -> None:
    x = NAMES_PT + GAP_PT
    for kind, words in KEYS:
        _box(drawn, x, x + 14.0, y, kind)
        half = marks.extent(words).width / 2
        marks.write(drawn, x + 18.0 + half, y, words, gid=f"key-{kind}")
        x += 18.0 + 2 * half + 14.0


def _caption(drawn: int, moved: int) -> str:
    first = f"The first {drawn} of {moved} results that moved. " if drawn < moved else ""
    return first + "Each result has a scale of its own, which does not begin at zero; the numbers are those of the " \
                   "table of parts. What moved none of these results is left out."


def _alt(falls: Sequence[Fall], causes: Sequence[str], comparison: Mapping[str, Any]) -> str:
    told = []
    for fall in falls:
        unit = f" {fall.unit}" if fall.unit else ""
        parts = "; ".join(f"{bar.number} by {cause.partition(':')[0]}"
                          for bar, cause in zip(fall.bars, causes, strict=True) if bar)
        told.append(f"{fall.symbol} from {fall.numbers[0]} to {fall.numbers[1]}{unit}: {parts}")
    return f"Revision {comparison['against']['revision']} to {comparison['of']['revision']}. " + ". ".join(told) + "."
