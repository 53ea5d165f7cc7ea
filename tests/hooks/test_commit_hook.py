"""The hook before a commit, and the example for CI, in real repositories with the real commands."""
from __future__ import annotations

import os
import shlex
import shutil
import subprocess
import sys
from collections.abc import Callable
from pathlib import Path

import pytest
import yaml
from click.testing import CliRunner

from calcpack.cli import main

TOP = Path(__file__).parents[2]
SHEET = """\
calcpack: 1
sheet: {number: BC-1, title: Wash tank, project: Bottle works, revision: A, status: draft, purpose: Heat., scope: All.}
signoff: {prepared: {name: B. Lindt, date: 2026-03-02}}
case:
  method: none
  inputs: {m: 1000 kg, c_w: 4.18 kJ/(kg·K), dT: 40 K}
steps:
  - {symbol: Q, title: Heat to warm the tank, formula: m * c_w * dT, unit: MJ}
limits:
  - {id: L1, symbol: Q, at_most: 200 MJ, why: The heater gives no more in an hour.}
results: [Q]
"""
WRONG = SHEET.replace("formula: m ", "formula: mm ")
Git = Callable[..., subprocess.CompletedProcess[str]]


@pytest.fixture
def works(tmp_path: Path) -> Path:
    (tmp_path / "works/specs").mkdir(parents=True)
    return tmp_path / "works"


@pytest.fixture
def git(works: Path, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Git:
    """Runs git in a repository that takes the hook from this project, with calcpack on the PATH."""
    monkeypatch.setenv("GIT_CONFIG_GLOBAL", str(tmp_path / "no-settings"))
    monkeypatch.setenv("GIT_CONFIG_NOSYSTEM", "1")
    monkeypatch.setenv("PATH", f"{Path(sys.executable).parent}{os.pathsep}{os.environ['PATH']}")

    def run(*arguments: str, check: bool = True) -> subprocess.CompletedProcess[str]:
        command = ["git", "-c", "user.name=N. Tester", "-c", "user.email=tester@example.invalid",
                   "-c", "commit.gpgsign=false", *arguments]
        return subprocess.run(command, cwd=works, check=check, capture_output=True, text=True, timeout=120)
    run("init", "-q", "-b", "main")
    run("config", "core.hooksPath", str(TOP / ".hooks"))
    return run


def commits(git: Git) -> int:
    return int(git("rev-list", "--count", "--all").stdout)


def test_a_spec_that_solves_is_committed_in_silence(works, git):
    (works / "specs/tank.yaml").write_text(SHEET, "utf-8")
    git("add", ".")
    assert git("commit", "-q", "-m", "First").stderr == "" and commits(git) == 1


def test_a_wrong_spec_is_refused_with_its_place_in_the_repository(works, git):
    (works / "specs/tank.yaml").write_text(WRONG, "utf-8")
    git("add", ".")
    done = git("commit", "-q", "-m", "First", check=False)
    assert done.returncode != 0 and commits(git) == 0
    assert "specs/tank.yaml:8:" in done.stderr and "The commit was refused" in done.stderr
    assert "Traceback" not in done.stderr and "/tmp" not in done.stderr
    assert git("commit", "-q", "--no-verify", "-m", "As it is").returncode == 0


def test_what_is_staged_is_solved_and_not_what_the_work_tree_holds(works, git):
    (works / "specs/tank.yaml").write_text(SHEET, "utf-8")
    git("add", ".")
    (works / "specs/tank.yaml").write_text(WRONG, "utf-8")
    git("commit", "-q", "-m", "The staged one solves")
    git("add", ".")
    (works / "specs/tank.yaml").write_text(SHEET.replace("1000", "1001"), "utf-8")
    assert git("commit", "-q", "-m", "The staged one is wrong", check=False).returncode != 0
    # 'commit -a' has an index of its own.
    git("commit", "-q", "-a", "-m", "The work tree solves")
    (works / "specs/tank.yaml").write_text(WRONG, "utf-8")
    assert git("commit", "-q", "-a", "-m", "The work tree is wrong", check=False).returncode != 0
    assert commits(git) == 2


def test_a_failed_limit_is_told_and_does_not_block(works, git):
    (works / "specs/tank.yaml").write_text(SHEET.replace("1000 kg", "1500 kg"), "utf-8")
    git("add", ".")
    done = git("commit", "-q", "-m", "Too much")
    assert commits(git) == 1 and "FAILS" in done.stderr and "the commit goes on" in done.stderr


def test_a_case_without_an_answer_is_refused(works, git):
    root = '  - {symbol: x, title: None, unit: K, root: {equation: "x * 1 MJ/K + Q", between: [1 K, 5 K]}}\nlimits:'
    (works / "specs/tank.yaml").write_text(SHEET.replace("limits:", root), "utf-8")
    git("add", ".")
    done = git("commit", "-q", "-m", "No root", check=False)
    assert done.returncode != 0 and "between" in done.stderr


def test_other_files_and_removed_specs_are_left_alone(works, git, monkeypatch, tmp_path):
    (works / "specs/tank.yaml").write_text(SHEET, "utf-8")
    (works / "settings.yaml").write_text("name: [unclosed\n", "utf-8")
    git("add", ".")
    git("commit", "-q", "-m", "First")
    (works / "specs/tank.yaml").unlink()
    (works / "notes.txt").write_text("x", "utf-8")
    git("add", "-A")
    git("commit", "-q", "-m", "Gone")
    assert commits(git) == 2


def test_names_with_blanks_and_rows_in_a_file(works, git):
    rows = SHEET.replace("{m: 1000 kg, ", "{").replace("formula: m ", "formula: m_load ").replace("[Q]", "[Q_all]")
    series = "  series:\n    rows: loads.csv\n    shown: two\n    totals: [{symbol: Q_all, title: All, of: Q}]\nsteps:"
    (works / "specs/wash tank, größer.yaml").write_text(rows.replace("steps:", series), "utf-8")
    (works / "specs/loads.csv").write_text("label,m_load [kg]\none,1000\ntwo,1200\n", "utf-8")
    git("add", ".")
    git("commit", "-q", "-m", "First")
    (works / "specs/loads.csv").write_text("label,m_load [bar]\none,1000\ntwo,1200\n", "utf-8")
    git("add", ".")
    done = git("commit", "-q", "-m", "Wrong rows", check=False)
    assert done.returncode != 0 and commits(git) == 1 and "größer.yaml" in done.stderr


def test_marks_that_lapse_are_told_and_do_not_block(works, git):
    spec = works / "specs/tank.yaml"
    spec.write_text(SHEET, "utf-8")
    marked = CliRunner().invoke(main, ["review", str(spec), "--agree", "Q,m", "--by", "S. Virta",
                                       "--date", "2026-03-05"])
    assert marked.exit_code == 0, marked.stderr
    git("add", ".")
    assert "lapsed" not in git("commit", "-q", "-m", "Checked").stderr
    spec.write_text(SHEET.replace("1000 kg", "1100 kg"), "utf-8")
    git("add", ".")
    done = git("commit", "-q", "-m", "Moved")
    assert "marks or signatures of the check have lapsed" in done.stderr and "S. Virta" in done.stderr
    (works / "specs/tank.review.yaml").write_text("review: [\n", "utf-8")
    git("add", ".")
    assert git("commit", "-q", "-m", "Torn", check=False).returncode != 0 and commits(git) == 2


def test_without_calcpack_the_commit_waits(works, git, tmp_path, monkeypatch):
    tools = tmp_path / "tools"
    tools.mkdir()
    for name in ("git", "bash", "env", "grep", "mktemp", "rm", "basename"):
        (tools / name).symlink_to(shutil.which(name))
    monkeypatch.setenv("PATH", str(tools))
    (works / "specs/tank.yaml").write_text(SHEET, "utf-8")
    git("add", ".")
    done = git("commit", "-q", "-m", "First", check=False)
    assert done.returncode != 0 and "calcpack is not on the PATH" in done.stderr
    assert list(works.glob("**/*.yaml")) == [works / "specs/tank.yaml"]


def test_the_entry_for_the_hook_tool_refuses_faults_and_passes_failed_limits(works, git):
    [hook] = yaml.safe_load((TOP / ".pre-commit-hooks.yaml").read_text("utf-8"))
    outcomes = {}
    for name, text in (("good", SHEET), ("failing", SHEET.replace("1000 kg", "1500 kg")), ("wrong", WRONG)):
        (works / f"specs/{name}.yaml").write_text(text, "utf-8")
        done = subprocess.run([*shlex.split(hook["entry"]), f"specs/{name}.yaml"], cwd=works, capture_output=True,
                              text=True, check=False, timeout=60)
        outcomes[name] = done.returncode
    assert outcomes == {"good": 0, "failing": 0, "wrong": 2}


@pytest.mark.slow
def test_the_example_for_ci_builds_and_tells_what_changed(works, git):
    (works / "specs/tank.yaml").write_text(SHEET, "utf-8")
    git("add", ".")
    git("commit", "-q", "-m", "First")
    git("checkout", "-q", "-b", "larger")
    (works / "specs/tank.yaml").write_text(SHEET.replace("1000 kg", "1100 kg"), "utf-8")
    git("commit", "-q", "-a", "-m", "Larger")
    git("checkout", "-q", "main")
    (works / "specs/other.yaml").write_text(SHEET.replace("BC-1", "BC-2"), "utf-8")
    git("add", ".")
    git("commit", "-q", "-m", "Of others")
    git("checkout", "-q", "larger")

    def job(*arguments: str) -> subprocess.CompletedProcess[str]:
        return subprocess.run([str(TOP / ".hooks/ci-example.sh"), *arguments], cwd=works, capture_output=True,
                              text=True, check=False, timeout=300)
    done = job("main")
    assert done.returncode == 0, done.stderr
    changes = (works / "changes.md").read_text("utf-8")
    assert "1 changed, 0 unchanged" in changes and "`Q` 167.20 MJ → 183.92 MJ" in changes and "BC-2" not in changes
    assert (works / "site/BC-1.pdf").is_file()
    assert job("nowhere").returncode == 1
    (works / "specs/issued").mkdir()
    (works / "specs/issued/BC-1-A.pdf").write_bytes(b"%PDF-1.7 torn")
    assert job("main").returncode == 1
