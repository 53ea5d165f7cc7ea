"""What can be marked, and that an identity moves with everything that is seen and with nothing else."""
from __future__ import annotations

import copy
from collections.abc import Callable
from decimal import ROUND_HALF_EVEN, Decimal
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from calcpack.review.targets import record_identity, shows_the_same, targets_of

Data = dict[str, Any]


def _identities(data: Data) -> dict[tuple[str, str], str]:
    return {one.key: one.identity for one in targets_of(data)}


def _moved(old: Data, new: Data) -> set[str]:
    before, after = _identities(old), _identities(new)
    return {f"{kind}:{name}" for kind, name in before if after.get((kind, name)) != before[kind, name]}


def test_every_limit_input_assumption_step_and_figure_is_a_target_once_in_the_order_of_the_sheet(cooler: Data) -> None:
    keys = [one.key for one in targets_of(cooler)]
    assert keys == [("limit", "L1"), ("limit", "L2"), ("input", "Q_dot"), ("input", "T_in"), ("input", "T_out"),
                    ("input", "c_w"), ("input", "f_foul"), ("assumption", "A1"), ("step", "dT_w"), ("step", "m_dot"),
                    ("step", "area"), ("step", "kept")]


def test_a_target_carries_the_number_as_printed_its_unit_and_its_step(cooler: Data) -> None:
    found = {one.name: one for one in targets_of(cooler)}
    step = next(one for one in cooler["steps"] if one["symbol"] == "m_dot")
    assert (found["m_dot"].shown, found["m_dot"].number) == (f"{step['shown']} kg/s", step["id"])
    assert found["A1"].shown is None and found["f_foul"].shown == "1.2"


@pytest.mark.parametrize(("old", "new", "moved"), [
    ("120 kW", "121 kW", {"input:Q_dot", "step:m_dot", "step:area", "step:kept", "limit:L1"}),
    ("value: 1.2", "value: 1.25", {"input:f_foul", "step:area", "limit:L1"}),
    ("tol: 2 kW", "tol: 3 kW", {"input:Q_dot"}),
    ("note: at the drain", "note: at the pump", {"input:T_out"}),
    ("Wash water inlet, source: R1", "Wash water inlet, source: R1 row 2", {"input:T_in"}),
    ("0.1 * Q_dot", "0.2 * Q_dot", {"step:kept"}),
    ("title: Area,", "title: Area of plates,", {"step:area", "limit:L1"}),
    ("reference: energy balance", "reference: first law", {"step:m_dot"}),
    ("note: flat plates", "note: thin plates", {"step:area"}),
    ("at_most: 12 m2", "at_most: 13 m2", {"limit:L1"}),
    ("why: the drain", "why: the sewer", {"limit:L2"}),
    ("basis: lagging", "basis: thick lagging", {"assumption:A1"}),
    ("works, page 3", "works, page 4",
     {"input:Q_dot", "input:T_in", "input:T_out", "input:c_w", "input:f_foul", "limit:L1", "limit:L2"}),
])
def test_what_moves_lapses_with_all_that_hangs_on_it_and_nothing_else(
        cooler: Data, change: Callable[[str, str], Data], old: str, new: str, moved: set[str]) -> None:
    assert _moved(cooler, change(old, new)) == moved


@pytest.mark.parametrize(("old", "new"), [
    ("title: Cooler of the wash water", "title: Cooler"),
    ("purpose: Size", "purpose: Choose"), ("120 kW", "121 kW"), ("0.1 * Q_dot", "0.2 * Q_dot"),
    ("reference: definition", "reference: by definition"), ("at_most: 12 m2", "at_most: 13 m2"),
    ("page 3", "page 4"), ("[area, m_dot]", "[area]"), ("note: First issue", "note: The first issue"),
    ("effect: small", "effect: very small"), ("source: R1, tol: 2 kW", "source: R1, tol: 5 kW"),
])
def test_a_signature_is_bound_to_all_that_the_sheet_says(
        cooler: Data, change: Callable[[str, str], Data], old: str, new: str) -> None:
    assert record_identity(change(old, new)) != record_identity(cooler)


@pytest.mark.parametrize(("old", "new"), [
    ("status: for-review", "status: issued"), ("date: 2026-02-03\n  purpose", "date: 2026-02-09\n  purpose"),
    ("prepared: {name: R. Aldane", "prepared: {name: T. Nobody"), ("calcpack: 1\n", "# A comment.\ncalcpack: 1\n"),
    ("120 kW", "120.0 kW"),
])
def test_status_date_names_and_the_spelling_of_the_spec_void_no_signature(
        cooler: Data, change: Callable[[str, str], Data], old: str, new: str) -> None:
    assert record_identity(change(old, new)) == record_identity(cooler)
    assert _moved(cooler, change(old, new)) == set()


def test_another_machine_and_the_block_of_an_issue_void_no_signature(cooler: Data) -> None:
    data = copy.deepcopy(cooler)
    data["engine"].update(platform="Elsewhere", python="3.13.1", libraries={"CoolProp": "9"})
    data["issue"] = {"kind": "for use", "date": "2026-02-06"}
    for one in (*data["steps"], *data["checks"]):
        one["value"] = f"{one['value']} " if isinstance(one.get("value"), str) else one["value"] * (1.0 + 1e-13)
    assert record_identity(data) == record_identity(cooler) and _identities(data) == _identities(cooler)


CAUTION = {"id": "C-1", "status": "triggered", "topic": "Heat", "text": "Hot.", "value": "60 °C", "threshold": "50 °C",
           "source": "practice", "defer": "Local codes decide.", "reason": None}


@pytest.mark.parametrize(("part", "key"), [
    ("sheet", "revision"), ("sheet", "scope"), ("cautions", "status"), ("cautions", "text"), ("cautions", "value"),
    ("checks", "status"), ("limits", "status"), ("references", "text"), ("steps", "shown"), ("steps", "numbers")])
def test_whatever_else_is_printed_voids_a_signature(cooler: Data, part: str, key: str) -> None:
    before = copy.deepcopy(cooler) | {"cautions": [CAUTION]}
    after = copy.deepcopy(before)
    entry = after[part] if part == "sheet" else after[part][0]
    entry[key] = "7.77"
    assert record_identity(after) != record_identity(before)


@pytest.mark.parametrize(("seen", "now", "same"), [
    ("88.31 °C", "88.31 °C", True), ("88.31 °C", "88.312 °C", True), ("88.31 °C", "88.32 °C", False),
    ("88.31 °C", "88.3 °C", True), ("88.36 °C", "88.3 °C", False), ("88.31 °C", "88.31 K", False),
    ("4.239", "4.2391", True), ("4.239", "4.239 kW", False),
    ("354.78 K (81.63 °C)", "354.781 K (81.631 °C)", True), ("-1.5e-6 m³", "-1.52e-6 m³", True),
    ("-1.5e-6 m³", "-1.5e-5 m³", False), ("−3 K", "-3.2 K", True), ("none", "none", True), ("none", "4", False),
    (None, None, True), (None, "4", False), ("4", None, False), ("120 kW", "120.4 kW", True)])
def test_numbers_are_the_same_to_the_digits_of_the_coarser(seen: str | None, now: str | None, same: bool) -> None:
    assert shows_the_same(seen, now) is same


@given(st.decimals(-1000, 1000, places=6), st.integers(0, 5), st.integers(-300, 300))
def test_any_number_rounds_to_its_own_print_and_to_no_other(value: Decimal, places: int, off: int) -> None:
    place = Decimal(1).scaleb(-places)
    seen = value.quantize(place, ROUND_HALF_EVEN)
    assert shows_the_same(f"{seen:f} kW", f"{value:f} kW")
    if off:
        assert not shows_the_same(f"{seen + off * place:f} kW", f"{seen:f} kW")
