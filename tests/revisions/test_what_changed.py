"""What a comparison finds: values within print, edits, moves, verdicts, marks."""
from __future__ import annotations

import json

import pytest
from hypothesis import given
from hypothesis import strategies as st

from calcpack.record import Record
from calcpack.revisions import compare_records, differs
from calcpack.revisions.compare import CONTENT
from calcpack.revisions.printed import change, change_percent, same_print


def entry(shown: str, unit: str, value: float, twin: str | None = None) -> dict:
    return {"shown": shown, "unit": unit, "value": value, "also_shown": twin}


def only(rows: list[dict], **wanted) -> dict:
    """The one row with these values."""
    found = [row for row in rows if all(row[key] == value for key, value in wanted.items())]
    assert len(found) == 1, f"{len(found)} rows with {wanted}"
    return found[0]


def test_a_record_does_not_differ_from_itself(cooler, chiller):
    for record in (cooler(), chiller()):
        comparison = compare_records(record, record)
        assert not differs(comparison)
        assert [comparison[key] for key in CONTENT] == [[] for _ in CONTENT]
        assert (comparison["engine"], comparison["notes"], comparison["marks"]) == ([], [], 0)
        assert comparison["edited"] == comparison["moved_only"] == comparison["changed_symbols"] == []
        assert json.loads(json.dumps(comparison)) == comparison


@given(place=st.integers(0, 5), step=st.integers(-400, 400))
def test_an_input_differs_exactly_where_its_print_does(cooler, place, step):
    old, new = cooler(), cooler()
    one = new.data["inputs"][place]
    number = round(float(one["shown"]) + step / 100, 2)
    one["shown"], one["value"] = f"{number:.2f}", one["value"] + step / 100
    comparison = compare_records(old, new)
    assert [row["symbol"] for row in comparison["inputs"]] == ([one["symbol"]] if step else [])
    assert differs(comparison) == bool(step)
    if step:
        assert comparison["inputs"][0]["change"].split()[0].replace("+", "") == f"{step / 100:.2f}"


def test_a_changed_input_is_edited_and_its_followers_moved(cooler):
    comparison = compare_records(cooler(), cooler(("120 kW", "150 kW")))
    assert only(comparison["inputs"]) == {
        "symbol": "Q_dot", "title": "Q_dot", "old": "120 kW", "new": "150 kW", "change": "+30 kW",
        "change_percent": "+25 %", "kind": "changed", "old_written": "120 kW", "new_written": "150 kW"}
    assert comparison["edited"] == ["Q_dot"]
    assert comparison["moved_only"] == ["m_dot", "area", "area_f", "plates", "dT_m"]
    assert comparison["changed_symbols"] == ["Q_dot", "m_dot", "area", "area_f", "plates", "dT_m"]
    assert only(comparison["results"], symbol="m_dot")["change_percent"] == "+25 %"
    choice = only(comparison["choices"])
    assert (choice["symbol"], choice["old"], choice["new"]) == ("plates", "small plates", "large plates")


def test_a_temperature_level_is_told_with_its_twin_and_without_percent(cooler):
    row = only(compare_records(cooler(), cooler(("60 degC", "62.5 degC")))["inputs"])
    assert (row["old"], row["new"]) == ("333.15 K (60.00 °C)", "335.65 K (62.50 °C)")
    assert (row["change"], row["change_percent"]) == ("+2.50 K", None)


def test_values_within_print_are_the_same():
    same = entry("3.0487", "kg/s", 3.04871)
    assert same_print(same, entry("3.0487", "kg/s", 3.04866))
    assert same_print(same, entry("3.05", "kg/s", 3.0487))          # at the coarser print
    assert not same_print(same, entry("3.0488", "kg/s", 3.04876))
    assert not same_print(same, entry("3.04", "kg/s", 3.04))


def test_every_digit_of_an_exact_value_counts():
    assert not same_print(entry("450", "kW", 450e3), entry("450.4", "kW", 450.4e3), exact=True)
    assert same_print(entry("450", "kW", 450e3), entry("450.0", "kW", 450e3), exact=True)
    assert change(entry("450", "kW", 450e3), entry("450.4", "kW", 450.4e3), exact=True) == "+0.4 kW"


def test_in_another_unit_a_unit_of_the_last_place_decides():
    assert same_print(entry("5.13", "bar", 513_000.0), entry("74.41", "psi", 513_039.0))
    assert not same_print(entry("5.13", "bar", 513_000.0), entry("74.6", "psi", 514_349.0))
    assert not same_print(entry("5.13", "bar", 513_000.0), entry("5.14", "bar", 513_990.0))


@pytest.mark.parametrize(("old", "new", "percent"), [
    (("4.000", "4.200"), "", "+5.0 %"), (("4.000", "3.000"), "", "-25 %"), (("100", "1150"), "kW", "+1050 %"),
    (("0", "2"), "kW", None), (("-2", "2"), "kW", None), (("1000.0", "1000.1"), "kW", "+0.010 %")])
def test_percent_where_it_says_something(old, new, percent):
    before, after = (entry(shown, new, float(shown)) for shown in old)
    assert change_percent(before, after) == percent


def test_print_units_change_no_value(chiller):
    comparison = compare_records(chiller(), chiller(("status: draft", "status: draft\n  units: us")))
    assert [(row["name"], row["old"], row["new"]) for row in comparison["sheet"]] == [("Units of print", "si", "us")]
    assert comparison["inputs"] == comparison["results"] == comparison["formulas"] == []


def test_a_formula_of_the_engineer(cooler):
    comparison = compare_records(cooler(), cooler(("area * f_foul", "area * f_foul + 1 m2")))
    row = only(comparison["formulas"])
    assert (row["symbol"], row["step"], row["what"]) == ("area_f", "1.4", "formula")
    assert (row["old"], row["new"]) == ("area * f_foul", "area * f_foul + 1 m²")
    assert only(comparison["steps"], symbol="area_f")["kind"] == "edited"
    assert comparison["moved_only"] == ["dT_m"]


@pytest.mark.parametrize(("edit", "symbol", "what"), [
    (("7 m2", "8 m2"), "area", "points of the table"),
    (("source: R2", "source: R1"), "area", "source of the table"),
    (("80 K", "90 K"), "dT_m", "upper end of the bracket"), (("[1 K", "[2 K"), "dT_m", "lower end of the bracket"),
    (("1.2 kg/s", "1.3 kg/s"), "plates", "formula")])
def test_every_part_of_a_definition(cooler, edit, symbol, what):
    row = only(compare_records(cooler(), cooler(edit))["formulas"])
    assert (row["symbol"], row["what"]) == (symbol, what)


def test_steps_that_came_and_went_are_known_by_symbol_not_by_number(cooler):
    new = cooler(("  - {symbol: dT_w, title: Cooling of the wash water, formula: T_in - T_out}\n",
                  "  - {symbol: twice, title: Twice, formula: 2 * spare}\n"
                  "  - {symbol: dT_w, title: Cooling of the wash water, formula: T_in - T_out}\n"))
    comparison = compare_records(cooler(), new)
    row = only(comparison["formulas"])
    assert (row["symbol"], row["kind"], row["old"], row["new"]) == ("twice", "added", None, "2 * spare")
    assert comparison["steps"] == []
    back = only(compare_records(new, cooler())["formulas"])
    assert (back["kind"], back["old"], back["new"]) == ("removed", "2 * spare", None)
    assert compare_records(new, cooler())["changed_symbols"] == []


def test_assumptions_references_and_wording(cooler):
    comparison = compare_records(cooler(), cooler(
        ("status: open", "status: confirmed"), ("Catalogue of plates", "Catalogue of plates (2nd issue)"),
        ("{value: 120 kW, source: R1}", "{value: 120 kW, source: R2, tol: 3 kW}"),
        ("Area with fouling", "Fouled area"), ("Size the", "Choose the")))
    assert only(comparison["assumptions"]) == {
        "id": "A1", "title": "No heat is lost to the hall.", "old": "status: open", "new": "status: confirmed",
        "kind": "changed"}
    assert only(comparison["references"])["new"] == "Catalogue of plates (2nd issue)"
    told = {(row["symbol"], row["what"]): (row["old"], row["new"]) for row in comparison["details"]}
    assert told[("Q_dot", "source")] == ("R1", "R2")
    assert told[("Q_dot", "tolerance")] == ("", "3 kW")
    assert told[("area_f", "title")] == ("Area with fouling", "Fouled area")
    assert only(comparison["sheet"])["name"] == "Purpose"
    assert comparison["changed_symbols"] == ["Q_dot", "area_f"]
    assert comparison["changed_ids"]["assumptions"] == ["A1"]


def test_limits_by_verdict_bound_and_move(cooler):
    old = cooler()
    moved = only(compare_records(old, cooler(("f_foul: 1.2", "f_foul: 1.25")))["limits"])
    assert (moved["id"], moved["kind"], moved["verdict_changed"]) == ("L1", "moved", False)
    failed = only(compare_records(old, cooler(("f_foul: 1.2", "f_foul: 1.6")))["limits"])
    assert failed["verdict_changed"] and failed["kind"] == "moved"
    assert "verdict: holds" in failed["old"] and "verdict: fails" in failed["new"]
    bound = only(compare_records(old, cooler(("at_most: 40 degC", "at_most: 45 degC")))["limits"])
    assert (bound["kind"], bound["bound_changed"]) == ("changed", True)
    assert bound["old"] == "bound: 313.15 K (40.00 °C); margin: 5.00 K"
    gone = only(compare_records(old, cooler((
        "  - {id: L2, symbol: T_out, at_most: 40 degC, why: the drain}\n", "")))["limits"])
    assert (gone["id"], gone["kind"], gone["new"]) == ("L2", "removed", None)


def test_digits_of_a_bound_follow_the_value_and_are_no_change(cooler):
    old, new = cooler(), cooler()
    limit = new.data["limits"][0]
    limit["value"], limit["bound"], limit["margin"] = "9.29 m²", "12.00 m²", "2.71 m²"
    new.data["steps"][3]["shown"] = new.data["results"]["area_f"]["shown"] = "9.29"
    assert not differs(compare_records(old, new))


def test_options_methods_and_fluids(chiller, cooler):
    old = chiller()
    new = chiller(("dT_pinch_e: 4 K", "T_e: 20 degC"), ("evaporating: pinch", "evaporating: temperature"))
    comparison = compare_records(old, new)
    row = only(comparison["options"])
    assert (row["name"], row["old"], row["new"], row["kind"]) == ("evaporating", "pinch", "temperature", "changed")
    assert {(one["symbol"], one["kind"]) for one in comparison["inputs"]} == {
        ("T_e", "added"), ("dT_pinch_e", "removed")}
    fluid = only(compare_records(old, chiller(("R-1234ze(E)", "R-600a")))["fluids"])
    assert (fluid["role"], fluid["identity_changed"]) == ("wf", True)
    assert fluid["old"].startswith("R-1234ze(E)") and fluid["new"].startswith("R-600a")
    method = compare_records(cooler(), old)
    assert method["options"][0] | {"title": ""} == {
        "name": "method", "title": "", "old": "none", "new": "vapour-compression", "kind": "changed",
        "old_meaning": cooler().data["case"]["method_title"], "new_meaning": old.data["case"]["method_title"]}


def test_an_option_left_out_is_its_default(chiller):
    spelled = chiller(("evaporating: pinch", "serves: heating, evaporating: pinch"))
    assert not differs(compare_records(chiller(), spelled))


def test_another_equation_of_state_for_one_fluid(chiller):
    old, new = chiller(), chiller()
    new.data["case"]["fluids"]["wf"]["identity"] += ", revised"
    new.data["case"]["fluids"]["wf"]["facts"][0]["value"] = "A3"
    fluid = only(compare_records(old, new)["fluids"])
    assert fluid["identity_changed"] and "revised" in fluid["new"] and "A3" in fluid["new"]


def test_cautions_and_checks(chiller):
    old, new = chiller(), chiller()
    triggered = next(one for one in new.data["cautions"] if one["status"] == "triggered")
    triggered["status"] = "not triggered"
    new.data["checks"][0]["status"] = "fails"
    quiet = next(one for one in old.data["cautions"] if one["status"] == "not triggered")
    old.data["cautions"].remove(quiet)
    comparison = compare_records(old, new)
    assert only(comparison["cautions"])["id"] == triggered["id"]
    assert only(comparison["checks"]) | {"title": ""} == {
        "id": new.data["checks"][0]["id"], "title": "", "old": "ok", "new": "fails", "kind": "changed"}


def test_rows_of_a_series_move_though_its_result_does_not(chiller):
    comparison = compare_records(chiller(), chiller(("T_sink_in: 52 degC", "T_sink_in: 54 degC")))
    row = only(comparison["steps"], symbol="dT_min_c")
    assert (row["inside_only"], row["old"], row["change"]) == (True, row["new"], None)


def test_marks_are_counted_as_they_are_drawn(cooler):
    comparison = compare_records(cooler(), cooler(("120 kW", "150 kW"), ("status: open", "status: confirmed")))
    # Six symbols in tables and steps, three of them results too, one assumption, one limit.
    assert len(comparison["changed_symbols"]) == 6
    assert comparison["changed_ids"] == {"assumptions": ["A1"], "limits": ["L1"]}
    assert comparison["marks"] == 6 + 3 + 2


def test_versions_are_noted_and_are_no_difference(cooler):
    old, new = cooler(), cooler()
    new.data["engine"]["libraries"]["CoolProp"] = "99.0"
    comparison = compare_records(old, new)
    assert only(comparison["engine"])["new"] == "99.0"
    assert not differs(comparison)


def test_new_lines_of_the_history_and_who_is_compared(cooler):
    new = cooler(("revision: A\n", "revision: B\n"),
                 ("First issue}", "First issue}\n  - {revision: B, date: 2026-04-01, note: Larger duty}"))
    comparison = compare_records(cooler(), new, source="v1:sheet.yaml")
    assert (comparison["letter"], comparison["against"]["revision"]) == ("B", "A")
    assert comparison["against"]["source"] == "v1:sheet.yaml"
    assert only(comparison["notes"])["note"] == "Larger duty"
    assert not differs(comparison)


def test_a_record_that_went_through_json_compares_the_same(chiller):
    old, new = chiller(), chiller(("eta_is: 0.71", "eta_is: 0.75"))
    again = [Record(json.loads(record.to_json())) for record in (old, new)]
    assert compare_records(*again) == compare_records(old, new)
