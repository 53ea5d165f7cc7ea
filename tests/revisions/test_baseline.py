"""The record that a sheet is compared with: named in the spec, or the last one issued before it."""
from __future__ import annotations

from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st

from calcpack.errors import CommandError
from calcpack.record import Record
from calcpack.revisions import baseline_for
from calcpack.revisions.order import LETTERS, place_in_order
from calcpack.spec import Spec, read_spec


@pytest.fixture
def sheet(tmp_path, cooler, cooler_text):
    """Writes the spec at a revision, and gives it as read with its record."""
    def write(revision: str, *, baseline: str | None = None, folder: Path = tmp_path) -> tuple[Spec, Record]:
        mark = ("revision: A", f"revision: {revision}")
        text = cooler_text.replace(*mark)
        if baseline is not None:
            text = text.replace("  status: draft", f"  status: draft\n  baseline: {baseline}")
        path = folder / "cooler.yaml"
        path.write_text(text, "utf-8")
        return read_spec(path), cooler(mark)
    return write


def issue(folder: Path, cooler, *revisions: str, number: str = "BC-7") -> None:
    """Records of these revisions into ``issued/``."""
    (folder / "issued").mkdir(exist_ok=True)
    for revision in revisions:
        record = cooler(("revision: A", f"revision: {revision}"), ("number: BC-7", f"number: {number}"))
        (folder / "issued" / f"{number}-{revision}.json").write_text(record.to_json(), "utf-8")


def test_the_order_of_revisions():
    marks = ["1", "2", "9", "10", "A", "B", "H", "J", "K", "N", "P", "R", "T", "U", "V", "W", "Y", "AA", "AB", "BA"]
    assert sorted(reversed(marks), key=place_in_order) == marks
    for odd in ("I", "a", "", "A1", "²"):
        with pytest.raises(ValueError):
            place_in_order(odd)


@given(st.text(LETTERS, min_size=1, max_size=3), st.text(LETTERS, min_size=1, max_size=3))
def test_no_two_revisions_have_one_place(one, other):
    assert (place_in_order(one) == place_in_order(other)) == (one == other)


def test_a_first_issue_has_none(tmp_path, sheet, cooler):
    assert baseline_for(*sheet("A")) is None
    issue(tmp_path, cooler, "A", "B")
    assert baseline_for(*sheet("A")) is None


@pytest.mark.parametrize(("issued", "revision", "before"), [
    (("A", "B", "C"), "D", "C"), (("A", "H", "J"), "K", "J"), (("Y", "AA", "B"), "AB", "AA"), (("Y", "B"), "AA", "Y"),
    (("A", "C"), "C", "A"), (("A", "B", "C"), "B", "A"), (("1", "2", "10"), "11", "10"), (("1", "2"), "A", "2")])
def test_the_one_just_before(tmp_path, sheet, cooler, issued, revision, before):
    issue(tmp_path, cooler, *issued)
    assert baseline_for(*sheet(revision)).revision == before


def test_other_sheets_and_other_files_are_left_alone(tmp_path, sheet, cooler):
    issue(tmp_path, cooler, "B", number="BC-8")
    issue(tmp_path, cooler, "A")
    (tmp_path / "issued/register.json").write_text("[1, 2]", "utf-8")
    (tmp_path / "issued/notes.txt").write_text("x", "utf-8")
    assert baseline_for(*sheet("C")).revision == "A"


def test_an_issued_record_that_cannot_be_read_is_told(tmp_path, sheet, cooler):
    issue(tmp_path, cooler, "A")
    (tmp_path / "issued/BC-7-B.json").write_text("{", "utf-8")
    with pytest.raises(CommandError, match="may be an issue of a sheet"):
        baseline_for(*sheet("C"))


def test_a_baseline_that_the_spec_names(tmp_path, sheet, cooler):
    issue(tmp_path, cooler, "A", "B")
    assert baseline_for(*sheet("C", baseline="issued/BC-7-A.json")).revision == "A"


def test_a_named_baseline_that_is_not_there_is_told_at_its_place(tmp_path, sheet, cooler):
    spec, record = sheet("C", baseline="issued/BC-7-A.json")
    with pytest.raises(CommandError) as error:
        baseline_for(spec, record)
    [fault] = error.value.faults
    row = spec.text.splitlines()[fault.place.line - 1]
    assert row[fault.place.column - 1:] == "issued/BC-7-A.json"


def test_a_baseline_in_git_in_a_work_tree_and_in_a_shallow_clone(tmp_path, git, sheet, cooler):
    works = tmp_path / "works"
    sheet("A", folder=works)
    issue(works, cooler, "A")
    git("add", ".")
    git("commit", "-q", "-m", "First issue")
    git("tag", "issue-A")
    assert baseline_for(*sheet("B", baseline="issue-A:cooler.yaml", folder=works)).revision == "A"
    git("commit", "-q", "-a", "-m", "Second")
    git("worktree", "add", "-q", str(tmp_path / "aside"), "HEAD")
    git("clone", "-q", "--depth", "1", works.as_uri(), str(tmp_path / "clone"))
    for folder in (tmp_path / "aside", tmp_path / "clone"):
        assert baseline_for(*sheet("B", folder=folder)).revision == "A"
    assert baseline_for(*sheet("B", baseline="issue-A:cooler.yaml", folder=tmp_path / "aside")).revision == "A"
    with pytest.raises(CommandError, match="git knows no revision 'issue-A'"):
        baseline_for(*sheet("B", baseline="issue-A:cooler.yaml", folder=tmp_path / "clone"))


def test_issued_records_need_no_git(tmp_path, sheet, cooler, monkeypatch):
    issue(tmp_path, cooler, "A")
    monkeypatch.setenv("PATH", "")
    assert baseline_for(*sheet("B")).revision == "A"
