"""One diagram of the record to a T–s, log p–h, p–V or T–S figure with numbered states."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure as Page
from matplotlib.ticker import AutoMinorLocator, FuncFormatter, LogLocator, MaxNLocator, NullFormatter

from calcpack.figures import canvas, marks
from calcpack.figures.figure import Figure
from calcpack.figures.placing import Box, Room, around
from calcpack.figures.words import axis_text, quantity_text

LEAST_SHARE = 0.42
"""The cycle takes at least this much of the height; a taller dome is cut off."""


def property_diagram(
    record: Mapping[str, Any], diagram: Mapping[str, Any], ident: str, width_mm: float
) -> Figure:
    """Draw ``diagram``; its lines are in print units already."""
    height_mm = 34.0 + 0.4 * width_mm
    title = diagram["title"].replace("-s ", "–s ").replace("p-", "p–").replace("T-S", "T–S")
    with canvas.settings():
        drawn = canvas.page(width_mm, height_mm, layout="constrained")
        axes = drawn.add_subplot()
        _frame(axes, diagram)
        _lines(axes, diagram)
        canvas.settle_layout(drawn)
        _labels(drawn, axes, diagram)
        text = canvas.svg_text(drawn, title)
    return Figure(ident, title, _caption(diagram), _alt(record, diagram, title), text, width_mm, height_mm)


def _letters(diagram: Mapping[str, Any]) -> tuple[str, str]:
    """The letters of the axes as the kind writes them: 'log p-h' has h across and p up."""
    up, _, across = diagram["kind"].removeprefix("log ").partition("-")
    return across or diagram["x"]["quantity"], up or diagram["y"]["quantity"]


def is_logarithmic(diagram: Mapping[str, Any]) -> bool:
    """Whether the vertical axis is logarithmic."""
    return diagram["kind"].startswith("log ")


def _frame(axes: Axes, diagram: Mapping[str, Any]) -> None:
    across, up = _letters(diagram)
    axes.set_xlabel(axis_text(across, diagram["x"]["unit"]))
    axes.set_ylabel(axis_text(up, diagram["y"]["unit"]))
    (left, right), (low, high) = limits(diagram)
    axes.set_xlim(left, right)
    axes.xaxis.set_major_locator(MaxNLocator(6, steps=[1, 2, 2.5, 5, 10]))
    axes.xaxis.set_minor_locator(AutoMinorLocator())
    if is_logarithmic(diagram):
        axes.set_yscale("log")
        _log_ticks(axes, low, high)
    else:
        axes.yaxis.set_major_locator(MaxNLocator(6, steps=[1, 2, 2.5, 5, 10]))
        axes.yaxis.set_minor_locator(AutoMinorLocator())
    axes.set_ylim(low, high)
    axes.grid(True)


def _log_ticks(axes: Axes, low: float, high: float) -> None:
    """Written ticks at 1, 2 and 5 of each decade; at every digit over less than half a decade."""
    decades = np.log10(high / low)
    written = (1, 2, 3, 4, 5, 6, 8) if decades < 0.7 else (1, 2, 5) if decades < 3.0 else (1,)
    axes.yaxis.set_major_locator(LogLocator(subs=written, numticks=30))
    axes.yaxis.set_major_formatter(FuncFormatter(lambda value, _: f"{value:g}"))
    axes.yaxis.set_minor_locator(LogLocator(subs=tuple(range(1, 10)), numticks=60))
    axes.yaxis.set_minor_formatter(NullFormatter())


def limits(diagram: Mapping[str, Any]) -> tuple[tuple[float, float], tuple[float, float]]:
    """Ends of both axes: all of the cycle, and of the dome what leaves the cycle large enough to read."""
    scale, back = (np.log10, lambda v: 10.0**v) if is_logarithmic(diagram) else (np.asarray, lambda v: v)
    xs, ys = (
        np.concatenate(
            [np.asarray(path[key], dtype=float) for path in diagram["paths"]]
            + [np.array([point[key] for point in diagram["points"]], dtype=float)]
        )
        for key in ("x", "y")
    )
    ys = scale(ys)
    low, high = float(ys.min()), float(ys.max())
    foot = np.inf
    if diagram["dome"]:
        dome_x, dome_y = np.asarray(diagram["dome"]["x"]), scale(np.asarray(diagram["dome"]["y"]))
        room = (high - low) / LEAST_SHARE
        top = min(max(high, float(dome_y.max())), low + room * 0.9)
        foot = max(float(dome_y.min()), top - room)
        high = top
        seen = dome_x[(dome_y >= min(low, foot)) & (dome_y <= high)]
        xs = np.concatenate([xs, seen])
    across, up = (float(np.ptp(xs)) or abs(float(xs[0])) or 1.0), (high - low) or abs(high) or 1.0
    # The dome runs out of the frame at the bottom where the record's lines go far enough below the cycle.
    bottom = foot if foot < low - 0.08 * up else low - 0.1 * up
    return (
        (float(xs.min()) - 0.07 * across, float(xs.max()) + 0.07 * across),
        (float(back(bottom)), float(back(high + 0.09 * up))),
    )


def _lines(axes: Axes, diagram: Mapping[str, Any]) -> None:
    if diagram["dome"]:
        axes.plot(diagram["dome"]["x"], diagram["dome"]["y"], color=canvas.SOFT, linewidth=0.9, gid="dome")
    for path in diagram["paths"]:
        dashed = path["style"] == "dashed"
        axes.plot(
            path["x"],
            path["y"],
            color=canvas.ACCENT,
            linewidth=1.4,
            solid_capstyle="round",
            linestyle=canvas.JOIN_DASHES if dashed else "-",
            gid=f"path-{path['from']}-{path['to']}",
            zorder=3,
        )


def _labels(drawn: Page, axes: Axes, diagram: Mapping[str, Any]) -> None:
    """Direction heads on the paths, a dot at every state and its number beside it."""
    to_page = axes.transData.transform
    frame = axes.bbox
    room = Room(
        Box((frame.x0 + frame.x1) / 2, (frame.y0 + frame.y1) / 2, frame.width / 2 - 1, frame.height / 2 - 1)
    )
    if diagram["dome"]:
        room.add_line(to_page(np.column_stack([diagram["dome"]["x"], diagram["dome"]["y"]])))
    for path in diagram["paths"]:
        points = to_page(np.column_stack([path["x"], path["y"]]))
        room.add_line(points)
        _direction(drawn, points, room)
    spots = {point["label"]: to_page((point["x"], point["y"])) for point in diagram["points"]}
    for x, y in spots.values():
        room.boxes.append(Box(x, y, 1.6, 1.6))
    axes.plot(
        [point["x"] for point in diagram["points"]],
        [point["y"] for point in diagram["points"]],
        "o",
        color=canvas.INK,
        markersize=3.2,
        zorder=4,
        gid="states",
    )
    for label in _crowded_first(spots):
        _number_state(drawn, room, label, spots)


def _direction(drawn: Page, points: np.ndarray, room: Room) -> None:
    """A head half-way along a path that is long enough to carry one."""
    lengths = np.concatenate([[0.0], np.cumsum(np.hypot(*np.diff(points, axis=0).T))])
    if lengths[-1] < 22.0:
        return
    half = lengths[-1] / 2.0 + 2.5
    tip, before = (
        [float(np.interp(at, lengths, points[:, axis])) for axis in (0, 1)] for at in (half, half - 5.0)
    )
    marks.arrow_head(drawn, tip, (tip[0] - before[0], tip[1] - before[1]), length=6.0, ink=canvas.ACCENT)
    room.boxes.append(Box((tip[0] + before[0]) / 2, (tip[1] + before[1]) / 2, 2.5, 2.5))


def _neighbour(label: str, spots: Mapping[str, np.ndarray]) -> tuple[float, np.ndarray]:
    """Distance to the nearest other state [pt], and where that lies."""
    others = [spot for other, spot in spots.items() if other != label] or [spots[label]]
    return min(((float(np.hypot(*(spots[label] - spot))), spot) for spot in others), key=lambda pair: pair[0])


def _crowded_first(spots: Mapping[str, np.ndarray]) -> Sequence[str]:
    """States with near neighbours choose their places first."""
    return sorted(spots, key=lambda label: (round(_neighbour(label, spots)[0], 1), label))


def _turn_from(label: str, spots: Mapping[str, np.ndarray]) -> tuple[float, float]:
    """What a number keeps away from: the dot of a close neighbour, else the middle of the cycle."""
    distance, spot = _neighbour(label, spots)
    x, y = spot if 0.0 < distance < 2.0 * marks.ROUND else np.mean(list(spots.values()), axis=0)
    return float(x), float(y)


def _number_state(drawn: Page, room: Room, label: str, spots: Mapping[str, np.ndarray]) -> None:
    """A state's number in a circle near its dot, with a leader where it had to go further off."""
    half = marks.half_width(label)
    x, y = (float(value) for value in spots[label])
    place = room.settle(around(x, y, half, marks.ROUND, away_from=_turn_from(label, spots))).box
    if np.hypot(place.x - x, place.y - y) > half + 4.0:
        marks.thin_line(drawn, (x, y), (place.x, place.y), 0.4)
    marks.circle(drawn, place.x, place.y, label)


def _caption(diagram: Mapping[str, Any]) -> str:
    styles = {path["style"] for path in diagram["paths"]}
    pieces = ["Circled numbers are the states of the state table."]
    if diagram["dome"]:
        pieces.append("Grey: boiling and dew line.")
    if "dashed" in styles:
        pieces.append(
            "Solid: course as calculated. "
            "Dashed: joins two states, the course between them is not calculated."
        )
    return " ".join(pieces)


def _alt(record: Mapping[str, Any], diagram: Mapping[str, Any], title: str) -> str:
    """What the picture shows, with the states' numbers as the sheet prints them."""
    table = {state["number"]: state for state in record["states"]}
    across, up = _letters(diagram)
    wanted = [(letter, _column(letter), diagram[axis]["unit"]) for letter, axis in ((up, "y"), (across, "x"))]
    states = []
    for point in diagram["points"]:
        state = table.get(point["label"], {})
        values = [
            f"{letter} = {_in_unit(state[key], unit_symbol)}"
            for letter, key, unit_symbol in wanted
            if state.get(key)
        ]
        states.append(
            f"state {point['label']}"
            + (f" ({state['label']})" if state.get("label") else "")
            + (": " + ", ".join(values) if values else "")
        )
    paths = ", ".join(f"{path['from']} to {path['to']}" for path in diagram["paths"])
    dome = " under and beside the saturation dome" if diagram["dome"] else ""
    return f"{title}: lines {paths}{dome}. " + "; ".join(states) + "."


def _column(letter: str) -> str:
    """The state table keeps an entropy as s and a volume as v, whether specific or not."""
    return letter.lower() if letter in ("S", "V") else letter


def _in_unit(quantity: Mapping[str, Any], unit_symbol: str) -> str:
    """A state's number as printed, in the axis's unit where the sheet prints it so."""
    if quantity["unit"] == unit_symbol:
        return quantity_text({**quantity, "also_shown": None})
    return quantity_text(quantity)
