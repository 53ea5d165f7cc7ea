"""Why a result moved: only changes that a chain of moved values leads from."""
from __future__ import annotations

from calcpack.revisions import compare_records


def follows_from(comparison: dict, symbol: str) -> list[tuple[str, str]]:
    [row] = [one for one in comparison["results"] if one["symbol"] == symbol]
    return [(cause["kind"], cause["name"]) for cause in row["causes"]]


def test_an_input_that_the_result_does_not_hang_on_is_not_named(cooler):
    comparison = compare_records(cooler(), cooler(("120 kW", "150 kW"), ("spare: 3.5", "spare: 9"),
                                                  ("f_foul: 1.2", "f_foul: 1.3")))
    assert [one["symbol"] for one in comparison["inputs"]] == ["Q_dot", "f_foul", "spare"]
    assert follows_from(comparison, "m_dot") == [("input", "Q_dot")]
    assert follows_from(comparison, "area_f") == [("input", "Q_dot"), ("input", "f_foul")]


def test_a_result_that_is_an_input_follows_from_itself(cooler):
    comparison = compare_records(cooler(), cooler(("T_out: 35", "T_out: 36")))
    assert follows_from(comparison, "T_out") == [("input", "T_out")]


def test_a_formula_and_a_table_are_causes_with_both_texts(cooler):
    comparison = compare_records(cooler(), cooler(("area * f_foul", "area * f_foul + 1 m2"), ("7 m2", "8 m2")))
    [row] = [one for one in comparison["results"] if one["symbol"] == "dT_m"]
    assert [cause["text"] for cause in row["causes"]] == [
        "area (points of the table): 0.5 kg/s → 4 m2; 1 kg/s → 7 m2; 2 kg/s → 12 m2"
        " → 0.5 kg/s → 4 m2; 1 kg/s → 8 m2; 2 kg/s → 12 m2",
        "area_f: area * f_foul → area * f_foul + 1 m²"]


def test_a_root_moves_through_its_body_and_not_through_its_bracket(chiller):
    comparison = compare_records(chiller(), chiller(("T_sink_out: 66", "T_sink_out: 69"), ("36 degC", "38 degC")))
    # T_source_in bounds the root of the evaporating level, which did not move: the outlet holds the pinch.
    assert follows_from(comparison, "W_dot_net") == [("input", "T_sink_out")]
    # The condensing level closes on the same pinch, and moves by what its profile reads.
    assert follows_from(comparison, "T_2") == [("input", "T_sink_out")]


def test_an_option_and_the_inputs_it_brings(chiller):
    comparison = compare_records(chiller(), chiller(("dT_pinch_e: 4 K", "T_e: 20 degC"),
                                                    ("evaporating: pinch", "evaporating: temperature")))
    assert follows_from(comparison, "COP") == [("input", "T_e"), ("input", "dT_pinch_e"), ("option", "evaporating")]


def test_another_refrigerant(chiller):
    comparison = compare_records(chiller(), chiller(("R-1234ze(E)", "R-600a")))
    assert follows_from(comparison, "COP") == [("fluid", "wf")]


def test_another_equation_of_state_comes_with_the_program(chiller):
    old, new = chiller(), chiller()
    new.data["engine"]["libraries"].update({"CoolProp": "99.0", "PyYAML": "99.0"})
    new.data["results"]["COP"]["shown"] = "9.999"
    assert follows_from(compare_records(old, new), "COP") == [("program", "CoolProp")]


def test_no_cause_is_made_up(cooler):
    old, new = cooler(), cooler()
    new.data["results"]["m_dot"]["shown"] = "9.9999"
    assert follows_from(compare_records(old, new), "m_dot") == []


def test_limits_have_causes_too(cooler):
    comparison = compare_records(cooler(), cooler(("f_foul: 1.2", "f_foul: 1.6")))
    [limit] = comparison["limits"]
    assert [(cause["kind"], cause["name"]) for cause in limit["causes"]] == [("input", "f_foul")]
