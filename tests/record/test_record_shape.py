"""The record: canonical, the same from any process, complete, and readable again."""
from __future__ import annotations

import json
import os
import subprocess
import sys
from pathlib import Path

import pytest

from calcpack.errors import CommandError
from calcpack.methods.starter import starter
from calcpack.pipeline import solve_spec
from calcpack.record import Record, read_record
from calcpack.record.build import build_record

PUMP, ENGINE = "vapour-compression", "organic-rankine"
ALONE = "import sys, pathlib; from calcpack.pipeline import solve_spec; " \
        "sys.stdout.write(solve_spec(pathlib.Path(sys.argv[1])).to_json())"


def in_a_process(path, seed):
    done = subprocess.run([sys.executable, "-c", ALONE, str(path)], capture_output=True, check=True,
                          env={**os.environ, "PYTHONHASHSEED": seed})
    return done.stdout.decode()


def test_two_processes_write_the_same_bytes_whatever_was_solved_before(tmp_path):
    path = tmp_path / "engine.yaml"
    path.write_text(starter(ENGINE, {"recuperator": "yes"}), "utf-8")
    solve_spec(Path("other.yaml"), text=starter(PUMP, {}))
    here = solve_spec(path).to_json()
    assert in_a_process(path, "1") == in_a_process(path, "2") == here


def test_the_text_is_canonical(arranged):
    record = build_record(arranged(PUMP))
    text = record.to_json()
    assert text.endswith("}\n") and json.loads(text) == json.loads(json.dumps(record.data))
    keys = [list(step) for step in json.loads(text)["steps"]]
    assert all(names == sorted(names) for names in keys)
    assert Record(json.loads(text)).to_json() == text, "floats come back to the same digits"


def test_a_record_is_read_again(tmp_path, arranged):
    record = build_record(arranged(PUMP))
    path = tmp_path / "record.json"
    path.write_text(record.to_json(), "utf-8")
    again = read_record(path)
    assert again.to_json() == record.to_json()
    assert (again.number, again.revision) == ("XX-001", "A")


@pytest.mark.parametrize("text, what", [
    ("not json", "{path} is not a record"), ("[1]", "{path} is not a record of format 1"),
    ("{}", "{path} is not a record of format 1"), ("[" * 100_000, "{path} is not a record"),
    ('"text"', "{path} is not a record of format 1"), ("null", "{path} is not a record of format 1")])
def test_what_is_no_record_is_told(tmp_path, text, what):
    path = tmp_path / "r.json"
    path.write_text(text, "utf-8")
    with pytest.raises(CommandError) as caught:
        read_record(path)
    assert caught.value.faults[0].what == what.format(path=path)


@pytest.mark.parametrize(("part", "value", "found"), [
    ("sheet", 3, "sheet is not a mapping"), ("sheet", {}, "sheet.number is not a text, sheet.revision is not a text"),
    ("steps", [{}], "steps is not a list of mappings with a text symbol"),
    ("limits", 1, "limits is not a list of mappings with a text id")])
def test_a_damaged_record_is_told_with_the_part_that_is_wrong(tmp_path, arranged, part, value, found):
    path = tmp_path / "r.json"
    path.write_text(json.dumps({**build_record(arranged("none")).data, part: value}), "utf-8")
    with pytest.raises(CommandError, match="is a damaged record") as caught:
        read_record(path)
    assert caught.value.faults[0].found.startswith(found)


def test_a_record_of_another_format_is_told(tmp_path, arranged):
    path = tmp_path / "r.json"
    path.write_text(json.dumps({**build_record(arranged("none")).data, "calcpack": 2}), "utf-8")
    with pytest.raises(CommandError) as caught:
        read_record(path)
    assert caught.value.faults[0].found == "format 2"
    with pytest.raises(CommandError) as caught:
        read_record(tmp_path / "none.json")
    assert caught.value.faults[0].what == f"cannot read {tmp_path / 'none.json'}"
    (tmp_path / "binary").write_bytes(b"\xff\xfe\x00")
    with pytest.raises(CommandError):
        read_record(tmp_path / "binary")


def test_a_symbol_is_a_pint_quantity_in_its_print_unit(arranged):
    record = build_record(arranged(PUMP))
    assert record["Q_dot_sink"].to("kW").magnitude == pytest.approx(250.0)
    assert f"{record['T_2'].units:~}" == "K"
    assert record["COP"].dimensionless
    assert record["W_dot_net"].to("Btu/h").magnitude == pytest.approx(record.step("W_dot_net")["value"] / 0.2930711,
        rel=1e-6)
    with pytest.raises(KeyError):
        record["nothing"]
    with pytest.raises(KeyError):
        record.step("Q_dot_sink")


def test_who_uses_an_input_and_what_a_step_uses_are_two_sides_of_one(arranged, method, options):
    data = build_record(arranged(method, options)).data
    known = {item["symbol"] for item in (*data["inputs"], *data["steps"])}
    for entry in data["inputs"]:
        assert entry["used_by"] == [step["id"] for step in data["steps"] if entry["symbol"] in step["uses"]]
    for step in data["steps"]:
        assert set(step["uses"]) <= known
    in_sections = [number for section in data["sections"] for number in section["steps"]]
    assert sorted(in_sections) == sorted(step["id"] for step in data["steps"])
    assert len({step["id"] for step in data["steps"]}) == len(data["steps"])
    assert list(data["results"]) == [one for one, _ in sorted(data["results"].items(),
        key=lambda pair: pair[1]["order"])]


SHEET = """\
calcpack: 1
sheet: {number: HP-7, title: Test, project: Works, revision: B, status: draft, purpose: Why., scope: What.,
        p_atm: 0.95 bar, units: us, page: Letter}
case:
  method: vapour-compression
  options: {evaporating: temperature, condensing: temperature, source_stream: none, sink_stream: none}
  fluids: {wf: propane}
  inputs:
    T_e: {value: 2 degC, tol: 0.5 K, source: R1, note: by the maker}
    T_c: {value: 100 degF, tol: 1.8 degR}
    dT_sh: 6 K
    dT_sc: 4 K
    eta_is: {value: 0.72, tol: 3 %}
    eta_drive: 1.0
    eta_motor: 0.94
    f_loss: 0.02
    Q_dot_sink: 100 kW
steps:
  - {symbol: COP_2, title: Twice, formula: COP * 2, reference: R1, note: for show}
assumptions: [{id: A1, text: Steady., basis: Log., status: open}, {id: A2, text: Dry., basis: Log., status: confirmed}]
references: [{id: R1, text: Log.}]
results: [COP, {symbol: Q_dot_sink, title: Duty}]
"""


@pytest.fixture(scope="module")
def us_record(solution_of):
    return build_record(solution_of(SHEET))


def test_the_sheets_own_words_come_through(us_record):
    data = us_record.data
    assert (data["sheet"]["number"], data["sheet"]["revision"], data["sheet"]["page"]) == ("HP-7", "B", "Letter")
    assert (data["sheet"]["p_atm"]["value"], data["sheet"]["p_atm"]["unit"]) == (95000.0, "psi")
    assert float(data["sheet"]["p_atm"]["shown"]) == pytest.approx(95000 / 6894.757293, abs=5e-4)
    assert data["holds"] == [{"id": "A1", "text": "Steady."}]
    assert data["results"]["Q_dot_sink"]["title"] == "Duty"
    assert data["results"]["COP"]["step"] == us_record.step("COP")["id"]
    assert data["results"]["Q_dot_sink"]["step"] is None, "an input is no step"
    own = us_record.step("COP_2")
    assert (own["own"], own["reference"], own["note"]) == (True, "R1", "for show")
    assert us_record.step("COP")["own"] is False


def test_tolerances_are_kept_as_written_and_printed_in_the_sheets_units(us_record):
    inputs = {entry["symbol"]: entry for entry in us_record.data["inputs"]}
    assert inputs["T_e"]["tol"] == {"value": 0.5, "shown": "0.9", "unit": "°R", "written": "0.5 K"}
    assert inputs["T_c"]["tol"]["value"] == pytest.approx(1.0)
    assert (inputs["T_c"]["tol"]["shown"], inputs["T_c"]["tol"]["unit"]) == ("1.8", "°R")
    assert inputs["eta_is"]["tol"]["value"] == pytest.approx(0.03)
    assert inputs["dT_sh"]["tol"] is None
    assert (inputs["T_e"]["source"], inputs["T_e"]["note"], inputs["T_e"]["written"]) == ("R1", "by the maker",
        "2 degC")


def test_a_default_says_that_it_is_one(us_record):
    inputs = {entry["symbol"]: entry for entry in us_record.data["inputs"]}
    assert inputs["W_dot_aux"]["default"] and inputs["W_dot_aux"]["source"] == "the method's default"
    assert not inputs["T_e"]["default"]
    options = us_record.data["case"]["options"]
    assert options["evaporating"]["given"] and not options["suction"]["given"]
    assert options["suction"]["meaning"] == "superheat at the evaporator outlet is an input"


def test_states_streams_exchangers_and_sketch_point_at_what_is_there(arranged):
    solution = arranged(ENGINE, {"recuperator": "yes"})
    data = build_record(solution).data
    assert [state["number"] for state in data["states"]] == ["1", "2", "3", "4", "5", "6"]
    for state in data["states"]:
        assert state["h"]["value"] == solution.value(f"h_{state['number']}")
    assert [state["x"]["shown"] for state in data["states"][:3]] == ["0 (sat. liquid)", "liquid", "1 (dry vapour)"]
    for exchanger, tag in zip(data["exchangers"], "hc", strict=True):
        shares = [row["q_share"] for row in exchanger["rows"]]
        assert (shares[0], shares[-1]) == (0.0, 1.0) and shares == sorted(shares)
        gaps = [row["T_hot_K"] - row["T_cold_K"] for row in exchanger["rows"]]
        assert exchanger["pinch"]["row"] == gaps.index(min(gaps))
        assert exchanger["pinch"]["dT"]["value"] == solution.value(f"dT_min_{tag}") == min(gaps)
    boxes = {node["name"] for node in data["sketch"]["nodes"]}
    assert all(link["from"] in boxes or link["to"] in boxes for link in data["sketch"]["links"])
    for diagram in data["diagrams"]:
        points = {point["label"] for point in diagram["points"]}
        assert all(path["from"] in points and path["to"] in points for path in diagram["paths"] if path["from"])


def test_versions_of_what_computed_the_record_are_kept(us_record):
    from importlib.metadata import version
    engine = us_record.data["engine"]
    assert engine["libraries"]["CoolProp"] == version("CoolProp")
    assert engine["root_tolerance"] == "1e-11 of the unknown"
    assert engine["command"] == "calcpack solve test.yaml"
