"""``calcpack verify``: what it says of an issued PDF, and of files about which it can say nothing."""
from __future__ import annotations

import dataclasses
import json
import os
import shutil
import subprocess
import sys
from pathlib import Path
from typing import Any

import pikepdf
import pytest
from click.testing import CliRunner, Result
from issue_helpers import write_sheet
from tampering import RECORD, digit_on_page, edited, file_of, put_file

import calcpack
from calcpack.cli import main
from calcpack.issuing.issue import issue
from calcpack.issuing.paper import FOR_INFORMATION
from calcpack.issuing.verify import verify
from calcpack.issuing.verify_again import AGAIN
from calcpack.issuing.verify_report import DIFFERS, NOT_VERIFIABLE, SAME, report_text
from calcpack.record import Record


@pytest.fixture
def issued(issued_twice: Path) -> Path:
    return issued_twice / "issued" / "RT-12-B.pdf"


def run(*words: Any) -> Result:
    return CliRunner().invoke(main, ["verify", *map(str, words)])


def plain(result: Result) -> str:
    """What a command printed, whatever the width it was wrapped to."""
    return " ".join(result.output.split())


@pytest.fixture(scope="module")
def remade(_issued_twice: Path) -> Any:
    """Pages that are made once for all tests that need those of revision B."""
    content = (_issued_twice / "issued" / "RT-12-B.pdf").read_bytes()
    return dataclasses.replace(AGAIN, make=lambda record, attachments: content)


def with_record(content: bytes, change: Any) -> bytes:
    """The PDF with its record changed."""
    data = json.loads(file_of(content, RECORD))
    change(data)
    return edited(content, lambda pdf: put_file(pdf, RECORD, Record(data).to_json().encode()))


def test_the_report_says_what_was_checked_with_figures_on_80_columns(issued: Path) -> None:
    result = run(issued)
    assert result.exit_code == 0, result.output
    assert all(len(line) <= 80 for line in result.output.splitlines() if str(issued.parent) not in line)
    text = plain(result)
    assert "RT-12 revision B, issued for use 2026-11-13: Rinse water heater" in text
    assert "3 files, as the record lists them, by hash and checksum: RT-12-B.json, rinse.review.yaml," in text
    assert "8 of 8 items checked; prepared R. Aldane, 2026-11-12; checked S. Virta" in text
    assert "2 steps from 4 inputs:" in text and "all the same" in text
    assert "the file is the same byte for byte" in text
    assert text.endswith("Same: what this file prints is what calcpack gives for the spec inside it.")


def test_the_figures_are_those_of_the_file(issued: Path, remade: Any) -> None:
    content = issued.read_bytes()
    report = verify(content, "x", again=remade)
    with pikepdf.open(issued) as pdf:
        pages = len(pdf.pages)
    stages = {stage.name: stage.words for stage in report.stages}
    assert f"{pages} pages made again" in stages["pages"]
    data = json.loads(file_of(content, RECORD))
    del data["issue"], data["engine"]

    def leaves(value: Any) -> list[Any]:
        inside = value.values() if isinstance(value, dict) else value
        return [one for part in inside for one in leaves(part)] if isinstance(value, dict | list) else [value]
    numbers = [one for one in leaves(data) if isinstance(one, int | float) and not isinstance(one, bool)]
    assert f": {len(numbers)} numbers" in stages["solved again"]


@pytest.mark.parametrize("setting", [{"LC_ALL": "C"}, {"LANG": "de_DE.UTF-8", "LC_ALL": "de_DE.UTF-8"},
                                     {"TZ": "Pacific/Auckland", "PYTHONHASHSEED": "7"}], ids=["C", "de", "TZ"])
def test_it_is_the_same_in_another_folder_locale_and_time_zone(issued: Path, tmp_path: Path,
                                                              setting: dict[str, str]) -> None:
    elsewhere = tmp_path / "other" / "folder"
    elsewhere.mkdir(parents=True)
    shutil.copy(issued, elsewhere / "renamed.pdf")
    done = subprocess.run([sys.executable, "-c", "from calcpack.cli import main; main()", "verify", "renamed.pdf"],
                          cwd=elsewhere, env={**os.environ, **setting}, capture_output=True, check=False, timeout=240)
    assert done.returncode == 0, done.stdout.decode() + done.stderr.decode()
    assert b"byte for byte" in b" ".join(done.stdout.split())
    assert done.stderr.decode().splitlines() == ["solving and printing again what renamed.pdf carries"]
    assert [one.name for one in elsewhere.iterdir()] == ["renamed.pdf"], "a verification writes nothing"


def test_what_differs_is_named_with_its_place_and_status_1(issued: Path) -> None:
    copy, page, _, new = digit_on_page(issued.read_bytes(), 3)
    issued.with_name("copy.pdf").write_bytes(copy)
    result = run(issued.with_name("copy.pdf"))
    assert result.exit_code == 1
    assert f"page {page}: another text is printed" in plain(result) and new in plain(result)
    assert result.output.rstrip().endswith("difference.") or result.output.rstrip().endswith("differences.")


def test_the_json_has_every_difference(issued: Path, remade: Any) -> None:
    from calcpack.issuing.verify_report import report_json
    copy = edited(issued.read_bytes(), lambda pdf: [pdf.pages.remove(p=1) for _ in range(3)])
    report = verify(copy, "copy.pdf", again=remade)
    data = json.loads(report_json(report))
    assert data["status"] == "differs" and data["sheet"].startswith("RT-12 revision B")
    assert len(data["differences"]) == len(report.differences)
    assert set(data["differences"][0]) == {"where", "what", "found", "expected"}


def test_json_of_a_file_that_is_the_same(issued: Path) -> None:
    result = run(issued, "--json")
    assert result.exit_code == 0
    data = json.loads(result.output)
    assert (data["status"], data["differences"], data["not_verifiable"]) == ("same", [], [])


def test_a_missing_file_is_status_2() -> None:
    result = run("nowhere.pdf")
    assert result.exit_code == 2 and "there is no file nowhere.pdf" in plain(result)


@pytest.mark.parametrize(("content", "reason"), [
    (b"", "not a PDF"), (b"%PDF-1.7\n", "cut short"), (b"%PDF-1.7\nstartxref\n9\n%%EOF\n", "damaged"),
    (b"calcpack: 1\n", "not a PDF")])
def test_a_file_that_is_no_pdf_cannot_be_verified(content: bytes, reason: str) -> None:
    report = verify(content, "x.pdf")
    assert report.status == NOT_VERIFIABLE and reason in report.reasons[0]


def test_a_pdf_that_was_not_issued_cannot_be_verified(issued: Path, tmp_path: Path) -> None:
    blank = pikepdf.new()
    blank.add_blank_page()
    blank.save(tmp_path / "plain.pdf")
    result = run(tmp_path / "plain.pdf")
    assert result.exit_code == 1 and "Not verifiable: the file carries no record" in plain(result)
    unissued = with_record(issued.read_bytes(), lambda data: data.pop("issue"))
    assert "not one of an issued sheet" in verify(unissued, "x").reasons[0]


def test_a_locked_pdf_cannot_be_verified(issued: Path, tmp_path: Path) -> None:
    with pikepdf.open(issued) as pdf:
        pdf.save(tmp_path / "locked.pdf", encryption=pikepdf.Encryption(owner="a", user="b"))
    assert "locked by a password" in verify((tmp_path / "locked.pdf").read_bytes(), "x").reasons[0]


def test_a_record_of_a_newer_format_cannot_be_verified(issued: Path) -> None:
    report = verify(with_record(issued.read_bytes(), lambda data: data.update(calcpack=2)), "x")
    assert report.status == NOT_VERIFIABLE and "format 2" in report.reasons[0]


@pytest.mark.parametrize("change", [
    lambda data: data["issue"].pop("print"), lambda data: data["issue"].update(comparison=7),
    lambda data: data["issue"].update(family=[1]), lambda data: data["issue"].update(files=7),
    lambda data: data["issue"].update(review={"file": "none.yaml"}), lambda data: data.update(engine=3),
    lambda data: data.update(steps={}), lambda data: data["inputs"].append({"symbol": 3, "from": {"unit": 1}}),
    lambda data: data["issue"].update(signatures=True), lambda data: data["sheet"].update(title=None),
    lambda data: data["sheet"].update(status="draft"), lambda data: data["steps"].append("x")],
    ids=["print", "comparison", "family", "files", "review", "engine", "steps", "inputs", "signatures", "title",
         "status", "step"])
def test_a_record_that_holds_something_else_is_told_and_never_a_traceback(issued: Path, change: Any) -> None:
    report = verify(with_record(issued.read_bytes(), change), "x")
    assert report.status != SAME
    assert report_text(report)


def test_the_stamped_copy_of_a_superseded_issue_says_where_the_issue_lies(issued: Path) -> None:
    result = run(issued.parent / "superseded" / "RT-12-A.pdf")
    assert result.exit_code == 1
    text = plain(result)
    assert "this is the stamped copy of a superseded issue; the issue itself, RT-12-A.pdf, lies in the folder" in text
    assert run(issued.parent / "RT-12-A.pdf").exit_code == 0


def test_a_copy_at_another_place_is_set_against_a_spec_and_against_git(issued: Path, tmp_path: Path) -> None:
    spec = issued.parent.parent / "rinse.yaml"
    result = run(issued, "--against", spec)
    assert result.exit_code == 0 and "byte for byte" in plain(result), result.output
    edited_spec = tmp_path / "edited.yaml"
    edited_spec.write_text(spec.read_text("utf-8").replace("value: 44 degC", "value: 43 degC"), "utf-8")
    report = verify(issued.read_bytes(), "x", against=str(edited_spec),
                    again=dataclasses.replace(AGAIN, make=lambda record, attachments: issued.read_bytes()))
    [found] = report.differences
    line = spec.read_text("utf-8").splitlines().index("    T_out: {value: 44 degC, source: R1}") + 1
    assert found.where == f"rinse.yaml line {line}"
    assert "44 degC" in found.found and "43 degC" in found.expected
    assert run(issued, "--against", "nowhere.yaml").exit_code == 2


def test_a_spec_is_found_in_git_though_it_was_renamed_since(issued: Path, remade: Any,
                                                           monkeypatch: pytest.MonkeyPatch) -> None:
    folder = issued.parent.parent

    def git(*words: str) -> None:
        subprocess.run(["git", "-c", "user.name=R. Aldane", "-c", "user.email=r@works.example", *words], cwd=folder,
                       check=True, capture_output=True, timeout=60)
    git("init", "-q")
    git("add", "rinse.yaml")
    git("commit", "-q", "-m", "Revision B")
    git("tag", "issue-B")
    git("mv", "rinse.yaml", "heater.yaml")
    git("commit", "-q", "-m", "Another name")
    monkeypatch.chdir(folder)
    report = verify(issued.read_bytes(), "x", against="issue-B:heater.yaml", again=remade)
    assert report.status == SAME, report_text(report)
    assert "the one inside is issue-B:heater.yaml, byte for byte" in report_text(report)


def test_where_the_engine_of_print_is_another_version_text_is_compared_and_drawings_are_not(
        issued: Path, remade: Any, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("calcpack.issuing.verify.print_engine", lambda: {"weasyprint": "99.0"})
    report = verify(issued.read_bytes(), "x", again=remade)
    assert report.status == SAME
    assert {stage.name: stage.words for stage in report.stages}["drawings"].startswith("not compared")
    assert any(one.startswith("printed with weasyprint 70") and one.endswith("here 99.0") for one in report.remarks)
    copy, page, _, _ = digit_on_page(issued.read_bytes(), 5)
    assert f"page {page}" in {one.where for one in verify(copy, "x", again=remade).differences}


def test_where_only_the_packing_differs_the_parts_are_compared(issued: Path, remade: Any,
                                                              monkeypatch: pytest.MonkeyPatch) -> None:
    from calcpack.issuing.paper import print_engine
    monkeypatch.setattr("calcpack.issuing.verify.print_engine", lambda: {**print_engine(), "zlib": "9.9"})
    with pikepdf.open(issued) as pdf:
        pdf.save(issued.with_name("packed.pdf"), deterministic_id=True, recompress_flate=True,
                 object_stream_mode=pikepdf.ObjectStreamMode.generate)
    packed = issued.with_name("packed.pdf").read_bytes()
    made = dataclasses.replace(AGAIN, make=lambda record, attachments: packed)
    report = verify(issued.read_bytes(), "x", again=made)
    assert report.status == SAME, report_text(report)
    assert any("zlib" in one for one in report.remarks)
    covered = edited(issued.read_bytes(), lambda pdf: pdf.pages[0].contents_add(b"q 1 g 100 500 60 14 re f Q"))
    assert verify(covered, "x", again=made).status == DIFFERS


def test_pages_of_another_calcpack_that_prints_otherwise_are_not_judged(
        issued: Path, remade: Any, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(calcpack, "__version__", "9.0.0")
    report = verify(issued.read_bytes(), "x", again=remade)
    assert report.status == SAME, "the text is the same, whichever version made it"
    assert any("made with calcpack 0.1.0, here 9.0.0" in one for one in report.remarks)
    reworded = digit_on_page(issued.read_bytes(), 5)[0]
    other = dataclasses.replace(AGAIN, make=lambda record, attachments: reworded)
    report = verify(issued.read_bytes(), "x", again=other)
    assert report.status == NOT_VERIFIABLE and "install that version" in report.reasons[0]


def test_an_issue_for_use_whose_review_file_shows_no_signature_is_found(issued: Path, remade: Any) -> None:
    review = file_of(issued.read_bytes(), "rinse.review.yaml").decode()
    unsigned = review[:review.index("signatures:")].encode()

    def edit(pdf: Any) -> None:
        import hashlib
        put_file(pdf, "rinse.review.yaml", unsigned)
        data = json.loads(file_of(issued.read_bytes(), RECORD))
        digest = hashlib.sha256(unsigned).hexdigest()
        data["issue"]["review"]["sha256"] = digest
        for one in data["issue"]["files"]:
            if one["name"] == "rinse.review.yaml":
                one.update(sha256=digest, size=len(unsigned))
        put_file(pdf, RECORD, Record(data).to_json().encode())
    report = verify(edited(issued.read_bytes(), edit), "x", again=remade)
    found = {one.what for one in report.differences if one.where == "check"}
    assert "the record states another signature as approved" in found
    assert any("issued for use" in one for one in found)


UP = """\
calcpack: 1
sheet: {number: RT-11, title: Well, project: Dye works, revision: A, status: draft}
case: {method: none, inputs: {T_well: 12 degC, dT_pipe: 3 K}}
steps: [{symbol: T_w, title: Water at the works, formula: T_well + dT_pipe}]
results: [T_w]
"""


def test_a_value_of_another_sheet_is_taken_as_the_record_states_and_the_report_says_so(ready: Path) -> None:
    write_sheet(ready, ("{value: 15 degC, title: Rinse water inlet, source: A1}",
                        "{from: RT-11.T_w, title: Rinse water inlet, source: A1}"))
    (ready / "well.yaml").write_text(UP, "utf-8")
    done = issue(ready / "rinse.yaml", kind=FOR_INFORMATION, date="2026-10-06")
    (ready / "well.yaml").unlink()
    report = verify(done.path.read_bytes(), "x")
    assert report.status == SAME, report_text(report)
    assert any(one.startswith("T_in = 288.15") and "RT-11 revision A, T_w" in one for one in report.remarks)


SERIES = "  series: {rows: data/loads.csv, shown: two, totals: [{symbol: Q_all, title: All heat, of: Q_row}]}\n"


def test_rows_that_the_spec_reads_are_taken_from_inside_the_file(tmp_path: Path) -> None:
    (tmp_path / "data").mkdir()
    (tmp_path / "data" / "loads.csv").write_text("label,Q_row [kW]\none,80\ntwo,120\n", "utf-8")
    write_sheet(tmp_path, ("    Q_dot: {value: 120 kW, tol: 2 kW, source: R1}\n", ""),
                ("steps:\n", SERIES + "steps:\n"), ("formula: Q_dot / (c_w", "formula: Q_row / (c_w"))
    done = issue(tmp_path / "rinse.yaml", kind=FOR_INFORMATION, date="2026-10-06")
    content = done.path.read_bytes()
    shutil.rmtree(tmp_path / "data")
    report = verify(content, "x")
    assert report.status == SAME, report_text(report)
    assert "loads.csv" in report_text(report)
