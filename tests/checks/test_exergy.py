"""Exergy balance: what equipment destroys is the dead state's temperature times the entropy it generates."""
from __future__ import annotations

import pytest
from check_cases import Solved, engine_text, heat_pump_text, solve_text, with_value
from law_cases import failures, texts

from calcpack.checks.exergy import DeadState, dead_state, destroyed, exergy_view, gouy_stodola
from calcpack.errors import SpecError
from calcpack.fluids import FluidDefinition, open_fluid
from calcpack.units import read_quantity

# Equipment whose heat comes from outside the sheet, at a temperature that is none of its business.
UNSTATED = {("steam-plant", "boiler with its steam lines"), ("vapour-recompression", "boiling solution")}


@pytest.mark.parametrize("text", texts())
def test_destruction_is_the_dead_state_times_the_entropy_generated(text: str) -> None:
    solution, _ = solve_text(text)
    for one in destroyed(solution, dead_state(solution)):
        if one.reason:
            assert (solution.method.name, one.volume.name) in UNSTATED
            continue
        assert one.balance == pytest.approx(one.from_entropy, rel=1e-6, abs=1e-9 * one.entering)
        assert one.balance >= -1e-6 * one.entering


def test_the_valve_destroys_what_its_end_states_say(heat_pump: Solved) -> None:
    value = heat_pump[0].value
    found = {one.volume.name: one for one in destroyed(heat_pump[0], DeadState(280.0, 1e5, "test"))}
    expected = 280.0 * value("m_dot_wf") * (value("s_4") - value("s_3"))
    assert found["expansion valve"].balance == pytest.approx(expected, rel=1e-9)


def test_destruction_is_in_proportion_to_the_dead_states_temperature(heat_pump: Solved) -> None:
    cold, warm = (destroyed(heat_pump[0], DeadState(T, 1e5, "test")) for T in (270.0, 297.0))
    for one, other in zip(cold, warm, strict=True):
        # The compressor's heat to the room leaves at the dead state's temperature: its entropy is not in proportion.
        if one.volume.name != "compressor":
            assert other.balance == pytest.approx(1.1 * one.balance, rel=1e-9)


def test_the_compressors_heat_to_the_room_counts_as_destroyed(heat_pump: Solved) -> None:
    value = heat_pump[0].value
    found = {one.volume.name: one for one in destroyed(heat_pump[0], DeadState(290.0, 1e5, "test"))}
    inside = 290.0 * value("m_dot_wf") * (value("s_2") - value("s_1"))
    assert found["compressor"].balance == pytest.approx(inside + value("Q_dot_loss"), rel=1e-9)


@pytest.mark.parametrize("symbol", ["h_4", "W_dot_shaft", "m_dot_sink"])
def test_an_open_balance_is_found(heat_pump: Solved, symbol: str) -> None:
    solution, record = heat_pump
    assert {one["status"] for one in gouy_stodola(solution, record)} == {"ok"}
    spoiled = with_value(solution, **{symbol: solution.value(symbol) * 1.0001})
    assert "fails" in {one["status"] for one in gouy_stodola(spoiled, record)}


def test_entropy_destroyed_is_found(heat_pump: Solved) -> None:
    solution, record = heat_pump
    spoiled = with_value(solution, s_4=solution.value("s_3") - 1.0)
    wrong = [one for one in gouy_stodola(spoiled, record) if one["status"] == "fails"]
    assert any("below zero" in one["detail"] for one in wrong)


def test_a_dead_state_above_what_heats_it_is_found() -> None:
    text = engine_text(T_c="35 degC").replace("T_0: 15 degC", "T_0: 60 degC")
    solution, record = solve_text(text)
    wrong = [one for one in gouy_stodola(solution, record) if one["status"] == "fails"]
    assert [one["text"].split(":")[0] for one in wrong] == ["Condenser"]
    assert "is the dead state warmer than what gives heat to it?" in wrong[0]["detail"]


def test_heat_of_unstated_temperature_is_not_guessed() -> None:
    text = heat_pump_text()
    text = text.replace("source_stream: outlet", "source_stream: none")
    text = text.replace("evaporating: pinch", "evaporating: temperature")
    text = "\n".join(line for line in text.splitlines() if "_source_" not in line and "p_source" not in line)
    text = text.replace("dT_pinch_e: 4 K", "T_e: 24 degC").replace(", source: water", "")
    text = text.replace("    source: water\n", "")
    text = "\n".join(line for line in text.splitlines() if "COP_rev" not in line)
    solution, record = solve_text(text)
    found = {one["text"].split(":")[0]: one for one in gouy_stodola(solution, record)}
    assert found["Evaporator"]["status"] == "not evaluated"
    assert "temperature that is not stated" in found["Evaporator"]["detail"]


def test_the_dead_state_is_the_sheets_own_before_the_specs_before_the_usual(engine: Solved, heat_pump: Solved) -> None:
    assert engine[0].value("T_0") == dead_state(engine[0]).T
    assert dead_state(engine[0]).source == "T_0 of this sheet"
    usual = dead_state(heat_pump[0])
    assert (usual.T, usual.p, usual.source) == (pytest.approx(288.15), heat_pump[0].p_atm, "default")
    stated, _ = solve_text(_with_dead_state(heat_pump_text(), "3 degC"))
    assert (dead_state(stated).T, dead_state(stated).source) == (pytest.approx(276.15), "as stated for the sheet")
    assert exergy_view(stated)["dead_state"]["T"]["shown"] == "276.15 K (3.00 °C)"


def _with_dead_state(text: str, level: str) -> str:
    assert "revision: A" in text
    return text.replace("revision: A", f"revision: A\n  T_dead: {level}", 1)


def test_two_dead_states_are_a_fault_of_the_spec() -> None:
    with pytest.raises(SpecError, match="the dead state is given twice") as raised:
        solve_text(_with_dead_state(engine_text(), "15 degC"))
    assert raised.value.faults[0].place is not None


@pytest.mark.parametrize("level", ["15 K/s", "4 bar", "-300 degC", "warm"])
def test_a_dead_state_that_is_no_temperature_is_refused(level: str) -> None:
    with pytest.raises(SpecError) as raised:
        solve_text(_with_dead_state(heat_pump_text(), level))
    assert [fault.place.line for fault in raised.value.faults] == [7]


def test_flow_exergies_are_those_of_the_definition(engine: Solved) -> None:
    solution, _ = engine
    view = exergy_view(solution)
    found = {one["label"]: one["e"]["value"] for one in view["streams"]}
    fluid = open_fluid(FluidDefinition("cyclopentane"))
    T_0, p_0 = solution.value("T_0"), read_quantity("1.01325 bar").value
    assert solution.p_atm == pytest.approx(p_0)
    h, s = (fluid.reader(output, ("p", "T"))(p_0, T_0) for output in "hs")
    expected = (solution.value("h_3") - h) - T_0 * (solution.value("s_3") - s)
    assert found["state 3, expander inlet"] == pytest.approx(expected, rel=1e-9)
    assert {"source, inlet", "state 1, pump inlet"} <= {label.lower() for label in found}


def test_a_sheet_without_control_volumes_has_no_exergy() -> None:
    from calcpack.methods.starter import starter
    solution, _ = solve_text(starter("carnot-cycle", {}))
    assert exergy_view(solution) is None


def test_the_example_package_has_nothing_to_find_fault_with() -> None:
    for one in texts()[:3]:
        assert failures(one.values[0]) == []
