"""Steam plant: every option solves and closes, heaters and reheats help as they must, faults say what to change."""
from __future__ import annotations

import re
from collections.abc import Callable, Mapping
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from calcpack.errors import CommandError, NoAnswerError, SpecError
from calcpack.methods.starter import starter
from calcpack.methods.steam_arrangement import PATTERN, arrangement
from calcpack.pipeline import solve_spec
from calcpack.record import Record

FIVE = "closed-pump closed-trap open closed-trap closed-trap"
Solve = Callable[..., Record]


@pytest.fixture
def solve(tmp_path: Path) -> Solve:
    """``solve(options, inputs, water)`` is the record of the starter's spec."""
    def run(options: Mapping[str, str] | None = None, inputs: Mapping[str, str] | None = None,
            water: str = "water") -> Record:
        text = re.sub(r"(?m)^    wf: \S+ ", f"    wf: {water} ", starter("steam-plant", dict(options or {})))
        (tmp_path / "plant.yaml").write_text(text, "utf-8")
        return solve_spec(tmp_path / "plant.yaml", dict(inputs or {}))
    return run


def value(record: Record, symbol: str) -> float:
    return next(one["value"] for one in (*record.data["steps"], *record.data["inputs"]) if one["symbol"] == symbol)


def failed(record: Record) -> list[str]:
    return [f"{one['id']} {one['text']}: {one['value']}" for one in record.data["checks"] if one["status"] == "fails"]


@pytest.mark.parametrize("options", [
    {},
    {"steam": "saturated", "lines": "losses"},
    {"reheats": "1", "condensing": "temperature"},
    {"reheats": "3", "heaters": "closed-trap closed-trap"},
    {"heaters": "open"},
    {"heaters": "closed-trap", "cooling": "flow"},
    {"heaters": "closed-pump"},
    {"heaters": "closed-pump closed-pump"},
    {"heaters": "closed-trap open closed-trap", "cooling": "outlet"},
    {"heaters": "closed-trap closed-trap closed-pump open"},
    {"heaters": "open closed-trap closed-pump closed-trap"},
    {"reheats": "2", "heaters": FIVE, "lines": "losses"},
    {"reheats": "2", "heaters": "closed-trap+reheat closed-trap reheat open closed-trap closed-trap", "lines": "losses",
     "cooling": "outlet", "process": "heat", "size_by": "flow"},
    {"process": "share"},
    {"process": "share", "heaters": "closed-trap process+reheat open", "reheats": "1"},
], ids=lambda options: " ".join(f"{name}={one}" for name, one in options.items()) or "defaults")
def test_each_arrangement_closes_its_balances_and_can_be_done_again_from_print(solve: Solve,
        options: dict[str, str]) -> None:
    record = solve(options)
    assert not failed(record)
    groups = {one["group"] for one in record.data["checks"] if one["status"] == "ok"}
    assert {"Energy balance", "Mass balance", "Re-done from print"} <= groups
    # No chain of steps may force more digits than a table has.
    assert max(len(one["shown"].replace(".", "").lstrip("0")) for one in record.data["steps"]) <= 8


def test_two_reheats_and_five_heaters_show_every_state_in_the_table_and_the_diagrams(solve: Solve) -> None:
    record = solve({"reheats": "2", "heaters": FIVE})
    states = [state["number"] for state in record.data["states"]]
    assert len(states) == 25 and len(set(states)) == 25
    kinds = {diagram["kind"]: diagram for diagram in record.data["diagrams"]}
    assert set(kinds) == {"T-s", "log p-h"}
    for diagram in kinds.values():
        assert [point["label"] for point in diagram["points"]] == states
        assert {end for path in diagram["paths"] for end in (path["from"], path["to"])} == set(states)
    assert {f"Heater {number}" for number in range(1, 6)} <= {box["name"] for box in record.data["sketch"]["nodes"]}


def test_shares_of_coupled_heaters_solve_all_balances_at_once(solve: Solve) -> None:
    """The steps go heater by heater; a linear solution of all balances together must give the same shares."""
    record = solve({"heaters": "closed-trap closed-trap closed-pump"})
    names = {point["label"]: f"h_{point['number']}" for point in record.data["states"]}
    h = {label: value(record, name) for label, name in names.items()}
    tap = [h[f"turbine, towards heater {i}"] for i in (1, 2, 3)]
    drain = [h[f"drains of heater {i}"] for i in (1, 2, 3)]
    out = [h[f"feedwater after heater {i}"] for i in (1, 2, 3)]
    pumped, cold = h["drains of heater 3, pumped"], h["after the feed pump"]
    # Unknowns: y1, y2, y3 and the enthalpy of the mixture behind heater 3.
    balances = np.array([
        [tap[0] - drain[0], 0, 0, 0],
        [drain[0] - drain[1], tap[1] - drain[1], 0, 1],
        [drain[1] - drain[2] - cold + out[2], drain[1] - drain[2] - cold + out[2], tap[2] - drain[2] - cold + out[2],
        0],
        [out[2] - pumped, out[2] - pumped, out[2] - pumped, 1]])
    shares = np.linalg.solve(balances, [out[0] - out[1], out[1], out[2] - cold, out[2]])
    assert [value(record, f"y_{i}") for i in (1, 2, 3)] == pytest.approx(shares[:3], rel=1e-9)
    assert h["feedwater after the drains of heater 3"] == pytest.approx(shares[3], rel=1e-12)


def test_reheat_and_heaters_raise_the_efficiency_and_losses_lower_it(solve: Solve) -> None:
    plain, reheated, heated = (value(solve(options), "eta_th") for options in (
        {}, {"reheats": "1"}, {"reheats": "1", "heaters": "closed-trap open"}))
    lossy = value(solve({"reheats": "1", "heaters": "closed-trap open", "lines": "losses"}), "eta_th")
    assert plain < reheated < heated
    assert lossy < heated


def test_pumping_drains_forward_beats_trapping_them(solve: Solve) -> None:
    same = {"p_x1": "20 bar", "p_x2": "2 bar"}
    pumped, trapped = (value(solve({"heaters": f"{kind} {kind}"}, same), "eta_th") for kind in ("closed-pump",
        "closed-trap"))
    assert pumped > trapped


def test_reheat_dries_the_exhaust(solve: Solve) -> None:
    wet = solve({}, {"p_1": "150 bar"})
    dry = solve({"reheats": "1"}, {"p_1": "150 bar", "p_rh1": "30 bar"})
    assert value(wet, "y_ex") > value(dry, "y_ex2")
    assert value(wet, "y_ex") == pytest.approx(1.0 - value(wet, "x_ex"))


def test_size_by_flow_and_by_power_are_each_others_inverse(solve: Solve) -> None:
    by_power = solve({"heaters": "open"}, {"W_dot_net": "80 MW"})
    flow = value(by_power, "m_dot_1")
    by_flow = solve({"heaters": "open", "size_by": "flow"}, {"m_dot_1": f"{flow!r} kg/s"})
    assert value(by_flow, "W_dot_net") == pytest.approx(80e6, rel=1e-12)


def test_process_heat_and_its_share_are_each_others_inverse(solve: Solve) -> None:
    heat = solve({"process": "heat", "size_by": "flow", "heaters": "open"}, {"Q_dot_pr": "20 MW"})
    share = solve({"process": "share", "size_by": "flow", "heaters": "open"}, {"y_pr": repr(value(heat, "y_pr"))})
    assert value(share, "Q_dot_pr") == pytest.approx(20e6, rel=1e-12)
    assert value(share, "eps_u") > value(share, "eta_th")


def test_heat_rate_and_steam_rate_are_efficiency_and_flow_in_trade_units(solve: Solve) -> None:
    record = solve({}, {"eta_b": "1"})
    shown = record.data["results"]
    assert shown["HR"]["unit"] == "kJ/kWh"
    assert float(shown["HR"]["shown"]) == pytest.approx(3600.0 / value(record, "eta_th"), rel=1e-4)
    assert float(shown["b_st"]["shown"]) == pytest.approx(3600e3 * value(record, "m_dot_1") / value(record,
        "W_dot_net"), rel=1e-4)


def test_the_two_formulations_of_water_agree(solve: Solve) -> None:
    options = {"reheats": "1", "heaters": "closed-trap open"}
    helmholtz, industrial = (value(solve(options, water=water), "eta_th") for water in ("water",
        "{fluid: water, model: IF97}"))
    assert industrial == pytest.approx(helmholtz, rel=2e-4)
    assert industrial != helmholtz


def test_steam_from_the_line_to_the_reheater_is_taken_at_its_pressure(solve: Solve) -> None:
    joined = solve({"reheats": "1", "heaters": "closed-trap+reheat open"}, {"p_x1": "40 bar", "p_x2": "5 bar"})
    apart = solve({"reheats": "1", "heaters": "closed-trap reheat open"},
        {"p_x1": "40.0001 bar", "p_rh1": "40 bar", "p_x2": "5 bar"})
    assert value(joined, "eta_th") == pytest.approx(value(apart, "eta_th"), rel=1e-5)


def test_extractions_that_take_more_than_the_flow_are_told(solve: Solve) -> None:
    with pytest.raises(NoAnswerError) as caught:
        solve({"process": "share", "heaters": "closed-trap process closed-trap"}, {"y_pr": "0.95"})
    fault = caught.value.faults[0]
    assert fault.what == "the extractions take more steam than there is: nothing is left behind the process"
    assert "take less steam for the process" in fault.hint


@pytest.mark.parametrize(("options", "inputs", "words"), [
    ({"heaters": "open open"}, {"p_x1": "1 bar", "p_x2": "5 bar"}, "the pressures do not fall along the turbine"),
    ({}, {"T_1": "200 degC"}, "is no steam"),
    ({"reheats": "1"}, {"T_rh1": "150 degC"}, "reheat 1 does not heat the steam"),
    ({"heaters": "closed-trap open"}, {"dT_ttd_1": "150 K"}, "heater 1 has nothing to heat"),
    ({"process": "share", "heaters": "open"}, {"p_ret": "0.5 bar", "T_ret": "40 degC"},
    "has not the pressure to enter the plant"),
    ({"cooling": "outlet"}, {"T_sink_out": "60 degC"}, "temperatures cross in the condenser"),
])
def test_numbers_without_an_answer_say_what_to_change(solve: Solve, options: dict, inputs: dict, words: str) -> None:
    with pytest.raises(NoAnswerError) as caught:
        solve(options, inputs)
    fault = caught.value.faults[0]
    assert words in fault.what
    assert fault.hint


@pytest.mark.parametrize(("options", "words"), [
    ({"heaters": "open reheat"}, "places 1 reheats, and option reheats asks for 0"),
    ({"heaters": "open process"}, "feeds a process 1 times, and option process asks for none"),
    ({"process": "heat"}, "option process: heat needs option size_by: flow"),
])
def test_options_that_disagree_are_told_before_any_number(options: dict[str, str], words: str) -> None:
    with pytest.raises(SpecError, match=re.escape(words)):
        starter("steam-plant", options)


def test_an_unknown_heater_is_told_with_the_words_that_can_be_given() -> None:
    with pytest.raises(CommandError) as caught:
        starter("steam-plant", {"heaters": "open tray"})
    assert "closed-trap, closed-pump" in caught.value.faults[0].expected


@pytest.mark.parametrize(("text", "fits"), [
    ("none", True), ("open", True), ("closed-trap+reheat open process", True), ("reheat reheat", True),
    ("", False), ("open  open", False), ("reheat+reheat", False), ("closed", False), ("open none", False)])
def test_the_pattern_of_heaters_takes_whole_words_only(text: str, fits: bool) -> None:
    assert bool(re.fullmatch(PATTERN, text)) is fits


def test_reheats_that_are_not_placed_follow_the_first_heaters() -> None:
    placed = arrangement({"heaters": "open closed-trap open", "reheats": "2", "process": "share"})
    order: list[Any] = [(one.kind, one.index) for one in placed.stations]
    assert order == [("heater", 1), ("reheat", 1), ("heater", 2), ("reheat", 2), ("process", 1), ("heater", 3)]


def test_an_unknown_heater_in_a_spec_is_told_at_its_place(tmp_path: Path) -> None:
    spec = tmp_path / "plant.yaml"
    spec.write_text(re.sub(r"(?m)^    heaters: none ", "    heaters: opn ", starter("steam-plant", {})), "utf-8")
    with pytest.raises(SpecError) as caught:
        solve_spec(spec)
    fault = caught.value.faults[0]
    assert fault.what == "option heaters cannot be 'opn'"
    assert spec.read_text("utf-8").splitlines()[fault.place.line - 1].lstrip().startswith("heaters: opn")
    assert "closed-pump (one a heater)" in fault.expected and "open" in fault.hint


def test_the_sheet_says_what_words_for_heaters_mean(solve: Solve) -> None:
    option = solve({"heaters": "open open"}).data["case"]["options"]["heaters"]
    assert option["value"] == "open open"
    assert option["meaning"].startswith("words from the highest pressure down")
