"""Tolerances to their effects: exact for linear cases, combined as JCGM 100:2008, 5.1.2 says."""
from __future__ import annotations

import math
from pathlib import Path

import pytest

from calcpack.pipeline import solve_spec

SHEET = """\
calcpack: 1
sheet: {{number: T-1, title: Sum, project: Trial works, revision: A, status: draft}}
case:
  method: none
  inputs:
    a: {{value: 10 kW, tol: 3 kW}}
    b: {{value: 4 kW, tol: 4 kW}}
    c: 2
steps:
  - {{symbol: y, title: Total, formula: {formula}, unit: kW}}
limits:
  - {{id: L1, symbol: y, at_most: {bound}, why: trial}}
results: [y]
"""
UNUSED = "    b: {{value: 4 kW, tol: 4 kW}}\n    c: 2\n"


def entry(formula: str = "a - c * b", bound: str = "20 kW"):
    text = SHEET.format(formula=formula, bound=bound)
    return solve_spec(Path("t.yaml"), text=text, name="t.yaml").data["uncertainty"]


def test_each_input_moves_the_result_by_its_own_slope():
    rows = {row["symbol"]: row["effects"]["y"] for row in entry()["inputs"]}
    assert rows["a"]["low_value"] == pytest.approx(-3000.0) and rows["a"]["high_value"] == pytest.approx(3000.0)
    assert rows["b"]["low_value"] == pytest.approx(8000.0) and rows["b"]["high_value"] == pytest.approx(-8000.0)


def test_effects_combine_as_root_of_squares_and_as_sum():
    (row,) = entry()["results"]
    assert row["combined_value"] == pytest.approx(math.hypot(3000.0, 8000.0))
    assert row["sum_value"] == pytest.approx(11000.0)
    assert row["combined"] == "8.5 kW" and row["sum"] == "11 kW"


@pytest.mark.parametrize(("bound", "verdict"), [
    ("14 kW", "holds at the sum of all tolerances"),
    ("12 kW", "holds at the combined tolerance, not at the sum"),
    ("5 kW", "margin smaller than the combined tolerance"),
    ("1 kW", "does not hold as calculated")])
def test_a_limit_is_judged_with_the_tolerances(bound, verdict):
    assert entry(bound=bound)["limits"][0]["verdict"] == verdict


def test_an_end_without_an_answer_is_told_and_not_guessed():
    found = entry(formula="sqrt(b - 1 kW) * sqrt(a) * c / 2")
    assert found["inputs"][1]["effects"]["y"] is None
    assert found["results"][0]["combined"] is None
    assert found["limits"][0]["verdict"] == "an end of a tolerance has no answer"


def test_the_solution_itself_is_not_disturbed_by_the_trials():
    path = Path(__file__).parents[2] / "specs" / "process-water-heat-pump.yaml"
    record = solve_spec(path).data
    stated = {one["symbol"]: one["tol"] for one in record["inputs"] if one["tol"]}
    assert set(stated) == {row["symbol"] for row in record["uncertainty"]["inputs"]}
    assert all(check["status"] != "fails" for check in record["checks"])


def test_a_sheet_without_tolerances_has_no_entry():
    text = SHEET.replace(UNUSED, "").format(formula="a", bound="20 kW").replace(", tol: 3 kW", "")
    assert solve_spec(Path("t.yaml"), text=text, name="t.yaml").data["uncertainty"] is None
