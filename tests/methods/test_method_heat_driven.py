"""Machines driven by heat: the three-temperature bound by plain arithmetic, and a real machine against it."""
from __future__ import annotations

import pytest

from calcpack.errors import CalcpackError
from calcpack.pipeline import solve_spec

METHOD = "heat-driven"
MACHINES = ("chiller", "heat-pump", "transformer")


def solved(spec_text, options=None, inputs=None):
    from pathlib import Path
    return solve_spec(Path("t.yaml"), inputs, text=spec_text(METHOD, options), name="t.yaml")


def test_the_chillers_bound_is_an_engine_times_a_refrigerator(arranged):
    solution = arranged(METHOD, {"machine": "chiller"}, {"T_h": "400 K", "T_m": "300 K", "T_c": "280 K"})
    # (1 - 300/400) * 280 / 20 = 3.5
    assert solution.value("COP_rev") == pytest.approx(3.5, rel=1e-12)
    assert solution.value("Q_dot_h") == pytest.approx(100e3 / 3.5, rel=1e-12)
    assert solution.value("Q_dot_m") == pytest.approx(100e3 * (1 + 1 / 3.5), rel=1e-12)


def test_the_heat_pump_gives_one_more_than_the_chiller_at_the_same_temperatures(arranged):
    levels = {"T_h": "400 K", "T_m": "300 K", "T_c": "280 K"}
    chiller = arranged(METHOD, {"machine": "chiller"}, levels)
    pump = arranged(METHOD, {"machine": "heat-pump"}, levels)
    assert pump.value("COP_rev") == pytest.approx(chiller.value("COP_rev") + 1.0, rel=1e-12)


def test_the_transformers_bound_by_exergy(arranged):
    solution = arranged(METHOD, {"machine": "transformer"}, {"T_h": "400 K", "T_m": "350 K", "T_c": "300 K"})
    # (1 - 300/350) / (1 - 300/400) = 4/7: the exergy of the driving heat is that of the useful heat.
    assert solution.value("COP_rev") == pytest.approx(4.0 / 7.0, rel=1e-12)


@pytest.mark.parametrize("between", ["reservoirs", "streams"])
@pytest.mark.parametrize("machine", MACHINES)
def test_the_reversible_machine_makes_no_entropy_and_the_real_one_does(spec_text, machine, between):
    record = solved(spec_text, {"machine": machine, "between": between, "real": "heat"})
    value = {one["symbol"]: one["value"] for one in record.data["steps"]}
    assert value["S_dot_in"] == pytest.approx(value["S_dot_out"], rel=1e-12)
    assert value["S_dot_gen"] > 0.0 and 0.0 < value["g_rev"] < 1.0
    checks = {one["id"]: one for one in record.data["checks"]}
    assert checks["V-H"]["status"] == "ok"
    assert not [one for one in checks.values() if one["status"] == "fails"]
    entropy = [one for one in checks.values() if one["group"] == "Entropy generated"]
    assert [one["text"] for one in entropy] == ["Reversible machine", "Real machine"]


def test_streams_with_hardly_any_glide_come_to_the_reservoirs_bound(arranged):
    streams = arranged(METHOD, {"between": "streams"}, {
        "T_hot_in": "90.005 degC", "T_hot_out": "89.995 degC", "T_middle_in": "29.995 degC",
        "T_middle_out": "30.005 degC",
        "T_cold_in": "10.005 degC", "T_cold_out": "9.995 degC"})
    reservoirs = arranged(METHOD, inputs={"T_h": "90 degC", "T_m": "30 degC", "T_c": "10 degC"})
    assert streams.value("COP_rev") == pytest.approx(reservoirs.value("COP_rev"), rel=1e-4)


def test_more_hot_or_less_lift_raises_the_bound(arranged):
    def coefficient(**inputs):
        return arranged(METHOD, inputs=inputs).value("COP_rev")
    assert coefficient(T_h="80 degC") < coefficient(T_h="90 degC") < coefficient(T_h="120 degC")
    assert coefficient(T_c="5 degC") < coefficient(T_c="10 degC") < coefficient(T_c="15 degC")
    assert coefficient(T_m="40 degC") < coefficient(T_m="30 degC")


@pytest.mark.parametrize("machine, inputs, what", [
    ("chiller", {"T_m": "95 degC"}, "the hot side is not above the middle one"),
    ("chiller", {"T_c": "35 degC"}, "the middle side is not above the cold one"),
    ("chiller", {"Q_dot_h_real": "30 kW"}, "the real machine destroys entropy"),
    ("heat-pump", {"Q_dot_h_real": "110 kW"}, "the real machine takes no heat at the cold side"),
])
def test_what_cannot_be_is_refused_in_plain_words(spec_text, machine, inputs, what):
    with pytest.raises(CalcpackError) as caught:
        solved(spec_text, {"machine": machine, "real": "heat"}, inputs)
    assert any(what in fault.what for fault in caught.value.faults), caught.value.faults
