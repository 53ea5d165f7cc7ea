"""The ladder: from the reversible figure to the net one without a remainder."""
from __future__ import annotations

import math

import pytest
from check_cases import Solved, engine_text, solve_text, with_value
from law_cases import texts

from calcpack.checks.ladder import climb, ladder_sums, ladder_view, losses
from calcpack.methods.starter import starter
from calcpack.units.digits import last_place

# Cycles of an ideal gas, a kilogram at a time, and sheets of the engineer's own: no plant between two figures.
WITHOUT = {"carnot-cycle", "gas-engine", "regenerative-gas-cycle", "endoreversible-estimate", "none"}


@pytest.mark.parametrize("text", texts())
def test_the_rungs_sum_to_the_way_from_start_to_end(text: str) -> None:
    solution, record = solve_text(text)
    found = climb(solution)
    if found is None:
        assert solution.method.name in WITHOUT or solution.options.get("real") == "none"
        return
    assert found.reason == ""
    assert found.arrived == pytest.approx(solution.value(found.ladder.end), rel=1e-9)
    assert {one["status"] for one in ladder_sums(solution, record)} <= {"ok"}


# Options that change what stands between the two figures.
VARIANTS = [
    ("vapour-compression", {"serves": "cooling"}), ("vapour-compression", {"suction_line": "warmed"}),
    ("vapour-compression", {"desuperheater": "outlet"}),
    ("vapour-compression", {"internal_exchanger": "effectiveness"}), ("organic-rankine", {"recuperator": "yes"}),
    ("organic-rankine", {"sink_stream": "none", "condensing": "temperature"}),
    ("steam-plant", {"reheats": "1", "heaters": "open", "cooling": "outlet"}),
    ("steam-plant", {"lines": "losses", "process": "share", "heaters": "open"}),
    ("combined-plant", {"pressures": "2", "cooling": "outlet"}), ("combined-plant", {"gas": "cycle"}),
    ("carnot-bound", {"real": "power"}), ("carnot-bound", {"machine": "heat-pump", "real": "power"}),
    ("carnot-bound", {"machine": "refrigerator", "real": "power"})]


@pytest.mark.parametrize(("method", "options"), VARIANTS)
def test_other_arrangements_have_a_ladder_too(method: str, options: dict[str, str]) -> None:
    solution, _ = solve_text(starter(method, options))
    found = climb(solution)
    assert found is not None and found.reason == ""
    assert found.arrived == pytest.approx(found.end, rel=1e-9)
    view = ladder_view(solution)
    way = 1.0 if view["upward"] else -1.0
    assert view["start"]["value"] + way * math.fsum(rung["value"] for rung in view["rungs"]) == pytest.approx(
        view["end"]["value"], rel=1e-9)


def test_printed_rungs_sum_to_the_printed_end_within_their_last_places(engine: Solved) -> None:
    view = ladder_view(engine[0])
    printed = float(view["start"]["shown"]) - sum(float(rung["shown"]) for rung in view["rungs"])
    place = last_place(view["end"]["shown"])
    assert printed == pytest.approx(float(view["end"]["shown"]), abs=0.5 * place * (len(view["rungs"]) + 2))
    assert {last_place(rung["shown"]) for rung in view["rungs"]} == {place}


def test_the_heat_pumps_start_is_its_duty_over_the_reversible_figure(heat_pump: Solved) -> None:
    value = heat_pump[0].value
    found = climb(heat_pump[0])
    carnot = value("Q_dot_sink") * (1.0 - value("T_m_source") / value("T_m_sink"))
    assert found.start == pytest.approx(carnot, rel=1e-9)
    assert found.ladder.upward


def test_what_a_source_is_not_asked_for_counts_below_zero_where_it_is_colder_than_the_dead_state() -> None:
    solution, record = solve_text(starter("vapour-compression", {}))
    less = climb(solution).steps[0]
    assert solution.value("T_m_source") < 288.15 and less.value < 0.0 and less.either
    assert {one["status"] for one in ladder_sums(solution, record)} == {"ok"}


@pytest.mark.parametrize(("symbol", "factor"), [
    ("W_dot_net", 1 + 1e-8), ("s_4", 1.001), ("h_source_out", 1.0001), ("h_source_in", 1.0001)])
def test_a_remainder_is_found(engine: Solved, symbol: str, factor: float) -> None:
    solution, record = engine
    spoiled = with_value(solution, **{symbol: solution.value(symbol) * factor})
    first = ladder_sums(spoiled, record)[0]
    if symbol in ("s_4", "h_source_out"):
        # What leaves one rung and enters another only moves the loss between them.
        assert first["status"] == "ok"
    else:
        assert first["status"] == "fails"


def test_a_rung_that_gives_is_found(engine: Solved) -> None:
    solution, record = engine
    gives = solution.value("W_dot_t") * 1.05
    spoiled = with_value(solution, W_dot_gen=gives, W_dot_net=gives - solution.value("W_dot_pm"))
    sums, signs = ladder_sums(spoiled, record)
    assert (sums["status"], signs["status"], signs["value"]) == ("ok", "fails", "generator and gear")


def test_a_symbol_that_is_not_there_is_told(engine: Solved) -> None:
    import dataclasses
    solution, record = engine
    values = {name: value for name, value in solution.values.items() if name != "W_dot_pm"}
    entry, = ladder_sums(dataclasses.replace(solution, values=values), record)
    assert (entry["status"], entry["detail"]) == ("not evaluated", "not on this sheet: W_dot_pm")
    assert ladder_view(dataclasses.replace(solution, values=values)) is None


def test_losses_are_the_rungs_outside_the_equipment(engine: Solved) -> None:
    found = {one["label"]: one["value"] for one in losses(engine[0])}
    assert found["generator and gear"] == pytest.approx(engine[0].value("W_dot_t") - engine[0].value("W_dot_gen"))
    assert "expander" not in found and "source leaves at its outlet temperature" in found


def test_a_ladder_with_one_rung_named_by_the_sheet_is_no_check() -> None:
    solution, record = solve_text(starter("carnot-bound", {"real": "power"}))
    assert ladder_view(solution)["rungs"][0]["share"] > 0.0
    assert ladder_sums(solution, record) == ()


def test_units_of_the_ladder_are_the_sheets() -> None:
    solution, _ = solve_text(engine_text(units="us"))
    assert ladder_view(solution)["unit"] == solution.unit("W_dot_net").symbol
