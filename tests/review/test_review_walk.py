"""On the example package: exactly the marks downstream of a change lapse, as a walk of this test's own says.

The walk reads what two records print of each entry and the names that each step
uses; it knows nothing of identities.
"""
from __future__ import annotations

import re
from math import fsum
from pathlib import Path
from typing import Any

import pytest

from calcpack.pipeline import solve_spec
from calcpack.record import Record
from calcpack.review.marks import ReviewFile
from calcpack.review.standing import standing
from calcpack.review.targets import targets_of
from calcpack.revisions.compare import compare

SPEC = Path(__file__).parents[2] / "specs" / "process-water-heat-pump.yaml"
Data = dict[str, Any]
Entry = dict[str, Any]

NARROW = ((r"eta_motor: \{value: 0\.94", "eta_motor: {value: 0.95"),
          (r"t_a: \{value: 5200 h", "t_a: {value: 5100 h"), (r"serves: heating", "serves: cooling"))
WIDE = ((r"T_sink_out: \{value: 70 degC", "T_sink_out: {value: 71 degC"),
        (r"eta_is: \{value: 0\.72", "eta_is: {value: 0.73"),
        (r"liquid: subcooled", "liquid: saturated"), (r"    dT_sc: .*\n", ""))


@pytest.fixture(scope="module")
def old() -> Record:
    return solve_spec(SPEC)


def _changed(edits: tuple[tuple[str, str], ...]) -> Record:
    text = SPEC.read_text("utf-8")
    for pattern, new in edits:
        text, count = re.subn(pattern, new, text)
        assert count == 1, pattern
    return solve_spec(SPEC, text=text, name=SPEC.name)


def _definition(step: Entry) -> list[Any]:
    """What a step says apart from its numbers."""
    detail = step.get("table") or step.get("choice") or step.get("lookup") or step.get("root") or {}
    kept = ("columns", "reduction", "column", "source", "points", "equation", "low_formula", "high_formula", "unknown")
    branches = [[one["condition"], one["value"], one["label"]] for one in detail.get("branches", ())]
    rows = [[one["label"], one["formula"]] for one in detail.get("rows", ())]
    return [step["kind"], step["formula"], step["unit"], step["title"], step["reference"], step["note"],
            {key: detail.get(key) for key in kept}, branches, rows]


def _reads(data: Data) -> dict[str, set[str]]:
    """What each step hangs on; an unknown, on the steps too that close its equation."""
    names = {one["id"]: one["symbol"] for one in data["steps"]}
    found = {}
    for one in data["steps"]:
        closing = (one.get("root") or one.get("optimum") or {}).get("closed_by") or ()
        found[one["symbol"]] = {*one["uses"], *(names[id_] for id_ in closing)}
    return found


def _downstream(before: Data, after: Data) -> set[str]:
    """The symbols of the new sheet whose value or definition moved, or that hang on one that did."""
    was = {one["symbol"]: one for one in (*before["inputs"], *before["steps"])}
    moved = {one["symbol"] for one in after["inputs"]
             if one["symbol"] not in was or one["value"] != was[one["symbol"]]["value"]}
    moved |= {one["symbol"] for one in after["steps"]
              if one["symbol"] not in was or _definition(one) != _definition(was[one["symbol"]])}
    reads = _reads(after)
    grown = True
    while grown:
        more = {symbol for symbol, names in reads.items() if symbol not in moved and names & moved}
        moved, grown = moved | more, bool(more)
    return moved


def _figures(data: Data, moved: set[str]) -> set[str]:
    """The ids of the figures on which a symbol stands that moved."""
    found = set()
    ends = {one["symbol"] for stream in data["streams"] for one in (stream["T_in"], stream["T_out"])}
    if ends & moved:
        found.add("arrangement")
    states = {one["symbol"] for state in data["states"] for one in (state[key] for key in "Tphsv") if one}
    if states & moved:
        found |= {"t-s", "log-p-h"}
    for one in data["exchangers"]:
        if {one["Q_dot"]["symbol"], one["pinch"]["dT"]["symbol"]} & moved:
            found.add(f"profile-{one['title'].lower()}")
    if data["ladder"]["end"]["symbol"] in moved:
        found.add("ladder")
    return found


@pytest.mark.parametrize(("edits", "some_stay"), [(NARROW, True), (WIDE, False)])
def test_exactly_what_hangs_on_two_inputs_and_an_option_lapses(
        old: Record, edits: tuple[tuple[str, str], ...], some_stay: bool) -> None:
    new = _changed(edits)
    before, after = old.data, new.data
    marks = tuple(_agreed(one) for one in targets_of(before))
    found = standing(after, ReviewFile(old.number, marks))
    moved = _downstream(before, after)
    known = {one.key for one in targets_of(before)}
    wanted = {("input", one["symbol"]) for one in after["inputs"] if one["symbol"] in moved}
    wanted |= {("step", one["symbol"]) for one in after["steps"] if one["symbol"] in moved}
    wanted |= {("limit", one["id"]) for one in after["limits"] if one["symbol"] in moved}
    wanted |= {("figure", name) for name in _figures(after, moved)}
    lapsed = {(one.kind, one.name) for one in found.lapsed}
    unmarked = {(one.kind, one.name) for one in found.items if one.state == "unmarked"}
    assert unmarked == {one.key for one in targets_of(after)} - known
    assert lapsed == wanted & known
    agreed = {(one.kind, one.name) for one in found.items if one.state == "agreed"}
    assert agreed == {one.key for one in targets_of(after)} - lapsed - unmarked and len(agreed) >= 20
    assert len(lapsed) >= 8 and some_stay == (("step", "COP") in lapsed and ("step", "T_2") in agreed)
    assert {one.name for one in found.gone} == {name for _, name in known - {one.key for one in targets_of(after)}}


def _agreed(target: Any) -> Any:
    from calcpack.review.marks import Mark
    return Mark(target.kind, target.name, "B", target.identity, target.shown, "agreed", "S. Virta", "2026-10-20")


def test_the_same_sheet_solved_again_keeps_every_mark(old: Record) -> None:
    review = ReviewFile(old.number, tuple(_agreed(one) for one in targets_of(old.data)))
    found = standing(solve_spec(SPEC).data, review)
    assert found.checked and len(found.items) > 100


@pytest.mark.parametrize("edits", [NARROW, WIDE])
def test_the_parts_of_why_a_result_moved_sum_to_its_change(old: Record, edits: tuple[tuple[str, str], ...]) -> None:
    new = _changed(edits)
    comparison = compare(old, new, folder=SPEC.parent)
    was = {one["symbol"]: one["value"] for one in (*old.data["inputs"], *old.data["steps"])}
    now = {one["symbol"]: one["value"] for one in (*new.data["inputs"], *new.data["steps"])}
    moved = [symbol for symbol in new.data["results"] if was[symbol] != now[symbol]]
    assert moved and set(moved) <= comparison["attribution"].keys()
    for symbol in moved:
        parts = [one["part_value"] for one in comparison["attribution"][symbol]["parts"]]
        scale = max(abs(was[symbol]), abs(now[symbol]))
        assert abs(fsum(parts) - (now[symbol] - was[symbol])) <= 1e-9 * scale, symbol
