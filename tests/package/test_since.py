"""All sheets since a revision, in real repositories: renamed, new, removed, unchanged, shallow, and without git."""
from __future__ import annotations

import json
import os
import re
import subprocess
from collections.abc import Callable
from pathlib import Path

import pytest
from click.testing import CliRunner

from calcpack.cli import main
from calcpack.errors import CommandError, SpecError
from calcpack.package.since import Since, since
from calcpack.package.since_report import report

TANK = """\
calcpack: 1
sheet:
  {{number: {number}, title: Wash tank, project: Bottle works, revision: {revision}, status: draft,
   purpose: Heat., scope: All.}}
case:
  method: none
  inputs:
    m: {mass}
    c_w: 4.18 kJ/(kg·K)
    dT: 40 K
steps:
  - {{symbol: Q, title: Heat to warm the tank, formula: m * c_w * dT, unit: MJ}}
limits:
  - {{id: L1, symbol: Q, at_most: 200 MJ, why: The heater gives no more in an hour.}}
results: [Q]
"""
Git = Callable[..., str]


def tank(number: str = "BC-1", mass: str = "1000 kg", revision: str = "A") -> str:
    return TANK.format(number=number, mass=mass, revision=revision)


@pytest.fixture
def git(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Git:
    """Runs git in ``works`` with settings of its own."""
    monkeypatch.setenv("GIT_CONFIG_GLOBAL", str(tmp_path / "no-settings"))
    monkeypatch.setenv("GIT_CONFIG_NOSYSTEM", "1")
    (tmp_path / "works/specs").mkdir(parents=True)
    chosen = ("user.name=N. Tester", "user.email=tester@example.invalid", "commit.gpgsign=false")

    def run(*arguments: str, folder: Path = tmp_path / "works") -> str:
        options = [part for setting in chosen for part in ("-c", setting)]
        return subprocess.run(["git", "-C", str(folder), *options, *arguments], check=True, capture_output=True,
                              text=True).stdout.strip()
    run("init", "-q", "-b", "main")
    return run


@pytest.fixture
def specs(tmp_path: Path, git: Git) -> Path:
    """Three tanks BC-1 to BC-3 at the tag v1."""
    folder = tmp_path / "works/specs"
    for at in (1, 2, 3):
        (folder / f"tank-{at}.yaml").write_text(tank(f"BC-{at}", f"{at * 1000} kg"), "utf-8")
    (folder / "other.yaml").write_text("some: file\n", "utf-8")
    git("add", ".")
    git("commit", "-q", "-m", "First")
    git("tag", "v1")
    return folder


def kinds(found: Since) -> dict[str, str]:
    return {one.number: one.kind for one in found.sheets}


def test_nothing_changed(specs):
    found = since("v1", [specs])
    assert found.sheets == () and found.unchanged == 3 and not found.differs
    assert "3 unchanged" in report(found, "text")


def test_changed_new_removed_and_unchanged_sheets(specs, git):
    (specs / "tank-1.yaml").write_text(tank("BC-1", "1300 kg", "B"), "utf-8")
    (specs / "tank-2.yaml").unlink()
    (specs / "tank-4.yaml").write_text(tank("BC-4"), "utf-8")
    found = since("v1", [specs])
    assert kinds(found) == {"BC-1": "changed", "BC-2": "removed", "BC-4": "new"} and found.unchanged == 1
    assert found.sheets[0].comparison["results"][0]["new"] == "217.36 MJ"
    assert found.differs


def test_a_spec_renamed_by_git_and_one_renamed_without_it_are_followed(specs, git):
    git("mv", "specs/tank-1.yaml", "specs/wash.yaml")
    (specs / "tank-2.yaml").rename(specs / "by-hand.yaml")
    for name, text in (("wash.yaml", tank("BC-1", "1100 kg")), ("by-hand.yaml", tank("BC-2", "2200 kg"))):
        (specs / name).write_text(text, "utf-8")
    found = since("v1", [specs])
    assert {(one.number, one.kind, one.was) for one in found.sheets} == {
        ("BC-1", "changed", "specs/tank-1.yaml"), ("BC-2", "changed", "specs/tank-2.yaml")}
    git("add", ".")
    git("commit", "-q", "-m", "Renamed")
    assert kinds(since("v1", [specs])) == {"BC-1": "changed", "BC-2": "changed"}


def test_a_spec_moved_into_the_folder_is_followed(specs, git, tmp_path):
    (tmp_path / "works/old").mkdir()
    git("mv", "specs/tank-1.yaml", "old/tank-1.yaml")
    git("commit", "-q", "-m", "Aside")
    git("tag", "v2")
    git("mv", "old/tank-1.yaml", "specs/tank-1.yaml")
    (specs / "tank-1.yaml").write_text(tank("BC-1", "1200 kg"), "utf-8")
    [one] = since("v2", [specs]).sheets
    assert (one.number, one.kind, one.was) == ("BC-1", "changed", "old/tank-1.yaml")


def test_two_specs_that_change_names_keep_their_numbers(specs):
    first, second = ((specs / f"tank-{at}.yaml").read_text("utf-8") for at in (1, 2))
    (specs / "tank-1.yaml").write_text(second, "utf-8")
    (specs / "tank-2.yaml").write_text(first, "utf-8")
    (specs / "tank-3.yaml").unlink()
    (specs / "tank-3b.yaml").write_text(tank("BC-3", "3000 kg"), "utf-8")
    found = since("v1", [specs])
    assert kinds(found).get("BC-3") is None and found.unchanged >= 1


def test_named_specs_alone_are_compared(specs):
    for at in (1, 2):
        (specs / f"tank-{at}.yaml").write_text(tank(f"BC-{at}", "1234 kg"), "utf-8")
    (specs / "tank-3.yaml").unlink()
    assert kinds(since("v1", [specs / "tank-1.yaml"])) == {"BC-1": "changed"}


def test_rows_in_a_file_count_with_the_spec_and_each_side_has_its_own(specs, git):
    series = "  series:\n    rows: loads.csv\n    shown: two\n    totals: [{symbol: Q_all, title: All, of: Q}]\nsteps:"
    rows = tank("BC-9").replace("    m: 1000 kg\n", "").replace("formula: m ", "formula: m_load ")
    rows = rows.replace("steps:", series).replace("[Q]", "[Q_all]")
    (specs / "rows.yaml").write_text(rows, "utf-8")
    (specs / "loads.csv").write_text("label,m_load [kg]\none,1000\ntwo,1200\n", "utf-8")
    git("add", ".")
    git("commit", "-q", "-m", "Rows")
    (specs / "loads.csv").write_text("label,m_load [kg]\none,1500\ntwo,1200\n", "utf-8")
    [one] = since("HEAD", [specs]).sheets
    [moved] = one.comparison["results"]
    assert (one.number, moved["old"], moved["new"]) == ("BC-9", "367.84 MJ", "451.44 MJ")


def test_a_sheet_that_takes_from_a_changed_one_changed_too(specs, git):
    (specs / "bath.yaml").write_text(tank("BC-8", "{from: BC-1.m}"), "utf-8")
    git("add", ".")
    git("commit", "-q", "-m", "Bath")
    (specs / "tank-1.yaml").write_text(tank("BC-1", "1100 kg"), "utf-8")
    found = since("HEAD", [specs])
    assert kinds(found) == {"BC-1": "changed", "BC-8": "changed"}
    assert [one.comparison["results"][0]["new"] for one in found.sheets] == ["183.92 MJ"] * 2


def test_a_sheet_that_was_wrong_then_is_told_and_not_compared(specs, git):
    (specs / "tank-1.yaml").write_text(tank().replace("m * c_w * dT", "m * c_w"), "utf-8")
    git("commit", "-q", "-a", "-m", "Wrong")
    (specs / "tank-1.yaml").write_text(tank(), "utf-8")
    found = since("HEAD", [specs])
    [one] = found.sheets
    assert one.kind == "not compared" and one.reason.startswith("HEAD:specs/tank-1.yaml: ")
    assert "not compared" in report(found, "markdown") and str(found.sheets[0].record["sheet"]["number"]) == "BC-1"


def test_faults_of_today_come_together(specs):
    for at in (1, 2):
        (specs / f"tank-{at}.yaml").write_text(tank(f"BC-{at}").replace("formula: m", "formula: mm"), "utf-8")
    with pytest.raises(SpecError) as error:
        since("v1", [specs])
    assert {Path(fault.place.file).name for fault in error.value.faults} == {"tank-1.yaml", "tank-2.yaml"}


def test_a_second_work_tree(specs, git, tmp_path):
    git("worktree", "add", "-q", str(tmp_path / "aside"), "v1")
    (tmp_path / "aside/specs/tank-3.yaml").write_text(tank("BC-3", "1 kg"), "utf-8")
    assert kinds(since("v1", [tmp_path / "aside/specs"])) == {"BC-3": "changed"}


def test_a_shallow_clone_compares_with_what_it_has_and_says_what_it_lacks(specs, git, tmp_path):
    (specs / "tank-1.yaml").write_text(tank("BC-1", "900 kg"), "utf-8")
    git("commit", "-q", "-a", "-m", "Smaller")
    clone = tmp_path / "clone"
    git("clone", "-q", "--depth", "1", (tmp_path / "works").as_uri(), str(clone))
    assert since("HEAD", [clone / "specs"]).unchanged == 3
    with pytest.raises(CommandError) as error:
        since("v1", [clone / "specs"])
    assert "git fetch --unshallow" in error.value.faults[0].hint
    git("fetch", "-q", "--depth", "1", "origin", "tag", "v1", folder=clone)
    # Two commits without what lies between them: content and number still find each sheet.
    assert kinds(since("v1", [clone / "specs"])) == {"BC-1": "changed"}


def test_without_git_or_its_repository(tmp_path, monkeypatch):
    monkeypatch.setenv("GIT_CEILING_DIRECTORIES", str(tmp_path.parent))
    (tmp_path / "tank.yaml").write_text(tank(), "utf-8")
    done = CliRunner().invoke(main, ["compare", "--since", "v1", str(tmp_path)])
    told = " ".join(done.stderr.split())      # a long name of the folder wraps the sentence
    assert done.exit_code == 2 and "is not in a work tree of git" in told and "hint:" in told
    monkeypatch.setenv("PATH", str(tmp_path))
    done = CliRunner().invoke(main, ["compare", "--since", "v1", str(tmp_path)])
    assert done.exit_code == 4 and "install git" in done.stderr


def test_specs_of_two_repositories_are_refused(specs, git, tmp_path):
    git("init", "-q", str(tmp_path / "second"))
    (tmp_path / "second/tank.yaml").write_text(tank(), "utf-8")
    with pytest.raises(CommandError, match="several repositories"):
        since("v1", [specs, tmp_path / "second/tank.yaml"])


def test_a_hooks_surroundings_do_not_mislead(specs, tmp_path, git, monkeypatch):
    git("init", "-q", str(tmp_path / "second"))
    monkeypatch.setenv("GIT_DIR", str(tmp_path / "second/.git"))
    assert since("v1", [specs]).unchanged == 3


@pytest.fixture
def found(specs) -> Since:
    (specs / "tank-1.yaml").write_text(tank("BC-1", "1300 kg", "B"), "utf-8")
    (specs / "tank-2.yaml").write_text(tank("BC-2", "2000 kg") + "# a remark\n", "utf-8")
    (specs / "tank-3.yaml").unlink()
    (specs / "tank-4.yaml").write_text(tank("BC-4").replace("Wash tank", "Tank | <b>four</b>"), "utf-8")
    return since("v1", [specs])


def test_markdown_begins_with_a_table_and_folds_the_rest(found):
    text = report(found, "markdown")
    rows = [row for row in text.partition("<details>")[0].splitlines() if row.startswith("|")]
    assert len(rows) == 6 and len({len(re.findall(r"(?<!\\)\|", row)) for row in rows}) == 1
    assert "| **BC-1** Wash tank | A → B | `Q` 167.20 MJ → 217.36 MJ (+30 %) | **L1 FAILS** |  |" in rows
    assert "says the same" in rows[3] and rows[4].endswith("removed: specs/tank-3.yaml |")
    assert "<b>" not in text and text.count("<details>") == text.count("</details>") == 1
    assert "\n## BC-1 Wash tank\n" in text and "\n### Results\n" in text


def test_text_fits_a_terminal_and_html_closes_what_it_opens(found):
    assert all(len(line) <= 80 for line in report(found, "text").splitlines())
    page = report(found, "html")
    for tag in ("details", "table", "section", "tr", "td"):
        assert page.count(f"<{tag}>") + page.count(f"<{tag} ") == page.count(f"</{tag}>")
    assert "<b>four" not in page


def test_json_has_each_sheet_and_its_comparison(found):
    data = json.loads(report(found, "json"))
    assert data["unchanged"] == 0 and [one["kind"] for one in data["sheets"]] == [
        "changed", "changed", "removed", "new"]
    assert data["sheets"][0]["failing"] == ["L1"] and data["sheets"][0]["comparison"]["letter"] == "B"


def test_reports_are_the_same_bytes_each_time_and_name_no_machine(found, specs):
    for shape in ("text", "markdown", "html", "json"):
        assert report(found, shape) == report(since("v1", [specs]), shape)
        assert str(specs.parent) not in report(found, shape) and "calcpack-" not in report(found, shape)


def test_the_command_writes_the_report_and_leaves_with_1_where_something_differs(specs, tmp_path, monkeypatch):
    monkeypatch.chdir(specs.parent)
    assert CliRunner().invoke(main, ["compare", "--since", "v1"]).exit_code == 0
    (specs / "tank-1.yaml").write_text(tank("BC-1", "1300 kg"), "utf-8")
    done = CliRunner().invoke(main, ["compare", "--since", "v1", "--format", "markdown", "-o", "changes.md"])
    assert done.exit_code == 1 and (specs.parent / "changes.md").read_text("utf-8").startswith("# Calculation sheets")
    os.remove("changes.md")
    assert CliRunner().invoke(main, ["compare", "one.yaml"]).exit_code == 2
