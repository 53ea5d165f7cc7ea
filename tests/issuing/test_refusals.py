"""What keeps a sheet from being issued: every reason at once, each at its place; what no kind of issue gets past."""
from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from pathlib import Path

import pytest
from click.testing import CliRunner, Result
from issue_helpers import check_sheet, pages_of, write_sheet

from calcpack.cli import main
from calcpack.errors import CalcpackError
from calcpack.issuing.issue import NotIssuedError, issue
from calcpack.issuing.paper import FOR_INFORMATION, FOR_USE
from calcpack.review.marks import Answer, ReviewFile

BROKEN = (("status: for-review", "status: draft"),
          ("status: confirmed", "status: open, owner: V. Brandt, due: 2026-12-01"),
          ("at_most: 1.2 kg/s", "at_most: 0.5 kg/s"))


def refused(path: Path, kind: str = FOR_USE, date: str = "2026-12-01") -> CalcpackError:
    with pytest.raises(NotIssuedError) as caught:
        issue(path, kind=kind, date=date)
    assert not (path.parent / "issued").exists() or not list((path.parent / "issued").glob(".*"))
    return caught.value


def command(*words: str | Path) -> Result:
    return CliRunner().invoke(main, ["issue", *map(str, words)])


def listing(path: Path) -> list[str]:
    return sorted(str(one.relative_to(path)) for one in path.rglob("*"))


def test_a_sheet_that_is_fit_is_issued_and_nothing_but_one_pdf_and_the_register_is_new(ready: Path) -> None:
    before = listing(ready)
    done = command(ready / "rinse.yaml", "--date", "2026-10-06")
    assert done.exit_code == 0, done.output
    assert f"issued {ready}/issued/RT-12-A.pdf" in done.output
    assert listing(ready) == sorted([*before, "issued", "issued/RT-12-A.pdf", "issued/register.yaml"])


def test_all_reasons_come_together_each_at_its_place(tmp_path: Path) -> None:
    path = write_sheet(tmp_path, *BROKEN)
    faults = refused(path).faults
    rows = path.read_text("utf-8").splitlines()
    placed = {one.what: rows[one.place.line - 1].strip() for one in faults if one.place}
    assert {what: row[:14] for what, row in placed.items()} == {
        "a draft is not issued for use": "status: draft", "hold A1 is open": "- {id: A1, tex",
        "limit L1 fails and nobody has waived it": "- {id: L1, sym"}
    others = [one.what for one in faults if one.place is None]
    assert "the sheet has no review file" in others
    assert any(one.startswith("point 65 of the checklist is not met") for one in others)
    assert command(path).exit_code == 1 and "nothing was written" in command(path).output
    assert listing(tmp_path) == ["rinse.yaml"]


def test_a_failed_limit_says_its_value_and_its_bound(tmp_path: Path) -> None:
    [fault] = [one for one in refused(write_sheet(tmp_path, BROKEN[2])).faults if "limit L1" in one.what]
    assert fault.found == "0.95694 kg/s" and fault.expected == "at most 0.5 kg/s"


def with_first_mark(**changes: object) -> Callable[[ReviewFile], ReviewFile]:
    return lambda review: replace(review, marks=(replace(review.marks[0], **changes), *review.marks[1:]))


SIGNED_ELSE = {
    "an open comment": (with_first_mark(verdict="comment", text="Which pump?"),
                        "a comment on limit L1 is open", "Which pump?"),
    "an answered comment": (with_first_mark(verdict="comment", text="Which pump?",
                                            answer=Answer("R. Aldane", "2026-10-06", "P2")),
                            "a comment on limit L1 is open", "Which pump?"),
    "an item unmarked": (lambda review: replace(review, marks=review.marks[1:]), "1 of 8 items are not checked",
                         "limit L1"),
    "a mark that lapsed": (with_first_mark(seen="0" * 20),
                           "1 of 8 items are not checked, 1 of them since their marks lapsed", "limit L1"),
    "no approval": (lambda review: replace(review, signatures=review.signatures[:2]),
                    "the signature 'approved' is missing", None),
    "a signature that lapsed": (
        lambda review: replace(review, signatures=(*review.signatures[:2],
                                                   replace(review.signatures[2], record="0" * 20))),
        "the signature 'approved' has lapsed, since the sheet moved after it", "M. Okoro"),
    "a name that nothing stands behind": (
        lambda review: replace(review, signatures=review.signatures[1:]),
        "the signature 'prepared' is a name in the spec that no signature stands behind", "R. Aldane"),
}


@pytest.mark.parametrize("case", SIGNED_ELSE)
def test_the_check_must_be_whole_and_the_signatures_must_hold(ready: Path, case: str) -> None:
    change, what, found = SIGNED_ELSE[case]
    told = refused(check_sheet(ready / "rinse.yaml", change)).faults
    assert next((one.what, one.found) for one in told if not one.what.startswith("point")) == (what, found)


def test_the_author_is_not_the_checker(ready: Path) -> None:
    def same(review: ReviewFile) -> ReviewFile:
        prepared, checked, approved = review.signatures
        return replace(review, signatures=(prepared, replace(checked, by="r aldane"), approved))
    told = [one.what for one in refused(check_sheet(ready / "rinse.yaml", same)).faults]
    assert any("r aldane" in one.casefold().replace(".", "") and "different people" in one for one in told)


def test_a_change_of_an_input_after_the_check_is_refused(ready: Path) -> None:
    path = ready / "rinse.yaml"
    path.write_text(path.read_text("utf-8").replace("value: 120 kW", "value: 121 kW"), "utf-8")
    told = [one.what for one in refused(path).faults]
    assert any("since their marks lapsed" in one for one in told)
    assert sum("has lapsed, since the sheet moved" in one for one in told) == 3


def test_a_signature_after_the_day_of_issue_is_refused(ready: Path) -> None:
    told = refused(ready / "rinse.yaml", date="2026-10-01").faults
    assert {(one.what.split("'")[1], one.found, one.expected) for one in told if "day of issue" in one.what} == {
        (role, "2026-10-05", "2026-10-01") for role in ("prepared", "checked", "approved")}


def test_a_revision_is_not_issued_on_a_day_before_the_last(issued_twice: Path) -> None:
    (issued_twice / "issued" / "RT-12-B.pdf").unlink()
    (issued_twice / "issued" / "register.yaml").unlink()
    [fault] = refused(issued_twice / "rinse.yaml", FOR_INFORMATION, "2026-10-05").faults
    assert fault.what == "the day of issue is before that of revision A" and fault.expected == "2026-10-06 or later"


@pytest.mark.parametrize("kind", [FOR_USE, FOR_INFORMATION])
@pytest.mark.parametrize("status", ["superseded", "void"])
def test_what_is_not_in_force_is_issued_for_nothing(ready: Path, kind: str, status: str) -> None:
    path = write_sheet(ready, ("status: for-review", f"status: {status}"))
    assert f"a sheet that is {status} is not issued" in [one.what for one in refused(path, kind).faults]


@pytest.mark.parametrize("kind", [FOR_USE, FOR_INFORMATION])
def test_a_revision_is_issued_once(issued_twice: Path, kind: str) -> None:
    error = refused(issued_twice / "rinse.yaml", kind)
    assert error.faults[0].what == "revision B was issued already" and error.faults[0].place.line == 6
    assert listing(issued_twice / "issued") == ["RT-12-A.pdf", "RT-12-B.pdf", "register.yaml", "superseded",
                                                "superseded/RT-12-A.pdf"]


def at_revision(folder: Path, mark: str) -> Path:
    return write_sheet(folder, ("revision: A\n", f"revision: {mark}\n"), ("{revision: A,", f"{{revision: {mark},"))


def test_a_later_revision_is_not_held_against_a_sheet(issued_twice: Path) -> None:
    assert not [one for one in refused(at_revision(issued_twice, "AA")).faults if "revision AA" in one.what]


@pytest.mark.parametrize("mark, hint", [("A", None), ("3", "numbers come before letters, not after them")])
def test_a_revision_comes_after_the_last(issued_twice: Path, mark: str, hint: str | None) -> None:
    for name in ("RT-12-A.pdf", "register.yaml"):
        (issued_twice / "issued" / name).unlink()
    path = at_revision(issued_twice, mark)
    for kind in (FOR_USE, FOR_INFORMATION):
        first = refused(path, kind).faults[0]
        assert first.what == f"revision {mark} does not come after B, which was issued last" and first.hint == hint


def test_an_issue_for_information_lists_what_is_open_on_its_first_page(tmp_path: Path) -> None:
    path = write_sheet(tmp_path, *BROKEN)
    done = command(path, "--for-information", "--date", "2026-12-01")
    assert done.exit_code == 0 and "RT-12-A-for-information.pdf" in done.output
    pages = pages_of(tmp_path / "issued" / "RT-12-A-for-information.pdf")
    first = " ".join(pages[0].split())
    for words in ("issued for information", "Open at issue:", "a draft is not issued for use", "hold A1 is open",
                  "limit L1 fails and nobody has waived it (0.95694 kg/s)", "the sheet has no review file"):
        assert words in first
    assert all("ISSUED FOR INFORMATION" in " ".join(page.split()) for page in pages)


def test_a_dry_run_says_the_same_and_writes_nothing(ready: Path) -> None:
    before = listing(ready)
    fit = command(ready / "rinse.yaml", "--date", "2026-10-06", "--dry-run")
    assert fit.exit_code == 0 and "would issue" in fit.output and "nothing was written" in fit.output
    write_sheet(ready, *BROKEN)
    assert command(ready / "rinse.yaml", "--dry-run").output == command(ready / "rinse.yaml").output
    assert command(ready / "rinse.yaml", "--dry-run").exit_code == 1
    assert listing(ready) == before


@pytest.mark.parametrize("words, status, said", [
    (["none.yaml"], 2, "there is no spec none.yaml"),
    (["rinse.yaml", "--date", "2026-02-30"], 2, "--date is not a day of the calendar"),
    (["rinse.yaml", "--date", "20260203"], 2, "--date is not a day of the calendar")])
def test_a_wrong_command_is_told(tmp_path: Path, monkeypatch: pytest.MonkeyPatch, words: list[str], status: int,
                                 said: str) -> None:
    monkeypatch.chdir(tmp_path)
    write_sheet(tmp_path)
    done = command(*words)
    assert (done.exit_code, said in done.output) == (status, True), done.output


def test_a_wrong_spec_is_told_as_ever(tmp_path: Path) -> None:
    path = write_sheet(tmp_path, ("value: 120 kW", "value: 120 kWW"))
    done = command(path, "--for-information")
    assert done.exit_code == 2 and "rinse.yaml:18:20" in done.output and not (tmp_path / "issued").exists()


def test_a_folder_that_cannot_be_made_is_told(ready: Path) -> None:
    (ready / "issued").write_text("a file where the folder should be")
    done = command(ready / "rinse.yaml", "--date", "2026-10-06")
    assert done.exit_code == 2 and "cannot write" in done.output
    assert not list(ready.glob(".*"))
