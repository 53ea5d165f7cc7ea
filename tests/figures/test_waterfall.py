"""What moved the results, drawn: bars that add up, words inside their room, and what is left out."""

from __future__ import annotations

import itertools
import json
from typing import Any

import pytest

from calcpack.figures import canvas, figures
from calcpack.figures.waterfall import _causes, _fall, waterfall
from calcpack.revisions.share_table import share_table

Parts = list[tuple[str, float, str]]


def result(old: tuple[float, str], parts: Parts, new: str, unit: str, program: float = 0.0) -> dict[str, Any]:
    """A result's attribution; the parts as (text, part [SI], number)."""
    told = [{"cause": text.partition(":")[0], "text": text, "part_value": part, "number": number}
            for text, part, number in parts]
    end = old[0] + sum(part for _, part, _ in parts) + program
    return {"parts": told, "ends_unit": unit, "unit": unit,
            "program": {"text": "the program: CoolProp 8.0.0 → 8.1.0", "part_value": program,
                        "number": f"{program:+.3f}" if program else "0"},
            "ends": [{"value": old[0], "number": old[1]}, {"value": end, "number": new}]}


DUTY = "Q_dot_sink: 450 kW → 500 kW"
INLET = "T_source_in: 314.15 K (41.00 °C) → 311.15 K (38.00 °C)"
LONG = "x_1: a * b + c → " + " + ".join(f"part_{at} * factor_{at}" for at in range(40))


def comparison(attribution: dict[str, Any]) -> dict[str, Any]:
    return {"against": {"revision": "A"}, "of": {"revision": "B"}, "attribution": attribution,
            "inputs": [{"symbol": "Q_dot_sink"}, {"symbol": "T_source_in"}], "formulas": [{"symbol": "x_1"}]}


CASES = {
    "one": comparison({"COP": result((4.0, "4.00"), [(DUTY, 0.2, "+0.200")], "4.20", "")}),
    "both ways": comparison({
        "W_dot_net": result((1e5, "100.0"), [(DUTY, 2e4, "+20.00"), (INLET, -3e4, "-30.00")], "90.0", "kW"),
        "T_2": result((350.0, "76.85"), [(DUTY, 0.0, "0"), (INLET, 1.0, "+1.000")], "77.85", "°C", program=0.5)}),
    "a long cause": comparison({"x_2": result((1.0, "1.000"), [(LONG, 0.1, "+0.1000")], "1.100", "kg/s")}),
    "tiny beside large": comparison({
        "E_a": result((1e9, "277.8"), [(DUTY, 1e9, "+277.8"), (INLET, 1.0, "+2.8e-7")], "555.6", "MWh")}),
    "six": comparison({f"h_{at}": result((4e5, "400.0000"), [(DUTY, 1e3, "+1.00000"), (INLET, -2e3, "-2.00000")],
                                         "399.0000", "kJ/(kg·K)") for at in range(6)}),
    "many causes": comparison({"COP": result((4.0, "4.00"), [(f"a_{at}: {at} → {at + 1}", 0.1, "+0.100")
                                                              for at in range(14)], "5.40", "")})}


def test_results_stand_in_the_order_of_the_sheet_after_a_way_through_json():
    given = {**CASES["both ways"], "results": [{"symbol": "W_dot_net"}, {"symbol": "T_2"}]}
    stored = json.loads(json.dumps(given, sort_keys=True))
    assert list(stored["attribution"]) == ["T_2", "W_dot_net"]
    assert [column.symbol for column in share_table(with_sums(stored)).columns] == ["W_dot_net", "T_2"]
    assert waterfall(stored).svg_text == waterfall(given).svg_text


def with_sums(comparison: dict[str, Any]) -> dict[str, Any]:
    """With what the table of parts reads beside the parts."""
    more = {"sum_number": "", "method": "average over all orders", "solves": 1}
    return {**comparison, "attribution": {key: {**one, **more} for key, one in comparison["attribution"].items()}}


@pytest.mark.parametrize("name", CASES)
def test_each_bar_begins_where_the_one_before_it_ends_and_the_last_ends_at_the_value_now(name):
    for symbol, one in CASES[name]["attribution"].items():
        causes = _causes(list(CASES[name]["attribution"].values()))
        fall = _fall(symbol, one, causes)
        level = fall.ends[0]
        for bar in filter(None, fall.bars):
            assert bar.start == pytest.approx(level)
            level = bar.end
        assert level == pytest.approx(fall.ends[1])


@pytest.mark.parametrize("name", CASES)
def test_words_keep_clear_of_each_other_and_inside_the_page(name, seen):
    figure = waterfall(CASES[name])
    width, height = (one * canvas.POINTS_PER_MM for one in (figure.width_mm, figure.height_mm))
    boxes = [box for _, box in seen.words if box.half_width > 0]
    assert len(boxes) >= 7
    for box in boxes:
        assert box.x >= box.half_width and box.x + box.half_width <= width
        assert box.y >= box.half_height and box.y + box.half_height <= height
    for one, other in itertools.combinations(boxes, 2):
        assert one.overlap(other) == 0.0


def test_what_moved_nothing_is_left_out(seen):
    still = comparison({"COP": result((4.0, "4.00"), [(DUTY, 0.2, "+0.200"), (INLET, 1e-12, "0")], "4.20", "")})
    waterfall(still)
    told = " ".join(text for text, _ in seen.words)
    assert "450" in told and "314.15" not in told and "program" not in told


def test_a_cause_that_moved_one_result_has_no_bar_under_another(seen):
    waterfall(CASES["both ways"])
    words = [text for text, _ in seen.words]
    assert words.count("+20.00") == 1 and "0" not in words and "+0.500" in words


def test_more_results_than_fit_are_counted_in_the_caption():
    eight = comparison({f"h_{at}": result((4.0, "4.00"), [(DUTY, 0.2, "+0.200")], "4.20", "") for at in range(8)})
    assert waterfall(eight).caption.startswith("The first 6 of 8 results that moved.")
    assert waterfall(CASES["one"]).caption.startswith("Each result")
    wide = comparison({f"h_{at}": result((4.0, "4.00"), [(DUTY, 0.2, "+1.23456789012e-15")], "4.20", "")
                       for at in range(6)})
    assert int(waterfall(wide).caption.split()[2]) < 6


def test_raised_and_lowered_differ_without_colour():
    text = waterfall(CASES["both ways"]).svg_text
    assert "fill: #12304f" in text and "fill: #ffffff" in text


def test_words_of_the_picture_tell_every_part():
    alt = waterfall(CASES["both ways"]).alt
    assert alt.startswith("Revision A to B. W_dot_net from 100.0 to 90.0 kW: +20.00 by Q_dot_sink; -30.00 by T_source")
    assert "T_2 from 76.85 to 77.85 °C: +1.000 by T_source_in; +0.500 by the program" in alt


def test_no_figure_where_nothing_moved_or_nothing_can_be_said():
    assert waterfall(None) is None and waterfall(comparison({})) is None
    far = {"COP": result((4.0, "4.00"), [(f"a_{at}: 0 → 1", 0.1, "+0.1") for at in range(40)], "8.00", "")}
    assert waterfall(comparison(far)) is None


def test_a_record_with_a_comparison_has_the_figure_last_and_equal_bytes(record):
    first, again = (figures(record, comparison=CASES["both ways"])[-1] for _ in range(2))
    assert first.id == "waterfall" and first.svg_text == again.svg_text
    assert "waterfall" not in {figure.id for figure in figures(record)}
