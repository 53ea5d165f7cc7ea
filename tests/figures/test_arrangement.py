"""The arrangement: lines round the equipment, state numbers on their lines, words that do not collide."""

from __future__ import annotations

import itertools

import pytest

from calcpack.figures import canvas, figures
from calcpack.figures.arrangement import arrangement, laid_out
from calcpack.figures.equipment import Port
from calcpack.figures.placing import Box
from calcpack.figures.routing import End, Router


def _runs(laid):
    return [(line, run) for line, route in laid.routes for run in itertools.pairwise(route.points)]


def _laid(record):
    with canvas.settings():
        return laid_out(record)


def test_lines_are_level_or_upright_and_enter_no_equipment(sketched):
    laid = _laid(sketched)
    assert len(laid.routes) == len(sketched["sketch"]["links"])
    for line, ((x0, y0), (x1, y1)) in _runs(laid):
        assert x0 == x1 or y0 == y1
        run = Box((x0 + x1) / 2, (y0 + y1) / 2, abs(x1 - x0) / 2, abs(y1 - y0) / 2)
        for piece in laid.sketch.pieces:
            # A line ends on the rim; a machine's slanted rim lies within its rectangle.
            own = piece in (line.start, line.end) and piece.name in laid.sketch.mirrored
            inside = piece.box.grown(-0.1)
            assert own or run.overlap(inside) == 0.0, (line.label, piece.name)


def _crosses(run, box):
    return (
        abs(run.x - box.x) < run.half_width + box.half_width
        and abs(run.y - box.y) < run.half_height + box.half_height
    )


def test_no_two_lines_share_a_run(sketched):
    runs = [run for _, run in _runs(_laid(sketched))]
    for (a, b), (c, d) in itertools.combinations(runs, 2):
        for fixed, moving in ((0, 1), (1, 0)):
            if a[fixed] == b[fixed] == c[fixed] == d[fixed]:
                low, high = (
                    max(min(a[moving], b[moving]), min(c[moving], d[moving])),
                    min(max(a[moving], b[moving]), max(c[moving], d[moving])),
                )
                assert low >= high - 1e-9


def test_state_numbers_are_those_of_the_links_and_lie_on_their_lines(sketched, seen):
    figure = arrangement(sketched)
    labels = {one["label"] for one in sketched["sketch"]["links"] if one["style"] == "fluid"}
    assert set(seen.circles) == labels
    laid = _laid(sketched)
    for number in laid.numbers:
        route = next(
            route for line, route in laid.routes if line.label == number.lines[0] and line.style == "fluid"
        )
        assert any(
            _crosses(
                Box(number.box.x, number.box.y, 0.01, 0.01),
                Box(
                    (a[0] + b[0]) / 2,
                    (a[1] + b[1]) / 2,
                    abs(a[0] - b[0]) / 2 + 0.1,
                    abs(a[1] - b[1]) / 2 + 0.1,
                ),
            )
            for a, b in itertools.pairwise(route.points)
        )
    assert all(f'id="state-{label}"' in figure.svg_text for label in labels)


def test_words_and_numbers_keep_clear_of_one_another_and_of_the_lines(sketched):
    laid = _laid(sketched)
    boxes = [(words.lines, words.box.grown(-0.5)) for words in (*laid.words, *laid.numbers)]
    boxes += [((piece.name,), piece.box) for piece in laid.sketch.pieces if piece.kind != "valve"]
    for (one, first), (other, second) in itertools.combinations(boxes, 2):
        assert first.overlap(second) == 0.0, (one, other)
    for words in laid.words:
        for _, ((x0, y0), (x1, y1)) in _runs(laid):
            run = Box((x0 + x1) / 2, (y0 + y1) / 2, abs(x1 - x0) / 2, abs(y1 - y0) / 2)
            assert not _crosses(run, words.box.grown(-0.5)), words.lines


@pytest.mark.parametrize("name", ["heat pump", "engine with recuperator"])
def test_the_two_passes_of_an_exchanger_run_against_one_another(record, sketches, name):
    record["sketch"] = sketches[name]
    passes = _laid(record).sketch.passes
    names = {one.piece.name for one in passes if one.zigzag and one.inlet and one.outlet}
    assert names
    for piece in names:
        ways = [one.outlet_port.x > one.inlet_port.x for one in passes if one.piece.name == piece]
        if len(ways) == 2:
            assert ways[0] is not ways[1], piece


def test_fluid_passes_of_a_recuperator_are_told_apart_by_pressure(record, sketches):
    record["sketch"] = sketches["engine with recuperator"]
    pairs = {
        (one.inlet.label, one.outlet.label)
        for one in _laid(record).sketch.passes
        if one.piece.name == "Recuperator"
    }
    assert pairs == {("2", "5"), ("10", "6")}


def test_streams_are_named_with_their_temperatures(record, seen):
    arrangement(record)
    assert {"sink in", "47.85\u202f°C", "sink out", "68.52\u202f°C"} <= {text for text, _ in seen.words}


def test_heat_flows_are_named_with_their_values_where_the_record_has_them(record, seen):
    record["sketch"] = {
        "nodes": [
            {"name": name, "shape": shape, "column": 0, "row": row}
            for row, (name, shape) in enumerate(
                (("Hot", "reservoir"), ("Engine", "engine"), ("Cold", "reservoir"))
            )
        ],
        "links": [
            {"from": "Hot", "to": "Engine", "label": "Q_dot_h", "style": "heat"},
            {"from": "Engine", "to": "Cold", "label": "Q_dot_c", "style": "heat"},
        ],
    }
    arrangement(record)
    words = {text for text, _ in seen.words}
    assert r"$\dot{Q}_{\mathrm{h}}$ = 500.00" + "\u202fkW" in words and r"$\dot{Q}_{\mathrm{c}}$" in words


def test_alt_text_tells_every_line(sketched):
    alt = arrangement(sketched).alt
    for one in sketched["sketch"]["links"]:
        assert f"{one['from']} to {one['to']}" in alt


def test_a_router_goes_round_what_stands_between():
    wall = Box(50.0, 0.0, 10.0, 30.0)
    router = Router([wall])
    start, end = End(Port(0.0, 0.0, 1, 0), 0.0, 0.0), End(Port(0.0, 0.0, -1, 0), 100.0, 0.0)
    router.lay_net([start, end])
    route = router.route([start], [end])
    assert route.points[0] == (0.0, 0.0) and route.points[-1] == (100.0, 0.0)
    assert max(abs(y) for _, y in route.points) > wall.half_height


def test_a_second_line_does_not_run_close_along_the_first():
    router = Router([Box(50.0, 20.0, 30.0, 15.0)])
    first = (End(Port(0.0, 0.0, 1, 0), 0.0, 0.0), End(Port(0.0, 0.0, -1, 0), 100.0, 0.0))
    # The shortest way between these two leads under the box, 4.5 points above the first line.
    second = (End(Port(0.0, 0.0, 0, -1), 10.0, 30.0), End(Port(0.0, 0.0, 0, -1), 90.0, 30.0))
    router.lay_net([*first, *second])
    router.route(first[:1], first[1:])
    points = router.route(second[:1], second[1:]).points
    assert all(abs(a[1]) >= 6.0 for a, b in itertools.pairwise(points) if a[1] == b[1])


def test_a_walled_in_port_has_no_route():
    router = Router([Box(50.0, 0.0, 10.0, 30.0), Box(100.0, 0.0, 12.0, 12.0)])
    start, end = End(Port(0.0, 0.0, 1, 0), 0.0, 0.0), End(Port(0.0, 0.0, -1, 0), 100.0, 0.0)
    router.lay_net([start, end])
    assert router.route([start], [end]) is None


def test_a_sheet_without_an_arrangement_has_no_such_figure(record):
    record["sketch"] = {"nodes": [], "links": []}
    assert "arrangement" not in {one.id for one in figures(record)}


@pytest.mark.parametrize(
    "shape",
    [
        "exchanger",
        "compressor",
        "expander",
        "pump",
        "valve",
        "generator",
        "motor",
        "recuperator",
        "reservoir",
        "engine",
        "heat pump",
        "something else",
    ],
)
def test_a_single_piece_of_any_shape_is_drawn_with_its_name(record, shape, seen):
    record["sketch"] = {"nodes": [{"name": "Piece", "shape": shape, "column": 0, "row": 0}], "links": []}
    arrangement(record)
    assert "Piece" in {text for text, _ in seen.words}
