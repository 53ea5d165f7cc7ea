"""Limits of the spec: value, bound, margin and verdict."""
from __future__ import annotations

import pytest
from check_cases import Solved, by_id, heat_pump_text, solve_text, with_value

from calcpack.checks.limits import limits


def test_margins_and_verdicts(heat_pump: Solved) -> None:
    solution, _ = heat_pump
    found = by_id(limits(solution))
    assert {name: one["status"] for name, one in found.items()} == {
        "L1": "holds", "L2": "holds", "L3": "holds", "L4": "fails", "L5": "holds"}
    COP = solution.value("COP")
    assert found["L2"]["margin_value"] == pytest.approx(COP - 3.5)
    assert found["L2"]["margin_percent"] == f"{100 * (COP - 3.5) / 3.5:.1f} %"
    assert found["L4"]["margin_value"] == pytest.approx(2e5 - solution.value("p_c"))
    assert found["L4"]["margin"].startswith("-") and found["L4"]["margin"].endswith(" bar")


def test_a_temperature_level_has_no_percentage_and_says_why(heat_pump: Solved) -> None:
    one = by_id(limits(heat_pump[0]))["L1"]
    assert one["margin_percent"] is None and "temperature level" in one["margin_percent_reason"]
    assert one["bound"] == "383.15 K (110.00 °C)"
    assert one["margin"].endswith(" K")


def test_a_difference_of_temperatures_has_a_percentage(heat_pump: Solved) -> None:
    one = by_id(limits(heat_pump[0]))["L3"]
    assert one["margin_percent"].lstrip("-") == "0.0 %"


def test_a_bound_reads_as_it_was_written(heat_pump: Solved) -> None:
    assert by_id(limits(heat_pump[0]))["L2"]["bound"] == "3.50"


def test_a_bound_that_is_a_symbol_is_named_with_its_value(heat_pump: Solved) -> None:
    solution, _ = heat_pump
    one = by_id(limits(solution))["L5"]
    assert one["text"].endswith(f"at most COP_rev = {solution.shown('COP_rev')}")


def test_a_root_that_comes_to_its_bound_holds(heat_pump: Solved) -> None:
    solution, _ = heat_pump
    hair = with_value(solution, dT_min_c=3.0 * (1 - 1e-10))
    assert by_id(limits(hair))["L3"]["status"] == "holds"
    assert by_id(limits(with_value(solution, dT_min_c=2.9999)))["L3"]["status"] == "fails"


def test_a_margin_too_small_for_the_printed_places_is_not_printed_as_zero(heat_pump: Solved) -> None:
    solution, _ = heat_pump
    one = by_id(limits(with_value(solution, COP=3.5 - 1e-5)))["L2"]
    assert one["status"] == "fails" and one["margin"] == "-1.0e-5"


def test_limits_read_in_us_units() -> None:
    solution, _ = solve_text(heat_pump_text(units="us"))
    found = by_id(limits(solution))
    assert found["L1"]["bound"] == "689.670 °R (230.000 °F)"
    assert found["L4"]["bound"].endswith(" psi")
    assert {name: one["status"] for name, one in found.items()}["L4"] == "fails"
