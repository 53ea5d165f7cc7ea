"""Cautions that need safety quantities: each threshold on both sides, and what happens without them."""
from __future__ import annotations

from collections.abc import Callable

import pytest
from check_cases import Solved
from safety_cases import ROOM, found

from calcpack.checks.cautions import cautions
from calcpack.checks.cautions.caution import NOT_EVALUATED, NOT_TRIGGERED, TRIGGERED
from calcpack.formula.evaluate import value as evaluated
from calcpack.formula.parse import parse
from calcpack.units.digits import last_place

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


def test_values_are_short_and_their_sources_stand_in_the_reason(heat_pump: Solved, ammonia: Solved) -> None:
    for solved in (heat_pump, ammonia):
        one = found(solved)
        for name in ("C-C14", "C-M8", "C-T1"):
            assert len(one[name]["value"]) < 25 and "Annex E" in one[name]["reason"]
    assert "group L2" in found(heat_pump)["C-C14"]["reason"]
