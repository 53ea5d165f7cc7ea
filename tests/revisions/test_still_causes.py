"""What a comparison tells of a result's causes and ends: those that moved it, in the unit of the newer sheet."""
from __future__ import annotations

import pytest

from calcpack.revisions import compare_records


@pytest.fixture(scope="module")
def comparison(chiller):
    """The water enters warmer, where the pinch does not lie, and the compressor is worse."""
    return compare_records(chiller(), chiller(("T_source_in: 36 degC", "T_source_in: 38 degC"),
                                              ("eta_is: 0.71", "eta_is: 0.68")))


def test_a_change_whose_part_is_nothing_is_not_named_as_a_cause(comparison):
    parts = comparison["attribution"]["COP"]["parts"]
    assert {part["cause"]: part["number"] for part in parts}["T_source_in"] == "0"
    [result] = [one for one in comparison["results"] if one["symbol"] == "COP"]
    assert [cause["name"] for cause in result["causes"]] == ["eta_is"]


def test_every_result_keeps_a_cause(comparison):
    assert all(one["causes"] for one in comparison["results"])


def test_parts_lead_from_the_old_end_to_the_new_one(comparison):
    for one in comparison["attribution"].values():
        old, new = (end["value"] for end in one["ends"])
        assert old + one["sum"] == pytest.approx(new, rel=1e-9)


def test_ends_are_numbers_as_printed_and_a_levels_are_those_of_its_twin(comparison):
    attribution = comparison["attribution"]
    shown = {one["symbol"]: one for one in comparison["results"]}
    for symbol in ("COP", "W_dot_net"):
        numbers = [end["number"] for end in attribution[symbol]["ends"]]
        assert [text.split()[0] for text in (shown[symbol]["old"], shown[symbol]["new"])] == numbers
    level = attribution["T_2"]
    assert level["ends_unit"] == "°C"
    assert shown["T_2"]["new"].endswith(f"({level['ends'][1]['number']} °C)")


def test_ends_in_two_systems_of_units_are_both_told_in_that_of_the_newer(cooler):
    old, new = cooler(), cooler(("status: draft\n", "status: draft\n  units: us\n"), ("120 kW", "150 kW"))
    one = compare_records(old, new)["attribution"]["m_dot"]
    numbers = [float(end["number"]) for end in one["ends"]]
    assert one["ends_unit"] == "lb/h"
    assert numbers[1] / numbers[0] == pytest.approx(1.25, rel=1e-3)
