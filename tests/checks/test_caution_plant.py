"""Cautions on pressure equipment, steam, pumps, cold surfaces and flue gas: each threshold on both sides."""
from __future__ import annotations

from collections.abc import Callable

from check_cases import Solved, by_id, solve_text, with_value
from safety_cases import ZERO, found

from calcpack.checks.cautions import cautions
from calcpack.checks.cautions.caution import NOT_EVALUATED, NOT_TRIGGERED, TRIGGERED
from calcpack.methods.starter import starter


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


def test_a_gas_turbine_is_warned_of_its_inlet_temperature() -> None:
    # Uncooled metal to 1100 °C (practice, from memory).
    solution, _ = solve_text(starter("gas-turbine", {}))
    symbol = solution.plan.facts.roles["hottest"]
    for T, expected in ((1100.0, NOT_TRIGGERED), (1100.1, TRIGGERED)):
        assert by_id(cautions(with_value(solution, **{symbol: ZERO + T})))["C-K16b"]["status"] == expected
