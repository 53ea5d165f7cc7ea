"""All findings of a sheet together: their shape, their order, what they cost."""
from __future__ import annotations

import json
import time
from pathlib import Path

import pytest
from check_cases import Solved, heat_pump_text, solve_text, with_value

from calcpack.checks import CHECKS, examine
from calcpack.checks.cautions.caution import NOT_EVALUATED, NOT_TRIGGERED, TRIGGERED
from calcpack.errors import BrokenLawError
from calcpack.methods.starter import starter
from calcpack.pipeline import solve_spec


def test_entries_are_json_with_unique_names_and_known_words(heat_pump: Solved, engine: Solved) -> None:
    for solved in (heat_pump, engine):
        findings = examine(*solved)
        json.dumps([findings.limits, findings.checks, findings.cautions], allow_nan=False)
        for entries in (findings.limits, findings.checks, findings.cautions):
            names = [entry["id"] for entry in entries]
            assert len(names) == len(set(names))
        assert {entry["status"] for entry in findings.checks} <= {"ok", "fails", "not evaluated"}
        assert {entry["status"] for entry in findings.cautions} <= {TRIGGERED, NOT_TRIGGERED, NOT_EVALUATED}


def test_groups_stand_together_in_the_order_of_the_checks(heat_pump: Solved) -> None:
    groups = [entry["group"] for entry in examine(*heat_pump).checks]
    assert list(dict.fromkeys(groups)) == [
        "Mass balance", "Energy balance", "Entropy generated", "Bound", "Pinch", "Exergy", "Property range",
        "Critical point", "Second source", "Second way", "Re-done from print"]
    assert groups == sorted(groups, key=list(dict.fromkeys(groups)).index)
    assert len(CHECKS) == 14


def test_a_broken_law_stops_but_a_failed_limit_does_not(heat_pump: Solved) -> None:
    solution, record = heat_pump
    assert "fails" in {limit["status"] for limit in examine(solution, record).limits}
    with pytest.raises(BrokenLawError):
        examine(with_value(solution, COP=99.0), record)


def test_findings_reach_the_record(tmp_path: Path) -> None:
    path = tmp_path / "case.yaml"
    path.write_text(heat_pump_text(), "utf-8")
    record = solve_spec(path)
    assert [limit["id"] for limit in record.failed_limits] == ["L4"]
    assert record.data["checks"] and record.data["cautions"]


@pytest.mark.parametrize("name", ["carnot-cycle", "none", "carnot-bound"])
def test_sheets_without_machines_have_few_findings(name: str) -> None:
    findings = examine(*solve_text(starter(name, {})))
    assert findings.cautions == ()
    assert {entry["group"] for entry in findings.checks} <= {"Bound", "Two ways", "Property range", "Second way",
                                                             "Re-done from print"}


def test_findings_cost_less_than_the_solution(heat_pump: Solved) -> None:
    started = time.perf_counter()
    solve_text(heat_pump_text())
    solving = time.perf_counter() - started
    started = time.perf_counter()
    examine(*heat_pump)
    assert time.perf_counter() - started < solving
