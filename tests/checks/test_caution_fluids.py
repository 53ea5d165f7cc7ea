"""Cautions by fluid: ammonia, carbon dioxide, a room with R-134a, warming, the two circuits of a cascade."""
from __future__ import annotations

import dataclasses

import pytest
from check_cases import Solved, by_id, solve_text
from safety_cases import ROOM, found

from calcpack.checks.cautions import cautions
from calcpack.checks.cautions.caution import NOT_TRIGGERED, TRIGGERED
from calcpack.methods.starter import starter


def test_governing_charge_of_ammonia_is_that_of_toxicity(ammonia: Solved) -> None:
    # The larger of 0.00022 and 0.00035 kg/m³ (EN 378-1 Annex E, second-hand) is far below 0.2 · 0.116.
    one = found(ammonia, charge="1 kg", **ROOM)["C-C5"]
    assert "toxicity governs" in one["reason"] and "= 0.1050 kg" in one["working"] and one["status"] == TRIGGERED


@pytest.mark.parametrize(("name", "safe", "unsafe"), [
    # Ontario list: 25 ppm; Minnesota page: 300 ppm (both from the text).
    ("C-T2", "0.0025 %", "0.0026 %"), ("C-T3", "0.03 %", "0.0301 %")])
def test_ammonia_in_the_air(ammonia: Solved, name: str, safe: str, unsafe: str) -> None:
    assert found(ammonia, concentration=safe)[name]["status"] == NOT_TRIGGERED
    assert found(ammonia, concentration=unsafe)[name]["status"] == TRIGGERED


def test_ammonia_has_its_own_rules(ammonia: Solved) -> None:
    # EN 378-1: ATEL/ODL 0.00022 kg/m³ (second-hand); RD 552/2019 IF-07 6.3: 2000 kg; B2L closes the route of App. 4.
    for charge, expected in (("0.065 kg", NOT_TRIGGERED), ("0.067 kg", TRIGGERED)):
        assert found(ammonia, charge=charge, **ROOM)["C-T1a"]["status"] == expected
    for charge, expected in (("2000 kg", NOT_TRIGGERED), ("2001 kg", TRIGGERED)):
        assert found(ammonia, charge=charge)["C-M10"]["status"] == expected
    one = found(ammonia, charge="1 kg")
    assert one["C-C8"]["status"] == TRIGGERED and one["C-C8"]["value"] == "class B2L"
    assert "42 g/mol" in found(ammonia, charge="1 kg", room_area="9 m²", mounting_height="1 m")["C-C6"]["reason"]
    assert "C-C9" not in one and "C-M12" not in one and "C-P22" not in one
    assert one["C-M4"]["status"] == NOT_TRIGGERED and "high" in one["C-M4"]["reason"]
    assert "rules of its own" in one["C-M8"]["reason"]


@pytest.mark.parametrize(("name", "safe", "unsafe"), [
    # Ontario list: 5000 ppm; RD 552/2019 IF-04 5.2.3.1: 3 %; NIOSH: 40 000 ppm (from memory).
    ("C-T4", "0.5 %", "0.51 %"), ("C-T5", "3 %", "3.1 %"), ("C-T6", "4 %", "4.1 %")])
def test_carbon_dioxide_in_the_air(carbon_dioxide: Solved, name: str, safe: str, unsafe: str) -> None:
    assert found(carbon_dioxide, concentration=safe)[name]["status"] == NOT_TRIGGERED
    assert found(carbon_dioxide, concentration=unsafe)[name]["status"] == TRIGGERED


def test_the_effects_of_carbon_dioxide_are_named_as_far_as_they_reach(carbon_dioxide: Solved) -> None:
    assert "above 3.00 %, 10.0 %" in found(carbon_dioxide, concentration="12 %")["C-T5"]["reason"]


def test_measures_of_a_room_with_r134a(harmless: Solved) -> None:
    # RD 552/2019 IF-04 App. 4, worked example: 90 kg in 300 m³ = 0.30, QLMV 0.28, QLAV 0.58: one measure.
    one = found(harmless, charge="90 kg", **ROOM)["C-C9"]
    assert one["value"] == "0.300 kg/m³: one measure" and one["status"] == TRIGGERED
    assert "0.584 kg/m³" in one["reason"] and "worked example" in one["reason"]
    assert found(harmless, charge="80 kg", **ROOM)["C-C9"]["status"] == NOT_TRIGGERED
    assert found(harmless, charge="180 kg", **ROOM)["C-C9"]["value"].endswith("two measures")
    # In the lowest basement RCL, 0.21 kg/m³, stands for QLMV, and QLAV is never exceeded.
    basement = {"room_level": "lowest-basement", **ROOM}
    assert found(harmless, charge="64 kg", **basement)["C-C9"]["value"].endswith("one measure")
    assert "not allowed" in found(harmless, charge="180 kg", **basement)["C-C9"]["value"]


@pytest.mark.parametrize(("kilograms", "months"), [("3.49 kg", None), ("3.5 kg", 12), ("35 kg", 6), ("350 kg", 3)])
def test_leak_checks_by_equivalent(harmless: Solved, kilograms: str, months: int | None) -> None:
    # R-134a, 1430 by the fourth report; 5, 50 and 500 t (EU 2024/573, from memory).
    one = found(harmless, charge=kilograms)["C-M12"]
    assert one["status"] == (TRIGGERED if months else NOT_TRIGGERED)
    assert one["value"].endswith(f"each {months} months" if months else "none")
    assert found(harmless, charge="349 kg")["C-M11"]["status"] == NOT_TRIGGERED
    assert found(harmless, charge="350 kg")["C-M11"]["status"] == TRIGGERED


def test_total_warming_adds_leaks_end_and_energy(harmless: Solved) -> None:
    # RD 552/2019 IF-02 App. 2: 1430·0.4·10^(2/3)·15 + 1430·10·0.05 + 15·1000·0.5 = 39825 + 715 + 7500 kg.
    one = found(harmless, charge="10 kg", annual_energy="1 MWh/a", years="15 a", grid_emission="0.5 kg/kWh")["C-M14"]
    assert one["value"] == "48.04 t of CO2 equivalent" and one["threshold"] == "none: information"
    assert "C-M14" not in found(harmless, room_area="9 m²")


def test_carbon_dioxide_and_ammonia_in_one_plant(ammonia: Solved, carbon_dioxide: Solved) -> None:
    plan = ammonia[0].plan
    both = dataclasses.replace(plan, fluids={**plan.fluids, "source": carbon_dioxide[0].plan.fluids["wf"]})
    assert "C-T9" not in found(ammonia)
    assert by_id(cautions(dataclasses.replace(ammonia[0], plan=both)))["C-T9"]["status"] == TRIGGERED


@pytest.fixture(scope="module")
def cascade() -> Solved:
    """Carbon dioxide in the low circuit, ammonia in the high one."""
    return solve_text(starter("cascade", {}))


def test_the_second_fluid_of_a_cascade_has_cautions_of_its_own(cascade: Solved) -> None:
    # Ammonia is B2L, carbon dioxide A1 (EN 378-1 Annex E, second-hand).
    one = found(cascade)
    assert one["C-T1"]["status"] == NOT_TRIGGERED and one["C-T1-wf_high"]["status"] == TRIGGERED
    assert one["C-T1"]["topic"].endswith(", R-744") and one["C-T1-wf_high"]["topic"].endswith(", R-717")
    assert one["C-T9"]["status"] == TRIGGERED and not one["C-T9"]["topic"].endswith(", R-744")
    assert one["C-C1-wf_high"]["reason"] == "not given under case.safety: charge_high" and "C-C1" not in one


# Carbon dioxide: practical limit 0.10 kg/m³; ammonia: practical limit 0.00035 kg/m³, LFL 0.116 kg/m³ (EN 378-1
# Annex E, second-hand). Rules as in the table of thresholds: 30 kg and 0.105 kg in 300 m³; m_1 = 6 · 0.116 kg;
# 14 · m^(2/3) L/s, 2000 m³/h at 250 kg; a bund from 2000 kg; 29 CFR 1910.146: 6.92 % by volume.
CIRCUITS = [
    ("C-C4", "charge", "29.9 kg", "30.1 kg"), ("C-C4-wf_high", "charge_high", "0.104 kg", "0.106 kg"),
    ("C-C5-wf_high", "charge_high", "0.104 kg", "0.106 kg"), ("C-C1-wf_high", "charge_high", "0.695 kg", "0.697 kg"),
    ("C-M1", "charge", "249 kg", "251 kg"), ("C-M1-wf_high", "charge_high", "249 kg", "251 kg"),
    ("C-M10-wf_high", "charge_high", "2000 kg", "2001 kg"), ("C-T7", "concentration", "6.9 %", "6.95 %"),
    ("C-T7-wf_high", "concentration_high", "6.9 %", "6.95 %"), ("C-P22", "charge", "20 kg", "20.1 kg"),
    ("C-R9-wf_high", "charge_high", "500 kg", "501 kg")]


@pytest.mark.parametrize(("name", "key", "safe", "unsafe"), CIRCUITS)
def test_each_circuit_of_a_cascade_is_judged_by_its_own_charge(cascade: Solved, name: str, key: str, safe: str,
                                                               unsafe: str) -> None:
    other = {"charge": "charge_high", "charge_high": "charge"}.get(key)
    room = {**ROOM, "ventilation": "2000 m³/h"}
    for value, expected in ((safe, NOT_TRIGGERED), (unsafe, TRIGGERED)):
        for given in ({}, {other: "900 kg"} if other else {}):
            assert found(cascade, **room, **{key: value}, **given)[name]["status"] == expected


def test_the_warming_of_a_cascade_says_whose_charge_it_counts(cascade: Solved) -> None:
    one = found(cascade, charge="10 kg", annual_energy="1 MWh/a", years="15 a", grid_emission="0.5 kg/kWh")["C-M14"]
    assert one["reason"].endswith("the charge of the first circuit alone")
