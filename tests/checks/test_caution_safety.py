"""Cautions that need safety quantities: each threshold on both sides, and what happens without them."""
from __future__ import annotations

import dataclasses
from collections.abc import Callable
from typing import Any

import pytest
from check_cases import Solved, by_id, engine_text, solve_text, with_value

from calcpack.checks.cautions import cautions
from calcpack.checks.cautions.caution import NOT_EVALUATED, NOT_TRIGGERED, TRIGGERED
from calcpack.formula.evaluate import value as evaluated
from calcpack.formula.parse import parse
from calcpack.methods.starter import starter
from calcpack.solving.solution import Solution
from calcpack.spec.model import Safety
from calcpack.units.digits import last_place

ZERO = 273.15


def with_safety(solution: Solution, room_level: str | None = None, fluid_group: str | None = None,
                **values: str) -> Solution:
    """A solution whose spec gives these safety quantities."""
    case = dataclasses.replace(solution.spec.case, safety=Safety(values, room_level, "R1", fluid_group))
    return dataclasses.replace(solution, spec=dataclasses.replace(solution.spec, case=case))


def found(solved: Solved, **safety: Any) -> dict[str, dict[str, Any]]:
    """The cautions by their id, with these safety quantities."""
    return by_id(cautions(with_safety(solved[0], **safety)))


@pytest.fixture(scope="module")
def ammonia(vary: Callable[..., Solved]) -> Solved:
    return vary(wf="R-717")


@pytest.fixture(scope="module")
def carbon_dioxide(vary: Callable[..., Solved]) -> Solved:
    return vary(wf="R-744", T_source_in="-5 degC", T_source_out="-10 degC", T_sink_in="5 degC", T_sink_out="10 degC",
                source="{fluid: ethylene glycol, mass_fraction: 0.4}")


@pytest.fixture(scope="module")
def harmless(vary: Callable[..., Solved]) -> Solved:
    return vary(wf="R-134a")


@pytest.fixture(scope="module")
def steam() -> Solved:
    return solve_text(engine_text(wf="water", T_c="40 degC", T_e="180 degC", T_source_in="350 degC"))


ROOM = {"room_volume": "300 m³"}

# R-1234ze(E): class A2L, LFL 0.303 kg/m³ and ATEL/ODL 0.28 kg/m³ (EN 378-1 Annex E, second-hand), RCL 0.075 kg/m³
# (from memory), molar mass 114.04 g/mol. Each row: caution, what is given, the key, its last safe and first unsafe.
THRESHOLDS: list[tuple[str, dict[str, str], str, str, str]] = [
    # RD 552/2019 IF-04 App. 2 (from the text): 6 · 0.303 = 1.818 kg; sealed units the same.
    ("C-C1", {}, "charge", "1.817 kg", "1.819 kg"),
    ("C-C3", {}, "charge", "1.817 kg", "1.819 kg"),
    # The larger of practical limit and ATEL/ODL, 0.28 kg/m³, in 300 m³ (same).
    ("C-C4", ROOM, "charge", "83.99 kg", "84.01 kg"),
    # Flammability governs: 0.2 · 0.303 · 300 = 18.18 kg (same).
    ("C-C5", ROOM, "charge", "18.17 kg", "18.19 kg"),
    ("C-C12", ROOM, "charge", "18.17 kg", "18.19 kg"),
    # App. 3: 2.5 · 0.303^1.25 · 2.2 · √75 = 10.707 kg.
    ("C-C6", {"room_area": "75 m²", "mounting_height": "2.2 m"}, "charge", "10.70 kg", "10.72 kg"),
    # App. 3: 0.25 · A · 0.303 · 2.2 = 2 kg needs 12.00 m² of a movable unit.
    ("C-C7", {"charge": "2 kg"}, "room_area", "12.01 m²", "11.99 m²"),
    # App. 4: 195 · 0.303 = 59.085 kg.
    ("C-C8", {}, "charge", "59.08 kg", "59.09 kg"),
    # App. 4: QLAV is half of 0.303 kg/m³.
    ("C-C10", ROOM, "charge", "45.44 kg", "45.46 kg"),
    # App. 4: 10 / 0.075 = 133.3 m³/h.
    ("C-C13", {}, "ventilation", "133.4 m³/h", "133.3 m³/h"),
    # ASHRAE 15-2022 (from memory): half of 0.303 kg/m³ in 300 m³.
    ("C-C16", ROOM, "charge", "45.44 kg", "45.46 kg"),
    # RD 552/2019 IF-04 4.3: 60 · 5 kg / 4.661 kg/m³ = 64.4 m³/h.
    ("C-C15", {"charge": "5 kg", "enclosure_volume": "4 m³"}, "enclosure_ventilation", "64.5 m³/h", "64.2 m³/h"),
    # IF-07 5.2: 14 · 100^(2/3) = 301.6 L/s = 1086 m³/h; ASHRAE 15 (from memory): 70 · √100 = 700 L/s.
    ("C-M1", {"charge": "100 kg"}, "ventilation", "302 L/s", "301 L/s"),
    ("C-M3", {"charge": "100 kg"}, "ventilation", "700 L/s", "699 L/s"),
    # IF-07 5.1: 6 changes an hour of 300 m³.
    ("C-M2", {**ROOM, "room_level": "below-ground"}, "ventilation", "1800 m³/h", "1799 m³/h"),
    # IF-04 4.2.2: no surface above 400 °C; IF-04 3.3.1.1: 100 K below 368 °C.
    ("C-M6", {}, "surface_temperature", "400 degC", "400.1 degC"),
    ("C-M5", {}, "surface_temperature", "268 degC", "268.1 degC"),
    # IF-07 7.2: the whole charge reaches 0.303 kg/m³.
    ("C-M9", ROOM, "charge", "90.89 kg", "90.91 kg"),
    # Regulation (EU) 2024/573 (from memory): unsaturated fluids from 1 kg.
    ("C-M12", {}, "charge", "0.99 kg", "1 kg"),
    # IF-01 3.7.11: 140 000 ppm; 29 CFR 1910.146(b): 19.5 % of oxygen is 6.92 % of refrigerant.
    ("C-C11", {}, "concentration", "14 %", "14.01 %"),
    ("C-T7", {}, "concentration", "6.9 %", "6.95 %"),
    # IF-09 1.6.2: above 20 kg; IF-04 3.3.1.2: above 500 kg.
    ("C-P22", {}, "charge", "20 kg", "20.1 kg"),
    ("C-R9", {}, "charge", "500 kg", "501 kg"),
    # IF-08 1 (from the text).
    ("C-R1", {"PS": "25 bar(g)"}, "relief_set", "25 bar(g)", "25.01 bar(g)"),
    # IF-08 3.3.2: 25 L/s, with 1500 1/min 1 L a turn.
    ("C-R2", {"speed": "1500 1/min"}, "swept_volume", "1 L", "1.001 L"),
    # IF-08 3.3.4.1: from 100 dm³ on.
    ("C-R6", {}, "vessel_volume", "99.9 L", "100 L"),
    # IF-08 3.5: below 10 % of 1.1 · 20 + 1.01325 = 23.01 bar absolute; API 520-II (from memory): 3 % of 20 bar.
    ("C-R7", {"relief_set": "20 bar(g)"}, "relief_outlet_loss", "2.30 bar", "2.31 bar"),
    ("C-R8", {"relief_set": "20 bar(g)"}, "relief_inlet_loss", "0.60 bar", "0.61 bar"),
    # Practice (from memory).
    ("C-K15a", {}, "water_velocity", "0.9 m/s", "0.89 m/s"),
    ("C-K15a", {}, "water_velocity", "2.5 m/s", "2.51 m/s"),
    ("C-K15b", {}, "suction_velocity", "5 m/s", "4.9 m/s"),
    ("C-K15b", {}, "suction_velocity", "20 m/s", "20.1 m/s"),
    # Building-services page (second-hand); HSE page (from the text).
    ("C-H4", {}, "tap_temperature", "41 degC", "41.1 degC"),
    ("C-H5", {}, "store_temperature", "60 degC", "59.9 degC"),
    ("C-H6", {}, "store_temperature", "45 degC", "44.9 degC"),
    # ISO 13732-1 and ASTM C1055 (from memory).
    ("C-H1", {}, "surface_temperature", "64.9 degC", "65 degC"),
    ("C-H2", {}, "surface_temperature", "60 degC", "60.1 degC"),
]


@pytest.mark.parametrize(("name", "given", "key", "safe", "unsafe"), THRESHOLDS)
def test_a_caution_is_triggered_beyond_its_threshold_only(
        heat_pump: Solved, name: str, given: dict[str, str], key: str, safe: str, unsafe: str) -> None:
    assert found(heat_pump, **given, **{key: safe})[name]["status"] == NOT_TRIGGERED
    assert found(heat_pump, **given, **{key: unsafe})[name]["status"] == TRIGGERED


def test_what_is_not_given_is_named(heat_pump: Solved) -> None:
    one = found(heat_pump)
    for name, missing in (("C-C1", "charge"), ("C-C4", "charge, room_volume"), ("C-P20", "PS"), ("C-M1", "charge"),
                          ("C-C6", "charge, room_area, mounting_height"), ("C-R2", "swept_volume, speed")):
        assert one[name]["status"] == NOT_EVALUATED
        assert f"not given under case.safety: {missing}" in one[name]["reason"], name
    assert one["C-C1"]["threshold"] and "m_1 =" in one["C-C1"]["working"]


def test_every_hazard_stands_together(heat_pump: Solved, ammonia: Solved, steam: Solved) -> None:
    for solved in (heat_pump, ammonia, steam):
        hazards = [one["hazard"] for one in cautions(solved[0])]
        assert hazards == sorted(hazards, key=list(dict.fromkeys(hazards)).index)


EVERYTHING = {
    "charge": "60 kg", "room_volume": "300 m³", "room_area": "75 m²", "mounting_height": "2.2 m",
    "ventilation": "800 m³/h", "enclosure_volume": "4 m³", "enclosure_ventilation": "250 m³/h", "PS": "25 bar(g)",
    "PS_secondary": "10 bar(g)", "vessel_volume": "120 L", "vessel_area": "1.6 m²", "pipe_DN": "65",
    "relief_set": "24 bar(g)", "relief_inlet_loss": "0.4 bar", "relief_outlet_loss": "1.5 bar",
    "swept_volume": "1.9 L", "speed": "1450 1/min", "volumetric_efficiency": "0.85", "ambient_max": "36 degC",
    "ambient_min": "-10 degC", "room_dew_point": "12 degC", "water_velocity": "1.8 m/s", "NPSH_required": "1.2 m",
    "suction_head": "2 m", "suction_loss": "0.3 m", "annual_energy": "240 MWh/a", "years": "15 a",
    "grid_emission": "0.35 kg/kWh", "SO2": "0.03 %", "SO3_conversion": "2 %"}


def test_every_working_can_be_done_again_from_print(
        heat_pump: Solved, ammonia: Solved, carbon_dioxide: Solved, engine: Solved, steam: Solved) -> None:
    count = 0
    for solved in (heat_pump, ammonia, carbon_dioxide, engine, steam):
        for one in found(solved, fluid_group="2", room_level="below-ground", **EVERYTHING).values():
            for line in one["working"].splitlines():
                head, _, _ = line.partition(", with ")
                _, formula, numbers, result = head.split(" = ")
                printed = result.split(" ")[0]
                parse(formula)
                assert abs(float(evaluated(parse(numbers))) - float(printed)) <= 0.51 * last_place(printed), line
                count += 1
    assert count > 100


def test_all_thresholds_speak_the_units_of_the_sheet(vary: Callable[..., Solved]) -> None:
    us = found(vary(units="us"), fluid_group="2", **EVERYTHING)
    assert us["C-C1"]["value"] == "132.3 lb" and us["C-C4"]["threshold"].startswith("above 0.0175 lb/ft³")
    assert us["C-M1"]["value"].endswith(" ft³/min") and us["C-P21"]["value"].endswith(" psi(g)")


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


def test_the_standstill_pressure_is_held_against_ps(heat_pump: Solved) -> None:
    # EN 378-2 Table 2 (from memory): ambient up to 32, 38, 43, 55 °C gives 55, 59, 63, 67 °C.
    solution = heat_pump[0]
    for ambient, reference in (("32 degC", 55.0), ("32.1 degC", 59.0), ("43 degC", 63.0), ("55 degC", 67.0)):
        p = solution.plan.fluids["wf"].reader("p", ("T", "x"))(ZERO + reference, 0.0)
        for share, expected in ((1.001, NOT_TRIGGERED), (0.999, TRIGGERED)):
            assert found(heat_pump, ambient_max=ambient, PS=f"{p * share:.1f} Pa")["C-P18"]["status"] == expected
    assert found(heat_pump, ambient_max="56 degC")["C-P18"]["status"] == NOT_EVALUATED


def test_operating_pressure_keeps_below_nine_tenths_of_ps(heat_pump: Solved) -> None:
    # Practice (from memory), by gauge pressures.
    highest = (heat_pump[0].value("p_c") - 101325.0) / 0.9
    for share, expected in ((1.001, NOT_TRIGGERED), (0.999, TRIGGERED)):
        assert found(heat_pump, PS=f"{highest * share / 1e5:.5f} bar(g)")["C-P20"]["status"] == expected


def test_categories_of_the_circuit(heat_pump: Solved, ammonia: Solved) -> None:
    unknown = found(heat_pump, PS="25 bar(g)", vessel_volume="40 L")["C-P3"]
    assert unknown["status"] == NOT_EVALUATED and "fluid group" in unknown["reason"]
    one = found(heat_pump, fluid_group="2", PS="25 bar(g)", vessel_volume="40 L", pipe_DN="50")
    assert one["C-P3"]["status"] == TRIGGERED and one["C-P9"]["value"] == "category II"
    assert one["C-P6"]["status"] == TRIGGERED and one["C-P12"]["value"] == "category I"
    assert one["C-P14"]["value"] == "vessel" and "= 1000 bar·L" in one["C-P9"]["working"]
    assert found(heat_pump, fluid_group="2", PS="25 bar(g)", vessel_volume="2 L")["C-P9"]["status"] == NOT_TRIGGERED
    toxic = found(ammonia, PS="25 bar(g)", vessel_volume="40 L", pipe_DN="50")
    assert toxic["C-P9"]["value"] == "category III" and toxic["C-P12"]["value"] == "category II"


def test_steam_generators_have_their_own_table(steam: Solved) -> None:
    for volume, expected in (("2 L", NOT_TRIGGERED), ("2.1 L", TRIGGERED)):
        assert found(steam, vessel_volume=volume)["C-P8"]["status"] == expected
    assert found(steam, vessel_volume="100 L", PS="12 bar(g)")["C-P11"]["value"] == "category III"
    assert found(steam)["C-P17"]["status"] == TRIGGERED
    assert {"C-C1", "C-C11", "C-M1", "C-M6"} & set(found(steam)) == set()


def test_hot_steam(steam: Solved) -> None:
    # Practice, 565 to 600 °C (from memory).
    for T, expected in ((565.0, NOT_TRIGGERED), (565.1, TRIGGERED)):
        changed = with_value(steam[0], T_3=ZERO + T)
        assert by_id(cautions(changed))["C-K16a"]["status"] == expected


def test_water_hammer_against_the_secondary_circuit(heat_pump: Solved) -> None:
    given = {"water_velocity": "0.4 m/s"}
    assert found(heat_pump, **given)["C-R11"]["status"] == NOT_EVALUATED
    one = found(heat_pump, PS_secondary="10 bar(g)", **given)["C-R11"]
    assert one["status"] == NOT_TRIGGERED and "rho * a * dv" in one["working"]
    assert found(heat_pump, PS_secondary="9 bar(g)", **given)["C-R11"]["status"] == TRIGGERED


def test_the_feed_pump_draws_near_saturated_liquid(engine: Solved) -> None:
    # A ratio of 2.0 near the bubble point (a page citing ANSI/HI 9.6.1, second-hand); saturated liquid has no head
    # but the static one.
    given = {"suction_loss": "0.3 m", "NPSH_required": "1 m"}
    for head, expected in (("2.31 m", NOT_TRIGGERED), ("2.29 m", TRIGGERED)):
        one = found(engine, suction_head=head, **given)["C-K12"]
        assert one["status"] == expected and one["reason"] == "near the bubble point"
    assert "are available" in found(engine, suction_head="2 m", suction_loss="0 m")["C-K12"]["reason"]


def test_cold_surfaces_against_the_dew_point_of_the_room(heat_pump: Solved) -> None:
    coldest = heat_pump[0].value("T_e") - ZERO
    for above, expected in ((-0.01, NOT_TRIGGERED), (0.01, TRIGGERED)):
        given = f"{coldest + above:.4f} degC"
        assert found(heat_pump, room_dew_point=given)["C-H10"]["status"] == expected


def test_frost_needs_the_dew_point_too(vary: Callable[..., Solved]) -> None:
    air = vary(source="{fluid: air, model: ideal gas}", T_source_in="7 degC", T_source_out="2 degC",
               T_sink_in="25 degC", T_sink_out="30 degC")
    T = air[0].value("T_e") - ZERO
    assert T < 0.0 and found(air)["C-H9"]["status"] == TRIGGERED
    assert found(air, air_dew_point=f"{T - 1.0:.2f} degC")["C-H9"]["status"] == NOT_TRIGGERED
    assert found(air)["C-P15"]["status"] == TRIGGERED


def test_a_fluid_that_freezes_in_the_cold(heat_pump: Solved) -> None:
    # The equation of R-1234ze(E) ends at 168.62 K.
    assert found(heat_pump, ambient_min="-104 degC")["C-H11"]["status"] == NOT_TRIGGERED
    assert found(heat_pump, ambient_min="-105 degC")["C-H11"]["status"] == TRIGGERED


def test_sulfur_trioxide_from_sulfur_dioxide(engine: Solved) -> None:
    one = found(engine, SO2="0.03 %", SO3_conversion="2 %")
    assert "p * y_SO2 * f" in one["C-F1"]["working"] and "Okkes" in one["C-F1"]["reason"]
    assert one["C-F3"]["status"] == NOT_TRIGGERED
    for share in ("0.9 %", "5.1 %"):
        assert found(engine, SO2="0.03 %", SO3_conversion=share)["C-F3"]["status"] == TRIGGERED
    same = found(engine, p_SO3="0.5 Pa", p_H2O="101.3 mbar")["C-F1"]
    assert same["value"] == one["C-F1"]["value"] and same["status"] in (TRIGGERED, NOT_TRIGGERED)


def test_values_are_short_and_their_sources_stand_in_the_reason(heat_pump: Solved, ammonia: Solved) -> None:
    for solved in (heat_pump, ammonia):
        one = found(solved)
        for name in ("C-C14", "C-M8", "C-T1"):
            assert len(one[name]["value"]) < 25 and "Annex E" in one[name]["reason"]
    assert "group L2" in found(heat_pump)["C-C14"]["reason"]


def test_carbon_dioxide_and_ammonia_in_one_plant(ammonia: Solved, carbon_dioxide: Solved) -> None:
    plan = ammonia[0].plan
    both = dataclasses.replace(plan, fluids={**plan.fluids, "source": carbon_dioxide[0].plan.fluids["wf"]})
    assert "C-T9" not in found(ammonia)
    assert by_id(cautions(dataclasses.replace(ammonia[0], plan=both)))["C-T9"]["status"] == TRIGGERED


def test_the_second_fluid_of_a_cascade_has_cautions_of_its_own() -> None:
    # Ammonia is B2L, carbon dioxide A1 (EN 378-1 Annex E, second-hand).
    solved = solve_text(starter("cascade", {}))
    one = found(solved)
    (role,) = {point.fluid for point in solved[0].plan.facts.states} - {"wf"}
    assert one["C-T1"]["status"] == NOT_TRIGGERED and one[f"C-T1-{role}"]["status"] == TRIGGERED
    assert one[f"C-T1-{role}"]["topic"].endswith(", R-717") and one["C-T9"]["status"] == TRIGGERED
    assert f"C-C1-{role}" not in one and f"C-C14-{role}" in one


def test_a_gas_turbine_is_warned_of_its_inlet_temperature() -> None:
    # Uncooled metal to 1100 °C (practice, from memory).
    solution, _ = solve_text(starter("gas-turbine", {}))
    symbol = solution.plan.facts.roles["hottest"]
    for T, expected in ((1100.0, NOT_TRIGGERED), (1100.1, TRIGGERED)):
        assert by_id(cautions(with_value(solution, **{symbol: ZERO + T})))["C-K16b"]["status"] == expected
