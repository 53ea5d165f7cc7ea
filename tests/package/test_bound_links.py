"""A package whose sheets do not agree with each other says so on its cover."""
from __future__ import annotations

import copy
from typing import Any

import pytest
from package_sheets import write_sheet

from calcpack.package.bound_front import _open
from calcpack.package.bound_links import at_odds
from calcpack.package.bound_sheets import BoundSheet, Signed
from calcpack.package.transmittal import rows_of
from calcpack.pipeline import solve_all
from calcpack.record import Record


@pytest.fixture(scope="module")
def pair(tmp_path_factory: pytest.TempPathFactory) -> tuple[Any, Any]:
    """The records of WB-1, and of WB-2, which takes its Q."""
    folder = tmp_path_factory.mktemp("specs")
    first = write_sheet(folder, "WB-1", {"m": "2 kg/s"}, {"Q": "m * 100 kJ/kg"})
    second = write_sheet(folder, "WB-2", {"P": "{from: WB-1.Q}"}, {"P_2": "P * 2"})
    records = solve_all([first, second])
    return records[0].data, records[1].data


def test_sheets_that_agree_have_nothing_said(pair):
    source, taker = pair
    assert at_odds(taker, {"WB-1": source, "WB-2": taker}) == [] == at_odds(source, {"WB-1": source})


def test_a_value_that_moved_since_it_was_taken_is_told_with_both(pair):
    source, taker = copy.deepcopy(pair)
    [step] = source["steps"]
    step.update(value=step["value"] * 1.1, shown="220.0")
    source["sheet"]["revision"] = "B"
    [line] = at_odds(taker, {"WB-1": source})
    assert line.startswith("P was taken as WB-1.Q = 200") and "of revision A" in line
    assert line.endswith("revision B, bound here, has 220.0 kW")


def test_a_new_revision_with_the_same_value_is_no_matter(pair):
    source, taker = copy.deepcopy(pair)
    source["sheet"]["revision"] = "B"
    assert at_odds(taker, {"WB-1": source}) == []


def test_a_source_without_the_value_or_outside_the_package_is_told(pair):
    source, taker = copy.deepcopy(pair)
    source["steps"] = []
    assert at_odds(taker, {"WB-1": source})[0].endswith("bound here, has no such value")
    assert at_odds(taker, {}) == ["takes values from WB-1, which is not in this package"]


def test_the_cover_lists_what_does_not_agree(pair):
    source, taker = copy.deepcopy(pair)
    source["steps"][0].update(value=1.0, shown="0.001")
    sheets = [BoundSheet(Record(data), "issued", "2026-03-31", (Signed("N. N.", "signed"),) * 3, b"", "f", "0" * 64)
              for data in (source, taker)]
    [line] = _open(rows_of(sheets, [1, 1], 1))
    assert line.startswith("WB-2: P was taken as WB-1.Q = 200")
