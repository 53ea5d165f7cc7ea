"""Invented records to draw, and a look at what was drawn: the words with their room, the lines of the SVG."""

from __future__ import annotations

import copy
import re
from collections.abc import Callable, Iterator
from dataclasses import dataclass, field
from typing import Any

import numpy as np
import pytest

from calcpack.figures import canvas, marks
from calcpack.figures.placing import Box

Record = dict[str, Any]


def quantity(symbol: str, value: float, shown: str, unit: str, also: str | None = None) -> Record:
    return {"symbol": symbol, "value": value, "shown": shown, "unit": unit, "also_shown": also}


def node(name: str, shape: str, column: float, row: float) -> Record:
    return {"name": name, "shape": shape, "column": column, "row": row}


def link(start: str, end: str, label: str = "", style: str = "fluid") -> Record:
    return {"from": start, "to": end, "label": label, "style": style}


def _diagram(
    kind: str, corners: dict[str, tuple[float, float]], pairs: list[tuple[str, str]], axes: tuple
) -> Record:
    """Straight paths of 21 points between corners, the first dashed, and a dome about them."""
    share = np.linspace(0.0, 1.0, 21)
    paths = []
    for at, (start, end) in enumerate(pairs):
        (x0, y0), (x1, y1) = corners[start], corners[end]
        paths.append(
            {
                "from": start,
                "to": end,
                "style": "dashed" if at == 0 else "solid",
                "x": list(x0 + (x1 - x0) * share),
                "y": list(y0 + (y1 - y0) * share),
            }
        )
    xs, ys = zip(*corners.values(), strict=True)
    across = np.linspace(min(xs) - 0.2 * np.ptp(xs), max(xs), 60)
    round_top = 1.0 - ((across - across.mean()) / (0.5 * np.ptp(across))) ** 2
    dome = {"x": list(across), "y": list(min(ys) * 0.8 + (max(ys) * 1.3 - min(ys) * 0.8) * round_top)}
    return {
        "kind": kind,
        "title": f"{kind} diagram of fluid K",
        "dome": dome,
        "paths": paths,
        "x": {"quantity": axes[0][0], "unit": axes[0][1]},
        "y": {"quantity": axes[1][0], "unit": axes[1][1]},
        "points": [{"label": name, "x": x, "y": y} for name, (x, y) in corners.items()],
    }


def _exchanger() -> Record:
    """Three zones; the lines are 0.4 K apart where condensation begins."""
    rows = []
    for zone, start, end, hot in (
        ("subcooling", 0.0, 0.1, (330.0, 340.0)),
        ("condensing", 0.1, 0.9, (340.0, 340.0)),
        ("desuperheating", 0.9, 1.0, (340.0, 352.0)),
    ):
        for share in (0.0, 0.5, 1.0):
            q = start + (end - start) * share
            rows.append(
                {
                    "label": f"{zone}, {share:.2f}",
                    "q_share": q,
                    "Q_W": q * 400e3,
                    "T_hot_K": hot[0] + (hot[1] - hot[0]) * share,
                    "T_cold_K": 321.0 + 18.6 * q / 0.9,
                }
            )
    return {
        "id": "5.4",
        "title": "Condenser",
        "Q_dot": quantity("Q_dot_sink", 400e3, "400.00", "kW"),
        "rows": rows,
        "pinch": {"row": 5, "dT": quantity("dT_min_c", 0.4, "0.40", "K")},
    }


SKETCHES: dict[str, Record] = {
    "heat pump": {
        "nodes": [
            node("Condenser", "exchanger", 1, 0),
            node("Compressor", "compressor", 2, 1),
            node("Evaporator", "exchanger", 1, 2),
            node("Expansion valve", "valve", 0, 1),
        ],
        "links": [
            link("Evaporator", "Compressor", "1"),
            link("Compressor", "Condenser", "2"),
            link("Condenser", "Expansion valve", "3"),
            link("Expansion valve", "Evaporator", "4"),
            link("Sink in", "Condenser", "sink in", "stream"),
            link("Condenser", "Sink out", "sink out", "stream"),
            link("Power", "Compressor", "power", "power"),
        ],
    },
    "engine with recuperator": {
        "nodes": [
            node("Heater", "exchanger", 1, 0),
            node("Expander", "expander", 2, 1),
            node("Generator", "generator", 3, 1),
            node("Recuperator", "recuperator", 1, 1),
            node("Condenser", "exchanger", 1, 2),
            node("Pump", "pump", 0, 1),
        ],
        "links": [
            link("Expander", "Generator", "", "power"),
            link("Heater", "Expander", "3"),
            link("Condenser", "Pump", "1"),
            link("Pump", "Recuperator", "2"),
            link("Recuperator", "Condenser", "6"),
            link("Expander", "Recuperator", "10"),
            link("Recuperator", "Heater", "5"),
            link("Sink in", "Condenser", "sink in", "stream"),
            link("Condenser", "Sink out", "sink out", "stream"),
        ],
    },
    "two stages": {
        "nodes": [
            node("Gas cooler", "exchanger", 1, 0),
            node("High stage", "compressor", 3, 1),
            node("Motor", "motor", 4, 1),
            node("Flash vessel", "vessel", 1, 1.5),
            node("Low stage", "compressor", 3, 2),
            node("Upper valve", "valve", 0, 1),
            node("Lower valve", "valve", 0, 2),
            node("Mixer", "mixer", 2, 1.5),
            node("Evaporator", "exchanger", 1, 3),
        ],
        "links": [
            link("Evaporator", "Low stage", "1"),
            link("Low stage", "Mixer", "2"),
            link("Flash vessel", "Mixer", "9"),
            link("Mixer", "High stage", "3"),
            link("High stage", "Gas cooler", "4"),
            link("Gas cooler", "Upper valve", "5"),
            link("Upper valve", "Flash vessel", "6"),
            link("Flash vessel", "Lower valve", "7"),
            link("Lower valve", "Evaporator", "8"),
            link("Motor", "High stage", "", "power"),
            link("Power", "Low stage", "power", "power"),
        ],
    },
    "turbine with extraction": {
        "nodes": [
            node("Boiler", "exchanger", 0, 0),
            node("Turbine", "turbine", 1, 0),
            node("Generator", "generator", 2, 0),
            node("Condenser", "exchanger", 1, 1),
            node("Feed pump", "pump", 1, 2),
        ],
        "links": [
            link("Boiler", "Turbine", "1"),
            link("Turbine", "Condenser", "2"),
            link("Condenser", "Feed pump", "3"),
            link("Feed pump", "Boiler", "4"),
            link("Turbine", "Steam to process", "5"),
            link("Turbine", "Generator", "", "power"),
            link("Sink in", "Condenser", "sink in", "stream"),
            link("Condenser", "Sink out", "sink out", "stream"),
        ],
    },
    "reservoirs": {
        "nodes": [
            node("Hot reservoir", "reservoir", 1, 0),
            node("Engine", "engine", 1, 1),
            node("Cold reservoir", "reservoir", 1, 2),
        ],
        "links": [
            link("Hot reservoir", "Engine", "Q_dot_h", "heat"),
            link("Engine", "Cold reservoir", "Q_dot_c", "heat"),
            link("Engine", "Power out", "power", "power"),
        ],
    },
}

# States 1 and 2 lie almost on one spot, as before and after a pump; 3 and 4 at one enthalpy.
T_S = {"1": (0.30, 36.0), "2": (0.305, 37.2), "3": (1.4, 165.0), "4": (1.5, 90.0), "10": (1.25, 50.0)}
P_H = {"1": (407.2, 5.1), "2": (438.0, 16.7), "3": (290.3, 16.7), "4": (290.3, 5.1)}


def _states() -> list[Record]:
    rows = []
    for number, label in (
        ("1", "compressor inlet"),
        ("2", "compressor outlet"),
        ("3", "condenser outlet"),
        ("4", "evaporator inlet"),
        ("5", "extraction"),
        ("10", "exhaust"),
        ("6", "exhaust, cooled"),
    ):
        low = number in ("1", "4", "6", "10")
        rows.append(
            {
                "number": number,
                "label": label,
                "fluid_role": "wf",
                "h": None,
                "v": None,
                "x": None,
                "T": quantity(f"T_{number}", 305.15, "305.15", "K", "32.00 °C"),
                "p": quantity(
                    "p_e" if low else "p_c", 5.1e5 if low else 16.7e5, "5.1" if low else "16.7", "bar"
                ),
                "s": quantity(f"s_{number}", 1697.0, "1.6970", "kJ/(kg·K)"),
            }
        )
    return rows


RECORD: Record = {
    "sheet": {"units": "si"},
    "inputs": [quantity("Q_dot_h", 500e3, "500.00", "kW")],
    "steps": [],
    "states": _states(),
    "case": {"fluids": {"wf": {"designation": "fluid K"}, "sink": {"designation": "water"}}},
    "streams": [
        {
            "name": "Sink",
            "role": "sink",
            "designation": "water",
            "Q_dot": quantity("Q_dot_sink", 4e5, "400", "kW"),
            "T_in": quantity("T_sink_in", 321.0, "321.00", "K", "47.85 °C"),
            "T_out": quantity("T_sink_out", 341.67, "341.67", "K", "68.52 °C"),
        }
    ],
    "exchangers": [_exchanger()],
    "sketch": SKETCHES["heat pump"],
    "diagrams": [
        _diagram(
            "T-s",
            T_S,
            [("1", "2"), ("2", "3"), ("3", "4"), ("4", "10"), ("10", "1")],
            (("s", "kJ/(kg·K)"), ("T", "°C")),
        ),
        _diagram(
            "log p-h", P_H, [("1", "2"), ("2", "3"), ("3", "4"), ("4", "1")], (("h", "kJ/kg"), ("p", "bar"))
        ),
    ],
}


@pytest.fixture
def record() -> Record:
    """A fresh copy of the invented record."""
    return copy.deepcopy(RECORD)


@pytest.fixture
def sketches() -> dict[str, Record]:
    """The invented arrangements by name."""
    return copy.deepcopy(SKETCHES)


@pytest.fixture(params=sorted(SKETCHES))
def sketched(request: pytest.FixtureRequest, record: Record) -> Record:
    """The record with each of the arrangements in turn."""
    record["sketch"] = copy.deepcopy(SKETCHES[request.param])
    return record


@dataclass
class Seen:
    """What was drawn by points: words with the box of their letters, and circles."""

    words: list[tuple[str, Box]] = field(default_factory=list)
    circles: dict[str, Box] = field(default_factory=dict)


@pytest.fixture
def seen(monkeypatch: pytest.MonkeyPatch) -> Iterator[Seen]:
    """Everything that goes through the pens for words and circles from here on."""
    found = Seen()
    write, circle = marks.write, marks.circle

    def writing(drawn: Any, x: float, y: float, text: str, **style: Any) -> Any:
        half, tall = marks.extent(text, style.get("size", canvas.SMALL)).width / 2.0, canvas.SMALL * 0.36
        found.words.append((text, Box(x, y, tall, half) if style.get("turned") else Box(x, y, half, tall)))
        return write(drawn, x, y, text, **style)

    def circling(drawn: Any, x: float, y: float, label: str) -> None:
        found.circles[label] = Box(x, y, marks.half_width(label), marks.ROUND)
        circle(drawn, x, y, label)

    monkeypatch.setattr(marks, "write", writing)
    monkeypatch.setattr(marks, "circle", circling)
    yield found


@pytest.fixture
def lines_of() -> Callable[[str, str], np.ndarray]:
    """``lines_of(svg, gid)``: the points of a drawn line [pt], y upwards from the foot of the page."""

    def points(svg: str, gid: str) -> np.ndarray:
        height = float(re.search(r'viewBox="0 0 [\d.]+ ([\d.]+)"', svg)[1])
        body = re.search(rf'<g id="{re.escape(gid)}">\s*<path d="([^"]+)"', svg)
        assert body, f"no line {gid}"
        pairs = np.array(
            [[float(x), float(y)] for x, y in re.findall(r"[ML] (-?[\d.]+) (-?[\d.]+)", body[1])]
        )
        return np.column_stack([pairs[:, 0], height - pairs[:, 1]])

    return points


@pytest.fixture
def frame_of(
    lines_of: Callable[[str, str], np.ndarray],
) -> Callable[[str], tuple[float, float, float, float]]:
    """``frame_of(svg)``: left, low, right and high edge of the axes [pt]."""

    def edges(svg: str) -> tuple[float, float, float, float]:
        corners = lines_of(svg, "patch_2")
        return (*corners.min(axis=0), *corners.max(axis=0))

    return edges
