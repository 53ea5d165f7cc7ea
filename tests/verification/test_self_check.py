"""The published checks run by the program itself, their record, and what a sheet says of them."""
from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import pytest
from click.testing import CliRunner

from calcpack.building import build_package
from calcpack.cli import main
from calcpack.errors import CommandError
from calcpack.pipeline import solve_spec
from calcpack.verification import published, run, statement
from calcpack.verification.published import cases, companions, method_of, published_folder
from calcpack.verification.run import read_verification, self_check, to_json

SPECS = Path(__file__).parent.parent.parent / "specs"
BOUND = SPECS / "kiln-exhaust-bound.yaml"


@pytest.fixture(scope="module")
def verification() -> dict[str, Any]:
    return self_check("carnot-bound")


def test_the_run_holds_every_case_of_the_method(verification: dict[str, Any]) -> None:
    mine = [case for case in cases() if method_of(case.spec) == "carnot-bound"]
    assert len(verification["results"]) == len(mine) > 1
    assert verification["methods"]["carnot-bound"]["values"] == sum(len(case.values) for case in mine)
    assert verification["pass"] and not verification["whole"]
    shares = [value["share"] for one in verification["results"] for value in one["values"]]
    assert verification["methods"]["carnot-bound"]["worst"]["share"] == max(shares) <= 1.0


def test_the_record_reads_back_and_says_with_what_it_was_made(verification: dict[str, Any], tmp_path: Path) -> None:
    path = tmp_path / "verification.json"
    path.write_text(to_json(verification), "utf-8")
    assert read_verification(path) == verification
    assert set(verification["engine"]["libraries"]) >= {"CoolProp", "numpy", "scipy"}
    assert len(verification["test_set"]) == 12
    path.write_text("{}", "utf-8")
    with pytest.raises(CommandError, match="no verification record"):
        read_verification(path)


def _false_set(folder: Path, monkeypatch: pytest.MonkeyPatch, old: str, new: str) -> None:
    """A set of one check, with one published value replaced."""
    companion = next(path for path in companions() if path.name.startswith("5_01"))
    for path in (companion, published.spec_of(companion)):
        text = path.read_text("utf-8")
        if path == companion:
            assert old in text
            text = text.replace(old, new)
        (folder / path.name).write_text(text, "utf-8")
    monkeypatch.setattr(published, "published_folder", lambda: folder)


def test_a_value_that_is_off_fails_the_run(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    case = next(case for case in cases() if case.spec.name.startswith("5_01"))
    value = case.values[0].value
    assert value[0].isdigit()
    _false_set(tmp_path, monkeypatch, value, f"9{value}")
    result = CliRunner().invoke(main, ["self-check", "-q", "-o", str(tmp_path / "v.json")])
    assert result.exit_code == 1
    assert "FAILS" in result.stdout and case.row in result.stdout
    written = read_verification(tmp_path / "v.json")
    assert not written["pass"] and not written["methods"][method_of(case.spec)]["pass"]


def test_a_case_that_cannot_be_solved_fails_the_run(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    case = next(case for case in cases() if case.spec.name.startswith("5_01"))
    _false_set(tmp_path, monkeypatch, f"symbol: {case.values[0].symbol}", "symbol: no_such_symbol")
    done = self_check()
    assert not done["pass"]
    assert "no_such_symbol" in done["results"][0]["failure"]


def test_the_command_prints_80_columns_and_its_json() -> None:
    result = CliRunner().invoke(main, ["self-check", "carnot-bound"])
    assert result.exit_code == 0
    assert max(len(line) for line in result.stdout.splitlines()) <= 80
    assert "within what is allowed" in result.stdout
    data = json.loads(CliRunner().invoke(main, ["self-check", "carnot-bound", "--json"]).stdout)
    assert data["calcpack verification"] == run.FORMAT
    unknown = CliRunner().invoke(main, ["self-check", "carnot-bond"])
    assert unknown.exit_code == 2 and "did you mean 'carnot-bound'?" in unknown.stderr


def test_a_sheet_says_what_was_run_and_what_was_not(verification: dict[str, Any]) -> None:
    record = solve_spec(BOUND).data
    assert statement.statement(record, None)["words"].startswith("not run on this machine")
    said = statement.statement(record, verification)
    assert said["run"] and said["passed"] and said["same"]
    assert verification["date"] in said["words"] and "Worst: " in said["words"]
    # The published bounds have no kiln exhaust.
    assert not said["covers"] and "kiln exhaust" in " ".join(said["flags"])
    other = {**verification, "engine": {**verification["engine"], "calcpack": "0.0.9"}}
    assert any("other versions" in flag for flag in statement.statement(record, other)["flags"])
    missing = statement.statement({**record, "case": {**record["case"], "method": "none"}}, verification)
    assert not missing["run"] and missing["flags"]


def test_known_errors_are_those_of_the_version_and_the_method(monkeypatch: pytest.MonkeyPatch) -> None:
    listed = ({"versions": "0.1.0, 0.1.1", "methods": ["steam-plant"], "what": "w", "instead": "i"},
              {"versions": "0.1.0", "methods": "all", "what": "x", "instead": "j"})
    monkeypatch.setattr(statement, "_listed", lambda: listed)
    assert [one["what"] for one in statement.known_errors("0.1.0", "steam-plant")] == ["w", "x"]
    assert [one["what"] for one in statement.known_errors("0.1.0", "none")] == ["x"]
    assert statement.known_errors("0.2.0", "steam-plant") == []


def test_the_known_errors_file_can_be_read() -> None:
    statement._listed.cache_clear()
    for one in statement._listed():
        assert set(one) == {"versions", "methods", "what", "instead"}


def test_a_build_takes_the_record_beside_the_spec(verification: dict[str, Any], tmp_path: Path) -> None:
    spec = tmp_path / BOUND.name
    # Without the sheet that it takes the power of the engine from.
    alone = BOUND.read_text("utf-8").replace("{from: MT-102.W_dot_net}", "{value: 320 kW, source: R1}")
    spec.write_text(alone, "utf-8")
    build_package([spec], tmp_path / "without", pdf=False, jobs=1, tell=lambda text: None)
    assert "not run on this machine" in (tmp_path / "without" / "MT-101.html").read_text("utf-8")
    (tmp_path / "verification.json").write_text(to_json(verification), "utf-8")
    package = build_package([spec], tmp_path / "with", pdf=False, jobs=1, tell=lambda text: None)
    page = (tmp_path / "with" / "MT-101.html").read_text("utf-8")
    assert verification["date"] in page and verification["test_set"] in page
    assert 65 not in [one.number for one in package.unmet["MT-101"]]
    build_package([spec], tmp_path / "again", pdf=False, jobs=1, tell=lambda text: None)
    assert (tmp_path / "again" / "MT-101.html").read_bytes() == page.encode()
    with pytest.raises(CommandError):
        build_package([spec], tmp_path / "no", pdf=False, jobs=1, tell=lambda text: None,
                      verification=tmp_path / "missing.json")


def test_the_checks_lie_in_the_source_tree() -> None:
    assert published_folder() == SPECS.parent / "tests" / "published"
