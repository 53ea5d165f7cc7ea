"""T–s, log p–h, p–V and T–S diagrams: the lines are the record's, every state is numbered, nothing overlaps."""

from __future__ import annotations

import itertools

import numpy as np
import pytest

from calcpack.figures import figures, marks
from calcpack.figures.property_diagram import limits

WIDTHS = (80.0, 165.0)


def _drawn(record, kind, width=80.0):
    record["diagrams"] = [one for one in record["diagrams"] if one["kind"] == kind]
    record["sketch"], record["exchangers"] = {"nodes": [], "links": []}, []
    return figures(record, width)[0], record["diagrams"][0]


@pytest.mark.parametrize("width", WIDTHS)
@pytest.mark.parametrize("kind", ["T-s", "log p-h"])
def test_every_line_has_the_records_points(record, kind, width, lines_of, frame_of):
    figure, diagram = _drawn(record, kind, width)
    (left, low, right, high), (x_ends, y_ends) = frame_of(figure.svg_text), limits(diagram)
    scale = np.log10 if kind.startswith("log") else np.asarray
    for path in diagram["paths"]:
        drawn = lines_of(figure.svg_text, f"path-{path['from']}-{path['to']}")
        x = left + (np.array(path["x"]) - x_ends[0]) / (x_ends[1] - x_ends[0]) * (right - left)
        span = scale(y_ends[1]) - scale(y_ends[0])
        y = low + (scale(np.array(path["y"])) - scale(y_ends[0])) / span * (high - low)
        assert np.allclose(drawn, np.column_stack([x, y]), atol=0.02)


@pytest.mark.parametrize("kind", ["T-s", "log p-h"])
def test_the_cycle_lies_inside_the_frame(record, kind, lines_of, frame_of):
    figure, diagram = _drawn(record, kind)
    left, low, right, high = frame_of(figure.svg_text)
    for path in diagram["paths"]:
        x, y = lines_of(figure.svg_text, f"path-{path['from']}-{path['to']}").T
        assert left < x.min() and x.max() < right and low < y.min() and y.max() < high


@pytest.mark.parametrize("width", WIDTHS)
@pytest.mark.parametrize("kind", ["T-s", "log p-h"])
def test_every_state_is_numbered_clear_of_lines_and_of_the_others(
    record, kind, width, seen, lines_of, frame_of
):
    figure, diagram = _drawn(record, kind, width)
    labels = {point["label"] for point in diagram["points"]}
    assert set(seen.circles) == labels
    assert all(f'id="state-{label}"' in figure.svg_text for label in labels)
    for one, other in itertools.combinations(seen.circles.values(), 2):
        assert one.overlap(other) == 0.0
    left, low, right, high = frame_of(figure.svg_text)
    for box in seen.circles.values():
        assert left <= box.x - box.half_width and box.x + box.half_width <= right
        assert low <= box.y - box.half_height and box.y + box.half_height <= high
        for gid in ["dome", *(f"path-{path['from']}-{path['to']}" for path in diagram["paths"])]:
            assert _distance(lines_of(figure.svg_text, gid), box) >= marks.ROUND - 0.3


def _distance(line, box):
    """From a circle's middle to the nearest point of a line [pt]."""
    dense = np.concatenate([np.linspace(a, b, 12) for a, b in itertools.pairwise(line)])
    return float(np.hypot(*(dense - [box.x, box.y]).T).min())


def test_numbers_of_two_states_on_one_spot_lie_on_the_side_of_their_own_state(record, seen):
    _drawn(record, "T-s", 165.0)
    # State 2 has the higher temperature and entropy, so its number lies above or to the right of that of 1.
    one, two = seen.circles["1"], seen.circles["2"]
    assert (two.x - one.x) + (two.y - one.y) > 0.0


def test_states_on_the_very_same_spot_keep_their_numbers_apart(record, seen):
    first = record["diagrams"][0]["points"][0]
    record["diagrams"][0]["points"] += [dict(first, label=label) for label in ("2s", "11", "12")]
    _drawn(record, "T-s")
    boxes = [seen.circles[label] for label in ("1", "2", "2s", "11", "12")]
    assert all(one.overlap(other) == 0.0 for one, other in itertools.combinations(boxes, 2))


def test_axes_name_quantity_over_unit(record):
    svg = _drawn(record, "T-s")[0].svg_text
    assert "<!-- $T$ / °C -->" in svg and "<!-- $s$ / (kJ/(kg·K)) -->" in svg


def test_a_dome_far_taller_than_the_cycle_is_cut_off(record):
    diagram = record["diagrams"][0]
    diagram["dome"]["y"] = [y * 20.0 for y in diagram["dome"]["y"]]
    low, high = limits(diagram)[1]
    ys = [point["y"] for point in diagram["points"]]
    assert (max(ys) - min(ys)) / (high - low) > 0.3


def test_a_gas_cycle_has_no_dome_and_capital_letters(record):
    share = np.linspace(0.0, 1.0, 20)
    volumes, pressures = 2.0 + 3.0 * share, 50.0 / (2.0 + 3.0 * share)
    record["diagrams"] = [
        {
            "kind": "p-V",
            "title": "p-V diagram",
            "x": {"quantity": "v", "unit": "L"},
            "y": {"quantity": "p", "unit": "bar"},
            "dome": None,
            "paths": [{"from": "1", "to": "2", "style": "solid", "x": list(volumes), "y": list(pressures)}],
            "points": [{"label": "1", "x": 2.0, "y": 25.0}, {"label": "2", "x": 5.0, "y": 10.0}],
        }
    ]
    figure, _ = _drawn(record, "p-V")
    assert "<!-- $V$ / L -->" in figure.svg_text and 'id="dome"' not in figure.svg_text
    assert figure.title == "p–V diagram" and "dome" not in figure.alt


def test_the_words_carry_the_states_as_printed(record):
    figure, _ = _drawn(record, "T-s")
    assert "state 1 (compressor inlet): T = 32.00\u202f°C, s = 1.6970\u202fkJ/(kg·K)" in figure.alt
    assert "Dashed" in figure.caption and "dew line" in figure.caption
