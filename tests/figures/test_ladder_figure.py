"""The ladder's figure: rows that join, words that keep clear of each other and of the page's edge."""

from __future__ import annotations

import itertools

import pytest

from calcpack.figures import canvas, figures
from calcpack.figures.ladder import NAMES_PT, WIDTH_MM, bars_of, broken, ladder_figure


def entry(label, value, share=None, kind="loss"):
    shown = f"{value / 1e3:.1f}"
    return {"label": label, "value": value, "shown": shown, "kind": kind, "formula": "", "share": share or 0.0,
            "share_shown": f"{100.0 * (share or 0.0):.1f} %"}


def ladder(values, start, *, upward=False):
    rungs = [entry(f"piece {at} of the machine", value, value / abs(start), "destruction" if at % 2 else "loss")
             for at, value in enumerate(values)]
    end = start + sum(values) if upward else start - sum(values)
    return {"title": "From one figure to another", "unit": "kW", "upward": upward, "rungs": rungs,
            "start": entry("reversible power", start), "end": entry("net power", end, end / start)}


CASES = {
    "down": ladder([200e3, 4e3, 150e3, 90e3, 1e2], 900e3), "up": ladder([3e3, 22e3, 12e3, 4e3], 38e3, upward=True),
    "some below zero": ladder([-5e3, 30e3, 12e3], 20e3, upward=True), "nothing left": ladder([500e3, 500e3], 1000e3),
    "many": ladder([20e3] * 14, 500e3), "all gone": ladder([], 500e3)}


@pytest.mark.parametrize("name", CASES)
def test_each_row_begins_where_the_one_above_ends(name):
    bars = bars_of(CASES[name])
    way = 1.0 if CASES[name]["upward"] else -1.0
    level = CASES[name]["start"]["value"]
    for bar, rung in zip(bars[1:-1], CASES[name]["rungs"], strict=True):
        assert [bar.low, bar.high] == pytest.approx(sorted((level, level + way * rung["value"])))
        level = bar.level
    assert max(bars[-1].low, bars[-1].high, key=abs) == pytest.approx(CASES[name]["end"]["value"])


@pytest.mark.parametrize("name", CASES)
def test_words_keep_clear_of_each_other_and_inside_the_page(name, seen):
    figure = ladder_figure(CASES[name], "ladder")
    width, height = (one * canvas.POINTS_PER_MM for one in (figure.width_mm, figure.height_mm))
    boxes = [box for _, box in seen.words]
    assert len(boxes) >= 2 * (len(CASES[name]["rungs"]) + 2)
    for box in boxes:
        assert box.x >= box.half_width and box.x + box.half_width <= width
        assert box.y >= box.half_height and box.y + box.half_height <= height
    for one, other in itertools.combinations(boxes, 2):
        assert one.overlap(other) == 0.0


def test_a_long_name_takes_two_lines_and_then_is_cut():
    name = "less heat taken from the source than by the reversible machine between the same two streams of water"
    lines = broken(name)
    assert len(lines) == 2 and lines[0].startswith("Less heat") and lines[1].endswith("…")
    assert broken("expander") == ["Expander"]


def test_what_stays_and_what_is_lost_differ_without_colour():
    text = ladder_figure(CASES["down"], "ladder").svg_text
    for fill in ("#12304f", "#a6a6a6", "#ffffff"):
        assert f"fill: {fill}" in text


def test_words_of_the_picture_name_every_rung():
    figure = ladder_figure(CASES["up"], "ladder")
    for rung in CASES["up"]["rungs"]:
        assert f"{rung['label']} {rung['shown']}" in figure.alt
    assert "drawn in all" in figure.caption and "reversible figure" in ladder_figure(CASES["down"], "ladder").caption
    assert figure.width_mm == WIDTH_MM and NAMES_PT < WIDTH_MM * canvas.POINTS_PER_MM / 2


def test_a_record_with_a_ladder_has_its_figure_last_and_equal_bytes(record):
    record["ladder"] = CASES["down"]
    first, again = figures(record)[-1], figures(record)[-1]
    assert first.id == "ladder" and first.svg_text == again.svg_text
    record["ladder"] = None
    assert "ladder" not in {figure.id for figure in figures(record)}
