"""What an issue is made of: the files that go with the spec, the sheets that it takes from, the run that verifies."""
from __future__ import annotations

import json
from pathlib import Path

import pytest
from issue_helpers import RINSE, check_sheet, write_sheet, write_verification

from calcpack.errors import CommandError
from calcpack.issuing import gathering
from calcpack.issuing.freezing import frozen
from calcpack.issuing.gathering import gather
from calcpack.issuing.issue import NotIssuedError, issue
from calcpack.issuing.paper import FOR_USE
from calcpack.issuing.reasons import gates

WELL = """\
calcpack: 1
sheet:
  {number: RT-11, title: Well, project: Dye works, revision: A, status: for-review, date: 2026-10-01,
   purpose: The well., scope: The well alone.}
case:
  method: none
  inputs:
    T_well: {value: 15 degC, source: R1}
steps:
  - {symbol: T_main, title: Temperature of the main, formula: T_well + 1 K, reference: log of the main}
references:
  - {id: R1, text: "Log of the well, 2026, page 2"}
results: [T_main]
"""
TAKEN = ("{value: 15 degC, title: Rinse water inlet, source: A1}", "{from: RT-11.T_main, title: Rinse water inlet}")


def test_the_table_that_a_spec_reads_goes_with_it(tmp_path: Path) -> None:
    rows = "label,Q_row [kW]\nlow,80\nhigh,120\n"
    (tmp_path / "data").mkdir()
    (tmp_path / "data" / "loads.csv").write_text(rows, "utf-8")
    series = "  series: {rows: data/loads.csv, shown: high, totals: [{symbol: Q_all, title: All, of: Q_row}]}\nsteps:\n"
    path = write_sheet(tmp_path, ("    Q_dot: {value: 120 kW, tol: 2 kW, source: R1}\n", ""), ("steps:\n", series),
                       ("formula: Q_dot / (c_w", "formula: Q_row / (c_w"))
    spec, table = gather(path).files
    assert (spec.name, spec.role, spec.content) == ("rinse.yaml", "spec", path.read_bytes())
    assert (table.name, table.role, table.mime, table.content) == ("loads.csv", "rows", "text/csv", rows.encode())


def test_a_sheet_is_not_issued_before_those_that_it_takes_from(tmp_path: Path) -> None:
    (tmp_path / "well.yaml").write_text(WELL, "utf-8")
    case = gather(check_sheet(write_sheet(tmp_path, TAKEN)))
    [fault] = [one for one in gates(case, "2026-12-01") if "RT-11" in one.what]
    assert fault.what == "sheet RT-11, from which it takes values, is not fit for use"
    assert fault.found == "revision A not issued" and fault.hint == "issue that sheet first"


def test_the_issued_record_keeps_what_its_sources_were(tmp_path: Path) -> None:
    (tmp_path / "well.yaml").write_text(WELL, "utf-8")
    record = frozen(gather(check_sheet(write_sheet(tmp_path, TAKEN))), "for information", "2026-12-01").data
    [one] = record["issue"]["family"]["upstream"]
    assert (one["number"], one["revision"], one["values"][0]["shown"]) == ("RT-11", "A", "289.15")


def test_the_record_holds_what_its_own_text_says(ready: Path) -> None:
    record = frozen(gather(ready / "rinse.yaml"), FOR_USE, "2026-10-06")
    assert json.loads(record.to_json()) == record.data
    assert record.data["sheet"]["status"] == "issued"
    assert {one["name"]: one["role"] for one in record.data["issue"]["files"]} == {
        "rinse.yaml": "spec", "rinse.review.yaml": "review"}
    assert record.data["issue"]["signatures"]["approved"] == {"name": "M. Okoro", "date": "2026-10-05"}


def test_of_the_run_that_verifies_the_method_is_kept_and_no_more(ready: Path) -> None:
    run = frozen(gather(ready / "rinse.yaml"), FOR_USE, "2026-10-06").data["issue"]["verification"]
    assert list(run["methods"]) == ["none"] and len(json.dumps(run)) < 3000


def test_a_sheet_whose_program_was_not_verified_is_not_issued_for_use(ready: Path) -> None:
    (ready / "verification.json").unlink()
    with pytest.raises(NotIssuedError) as caught:
        issue(ready / "rinse.yaml", kind=FOR_USE, date="2026-10-06")
    assert [one.what.split(":")[0] for one in caught.value.faults] == [
        "point 65 of the checklist is not met", "point 66 of the checklist is not met"]
    write_verification(ready)
    assert issue(ready / "rinse.yaml", kind=FOR_USE, date="2026-10-06").path.is_file()


def test_a_spec_that_changes_while_it_is_solved_is_told(ready: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    path, real = ready / "rinse.yaml", gathering.kin

    def meanwhile(*arguments: object, **others: object) -> object:
        path.write_text(RINSE.replace("Size the heater for the rinse.", "Size it."), "utf-8")
        return real(*arguments, **others)
    monkeypatch.setattr(gathering, "kin", meanwhile)
    with pytest.raises(CommandError, match="was changed while it was solved"):
        gather(path)
