"""Values that one sheet takes from another: what is carried, how it is printed, every way in which it goes wrong."""
from __future__ import annotations

import subprocess
from pathlib import Path

import pytest
from package_sheets import edit, write_sheet

import calcpack
from calcpack.errors import CalcpackError, NoAnswerError, SpecError
from calcpack.pipeline import solve_all, solve_spec
from calcpack.record.carried import carried_of
from calcpack.reread.from_print import redo
from calcpack.revisions import compare_records, load


@pytest.fixture
def pair(tmp_path: Path) -> tuple[Path, Path]:
    """A dryer that gives a temperature, a difference and a power; an exchanger that takes them."""
    source = write_sheet(tmp_path, "MT-201", {"T_in": "80 degC", "dT_air": "12.3456 K", "Q_dot": "345.678 kW",
                                              "eta": "0.7"},
                         {"T_out": "T_in + dT_air / eta", "Q_dot_net": "Q_dot * eta / 3"}, name="dryer.yaml",
                         units={"Q_dot_net": "kW"})
    taker = write_sheet(tmp_path, "MT-202", {"T_hot": "{from: MT-201.T_out, tol: 1 K}",
                                             "Q_dot": "{from: MT-201.Q_dot_net}",
                                             "eta_b": "{from: MT-201.eta, source: R1}", "T_cold": "20 degC"},
                        {"UA": "Q_dot / (T_hot - T_cold) * eta_b"}, name="exchanger.yaml", units={"UA": "kW/K"},
                        more="references:\n  - {id: R1, text: 'Data sheet DS-1 revision A, page 2'}\n")
    return source, taker


def faults_of(path: Path, kind: type[CalcpackError] = SpecError) -> list[str]:
    with pytest.raises(kind) as caught:
        solve_spec(path)
    return [f"{fault.place.line if fault.place else 0}: {fault.what} / {fault.found} / {fault.expected} / {fault.hint}"
            for fault in caught.value.faults if fault.place is None or fault.place.file == str(path)]


def line_of(path: Path, text: str) -> int:
    return next(at for at, row in enumerate(path.read_text("utf-8").splitlines(), start=1) if text in row)


def test_a_value_is_carried_at_full_precision(pair):
    source, taker = pair
    given, taken = solve_spec(source), solve_spec(taker)
    inputs = {one["symbol"]: one for one in taken.data["inputs"]}
    assert inputs["T_hot"]["value"] == given.step("T_out")["value"]
    assert inputs["Q_dot"]["value"] == given.step("Q_dot_net")["value"]
    assert float(given.step("T_out")["shown"]) != given.step("T_out")["value"]
    assert calcpack.solve(taker).to_json() == taken.to_json()


def test_the_record_says_where_a_value_is_from(pair):
    source, taker = pair
    step = solve_spec(source).step("T_out")
    inputs = {one["symbol"]: one for one in solve_spec(taker).data["inputs"]}
    origin = inputs["T_hot"]["from"]
    assert {key: origin[key] for key in ("number", "symbol", "revision", "step", "title")} == {
        "number": "MT-201", "symbol": "T_out", "revision": "A", "step": "1.1", "title": "A sheet"}
    assert origin["identity"] == step["identity"] and origin["shown"] == step["shown"]
    assert origin["spec_sha256"] == solve_spec(source).data["spec_sha256"]
    assert inputs["T_hot"]["source"] == "MT-201 revision A, T_out, step 1.1"
    assert inputs["eta_b"]["source"] == "MT-201 revision A, eta, design input; R1"
    assert "from" not in inputs["T_cold"]


def test_the_sheet_can_be_done_again_from_its_print(pair):
    from calcpack.render.sheet import sheet_html
    record = solve_spec(pair[1])
    page = sheet_html(record)
    assert "MT-201 revision A" in page
    done = redo(page)
    assert not done.wrong
    # The second round starts from the inputs as written: without them in full it is not made at all.
    assert [one.what for one in done.whole] and all(one.agrees for one in done.whole)
    written = next(one["written"] for one in record.data["inputs"] if one["symbol"] == "T_hot")
    assert written == "370.7865714 K"


def test_a_source_in_other_units_is_carried_the_same(tmp_path, pair):
    edit(pair[1], "scope: All.", "scope: All.\n  units: us")
    record = solve_spec(pair[1])
    inputs = {one["symbol"]: one for one in record.data["inputs"]}
    assert inputs["T_hot"]["unit"] == "°R" and inputs["T_hot"]["value"] == solve_spec(pair[0]).step("T_out")["value"]
    assert inputs["Q_dot"]["unit"] == "kBtu/h"


def test_a_replaced_input_no_longer_comes_from_the_source(pair):
    record = solve_spec(pair[1], {"T_hot": "90 degC"})
    entry = next(one for one in record.data["inputs"] if one["symbol"] == "T_hot")
    assert entry["written"] == "90 degC" and "from" not in entry
    assert record.step("UA")["value"] == pytest.approx(80658.2 / 70 * 0.7)


def test_replaced_inputs_hold_for_the_sheets_named_and_what_they_give(pair):
    source, taker = pair
    alone = solve_all([taker], {"eta_b": "0.5"})[0]
    assert alone["T_hot"].magnitude == pytest.approx(370.7865714)
    with pytest.raises(SpecError, match="T_in: there is no input of that symbol"):
        solve_all([taker, source], {"T_in": "100 degC"})
    edit(taker, "T_cold: 20 degC", "T_in: 20 degC")
    edit(taker, "T_hot - T_cold", "T_hot - T_in")
    both = solve_all([taker, source], {"T_in": "30 degC"})
    assert both[0]["T_hot"].magnitude == both[1]["T_out"].magnitude == pytest.approx(320.7865714)
    assert both[0]["T_in"].magnitude == pytest.approx(303.15)


def test_the_carried_values_of_a_record_stand_for_the_sources(tmp_path, pair):
    record = solve_spec(pair[1])
    alone = tmp_path / "alone"
    alone.mkdir()
    copy = alone / "exchanger.yaml"
    copy.write_bytes(pair[1].read_bytes())
    assert solve_spec(copy, carried=carried_of(record.data)).to_json() == record.to_json()
    assert all("there is no sheet MT-201" in fault for fault in faults_of(copy))
    origin = next(one for one in record.data["inputs"] if one["symbol"] == "T_hot")["from"]
    for lacking in origin.keys() - {"stated"}:
        torn = [{**one, "from": {name: value for name, value in one["from"].items() if name != lacking}}
                if one["symbol"] == "T_hot" else one for one in record.data["inputs"]]
        assert set(carried_of({"inputs": torn})) == {"Q_dot", "eta_b"}
    with pytest.raises(SpecError, match=r"nothing here gives the value of MT-201\.T_out"):
        solve_spec(copy, carried={})


def test_no_such_sheet_and_no_such_symbol_are_told_at_the_link(pair):
    _, taker = pair
    edit(taker, "MT-201.T_out", "MT-210.T_out")
    edit(taker, "MT-201.Q_dot_net", "MT-201.Q_net")
    first, second = faults_of(taker)
    assert first.startswith(f"{line_of(taker, 'MT-210')}: there is no sheet MT-210") and "'MT-201'" in first
    assert second.startswith(f"{line_of(taker, 'Q_net}')}: sheet MT-201 gives no value to Q_net")
    assert "did you mean 'Q_dot_net'?" in second


def test_two_sheets_of_the_number_are_told(tmp_path, pair):
    (tmp_path / "copy.yaml").write_bytes(pair[0].read_bytes())
    assert "two sheets have the number MT-201 / copy.yaml, dryer.yaml" in faults_of(pair[1])[0]


def test_a_ring_is_told_whole_at_each_of_its_links(tmp_path):
    paths = [write_sheet(tmp_path, f"R-{at}", {"a": f"{{from: R-{after}.b}}"}, {"b": "2 * a"})
             for at, after in ((1, 2), (2, 3), (3, 1))]
    outside = write_sheet(tmp_path, "R-4", {"a": "{from: R-1.b}"}, {"b": "2 * a"})
    with pytest.raises(SpecError) as caught:
        solve_all([*paths, outside])
    told = {Path(fault.place.file).name: (fault.what, fault.found) for fault in caught.value.faults}
    assert told["R-1.yaml"] == ("sheets take their values from each other in a ring", "R-1 from R-2 from R-3 from R-1")
    assert told["R-3.yaml"][1] == "R-3 from R-1 from R-2 from R-3"
    assert told["R-4.yaml"][0] == "sheet R-1, which gives b, has faults of its own"


def test_a_sheet_linked_to_itself_is_told(tmp_path):
    path = write_sheet(tmp_path, "S-1", {"a": "{from: S-1.b}", "c": "2"}, {"b": "2 * c", "d": "a"})
    assert "a sheet cannot take a value from itself" in faults_of(path)[0]


def test_faults_of_the_source_are_told_with_the_sheet_that_needs_it(pair):
    source, taker = pair
    edit(source, "eta: 0.7", "eta: 0.7 kW")
    with pytest.raises(SpecError) as caught:
        solve_spec(taker)
    files = {Path(fault.place.file).name for fault in caught.value.faults}
    assert files == {"dryer.yaml", "exchanger.yaml"}
    assert any(fault.what == "sheet MT-201, which gives T_out, has faults of its own" for fault in caught.value.faults)


def test_a_source_without_an_answer_is_no_fault_of_the_spec(tmp_path):
    source = write_sheet(tmp_path, "N-1", {"a": "0", "b": "1"}, {"c": "b / a"})
    taker = write_sheet(tmp_path, "N-2", {"c": "{from: N-1.c}"}, {"d": "2 * c"})
    with pytest.raises(NoAnswerError):
        solve_spec(source)
    assert "sheet N-1, which gives c, has no answer" in faults_of(taker, NoAnswerError)[0]


@pytest.mark.parametrize(("link", "symbol", "said"), [
    ("dT_air", "T_own", "a temperature difference stands where a level is meant"),
    ("T_out", "dT_own", "a temperature level stands where a difference is meant")])
def test_a_level_is_not_taken_for_a_difference(tmp_path, pair, link, symbol, said):
    taker = write_sheet(tmp_path, "K-1", {symbol: f"{{from: MT-201.{link}}}"}, {"x": f"2 * {symbol}"})
    [fault] = faults_of(taker)
    assert fault.startswith(f"{line_of(taker, 'from:')}: {said} / MT-201.{link} = ")


def test_a_method_refuses_a_value_of_another_kind_or_out_of_its_range(tmp_path, pair):
    from calcpack.methods.starter import starter
    path = tmp_path / "cycle.yaml"
    text = starter("carnot-cycle", {})
    line = next(row for row in text.splitlines() if row.strip().startswith("T_h:"))
    path.write_text(text.replace(line, "    T_h: {from: MT-201.Q_dot}"), "utf-8")
    assert "a temperature is meant here / MT-201.Q_dot = 345.678 kW, length²·mass/time³ (power)" in faults_of(path)[0]
    line = next(row for row in text.splitlines() if row.strip().startswith("gamma:"))
    path.write_text(text.replace(line, "    gamma: {from: MT-201.eta}"), "utf-8")
    assert "gamma" in faults_of(path)[0] and "is out of its range" in faults_of(path)[0]


def test_a_link_that_both_has_a_value_and_takes_one_is_told_with_every_other_fault(tmp_path, pair):
    edit(pair[1], "{from: MT-201.T_out, tol: 1 K}", "{from: MT-299.T_out, tol: 1 kW}")
    edit(pair[1], "T_cold: 20 degC", "T_cold: 20 bar")
    text = " | ".join(faults_of(pair[1]))
    assert "there is no sheet MT-299" in text


def test_compare_names_the_sheet_whose_value_moved(pair):
    source, taker = pair
    before = solve_spec(taker)
    edit(source, "Q_dot: 345.678 kW", "Q_dot: 400 kW")
    comparison = compare_records(before, solve_spec(taker))
    [changed] = comparison["inputs"]
    assert changed["symbol"] == "Q_dot" and changed["taken_from"] == "MT-201.Q_dot_net"
    [result] = comparison["results"]
    assert [cause["text"] for cause in result["causes"]] == [
        "Q_dot: 80.6582 kW → 93.3333 kW, taken from MT-201.Q_dot_net"]
    assert comparison["attribution"]["UA"]["parts"][0]["cause"] == "Q_dot"


def test_a_spec_in_git_takes_from_its_sources_of_that_time(tmp_path, pair):
    def git(*arguments: str) -> None:
        subprocess.run(["git", "-C", str(tmp_path), "-c", "user.name=R", "-c", "user.email=r@example.org",
                        "-c", "commit.gpgsign=false", *arguments], check=True, capture_output=True)
    git("init", "-q")
    git("add", ".")
    git("commit", "-q", "-m", "first")
    then = solve_spec(pair[1])
    edit(pair[0], "Q_dot: 345.678 kW", "Q_dot: 400 kW")
    old, new = load("HEAD:exchanger.yaml", tmp_path), solve_spec(pair[1])
    assert old["Q_dot"] == then["Q_dot"] != new["Q_dot"]
    edit(pair[0], "number: MT-201", "number: MT-299")
    assert load("HEAD:exchanger.yaml", tmp_path)["Q_dot"] == then["Q_dot"]
