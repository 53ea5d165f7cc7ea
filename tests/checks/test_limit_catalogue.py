"""Usual limits: each says the same as its caution, turned round, and decides nothing."""
from __future__ import annotations

from collections.abc import Callable

import pytest
from check_cases import Solved, by_id, engine_text, solve_text, with_value

from calcpack.checks import examine
from calcpack.checks.cautions import CAUTIONS, cautions
from calcpack.checks.limit_catalogue import CATALOGUE, HOLDS, OUTSIDE, bound_words, usual_limits

ZERO = 273.15


def test_what_is_triggered_is_outside_and_what_is_not_holds(heat_pump: Solved, engine: Solved) -> None:
    for solution, _ in (heat_pump, engine):
        warned = by_id(cautions(solution))
        entries = usual_limits(warned.values())
        assert len(entries) >= 8
        for one in entries:
            expected = {"triggered": OUTSIDE, "not triggered": HOLDS}.get(warned[one["caution"]]["status"],
                                                                          "not evaluated")
            assert one["status"] == expected and one["source"] and one["confirmed"]
            assert one["value"] == warned[one["caution"]]["value"]


@pytest.mark.parametrize(("name", "symbol", "inside", "outside"), [
    # Discharge line at most 107 °C (trade articles, second-hand).
    ("U-K1", "T_2", ZERO + 107.0, ZERO + 107.1),
    # Pressure ratio of a stage at most 8 (practice, from memory).
    ("U-K4", "r_p", 8.0, 8.1),
    # Condensing at least 15 K below 382.51 K (practice, from memory).
    ("U-K5", "T_c", 382.51 - 15.01, 382.51 - 14.98)])
def test_a_usual_limit_turns_with_its_value(heat_pump: Solved, name: str, symbol: str, inside: float,
                                            outside: float) -> None:
    for value, expected in ((inside, HOLDS), (outside, OUTSIDE)):
        changed = with_value(heat_pump[0], **{symbol: value})
        assert by_id(usual_limits(cautions(changed)))[name]["status"] == expected


@pytest.mark.parametrize(("threshold", "bound"), [
    ("above 380.15 K (107.00 °C)", "at most 380.15 K (107.00 °C)"), ("at or above 100 L", "below 100 L"),
    ("less than 5.00 K", "at least 5.00 K"), ("below 1.013 bar", "at least 1.013 bar"),
    ("outside 0.90 m/s to 2.5 m/s", "0.90 m/s to 2.5 m/s"),
    ("vapour fraction below 0.88", "vapour fraction at least 0.88"),
    ("evaporating below 273.15 K (0.00 °C) or leaving below 277.15 K (4.00 °C)",
     "evaporating at least 273.15 K (0.00 °C) and leaving at least 277.15 K (4.00 °C)"), ("", "")])
def test_a_threshold_turned_round(threshold: str, bound: str) -> None:
    assert bound_words(threshold) == bound


def test_a_threshold_of_unknown_words_is_refused() -> None:
    with pytest.raises(KeyError):
        bound_words("beyond 3")


def test_the_catalogue_names_each_caution_once_and_by_equipment(heat_pump: Solved, engine: Solved,
                                                                vary: Callable[..., Solved]) -> None:
    names = [usual.caution for usual in CATALOGUE]
    assert len(names) == len(set(names)) and len(CAUTIONS) > 70
    steam = solve_text(engine_text(wf="water", T_c="40 degC", T_e="180 degC", T_source_in="350 degC"))
    ammonia = vary(wf="R-717")
    met = {one["caution"] for solved in (heat_pump, engine, steam, ammonia)
           for one in usual_limits(cautions(solved[0]))}
    # These ask for a gas turbine, or for the losses of a relief line.
    assert set(names) - met == {"C-K16b", "C-R7", "C-R8"}


def test_usual_limits_stand_apart_from_those_of_the_spec(heat_pump: Solved) -> None:
    findings = examine(*heat_pump)
    assert [one["id"] for one in findings.limits] == ["L1", "L2", "L3", "L4", "L5"]
    assert findings.usual_limits == usual_limits(findings.cautions)
    assert all(one["id"].startswith("U-") for one in findings.usual_limits)
