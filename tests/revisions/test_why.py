"""Why a result moved: only changes that a chain of moved values leads from, and how much each of them moved it."""
from __future__ import annotations

import re
from hashlib import sha256
from html import unescape
from math import fsum, isclose
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st

from calcpack.pipeline import solve_spec
from calcpack.record import Record
from calcpack.render.sheet import sheet_html
from calcpack.revisions import compare_records, rendered
from calcpack.revisions.shares import Gap, averaged, one_by_one


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


# How much of a move each change has: the parts of the attribution.


def moved_by(old: Record, new: Record, symbol: str) -> float:
    values = [{one["symbol"]: one["value"] for one in (*record.data["inputs"], *record.data["steps"])}[symbol]
              for record in (old, new)]
    return values[1] - values[0]


def part_of(comparison: dict, symbol: str) -> dict[str, float]:
    return {part["cause"]: part["part_value"] for part in comparison["attribution"][symbol]["parts"]}


def assert_sums_are_whole(old: Record, new: Record, comparison: dict) -> None:
    assert comparison["attribution"]
    for symbol, found in comparison["attribution"].items():
        parts = fsum([*(part["part_value"] for part in found["parts"]), found["program"]["part_value"]])
        whole = moved_by(old, new, symbol)
        assert isclose(parts, whole, rel_tol=1e-9) and isclose(found["sum"], whole, rel_tol=1e-9)


def test_parts_sum_to_the_whole_for_two_inputs_and_an_option_with_its_input(chiller):
    old, new = chiller(), chiller(
        ("dT_pinch_e: 4 K", "T_e: 20 degC"), ("evaporating: pinch", "evaporating: temperature"),
        ("T_sink_out: 66", "T_sink_out: 69"), ("eta_is: 0.71", "eta_is: 0.75"))
    comparison = compare_records(old, new)
    assert_sums_are_whole(old, new, comparison)
    assert list(part_of(comparison, "COP")) == ["evaporating, T_e, dT_pinch_e", "T_sink_out", "eta_is"]
    found = comparison["attribution"]["COP"]
    assert found["method"] == "average over all orders of 3 causes"
    assert found["solves"] == 2 ** 3 + 1
    assert found["program"]["part_value"] == 0.0
    # Nothing but the bare rule of compression: a better compressor raises COP and lowers the power.
    assert part_of(comparison, "COP")["eta_is"] > 0.0 > part_of(comparison, "W_dot_net")["eta_is"]
    assert part_of(comparison, "COP")["T_sink_out"] < 0.0


def test_parts_by_hand(cooler):
    """Both factors of a product move: each has its own effect and half of the joint one."""
    old, new = cooler(), cooler(("120 kW", "150 kW"), ("c_w: 4.18", "c_w: 4.4"))
    parts = part_of(compare_records(old, new), "m_dot")
    flow = {(Q, c): Q / (c * 25.0) for Q in (120e3, 150e3) for c in (4180.0, 4400.0)}
    assert isclose(parts["Q_dot"], (flow[150e3, 4180.0] - flow[120e3, 4180.0]
                                    + flow[150e3, 4400.0] - flow[120e3, 4400.0]) / 2, rel_tol=1e-12)
    assert isclose(parts["c_w"], (flow[120e3, 4400.0] - flow[120e3, 4180.0]
                                  + flow[150e3, 4400.0] - flow[150e3, 4180.0]) / 2, rel_tol=1e-12)


def test_two_symmetric_causes_have_equal_parts(cooler):
    factors = ("f_foul: 1.2", "f_foul: 1.2\n    f_a: 1\n    f_b: 1"), ("area * f_foul", "area * f_foul * f_a * f_b")
    old, new = cooler(*factors), cooler(*factors, ("f_a: 1", "f_a: 1.2"), ("f_b: 1", "f_b: 1.2"))
    parts = part_of(compare_records(old, new), "area_f")
    assert parts["f_a"] == parts["f_b"]
    assert isclose(parts["f_a"] + parts["f_b"], moved_by(old, new, "area_f"), rel_tol=1e-9)


games = st.integers(1, 5).flatmap(lambda count: st.tuples(
    st.just(count), st.lists(st.floats(-1e3, 1e3), min_size=1 << count, max_size=1 << count)))


@given(games, st.randoms(use_true_random=False))
def test_the_order_of_the_causes_moves_no_part(game, random):
    count, values = game
    order = random.sample(range(count), count)
    reordered = [values[sum(1 << order[at] for at in range(count) if mask >> at & 1)] for mask in range(1 << count)]
    parts, others = averaged(count, values.__getitem__), averaged(count, reordered.__getitem__)
    assert all(isclose(others[at], parts[order[at]], rel_tol=1e-9, abs_tol=1e-9) for at in range(count))
    assert isclose(fsum(parts), values[-1] - values[0], rel_tol=1e-9, abs_tol=1e-9)


@given(st.lists(st.floats(-1e3, 1e3), min_size=16, max_size=16), st.integers(0, 3))
def test_a_cause_that_moves_nothing_has_no_part(values, idle):
    found = averaged(4, lambda mask: values[mask & ~(1 << idle)])
    assert found[idle] == 0.0


def test_one_by_one_tells_a_cause_without_an_answer_with_the_next():
    values = {0: 1.0, 1: 3.0, 7: 10.0, 15: 11.0}

    def value(mask: int) -> float:
        if mask not in values:
            raise Gap(mask, "nothing there")
        return values[mask]
    assert one_by_one(4, value) == [((0,), 2.0), ((1, 2), 7.0), ((3,), 1.0)]
    del values[15]
    with pytest.raises(Gap):
        one_by_one(4, value)


def test_nine_causes_are_taken_in_the_written_order(cooler):
    names = [f"f_{letter}" for letter in "abcdefghi"]
    inputs = "".join(f"\n    {name}: 1.1" for name in names)
    product = " * ".join(["area * f_foul", *names])
    grown = (("f_foul: 1.2", "f_foul: 1.2" + inputs), ("area * f_foul", product))
    old, new = cooler(*grown), cooler(*grown, *((f"{name}: 1.1", f"{name}: 1.21") for name in names))
    comparison = compare_records(old, new)
    found = comparison["attribution"]["area_f"]
    assert found["method"].startswith("9 causes one at a time in the written order; there are more than 8")
    assert found["solves"] == 9 + 2
    assert_sums_are_whole(old, new, comparison)
    parts = part_of(comparison, "area_f")
    assert list(parts) == names
    # Each factor of 1.1 acts on what those before it have left.
    first = old["area_f"].to("m**2").magnitude * 0.1
    assert all(isclose(parts[name], first * 1.1 ** at, rel_tol=1e-9) for at, name in enumerate(names))


def test_a_mixture_without_an_answer_is_told_and_the_order_taken(cooler):
    """Cooling to 65 degC from 60 degC is below nothing: the outlet alone leaves the catalogue."""
    old = cooler()
    new = cooler(("T_in: {value: 60 degC", "T_in: {value: 90 degC"), ("T_out: 35", "T_out: 65"),
                 ("f_foul: 1.2", "f_foul: 1.3"))
    comparison = compare_records(old, new)
    found = comparison["attribution"]["area_f"]
    assert "one at a time in the written order; with T_out alone there is no answer: " in found["method"]
    assert_sums_are_whole(old, new, comparison)


def test_a_step_stands_with_the_input_that_it_alone_uses(cooler):
    old, new = cooler(), cooler(("f_foul: 1.2", "f_foul: 1.2\n    f_new: 1.5"),
                                ("area * f_foul", "area * f_foul * f_new"), ("120 kW", "130 kW"))
    comparison = compare_records(old, new)
    assert list(part_of(comparison, "area_f")) == ["Q_dot", "f_new, area_f"]
    assert_sums_are_whole(old, new, comparison)


def test_another_fluid_is_a_cause(chiller):
    old, new = chiller(), chiller(("R-1234ze(E)", "R-600a"), ("T_sink_out: 66", "T_sink_out: 69"))
    comparison = compare_records(old, new)
    assert list(part_of(comparison, "COP")) == ["wf", "T_sink_out"]
    assert_sums_are_whole(old, new, comparison)


def test_another_method_is_one_cause_with_all_that_comes_with_it(chiller, cooler):
    old = cooler(("results: [area_f,", "results: [COP,"), ("symbol: area_f,", "symbol: COP,"), ("area_f", "COP"))
    new = chiller()
    [part] = compare_records(old, new)["attribution"]["COP"]["parts"]
    assert part["cause"] == "method" and part["text"].startswith("method: none → vapour-compression, with its options")
    assert isclose(part["part_value"], moved_by(old, new, "COP"), rel_tol=1e-9)


def test_a_gauge_pressure_moves_with_the_air(chiller):
    grown = ("results: [COP", "steps:\n  - {symbol: p_2x, title: Twice, formula: 2 * p_source}\nresults: [p_2x, COP")
    old, new = chiller(grown), chiller(grown, ("  status: draft", "  status: draft\n  p_atm: 0.9 bar"))
    comparison = compare_records(old, new)
    assert list(part_of(comparison, "p_2x")) == ["p_atm"]
    assert_sums_are_whole(old, new, comparison)


def test_a_value_set_on_the_command_line_is_an_input_that_moved(cooler_text):
    old = solve_spec(Path("sheet.yaml"), text=cooler_text, name="sheet.yaml")
    new = solve_spec(Path("sheet.yaml"), {"f_foul": "1.5"}, text=cooler_text, name="sheet.yaml")
    comparison = compare_records(old, new)
    assert_sums_are_whole(old, new, comparison)
    assert list(part_of(comparison, "area_f")) == ["f_foul"]


def test_the_program_has_its_part(cooler):
    """The kept record says another value than its spec gives today: the difference is nobody's edit."""
    old, new = cooler(), cooler(("f_foul: 1.2", "f_foul: 1.3"))
    area = old.step("area_f")
    area["value"] -= 0.25
    area["shown"] = old.data["results"]["area_f"]["shown"] = f"{area['value']:.3f}"
    old.data["results"]["area_f"]["value"] = area["value"]
    old.data["engine"]["libraries"]["CoolProp"] = "1.0"
    comparison = compare_records(old, new)
    program = comparison["attribution"]["area_f"]["program"]
    assert isclose(program["part_value"], 0.25, rel_tol=1e-9)
    assert program["text"].startswith("the program: CoolProp 1.0 → ")
    assert_sums_are_whole(old, new, comparison)
    assert "+0.2500  the program: CoolProp 1.0 → " in rendered(comparison, "text")


@pytest.mark.parametrize(("spoil", "why"), [
    (lambda record: record.pop("spec_text"), "the older record carries no spec"),
    (lambda record: record.update(spec_text=record["spec_text"] + "\n"), "is not the one it was solved from"),
    (lambda record: record.update(spec_text="a: b", spec_sha256=sha256(b"a: b").hexdigest()),
     "today's program does not read the older spec")])
def test_a_record_that_cannot_be_solved_again_says_so(cooler, spoil, why):
    old, new = cooler(), cooler(("f_foul: 1.2", "f_foul: 1.3"))
    spoil(old.data)
    comparison = compare_records(old, new)
    assert comparison["attribution"] == {} and why in comparison["attribution_note"]
    for shape in ("text", "markdown", "html"):
        said = " ".join(unescape(rendered(comparison, shape)).split())
        assert "Not attributed: " in said and why in said


def test_the_record_carries_the_text_that_its_hash_is_of(cooler, cooler_text):
    data = cooler().data
    assert data["spec_text"] == cooler_text
    marked = solve_spec(Path("sheet.yaml"), text="\ufeff" + cooler_text, name="sheet.yaml").data
    assert sha256(marked["spec_text"].encode("utf-8")).hexdigest() == marked["spec_sha256"] != data["spec_sha256"]


def test_every_shape_has_the_table(cooler):
    comparison = compare_records(cooler(), cooler(("120 kW", "150 kW"), ("f_foul: 1.2", "f_foul: 1.3")))
    parts = {part["cause"]: part["number"] for part in comparison["attribution"]["area_f"]["parts"]}
    assert set(parts) == {"Q_dot", "f_foul"}
    for shape in ("text", "markdown", "html", "json"):
        text = rendered(comparison, shape)
        assert all(number in text for number in (*parts.values(), comparison["attribution"]["area_f"]["sum_number"]))


def test_a_program_without_edits_asks_for_no_table_when_nothing_moved(cooler):
    comparison = compare_records(cooler(), cooler())
    assert comparison["attribution"] == {} and comparison["attribution_note"] == ""


def test_the_sheet_has_a_column_a_result_and_a_row_a_cause(cooler):
    new = cooler(("120 kW", "150 kW"), ("f_foul: 1.2", "f_foul: 1.3"))
    comparison = compare_records(cooler(), new)
    page = sheet_html(new, comparison=comparison)
    table = re.search(r'<table class="wide changes shares">(.*?)</table>', page, re.DOTALL)[1]
    rows = [[unescape(re.sub(r"<[^>]+>", "", cell)) for cell in re.findall(r"<td>(.*?)</td>", row)]
            for row in re.findall(r"<tr><td>.*?</tr>", table)]
    found = comparison["attribution"].values()
    assert [len(row) for row in rows] == [1 + len(found)] * 3
    assert [row[0].split(":")[0] for row in rows[:2]] == ["Q˙", "ffoul"]
    wanted = [[one["parts"][at]["number"].replace("-", "−") for one in found] for at in range(2)]
    assert [row[1:] for row in rows] == [*wanted, [one["sum_number"].replace("-", "−") for one in found]]
    assert "Average over all orders of 2 causes. 5 solves" in page


def test_a_sheet_says_why_nothing_is_attributed(cooler):
    old, new = cooler(), cooler(("f_foul: 1.2", "f_foul: 1.3"))
    del old.data["spec_text"]
    page = sheet_html(new, comparison=compare_records(old, new))
    assert "Not attributed: the older record carries no spec." in page and "changes shares" not in page
