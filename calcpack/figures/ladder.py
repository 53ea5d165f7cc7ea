"""The ladder of a record to its figure: from the reversible figure, rung by rung, to the net one."""

from __future__ import annotations

import textwrap
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from matplotlib.figure import Figure as Page
from matplotlib.patches import Rectangle
from matplotlib.transforms import IdentityTransform

from calcpack.figures import canvas, marks
from calcpack.figures.figure import Figure
from calcpack.figures.words import GAP, plain

WIDTH_MM = 165.0
NAMES_PT = 178.0
"""Room for the names at the left [pt]."""

ROW_PT = 21.0
BAR_PT = 11.0
EDGE_PT = 3.0
TALL_NAME = 2
FILL = {"total": canvas.ACCENT, "destruction": "#a6a6a6", "loss": "white"}
KEYS = (("total", "power"), ("destruction", "destroyed in equipment"), ("loss", "lost outside it, unused"))


@dataclass(frozen=True, slots=True)
class Bar:
    """One row: from ``low`` to ``high`` in the record's unit; the next row goes on at ``level``."""

    name: str
    text: str
    kind: str
    low: float
    high: float
    level: float


def bars_of(ladder: Mapping[str, Any]) -> tuple[Bar, ...]:
    """The rows of a ladder: the start, a row a rung, the end; lengths in SI."""
    unit, way = ladder["unit"], 1.0 if ladder["upward"] else -1.0
    start, end = ladder["start"], ladder["end"]
    level = start["value"]
    bars = [Bar(start["label"], _text(start, unit), "total", min(level, 0.0), max(level, 0.0), level)]
    for rung in ladder["rungs"]:
        after = level + way * rung["value"]
        bars.append(
            Bar(
                rung["label"],
                f"{_text(rung, unit)} ({_number(rung['share_shown'])})",
                rung["kind"],
                min(level, after),
                max(level, after),
                after,
            )
        )
        level = after
    bars.append(
        Bar(
            end["label"],
            f"{_text(end, unit)} ({_number(end['share_shown'])})",
            "total",
            min(end["value"], 0.0),
            max(end["value"], 0.0),
            level,
        )
    )
    return tuple(bars)


def _number(text: str) -> str:
    return text.replace("-", "\u2212").replace(" ", GAP)


def _text(entry: Mapping[str, Any], unit: str) -> str:
    return _number(f"{entry['shown']} {unit}".strip())


def ladder_figure(ladder: Mapping[str, Any], ident: str) -> Figure:
    """Draw a ladder; rows from the top down, lengths along one scale from zero."""
    bars = bars_of(ladder)
    height_pt = ROW_PT * (len(bars) + 1) + 2 * EDGE_PT
    height_mm = height_pt / canvas.POINTS_PER_MM
    with canvas.settings():
        drawn = canvas.page(WIDTH_MM, height_mm)
        _draw(drawn, bars, height_pt)
        _key(drawn, EDGE_PT + ROW_PT / 2)
        text = canvas.svg_text(drawn, ladder["title"])
    return Figure(ident, ladder["title"], _caption(ladder), _alt(ladder), text, WIDTH_MM, height_mm)


def _draw(drawn: Page, bars: tuple[Bar, ...], height_pt: float) -> None:
    width = WIDTH_MM * canvas.POINTS_PER_MM
    low, high = min(bar.low for bar in bars), max(bar.high for bar in bars)
    # The value stands behind its bar: the scale leaves room for the longest.
    behind = max(marks.extent(bar.text).width for bar in bars) + 10.0
    scale = (width - NAMES_PT - behind - EDGE_PT) / ((high - low) or 1.0)
    tops = [height_pt - EDGE_PT - ROW_PT * (index + 0.5) for index in range(len(bars))]

    def across(value: float) -> float:
        return NAMES_PT + (value - low) * scale

    zero = across(0.0)
    marks.thin_line(drawn, (zero, tops[0] + ROW_PT / 2), (zero, tops[-1] - ROW_PT / 2), 0.6)
    for index, (bar, y, below) in enumerate(zip(bars, tops, [*tops[1:], None], strict=True)):
        _name(drawn, bar.name, y, index)
        _box(drawn, across(bar.low), across(bar.high), y, FILL[bar.kind])
        marks.write(drawn, across(bar.high) + 4.0 + marks.extent(bar.text).width / 2, y, bar.text, gid=f"value-{index}")
        if below is not None:
            marks.thin_line(drawn, (across(bar.level), y - BAR_PT / 2), (across(bar.level), below + BAR_PT / 2), 0.4)


def _name(drawn: Page, name: str, y: float, row: int) -> None:
    lines = broken(name)
    for index, line in enumerate(lines):
        half, up = marks.extent(plain(line)).width / 2, 9.4 * ((len(lines) - 1) / 2 - index)
        marks.write(drawn, EDGE_PT + half, y + up, plain(line), gid=f"name-{row}-{index}")


def broken(name: str) -> list[str]:
    """A name in at most two lines that fit the room for names; the sheet's table has the whole of it."""
    name = name[:1].upper() + name[1:]
    room = NAMES_PT - EDGE_PT - 10.0
    count = len(name) * room / max(marks.extent(plain(name)).width, 1.0)
    while True:
        lines = textwrap.wrap(name, max(8, int(count)), max_lines=TALL_NAME, placeholder=" …", break_on_hyphens=False)
        if count <= 8 or all(marks.extent(plain(line)).width <= room for line in lines):
            return lines
        count -= 1


def _box(drawn: Page, left: float, right: float, y: float, fill: str) -> None:
    drawn.add_artist(
        Rectangle(
            (left, y - BAR_PT / 2),
            # A rung too small for the scale still shows as a line.
            max(right - left, 0.4),
            BAR_PT,
            facecolor=fill,
            edgecolor=canvas.INK,
            linewidth=0.6,
            transform=IdentityTransform(),
            zorder=4,
        )
    )


def _key(drawn: Page, y: float) -> None:
    x = NAMES_PT
    for kind, words in KEYS:
        _box(drawn, x, x + 14.0, y, FILL[kind])
        half = marks.extent(words).width / 2
        marks.write(drawn, x + 18.0 + half, y, words, gid=f"key-{kind}")
        x += 18.0 + 2 * half + 14.0


def _caption(ladder: Mapping[str, Any]) -> str:
    whole = "the power drawn in all" if ladder["upward"] else "the reversible figure"
    return f"Each rung begins where the one above it ends; shares are of {whole}."


def _alt(ladder: Mapping[str, Any]) -> str:
    unit = ladder["unit"]
    rungs = ", ".join(f"{rung['label']} {_text(rung, unit)}" for rung in ladder["rungs"])
    start, end = ladder["start"], ladder["end"]
    return f"{start['label']} {_text(start, unit)}; {rungs}; {end['label']} {_text(end, unit)}."
