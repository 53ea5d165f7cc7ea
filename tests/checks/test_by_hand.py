"""The re-check by hand: it passes what can be done again from print, and finds what cannot."""
from __future__ import annotations

import copy
import dataclasses
from decimal import Decimal

import pytest
from check_cases import Solved, by_id, heat_pump_text, solve_text, with_step

from calcpack.checks.hand import redone, redone_by_hand
from calcpack.methods import methods
from calcpack.methods.starter import starter
from calcpack.record.record import Record


def failed(solved: Solved) -> set[str]:
    """The symbols whose printed results cannot be done again."""
    return {one.symbol for one in redone(*solved) if not one.agrees}


def moved(shown: str, places: int) -> str:
    """A printed number moved by so many units in its last place."""
    number = Decimal(shown)
    return str(number + places * Decimal(1).scaleb(number.as_tuple().exponent))


def test_every_step_is_done_again_and_the_worst_is_named(heat_pump: Solved) -> None:
    solution, record = heat_pump
    summary, = redone_by_hand(solution, record)
    count = len(record.data["steps"])
    assert summary["value"].startswith(f"{count} of {count} steps, worst 0.")
    assert summary["status"] == "ok"
    assert {one.step for one in redone(solution, record)} == {step["id"] for step in record.data["steps"]}


@pytest.mark.parametrize("units", ["si", "us"])
@pytest.mark.parametrize("name", list(methods()))
def test_every_method_can_be_done_again_from_print(name: str, units: str) -> None:
    solved = solve_text(starter(name, {}).replace("units: si", f"units: {units}"))
    assert failed(solved) == set()


@pytest.mark.parametrize("symbol", ["w_comp", "h_2", "T_2", "p_c", "COP", "m_dot_wf", "LMTD_cc", "band", "fouling",
                                    "T_1", "T_crit_wf", "dT_min_e", "T_c"])
def test_a_result_off_by_two_in_the_last_place_is_found(heat_pump: Solved, symbol: str) -> None:
    solution, record = heat_pump
    shown = record.step(symbol)["shown"]
    spoiled = with_step(record, symbol, shown=moved(shown, 2))
    assert symbol in failed((solution, spoiled))


def test_a_changed_digit_among_the_numbers_is_found(heat_pump: Solved) -> None:
    solution, record = heat_pump
    numbers = record.step("h_2s")["numbers"]
    assert "bar" in numbers
    first = numbers.index("p=") + 2
    digit = "2" if numbers[first] != "2" else "3"
    spoiled = with_step(record, "h_2s", numbers=numbers[:first] + digit + numbers[first + 1:])
    assert failed((solution, spoiled)) == {"h_2s"}


def test_an_operand_that_differs_from_its_own_place_is_found_even_if_the_result_does_not(heat_pump: Solved) -> None:
    solution, record = heat_pump
    # T_3 = T_bub - dT_sc: both moved by the same amount give the same result.
    numbers = record.step("T_3")["numbers"]
    first, _, second = numbers.partition(" K - ")
    spoiled = with_step(record, "T_3", numbers=f"{Decimal(first) + 1} K - {Decimal(second.removesuffix(' K')) + 1} K")
    result, = (one for one in redone(solution, spoiled) if not one.agrees)
    assert result.symbol == "T_3" and "operands as printed" in result.detail


def test_text_that_is_no_formula_is_a_finding_not_a_crash(heat_pump: Solved) -> None:
    solution, record = heat_pump
    for numbers in ("", "1 +", "h(nowhere, p=1 bar, T=300 K)", "sqrt(-1)", "1 / 0"):
        spoiled = with_step(record, "h_1", numbers=numbers)
        assert failed((solution, spoiled)) == {"h_1"}


def test_a_wrong_property_value_is_found(heat_pump: Solved, monkeypatch: pytest.MonkeyPatch) -> None:
    solution, record = heat_pump
    fluid = solution.plan.fluids["wf"]
    reader = type(fluid).reader

    def shifted(self, output, names):
        read = reader(self, output, names)
        return (lambda *given: read(*given) + 50.0) if output == "h" and self is fluid else read
    monkeypatch.setattr(type(fluid), "reader", shifted)
    found = failed((solution, record))
    assert {"h_1", "h_3"} <= found and "h_source_in" not in found


def test_a_cell_of_a_table_is_done_again(heat_pump: Solved) -> None:
    solution, record = heat_pump
    table = copy.deepcopy(record.step("dT_min_c")["table"])
    cell = table["rows"][3]["cells"][4]
    cell["shown"] = moved(cell["shown"], 2)
    spoiled = with_step(record, "dT_min_c", table=table)
    assert failed((solution, spoiled)) == {"dT_x_c"}


def test_a_reduction_is_done_again_from_its_printed_column(heat_pump: Solved) -> None:
    solution, record = heat_pump
    table = {**record.step("dT_min_c")["table"], "reduction": "max"}
    assert failed((solution, with_step(record, "dT_min_c", table=table))) == {"dT_min_c"}


def test_a_condition_must_come_out_as_recorded(heat_pump: Solved) -> None:
    solution, record = heat_pump
    choice = copy.deepcopy(record.step("band")["choice"])
    choice["branches"][0]["condition_numbers"] = choice["branches"][0]["condition_numbers"].replace("<", ">")
    result, = (one for one in redone(solution, with_step(record, "band", choice=choice)) if not one.agrees)
    assert "is recorded as one that holds" in result.detail


def test_a_lookup_is_interpolated_again(heat_pump: Solved) -> None:
    solution, record = heat_pump
    lookup = copy.deepcopy(record.step("fouling")["lookup"])
    lookup["points"][2][1] = "0.08"
    assert failed((solution, with_step(record, "fouling", lookup=lookup))) == {"fouling"}


def test_a_failure_has_an_entry_of_its_own(heat_pump: Solved) -> None:
    solution, record = heat_pump
    entries = redone_by_hand(solution, with_step(record, "COP", shown="9.999"))
    found = by_id(entries)
    assert found["V-H"]["status"] == "fails"
    number = record.step("COP")["id"]
    assert found[f"V-H-{number}"]["status"] == "fails" and "9.999 printed" in found[f"V-H-{number}"]["detail"]


def test_the_recheck_leaves_the_program_as_it_was(heat_pump: Solved) -> None:
    solution, record = heat_pump
    before = copy.deepcopy((solution.program.tables, solution.program.held))
    list(redone(solution, record))
    assert (solution.program.tables, solution.program.held) == before


def test_two_fluids_of_one_designation_are_told_apart_by_their_role() -> None:
    solution, record = solve_text(heat_pump_text().replace("source: water, sink: water",
                                                           "source: {fluid: water, model: IF97}, sink: water"))
    assert failed((solution, record)) == set()
    both = solution.plan.fluids["source"], solution.plan.fluids["sink"]
    assert both[0].designation == both[1].designation and both[0] is not both[1]
    # Exchanged, the two formulations give other printed numbers: the role does matter.
    swapped = {**solution.plan.fluids, "source": both[1], "sink": both[0]}
    plan = dataclasses.replace(solution.plan, fluids=swapped)
    assert failed((dataclasses.replace(solution, plan=plan), record))


def test_a_sheet_without_steps_has_nothing_to_redo(heat_pump: Solved) -> None:
    solution, record = heat_pump
    assert redone_by_hand(solution, Record({**record.data, "steps": []})) == ()
