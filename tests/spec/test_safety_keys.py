"""The safety quantities: what is read, in which kind, and what the schema says of them."""
from __future__ import annotations

from pathlib import Path

import pytest

from calcpack.errors import SpecError
from calcpack.spec import json_schema, read_spec
from calcpack.spec.safety import BY_NAME, QUANTITIES

HEAD = """\
calcpack: 1
sheet: {number: T-1, title: Test sheet, project: Tests, revision: A, status: draft, p_atm: 0.95 bar}
case:
  method: none
"""


def read(text: str):
    return read_spec(Path("safety.yaml"), text=HEAD + text)


def test_every_example_reads_in_its_own_kind():
    lines = "".join(f"    {one.name}: {one.example}\n" for one in QUANTITIES)
    spec = read("  safety:\n" + lines)
    assert list(spec.case.safety.values) == [one.name for one in QUANTITIES]
    for one in QUANTITIES:
        assert one.above < one.value(spec.case.safety.values[one.name], spec.sheet.p_atm) <= one.most


def test_gauge_pressures_add_the_sheets_atmosphere():
    spec = read("  safety: {PS: 25 bar(g), relief_set: 24 bar}\n")
    assert BY_NAME["PS"].value(spec.case.safety.values["PS"], spec.sheet.p_atm) == pytest.approx(25.95e5)
    assert BY_NAME["relief_set"].value(spec.case.safety.values["relief_set"], spec.sheet.p_atm) == 24e5


def test_a_sheet_without_safety_quantities_has_none():
    safety = read("").case.safety
    assert (safety.values, safety.room_level, safety.source, safety.fluid_group) == ({}, None, None, None)


def test_room_and_group_are_words():
    safety = read("  safety: {room_level: lowest-basement, fluid_group: 2, source: Plant list}\n").case.safety
    assert (safety.room_level, safety.fluid_group, safety.source) == ("lowest-basement", "2", "Plant list")


@pytest.mark.parametrize(("written", "what"), [
    ("charge: 12 m³", "a mass is meant"), ("charge: 0 kg", "out of range"), ("charge: 12", "a mass is meant"),
    ("suction_head: 3 bar", "a length is meant"), ("PS: 25", "a pressure is meant"),
    ("PS: -2 bar(g)", "not above zero"), ("volumetric_efficiency: 1.2", "out of range"),
    ("store_temperature: 60 bar", "a temperature is meant"), ("colour: red", "unknown key"),
    ("source: R7", "no reference or assumption")])
def test_what_does_not_fit_is_refused(written, what):
    with pytest.raises(SpecError) as raised:
        read(f"  safety: {{{written}}}\n")
    assert what in raised.value.faults[0].what


def test_the_schema_documents_every_quantity():
    keys = json_schema()["$defs"]["WrittenSafety"]["properties"]
    assert set(BY_NAME) | {"room_level", "fluid_group", "source"} == set(keys)
    for one in QUANTITIES:
        assert keys[one.name]["description"] == one.says and keys[one.name]["examples"] == [one.example]


def test_a_waiver_is_kept_whole():
    spec = read("limits:\n  - {id: L1, symbol: a, at_most: 3, why: w, "
                "waiver: {reason: r, name: A. Example, date: 2026-01-31}}\n"
                "  - {id: L2, symbol: a, at_least: 1, why: w}\n")
    first, second = spec.limits
    assert (first.waiver.reason, first.waiver.name, first.waiver.date) == ("r", "A. Example", "2026-01-31")
    assert second.waiver is None
