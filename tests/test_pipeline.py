"""The order of the stages: one spec, several specs, folders; every fault told once, a wrong spec first."""
from __future__ import annotations

import pytest

import calcpack
from calcpack.errors import CalcpackError, CommandError, NoAnswerError, SpecError
from calcpack.methods.starter import starter
from calcpack.pipeline import solve_all, solve_spec, spec_files


def written(folder, name, text):
    path = folder / name
    path.write_text(text, "utf-8")
    return path


@pytest.fixture
def cycle(tmp_path):
    return written(tmp_path, "cycle.yaml", starter("carnot-cycle", {}))


def test_the_package_solves_a_spec_by_its_path(cycle):
    record = calcpack.solve(cycle)
    assert record["eta"].magnitude == pytest.approx(1 - 300.15 / 600.15, rel=1e-12)
    assert calcpack.solve(str(cycle)).to_json() == record.to_json()
    assert record.data["spec_file"] == "cycle.yaml"


def test_replaced_inputs_and_text_in_the_place_of_the_file(cycle):
    record = solve_spec(cycle, {"T_c": "0 degC"}, text=cycle.read_text("utf-8").replace("XX-001", "YY-2"),
        name="REV:cycle.yaml")
    assert record.number == "YY-2"
    assert record["eta"].magnitude == pytest.approx(1 - 273.15 / 600.15, rel=1e-12)


def test_the_hash_is_that_of_the_file(cycle):
    import hashlib
    assert calcpack.solve(cycle).data["spec_sha256"] == hashlib.sha256(cycle.read_bytes()).hexdigest()


def test_a_missing_file_is_told(tmp_path):
    with pytest.raises(CalcpackError) as caught:
        solve_spec(tmp_path / "none.yaml")
    assert caught.value.exit_status == 2
    assert "none.yaml" in str(caught.value)


def test_faults_of_all_specs_come_together_a_wrong_spec_before_a_missing_answer(tmp_path, cycle):
    wrong = written(tmp_path, "wrong.yaml", starter("carnot-cycle", {}).replace("gamma: 1.4", "gamma: 0.4"))
    hopeless = written(tmp_path, "hopeless.yaml", starter("carnot-cycle", {}).replace("T_h: 327", "T_h: 1"))
    with pytest.raises(SpecError) as caught:
        solve_all([hopeless, cycle, wrong])
    files = [fault.place.file for fault in caught.value.faults]
    assert [name.rsplit("/", 1)[-1] for name in files] == ["hopeless.yaml", "wrong.yaml"]
    with pytest.raises(NoAnswerError):
        solve_all([hopeless, cycle])


def test_several_specs_are_solved_in_the_order_given(tmp_path, cycle):
    other = written(tmp_path, "other.yaml", starter("carnot-bound", {}).replace("XX-001", "XX-002"))
    assert [record.number for record in solve_all([other, cycle])] == ["XX-002", "XX-001"]


def test_a_folder_gives_its_specs_and_leaves_what_is_none(tmp_path, cycle):
    written(tmp_path, "a-second.yml", starter("carnot-bound", {}))
    written(tmp_path, "review.yaml", "marks: []\n")
    written(tmp_path, "notes.txt", "calcpack: 1\n")
    (tmp_path / "bytes.yaml").write_bytes(b"\xff\xfe")
    assert [path.name for path in spec_files([tmp_path])] == ["a-second.yml", "cycle.yaml"]
    assert [path.name for path in spec_files([cycle, tmp_path, cycle])] == ["cycle.yaml", "a-second.yml"]


def test_a_folder_without_a_spec_and_a_name_without_a_file_are_told(tmp_path):
    with pytest.raises(CommandError) as caught:
        spec_files([tmp_path])
    assert caught.value.faults[0].what == f"{tmp_path} holds no spec"
    with pytest.raises(CommandError) as caught:
        spec_files([tmp_path / "none"])
    assert caught.value.faults[0].what == f"there is no file or folder {tmp_path / 'none'}"


def test_two_sheets_of_one_number_are_refused():
    from types import SimpleNamespace

    from calcpack.building import require_distinct
    from calcpack.record import Record
    records = [Record({"sheet": {"number": number, "revision": "A"}, "spec_file": f"{name}.yaml"})
               for number, name in (("A-1", "one"), ("A-2", "two"), ("A-1", "three"))]
    sheets = [SimpleNamespace(record=record) for record in records]
    require_distinct(sheets[:2])
    with pytest.raises(CommandError) as caught:
        require_distinct(sheets)
    fault = caught.value.faults[0]
    assert fault.what == "the sheet number A-1 stands in more than one spec"
    assert fault.found == "one.yaml, three.yaml"


def test_a_case_without_an_answer_is_told_at_the_case(tmp_path):
    path = written(tmp_path, "hopeless.yaml", starter("carnot-cycle", {}).replace("T_h: 327", "T_h: 1"))
    with pytest.raises(NoAnswerError) as caught:
        solve_spec(path)
    place = caught.value.faults[0].place
    assert place.file.endswith("hopeless.yaml")
    assert path.read_text("utf-8").splitlines()[place.line - 1].strip().startswith("method:")
