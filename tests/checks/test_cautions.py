"""Cautions: each threshold from its source, on both sides of it."""
from __future__ import annotations

from collections.abc import Callable
from typing import Any

import pytest
from check_cases import Solved, by_id, engine_text, heat_pump_text, solve_text, with_value

from calcpack.checks.cautions import cautions
from calcpack.checks.cautions.caution import (
    DEFER,
    MEMORY,
    NOT_EVALUATED,
    NOT_TRIGGERED,
    SECOND_HAND,
    TEXT,
    TRIGGERED,
)
from calcpack.checks.cautions.flue_gas import acid_dew_point
from calcpack.units import unit

ZERO = 273.15


def status(solved: Solved, name: str, **changed: float) -> str:
    """The status of one caution with some values changed."""
    return by_id(cautions(with_value(solved[0], **changed)))[name]["status"]


def found(solved: Solved) -> dict[str, dict[str, Any]]:
    """All cautions of a sheet by their id."""
    return by_id(cautions(solved[0]))


# Each row: caution, a symbol of the heat pump, the last value that is safe, the first that is not (SI).
THRESHOLDS = [
    # ACHR News, discharge line of hermetic compressors: 225 °F, 107 °C (second-hand).
    ("C-K1", "T_2", ZERO + 107.0, ZERO + 107.01),
    # ACHR News: mineral oil breaks down at 177 °C, the valve being 42 K hotter than the line (second-hand).
    ("C-K2", "T_2", ZERO + 135.0, ZERO + 135.01),
    # Practice: single-stage reciprocating compressors to a ratio of 8 to 10 (from memory).
    ("C-K4", "r_p", 8.0, 8.001),
    # Practice: condensing at least 10 to 15 K below the critical temperature, 382.51 K (from memory).
    ("C-K5", "T_c", 382.51 - 15.01, 382.51 - 14.98),
    # RD 552/2019 IF-08 3.3.4.3 note with 0.9 of the critical pressure, 36.35 bar, chosen here.
    ("C-R5", "p_c", 0.8999 * 36.349e5, 0.901 * 36.349e5),
    # The sheet's atmosphere, 1.01325 bar (computed).
    ("C-K8", "p_e", 101325.0, 101324.0),
    # HSE hot and cold water page: stored at 60 °C or more (from the text).
    ("C-H5", "T_sink_out", ZERO + 60.0, ZERO + 59.99),
    # Evaporating below 0 °C with plain water (RD 552/2019 IF-08 3.2.5 asks for a limiter, from the text).
    ("C-H8", "T_e", ZERO, ZERO - 0.01),
    # Leaving water below 4 °C (from memory).
    ("C-H8", "T_source_out", ZERO + 4.0, ZERO + 3.99),
    # Practice: 5 K between a stream and an evaporating or condensing fluid (from memory).
    ("C-K14", "dT_min_c", None, 4.99),
    # RD 552/2019 IF-04 3.3.1.1: autoignition less 100 K; R-1234ze(E) ignites at 368 °C (EN 378, from memory).
    ("C-M5", "T_2", ZERO + 268.0, ZERO + 268.01),
]


@pytest.mark.parametrize(("name", "symbol", "safe", "unsafe"), THRESHOLDS)
def test_a_caution_is_triggered_beyond_its_threshold_only(
        heat_pump: Solved, name: str, symbol: str, safe: float | None, unsafe: float | None) -> None:
    if unsafe is not None:
        assert status(heat_pump, name, **{symbol: unsafe}) == TRIGGERED
    if safe is not None:
        assert status(heat_pump, name, **{symbol: safe}) == NOT_TRIGGERED


@pytest.mark.parametrize(("gauge_bar", "europe", "america"), [
    (0.49, NOT_TRIGGERED, NOT_TRIGGERED),
    (0.51, TRIGGERED, NOT_TRIGGERED),      # PED 2014/68/EU Art. 1: above 0.5 bar gauge (from the text)
    (1.03, TRIGGERED, NOT_TRIGGERED),
    (1.04, TRIGGERED, TRIGGERED),          # ASME BPVC VIII-1 U-1: above 15 psi, 1.034 bar (from memory)
])
def test_pressure_equipment_rules_begin_at_their_gauge_pressures(
        heat_pump: Solved, gauge_bar: float, europe: str, america: str) -> None:
    p = 101325.0 + gauge_bar * 1e5
    changed = dict.fromkeys(("p_c", "p_e", "p_sink", "p_source"), p)
    assert status(heat_pump, "C-P1", **changed) == europe
    assert status(heat_pump, "C-P16", **changed) == america


@pytest.mark.parametrize(("hottest", "triggered"), [
    (64.9, (False, True)), (65.0, (True, True)), (60.0, (False, False))])
def test_hot_surfaces(heat_pump: Solved, hottest: float, triggered: tuple[bool, bool]) -> None:
    # ISO 13732-1:2006: 65 °C within 1 s (from memory); 60 °C is the usual industrial surface (from memory).
    cool = dict.fromkeys(("T_1", "T_3", "T_4", "T_sink_in", "T_sink_out", "T_source_in", "T_source_out"), ZERO + 30.0)
    for name, expected in zip(("C-H1", "C-H2"), triggered, strict=True):
        assert status(heat_pump, name, T_2=ZERO + hottest, **cool) == (TRIGGERED if expected else NOT_TRIGGERED)


@pytest.mark.parametrize(("T_in", "T_out", "expected"), [
    (10.0, 20.0, NOT_TRIGGERED), (10.0, 30.0, TRIGGERED), (44.0, 60.0, TRIGGERED), (45.0, 60.0, NOT_TRIGGERED)])
def test_legionella_grow_between_20_and_45_degrees(heat_pump: Solved, T_in: float, T_out: float, expected: str) -> None:
    # Building-services pages (second-hand).
    assert status(heat_pump, "C-H6", T_sink_in=ZERO + T_in, T_sink_out=ZERO + T_out) == expected


@pytest.mark.parametrize(("T_out", "expected"), [(48.99, NOT_TRIGGERED), (49.0, TRIGGERED)])
def test_hot_water_scalds_from_49_degrees(heat_pump: Solved, T_out: float, expected: str) -> None:
    # Burn-institute table: 49 °C in more than 5 min (second-hand).
    assert status(heat_pump, "C-H3", T_sink_in=ZERO + 30.0, T_sink_out=ZERO + T_out) == expected


@pytest.mark.parametrize(("above", "expected"), [(4.99, TRIGGERED), (5.0, NOT_TRIGGERED)])
def test_small_superheat(heat_pump: Solved, above: float, expected: str) -> None:
    # Dry expansion with 5 K (practice, from memory).
    assert status(heat_pump, "C-K11", T_1=heat_pump[0].value("T_e") + above) == expected


def test_standstill_governs_where_the_machine_runs_cooler(heat_pump: Solved) -> None:
    # RD 552/2019 IF-06 1.2 (from the text) at 55 °C, EN 378-2 Table 2 (from memory).
    solution, _ = heat_pump
    p = solution.plan.fluids["wf"].reader("p", ("T", "x"))(ZERO + 55.0, 0.0)
    assert status(heat_pump, "C-P18", p_c=p * 0.999) == TRIGGERED
    assert status(heat_pump, "C-P18", p_c=p * 1.001) == NOT_TRIGGERED


def test_wet_suction_is_liquid_to_the_compressor(heat_pump: Solved) -> None:
    solution, _ = heat_pump
    dew = solution.plan.fluids["wf"].reader("h", ("p", "x"))(solution.value("p_e"), 1.0)
    assert status(heat_pump, "C-K10b", h_1=dew - 100.0) == TRIGGERED
    assert status(heat_pump, "C-K10b", h_1=dew) == NOT_TRIGGERED


def test_what_is_not_on_the_sheet_is_not_evaluated_and_says_why(heat_pump: Solved) -> None:
    for name in ("C-C1", "C-C4", "C-C11", "C-M12"):
        one = found(heat_pump)[name]
        assert one["status"] == NOT_EVALUATED and "not" in one["reason"] and one["value"] == ""


def test_every_caution_names_source_and_confirmation_and_defers(heat_pump: Solved, engine: Solved) -> None:
    for solved in (heat_pump, engine):
        for one in cautions(solved[0]):
            assert one["source"] and one["confirmed"] and one["text"].endswith(".")
            assert one["defer"] == DEFER and "local codes" in DEFER and "licensed" in DEFER
            assert one["reason"] or one["status"] != NOT_EVALUATED
            assert one["status"] == NOT_EVALUATED or (one["value"] and one["threshold"])
    assert found(heat_pump)["C-P1"]["confirmed"] == TEXT
    assert found(heat_pump)["C-K1"]["confirmed"] == SECOND_HAND
    assert found(heat_pump)["C-P16"]["confirmed"] == MEMORY


def test_flammability_and_toxicity_follow_the_safety_class(vary: Callable[..., Solved]) -> None:
    ammonia = found(vary(wf="R-717"))                       # B2L (EN 378-1 Annex E, second-hand)
    assert (ammonia["C-C14"]["status"], ammonia["C-T1"]["status"]) == (TRIGGERED, TRIGGERED)
    assert "ATEL/ODL 0.00022 kg/m³" in ammonia["C-T1"]["reason"]
    assert "C-K3" in ammonia and "C-T10" not in ammonia
    harmless = found(vary(wf="R-134a"))                     # A1 (EN 378-1 Annex E, second-hand)
    assert (harmless["C-C14"]["status"], harmless["C-T1"]["status"]) == (NOT_TRIGGERED, NOT_TRIGGERED)
    assert not {"C-M5", "C-M8", "C-C1", "C-K3"} & set(harmless)
    propane = found(vary(wf="propane"))                     # A3, under its common name
    assert propane["C-C14"]["status"] == TRIGGERED


def test_a_flammable_fluid_below_the_atmosphere_is_told_of_air_inside(engine: Solved) -> None:
    one = found(engine)["C-K8"]
    assert one["status"] == TRIGGERED and "flammable" in one["reason"]


def test_a_fluid_without_a_class_burns_by_its_flammability_limit(engine: Solved) -> None:
    one = found(engine)["C-C14"]
    assert one["status"] == TRIGGERED and "lower flammability limit" in one["reason"]
    assert found(engine)["C-T1"]["status"] == NOT_EVALUATED


def test_an_engines_cooling_water_is_nobodys_tap(engine: Solved) -> None:
    assert not {"C-H3", "C-H5", "C-H6", "C-K1", "C-K4"} & set(found(engine))
    assert found(engine)["C-K12"]["status"] == NOT_EVALUATED


def test_wet_steam_at_the_exhaust_has_its_own_limit() -> None:
    # At most 12 % of moisture (a study page and textbooks, second-hand).
    steam = solve_text(engine_text(wf="water", T_c="40 degC", T_e="180 degC", T_source_in="350 degC"))
    one = found(steam)["C-K9"]
    share = float(one["value"].removeprefix("vapour fraction "))
    assert one["status"] == (TRIGGERED if share < 0.88 else NOT_TRIGGERED)
    solution = steam[0]
    h_f, h_g = (solution.plan.fluids["wf"].reader("h", ("p", "x"))(solution.value("p_c"), x) for x in (0.0, 1.0))
    for x, expected in ((0.879, TRIGGERED), (0.881, NOT_TRIGGERED)):
        assert status(steam, "C-K9", h_4=h_f + x * (h_g - h_f)) == expected
    assert "C-C14" not in found(steam) and "C-K10a" not in found(steam)


def test_a_wet_organic_exhaust_is_told_apart_from_a_dry_one(engine: Solved) -> None:
    solution, _ = engine
    dew = solution.plan.fluids["wf"].reader("h", ("p", "x"))(solution.value("p_c"), 1.0)
    assert status(engine, "C-K10a") == NOT_TRIGGERED
    assert status(engine, "C-K10a", h_4=dew - 500.0) == TRIGGERED


def test_thermal_stability_of_the_fluid(engine: Solved) -> None:
    # Cyclopentane: 300 °C, Ginosar, Petkovic and Guillen, Energy & Fuels 25 (2011) 4138 (the register's fact).
    assert status(engine, "C-K6", T_3=ZERO + 299.9) == NOT_TRIGGERED
    assert status(engine, "C-K6", T_3=ZERO + 300.1) == TRIGGERED


def test_carbon_dioxide_turns_to_dry_ice_below_its_triple_point(vary: Callable[..., Solved]) -> None:
    # 5.18 bar (computed with CoolProp 8.0.0; RD 552/2019 IF-04 5.2.3.2 says 5.2 bar).
    cold = vary(wf="R-744", T_source_in="-5 degC", T_source_out="-10 degC", T_sink_in="5 degC", T_sink_out="10 degC",
                source="{fluid: ethylene glycol, mass_fraction: 0.4}")
    assert status(cold, "C-T8", p_e=5.19e5) == NOT_TRIGGERED
    assert status(cold, "C-T8", p_e=5.17e5) == TRIGGERED
    assert found(cold)["C-T5"]["status"] == NOT_EVALUATED
    # Brine does not freeze as water does.
    assert "C-H8" not in found(cold)


def test_a_gas_exchanger_is_measured_by_its_own_pinch(engine: Solved) -> None:
    # Practice: 10 K on a gas side (from memory).
    assert status(engine, "C-K14", dT_min_h=9.9) == TRIGGERED
    assert status(engine, "C-K14", dT_min_h=10.1) == NOT_TRIGGERED


@pytest.mark.parametrize(("p_water", "p_SO3", "kelvin"), [
    # Worked example: 1000/T = 2.60739, 383.52 K (recomputed; its source prints 110.52 °C, having taken off 273).
    (38.1104, 9.7421e-4, 383.52),
    # Second worked example: 402 K printed, 401.88 K recomputed.
    (93.44, 2.4917e-3, 401.88)])
def test_acid_dew_point_gives_the_worked_values(p_water: float, p_SO3: float, kelvin: float) -> None:
    mmHg = unit("mmHg")
    assert acid_dew_point(mmHg.to_si(p_water), mmHg.to_si(p_SO3)) == pytest.approx(kelvin, abs=0.006)


def test_acid_dew_point_needs_sulfur_trioxide_and_then_is_evaluated(engine: Solved) -> None:
    assert found(engine)["C-F1"]["status"] == NOT_EVALUATED and "p_SO3" in found(engine)["C-F1"]["reason"]
    sulfur = solve_text(engine_text(extra="    p_SO3: 0.5 Pa"))
    one = found(sulfur)["C-F1"]
    dew = acid_dew_point(0.10 * 1.013e5, 0.5)
    assert f"{dew:.2f} K" in one["reason"]
    assert status(sulfur, "C-F1", T_source_out=dew + 19.9) == TRIGGERED
    assert status(sulfur, "C-F1", T_source_out=dew + 20.1) == NOT_TRIGGERED


def test_water_dew_point_of_the_flue_gas(engine: Solved) -> None:
    # 10 % of 1.013 bar: saturation at 0.1013 bar is 46.1 °C by steam tables.
    assert status(engine, "C-F2", T_source_out=ZERO + 47.0) == NOT_TRIGGERED
    assert status(engine, "C-F2", T_source_out=ZERO + 45.0) == TRIGGERED


def test_cautions_speak_the_units_of_the_sheet() -> None:
    us = found(solve_text(heat_pump_text(units="us")))
    assert us["C-K1"]["threshold"] == "above 684.27 °R (224.60 °F)"
    assert us["C-P1"]["value"].endswith(" psi(g)")
