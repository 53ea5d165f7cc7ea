"""One exchanger of the record to its temperatures against the heat exchanged, with zones and pinch."""

from __future__ import annotations

import textwrap
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure as Page
from matplotlib.ticker import AutoMinorLocator, MaxNLocator

from calcpack.figures import canvas, marks
from calcpack.figures.figure import Figure
from calcpack.figures.placing import Box, Candidate, Room, around
from calcpack.figures.words import axis_text, fluid_name, plain, quantity_text, symbol_text
from calcpack.units import unit

SHORT_GAP = 13.0
"""Below this many points between the lines the pinch is marked by arrows from outside."""


@dataclass(frozen=True, slots=True)
class Profile:
    """An exchanger in print units: heat flow ``q``, temperatures, and who the two lines are."""

    q: np.ndarray
    hot: np.ndarray
    cold: np.ndarray
    zones: tuple[tuple[str, float, float], ...]
    hot_name: str
    cold_name: str
    stream_is: str  # 'hot', 'cold' or '' where neither line is a secondary stream
    q_unit: str
    t_unit: str


def profile_of(record: Mapping[str, Any], exchanger: Mapping[str, Any]) -> Profile:
    """The rows of an exchanger in the units of the sheet."""
    us = record["sheet"]["units"] == "us"
    heat, level = unit("kBtu/h" if us else "kW"), unit("degF" if us else "degC")
    rows = sorted(exchanger["rows"], key=lambda row: row["q_share"])
    q, hot, cold = (
        np.array([to.from_si(row[key]) for row in rows])
        for key, to in (("Q_W", heat), ("T_hot_K", level), ("T_cold_K", level))
    )
    hot_name, cold_name, stream_is = _sides(record, exchanger)
    return Profile(q, hot, cold, _zones(rows, q), hot_name, cold_name, stream_is, heat.symbol, level.symbol)


def _sides(record: Mapping[str, Any], exchanger: Mapping[str, Any]) -> tuple[str, str, str]:
    """Names of the hot and the cold side, and which of them is the stream that heats or cools."""
    roles = exchanger.get("hot_role"), exchanger.get("cold_role")
    known = {stream["role"]: stream for stream in record["streams"]}
    if all(roles) and any(role in known for role in roles):
        names = [_side_name(record, known, role) for role in roles]
        return names[0], names[1], "hot" if roles[0] in known else "cold"
    stream = next(
        (
            one
            for one in record["streams"]
            if one["Q_dot"] and exchanger["Q_dot"] and one["Q_dot"]["symbol"] == exchanger["Q_dot"]["symbol"]
        ),
        None,
    )
    if stream is None:
        return "hot side", "cold side", ""
    names = (
        f"{stream['name'].lower()}, {stream['designation']}",
        fluid_name(record, "wf") or "working fluid",
    )
    gives = stream["T_in"]["value"] > stream["T_out"]["value"]
    return (*names, "hot") if gives else (names[1], names[0], "cold")


def _side_name(record: Mapping[str, Any], streams: Mapping[str, Mapping[str, Any]], role: str) -> str:
    if role in streams:
        return f"{streams[role]['name'].lower()}, {streams[role]['designation']}"
    return fluid_name(record, role) or "working fluid"


def _zones(rows: Sequence[Mapping[str, Any]], q: np.ndarray) -> tuple[tuple[str, float, float], ...]:
    """Name, start and end of each zone; a row's label is the zone's name, a comma and where in it."""
    zones: list[tuple[str, float, float]] = []
    start = float(q[0])
    names = [row["label"].rsplit(",", 1)[0] for row in rows]
    for index, name in enumerate(names):
        if index + 1 == len(names) or names[index + 1] != name:
            end = float(q[index])
            if end > start:
                zones.append((name, start, end))
            start = end
    return tuple(zones)


def exchanger_profile(
    record: Mapping[str, Any], exchanger: Mapping[str, Any], ident: str, width_mm: float
) -> Figure:
    """Draw the temperatures of one exchanger."""
    height_mm = 34.0 + 0.4 * width_mm
    profile = profile_of(record, exchanger)
    title = f"{exchanger['title']}: temperatures against heat exchanged"
    with canvas.settings():
        drawn = canvas.page(width_mm, height_mm, layout="constrained")
        axes = drawn.add_subplot()
        _frame(axes, profile)
        canvas.settle_layout(drawn)
        _labels(drawn, axes, profile, exchanger)
        text = canvas.svg_text(drawn, title)
    return Figure(ident, title, _caption(profile), _alt(profile, exchanger), text, width_mm, height_mm)


def _frame(axes: Axes, profile: Profile) -> None:
    axes.set_xlabel(axis_text("Q_dot", profile.q_unit))
    axes.set_ylabel(axis_text("T", profile.t_unit))
    low, high = (
        float(min(profile.hot.min(), profile.cold.min())),
        float(max(profile.hot.max(), profile.cold.max())),
    )
    across, up = float(np.ptp(profile.q)) or 1.0, (high - low) or 1.0
    axes.set_xlim(float(profile.q[0]) - 0.05 * across, float(profile.q[-1]) + 0.05 * across)
    # The strip at the top is for the names of the zones.
    axes.set_ylim(low - 0.14 * up, high + 0.16 * up)
    for axis in (axes.xaxis, axes.yaxis):
        axis.set_major_locator(MaxNLocator(6, steps=[1, 2, 2.5, 5, 10]))
        axis.set_minor_locator(AutoMinorLocator())
    axes.grid(True)
    for side in ("hot", "cold"):
        stream = profile.stream_is == side
        axes.plot(
            profile.q,
            getattr(profile, side),
            color=canvas.INK if stream else canvas.ACCENT,
            linewidth=1.4,
            linestyle=canvas.STREAM_DASHES if stream else "-",
            solid_capstyle="round",
            gid=side,
            zorder=3,
        )
    for _, start, end in profile.zones:
        for edge in (start, end):
            axes.axvline(edge, color=canvas.SOFT, linewidth=0.4, zorder=1)


def _labels(drawn: Page, axes: Axes, profile: Profile, exchanger: Mapping[str, Any]) -> None:
    frame = axes.bbox
    room = Room(
        Box((frame.x0 + frame.x1) / 2, (frame.y0 + frame.y1) / 2, frame.width / 2 - 2, frame.height / 2 - 2)
    )
    lines = {
        side: axes.transData.transform(np.column_stack([profile.q, getattr(profile, side)]))
        for side in ("hot", "cold")
    }
    for points in lines.values():
        room.add_line(points)
    _zone_names(drawn, axes, profile, room)
    _pinch(drawn, lines, exchanger, room)
    for side, name, way in (("hot", profile.hot_name, -1.0), ("cold", profile.cold_name, 1.0)):
        _line_name(drawn, lines[side], name, way, above=side == "hot", room=room)


def _zone_names(drawn: Page, axes: Axes, profile: Profile, room: Room) -> None:
    """Names between the zones' edges: along the top where they fit, else upright, else left to the caption."""
    for name, start, end in profile.zones:
        left, right = (float(axes.transData.transform((edge, 0.0))[0]) for edge in (start, end))
        length = marks.extent(plain(name)).width
        turned = length + 4.0 > right - left
        box = (
            _upright_place(room, axes, (left, right), length)
            if turned
            else Box((left + right) / 2.0, axes.bbox.y1 - 7.0, length / 2 + 1, 4.0)
        )
        if box is None:
            continue
        marks.write(drawn, box.x, box.y, plain(name), turned=turned, ink=canvas.SOFT)
        room.boxes.append(box)
        for edge in (left, right):
            room.add_line([(edge, axes.bbox.y0), (edge, axes.bbox.y1)])


def _upright_place(room: Room, axes: Axes, edges: tuple[float, float], length: float) -> Box | None:
    """A place for an upright name, the highest that hides no line; None in a zone too narrow or too full."""
    if edges[1] - edges[0] < 8.5:
        return None
    low, high = axes.bbox.y0 + length / 2 + 4.0, axes.bbox.y1 - length / 2 - 4.0
    places = (Box(sum(edges) / 2.0, float(y), 4.0, length / 2 + 1) for y in np.linspace(high, low, 24))
    return next((box for box in places if room.cost(Candidate(box)) == 0.0), None)


def _pinch(drawn: Page, lines: Mapping[str, np.ndarray], exchanger: Mapping[str, Any], room: Room) -> None:
    """A pair of arrows across the smallest gap and its value as the record prints it."""
    row = exchanger["pinch"]["row"]
    x, upper, lower = float(lines["hot"][row, 0]), float(lines["hot"][row, 1]), float(lines["cold"][row, 1])
    reach = 9.0 if upper - lower < SHORT_GAP else 0.0
    if reach:
        for tip, way in ((upper, -1.0), (lower, 1.0)):
            marks.thin_line(drawn, (x, tip - way * reach), (x, tip - way * 3.0), 0.7)
            marks.arrow_head(drawn, (x, tip), (0.0, way), length=4.5)
    else:
        marks.thin_line(drawn, (x, lower + 3.0), (x, upper - 3.0), 0.7)
        marks.arrow_head(drawn, (x, upper), (0.0, 1.0), length=4.5)
        marks.arrow_head(drawn, (x, lower), (0.0, -1.0), length=4.5)
    room.boxes.append(Box(x, (upper + lower) / 2, 2.0, (upper - lower) / 2 + reach))
    text = pinch_text(exchanger)
    half = marks.extent(text).width / 2 + 2.0
    middle = (x, (upper + lower) / 2)
    place = room.settle(_beside(middle, half, (upper - lower) / 2 + reach)).box
    if abs(place.x - x) > half + 8.0:
        marks.thin_line(drawn, middle, (place.x - np.sign(place.x - x) * half, place.y), 0.4)
    marks.write(drawn, place.x, place.y, text, gid="pinch")


def _beside(spot: tuple[float, float], half: float, tall: float) -> list[Candidate]:
    """Places for the value: at the arrows' own height left or right, then above, below and further off."""
    x, y = spot
    at_height = [
        Candidate(Box(x + side * (half + 4.0), y + up, half, 4.6), cost=0.08 * abs(up))
        for side in (1.0, -1.0)
        for up in np.arange(-24.0, 25.0, 4.0)
    ]
    stacked = [
        Candidate(
            Box(x + shift, y + way * (tall + 7.0 + more), half, 4.6),
            cost=2.0 + 0.05 * abs(shift) + 0.1 * more,
        )
        for way in (1.0, -1.0)
        for more in (0.0, 5.0, 10.0)
        for shift in (0.0, half * 0.9, -half * 0.9)
    ]
    return (
        at_height
        + stacked
        + around(x, y, half, 4.6, away_from=(x, y + 1.0), gaps=(12.0, 20.0, 30.0, 42.0, 56.0))
    )


def pinch_text(exchanger: Mapping[str, Any]) -> str:
    """Symbol and value of the smallest temperature difference."""
    smallest = exchanger["pinch"]["dT"]
    return f"{symbol_text(smallest['symbol'])} = {quantity_text(smallest)}"


def _line_name(drawn: Page, points: np.ndarray, name: str, way: float, *, above: bool, room: Room) -> None:
    """A direction head on the line and its name beside it, on the side away from the other line if it can be."""
    lines = _broken(plain(name), room.frame.half_width * 0.85)
    half, tall = max(marks.extent(line).width for line in lines) / 2 + 1.5, 4.8 * len(lines)
    _head(drawn, points, way, room)
    places = []
    for share in np.linspace(0.08, 0.92, 29):
        x = float(points[0, 0] + share * (points[-1, 0] - points[0, 0]))
        y = float(np.interp(x, points[:, 0], points[:, 1]))
        for gap in (3.0, 5.5, 9.5, 14.5, 20.5, 27.5, 36.0, 46.0, 58.0):
            for turn, dear in ((1.0, 0.0), (-1.0, 3.0)) if above else ((-1.0, 0.0), (1.0, 3.0)):
                places.append(
                    Candidate(
                        Box(x, y + turn * (tall + gap), half, tall),
                        dear + 0.35 * gap + 2.0 * abs(share - 0.5),
                    )
                )
    place = room.settle(places).box
    for index, line in enumerate(lines):
        marks.write(drawn, place.x, place.y + 9.6 * ((len(lines) - 1) / 2 - index), line)


def _broken(name: str, width: float) -> list[str]:
    """A name in lines of about ``width`` points; at most three, the caption has the whole of it."""
    count = len(name) * width / max(marks.extent(name).width, 1.0)
    return textwrap.wrap(
        name, max(12, int(count)), max_lines=3, placeholder=" …", break_on_hyphens=False
    ) or [""]


def _head(drawn: Page, points: np.ndarray, way: float, room: Room) -> None:
    """A head on the line, at whichever of a few places keeps clear of the arrows of the pinch."""
    places = []
    for share in (0.5, 0.42, 0.58, 0.34, 0.66, 0.26, 0.74):
        x = float(points[0, 0] + share * (points[-1, 0] - points[0, 0]))
        places.append(
            Candidate(Box(x, float(np.interp(x, points[:, 0], points[:, 1])), 4.0, 4.0), abs(share - 0.5))
        )
    spot = room.settle(places).box
    ends = [
        (x, float(np.interp(x, points[:, 0], points[:, 1]))) for x in (spot.x - 3.0 * way, spot.x + 3.0 * way)
    ]
    marks.arrow_head(drawn, ends[1], (ends[1][0] - ends[0][0], ends[1][1] - ends[0][1]), length=6.5)


def _caption(profile: Profile) -> str:
    zones = ", ".join(name for name, _, _ in profile.zones)
    stream = ", dash-dotted"
    hot, cold = (
        name + (stream if profile.stream_is == side else "")
        for side, name in (("hot", profile.hot_name), ("cold", profile.cold_name))
    )
    return (
        f"Hot line: {hot}. Cold line: {cold}. Heat is counted from the cold end; zones from left to right: "
        f"{zones}. The lines are straight between the calculated points; the arrows mark the smallest "
        "temperature difference."
    )


def _alt(profile: Profile, exchanger: Mapping[str, Any]) -> str:
    def ends(values: np.ndarray) -> str:
        return f"{values[0]:.1f} to {values[-1]:.1f} {profile.t_unit}".replace("-", "\u2212")

    smallest = exchanger["pinch"]["dT"]
    label = exchanger["rows"][exchanger["pinch"]["row"]]["label"]
    return (
        f"{exchanger['title']}, {quantity_text(exchanger['Q_dot'])} in all, from the cold end to the warm end: "
        f"hot line, {profile.hot_name}, {ends(profile.hot)}; cold line, {profile.cold_name}, {ends(profile.cold)}. "
        f"The smallest temperature difference is {quantity_text(smallest)} at: {label}."
    )
