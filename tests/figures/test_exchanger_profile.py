"""Temperatures against heat exchanged: units, sides, zones, pinch, and labels that keep clear."""

from __future__ import annotations

import itertools

import numpy as np
import pytest

from calcpack.figures import figures
from calcpack.figures.exchanger_profile import pinch_text, profile_of


def _drawn(record, width=80.0):
    record["diagrams"], record["sketch"] = [], {"nodes": [], "links": []}
    return figures(record, width)[0]


def test_print_units_of_both_systems(record):
    rows = record["exchangers"][0]["rows"]
    si = profile_of(record, record["exchangers"][0])
    assert np.allclose(si.hot, [row["T_hot_K"] - 273.15 for row in rows]) and si.q[-1] == pytest.approx(400.0)
    record["sheet"]["units"] = "us"
    us = profile_of(record, record["exchangers"][0])
    assert np.allclose(us.cold, [row["T_cold_K"] * 9.0 / 5.0 - 459.67 for row in rows])
    # International Table Btu, 1055.05585262 J (ISO 31-4:1992 annex A), from memory.
    assert us.q[-1] == pytest.approx(400e3 * 3600.0 / 1055.05585262 / 1000.0)
    assert "<!-- $T$ / °F -->" in _drawn(record).svg_text


def test_the_stream_is_on_the_side_that_its_temperatures_tell(record):
    profile = profile_of(record, record["exchangers"][0])
    assert (profile.hot_name, profile.cold_name, profile.stream_is) == ("fluid K", "sink, water", "cold")
    stream = record["streams"][0]
    stream["T_in"], stream["T_out"] = stream["T_out"], stream["T_in"]
    assert profile_of(record, record["exchangers"][0]).hot_name == "sink, water"
    record["streams"] = []
    assert profile_of(record, record["exchangers"][0]).stream_is == ""


def test_zones_follow_one_another_from_end_to_end(record):
    zones = profile_of(record, record["exchangers"][0]).zones
    assert [name for name, _, _ in zones] == ["subcooling", "condensing", "desuperheating"]
    assert [edge for _, start, end in zones for edge in (start, end)] == pytest.approx(
        [0, 40, 40, 360, 360, 400]
    )


@pytest.mark.parametrize("width", [80.0, 165.0])
def test_lines_have_the_rows_points(record, width, lines_of, frame_of):
    figure = _drawn(record, width)
    left, low, right, high = frame_of(figure.svg_text)
    profile = profile_of(record, record["exchangers"][0])
    ends = {side: lines_of(figure.svg_text, side) for side in ("hot", "cold")}
    # Both lines share one straight scale: temperature per point is the same along all of both.
    temperatures = np.concatenate([profile.hot, profile.cold])
    heights = np.concatenate([_at(ends["hot"], profile.q), _at(ends["cold"], profile.q)])
    slope, offset = np.polyfit(temperatures, heights, 1)
    assert slope > 0.0 and np.allclose(slope * temperatures + offset, heights, atol=0.05)
    for line in ends.values():
        assert left < line[:, 0].min() and line[:, 0].max() < right
        assert low < line[:, 1].min() and line[:, 1].max() < high


def _at(line, q):
    """Height of a drawn line at shares of its width."""
    x = line[0, 0] + (q - q[0]) / (q[-1] - q[0]) * (line[-1, 0] - line[0, 0])
    return np.interp(x, line[:, 0], line[:, 1])


@pytest.mark.parametrize("width", [80.0, 165.0])
@pytest.mark.parametrize(
    "name", ["fluid K", "blend of fluid K and fluid L, 92 % and 8 % by mass, after delivery"]
)
def test_words_keep_clear_of_one_another_and_of_the_lines(record, width, name, seen, lines_of):
    record["case"]["fluids"]["wf"]["designation"] = name
    figure = _drawn(record, width)
    for (_, one), (_, other) in itertools.combinations(seen.words, 2):
        assert one.overlap(other) == 0.0
    for side in ("hot", "cold"):
        line = lines_of(figure.svg_text, side)
        dense = np.concatenate([np.linspace(a, b, 60) for a, b in itertools.pairwise(line)])
        for text, box in seen.words:
            hidden = (abs(dense[:, 0] - box.x) < box.half_width) & (
                abs(dense[:, 1] - box.y) < box.half_height
            )
            assert not hidden.any(), text


def test_the_pinch_is_printed_as_in_the_record(record, seen):
    figure = _drawn(record)
    text = r"$\mathrm{Δ}T_{\mathrm{min},\mathrm{c}}$ = 0.40" + "\u202fK"
    assert pinch_text(record["exchangers"][0]) == text
    assert text in [words for words, _ in seen.words] and 'id="pinch"' in figure.svg_text
    assert "smallest temperature difference is 0.40\u202fK at: condensing, 1.00" in figure.alt


def test_a_name_cut_short_in_the_picture_stands_whole_in_the_caption(record, seen):
    name = "mixture of many parts, " * 8 + "as delivered"
    record["case"]["fluids"]["wf"]["designation"] = name
    figure = _drawn(record)
    assert any(words.endswith("…") for words, _ in seen.words) and name in figure.caption
