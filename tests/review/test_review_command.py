"""'calcpack review' at the terminal: what it shows, what it writes, how it leaves."""
from __future__ import annotations

import datetime
import json
import subprocess
import sys
from pathlib import Path
from typing import Any

import pytest
from click.testing import CliRunner, Result

from calcpack.cli import main
from calcpack.pipeline import spec_files
from calcpack.review.reading import read_review
from calcpack.review.writing import review_text

Data = dict[str, Any]
VIRTA = ("--by", "S. Virta", "--date", "2026-02-04")
START = "from calcpack.cli import main; main()"
EVERYTHING = "L1-L2,A1,1.1-1.4,Q_dot-f_foul"


@pytest.fixture
def spec(tmp_path: Path, review_kit: Any) -> Path:
    path = tmp_path / "cooler.yaml"
    path.write_text(review_kit.SPEC, "utf-8")
    return path


def _run(spec: Path, *options: str) -> Result:
    result = CliRunner().invoke(main, ["review", str(spec), *options])
    assert result.exception is None or isinstance(result.exception, SystemExit), result.exception
    return result


def _beside(spec: Path) -> Path:
    return spec.with_name("cooler.review.yaml")


def test_a_sheet_without_a_review_file_shows_what_is_to_be_checked_and_leaves_with_1(spec: Path) -> None:
    done = _run(spec)
    assert done.exit_code == 1 and not _beside(spec).exists()
    lines = done.stdout.splitlines()
    assert "Not checked (12)" in lines and "  steps        1.1-1.4" in lines and "  limits       L1, L2" in lines
    assert "  prepared  R. Aldane, 2026-02-03: named in the spec, not signed" in lines
    assert lines[-1] == "Open: 12 not checked, 3 signatures."


def test_a_whole_check_from_the_first_mark_to_the_last_signature(spec: Path) -> None:
    assert _run(spec, "--agree", EVERYTHING, *VIRTA).exit_code == 0
    assert _run(spec, "--comment", "area", "--text", "Why 1500?", *VIRTA).exit_code == 0
    assert _run(spec, "--sign", "checked", "--by", "S. Virta").exit_code == 2
    aldane = ("--by", "R. Aldane", "--date", "2026-02-05")
    assert _run(spec, "--answer", "area", "--text", "See R1.", *aldane).exit_code == 0
    assert _run(spec, "--correct", "area", "--text", "the source is named now", *VIRTA).exit_code == 0
    for role, name in (("prepared", "R. Aldane"), ("checked", "S. Virta"), ("approved", "M. Okoro")):
        assert _run(spec, "--sign", role, "--by", name, "--date", "2026-02-06").exit_code == 0
    done = _run(spec)
    assert done.exit_code == 0 and done.stdout.splitlines()[-1] == "Nothing is open."
    assert "Why 1500?" not in done.stdout
    every = _run(spec, "--all").stdout
    assert "Why 1500?" in every and "See R1." in every and every.count("S. Virta, 2026-02-04, revision A") == 14


def test_what_is_open_is_told_in_full(spec: Path, cooler: Data, review_kit: Any) -> None:
    _run(spec, "--agree", EVERYTHING, *VIRTA)
    _run(spec, "--comment", "m_dot", "--text", "Is the flow " + "really so very " * 9 + "small?", *VIRTA)
    _run(spec, "--answer", "m_dot", "--text", "It is.", "--by", "R. Aldane", "--date", "2026-02-05")
    _run(spec, "--sign", "prepared", "--by", "R. Aldane", "--date", "2026-02-05")
    spec.write_text(review_kit.SPEC.replace("value: 1.2", "value: 1.25"), "utf-8")
    done = _run(spec)
    assert done.exit_code == 1
    said = " ".join(done.stdout.split())
    assert "Open comments (1) 1.2 m_dot Mass flow of the wash water comment, S. Virta, 2026-02-04, revision A" in said
    assert "really so very small? answer, R. Aldane, 2026-02-05 It is." in said
    assert "Moved since they were agreed (3) was agreed at revision A by S. Virta, 2026-02-04, moved since" in said
    was, now = (next(one["shown"] for one in data["steps"] if one["symbol"] == "area")
                for data in (cooler, review_kit.solved(spec.read_text("utf-8"))))
    assert f"1.3 area {was} m² → {now} m²" in said and "f_foul 1.2 → 1.25" in said
    assert "VOID: the sheet moved after it was signed" in said
    assert done.stdout.splitlines()[-1] == "Open: 1 comment, 3 moved since, 3 signatures."


def test_no_line_is_wider_than_80_columns(spec: Path) -> None:
    _run(spec, "--comment", EVERYTHING, "--text", "word " * 60, *VIRTA)
    for options in ((), ("--all",), ("-h",)):
        assert max(len(line) for line in _run(spec, *options).stdout.splitlines()) <= 80


def test_json_says_the_same_to_scripts(spec: Path) -> None:
    _run(spec, "--agree", "area", *VIRTA)
    done = _run(spec, "--json")
    found = json.loads(done.stdout)
    assert done.exit_code == 1 and found["sheet"] == "MT-7" and not found["complete"]
    states = {one["name"]: one["state"] for one in found["items"]}
    assert states.pop("area") == "agreed" and set(states.values()) == {"unmarked"}
    assert found["counts"]["step"] == {"agreed": 1, "corrected": 0, "comment": 0, "lapsed": 0, "unmarked": 3}
    assert found["signatures"]["checked"]["state"] == "missing"


def test_a_mark_without_a_date_is_of_today(spec: Path) -> None:
    before = datetime.date.today().isoformat()
    _run(spec, "--agree", "area", "--by", "S. Virta")
    assert before <= read_review(_beside(spec)).marks[0].date <= datetime.date.today().isoformat()


def test_nothing_new_leaves_the_file_alone(spec: Path) -> None:
    _run(spec, "--agree", "area", *VIRTA)
    before = _beside(spec).stat()
    done = _run(spec, "--agree", "area", *VIRTA)
    assert done.exit_code == 0 and done.stdout.startswith("nothing new for ")
    assert _beside(spec).stat().st_mtime_ns == before.st_mtime_ns


@pytest.mark.parametrize(("options", "told"), [
    (("--agree", "area"), "error: --agree needs --by"),
    (("--comment", "area", "--by", "S. Virta"), "--comment needs --text"),
    (("--text", "Why?"), "--text says nothing without a mark"), (("--agree", "aria", *VIRTA), "did you mean 'area'?"),
    (("--agree", "area", "--comment", "L1", "--text", "x", *VIRTA), "one thing at a time is taken"),
    (("--sign", "checked", "--text", "x", *VIRTA), "--text says nothing with --sign"),
    (("--agree", "area", "--by", "R. Aldane"), "R. Aldane prepared revision A and cannot check it"),
    (("--take", "nowhere.yaml"), "there is no file 'nowhere.yaml'"),
    (("--take", "x.yaml", "--by", "S. Virta"), "--by says nothing with --take"),
    (("--agree", "area", "--by", "S. Virta", "--date", "today"), "'today' is not a day of the calendar"),
    (("--agree", "area", "--by", "S. Virta", "--date", "9998-01-01"), "'9998-01-01' is a day to come"),
    (("--agree", "area", "--by", "..."), "the name is missing"),
    (("--agree", "area", "--by", "R.\u200b Aldane"), "the name holds a character that cannot be seen"),
    (("--agree", "area", "--by", "S.\rVirta"), "the name holds a character that cannot be seen")])
def test_a_fault_leaves_with_2_and_writes_nothing(spec: Path, options: tuple[str, ...], told: str) -> None:
    done = _run(spec, *options)
    assert done.exit_code == 2 and told in done.stderr and "nothing was written" in done.stderr
    assert not _beside(spec).exists()


def test_a_broken_review_file_is_told_with_its_line_and_kept(spec: Path) -> None:
    _beside(spec).write_text("review: 1\nsheet: MT-7\nmarks:\n- {step: area}\n", "utf-8")
    done = _run(spec, "--agree", "area", *VIRTA)
    told = " ".join(done.stderr.split())
    assert done.exit_code == 2 and "cooler.review.yaml:4:4: key 'verdict' is missing in a mark" in told
    assert "- {step: area}" in done.stderr
    assert _beside(spec).read_text("utf-8").endswith("- {step: area}\n")


def test_the_review_of_another_sheet_is_refused(spec: Path) -> None:
    _beside(spec).write_text("review: 1\nsheet: MT-8\n", "utf-8")
    assert "this is the review of another sheet" in _run(spec).stderr


def test_a_comment_of_somebodys_own_is_not_lost(spec: Path) -> None:
    _run(spec, "--agree", "area", *VIRTA)
    _beside(spec).write_text(_beside(spec).read_text("utf-8") + "# ask S. V. again\n", "utf-8")
    done = _run(spec, "--agree", "m_dot", *VIRTA)
    assert done.exit_code == 2 and "a comment stands here, which would be lost" in done.stderr
    assert _beside(spec).read_text("utf-8").endswith("# ask S. V. again\n")


def test_the_marks_that_a_page_saved_are_taken(spec: Path, tmp_path: Path, cooler: Data, review_kit: Any) -> None:
    saved = tmp_path / "saved.yaml"
    saved.write_text(review_text(review_kit.agreed(cooler)), "utf-8")
    done = _run(spec, "--take", str(saved))
    assert done.exit_code == 0 and "12 new marks. Open: 3 signatures." in done.stdout
    assert _beside(spec).read_text("utf-8") == saved.read_text("utf-8")
    saved.write_text(saved.read_text("utf-8").replace("sheet: MT-7", "sheet: MT-8"), "utf-8")
    assert _run(spec, "--take", str(saved)).exit_code == 2


def test_an_answer_written_in_an_editor_is_shown_and_kept(spec: Path) -> None:
    _run(spec, "--comment", "area", "--text", "Why 1500?", *VIRTA)
    _run(spec, "--agree", "m_dot", *VIRTA)
    text = _beside(spec).read_text("utf-8")
    by_hand = '    text: "Why 1500?"\n    answer: {by: R. Aldane, date: 2026-02-05, text: See R1.}\n'
    _beside(spec).write_text(text.replace('    text: "Why 1500?"\n', by_hand), "utf-8")
    assert "See R1." in _run(spec).stdout
    _run(spec, "--agree", "dT_w", *VIRTA)
    found = read_review(_beside(spec))
    assert [one.name for one in found.marks] == ["area", "m_dot", "dT_w"]
    assert found.marks[0].answer is not None and found.marks[0].answer.text == "See R1."


def test_a_mark_whose_step_is_gone_is_shown_as_such(spec: Path, review_kit: Any) -> None:
    _run(spec, "--comment", "kept", "--text", "Is this needed?", *VIRTA)
    row = next(line for line in review_kit.SPEC.splitlines(keepends=True) if "symbol: kept" in line)
    spec.write_text(review_kit.SPEC.replace(row, ""), "utf-8")
    done = _run(spec)
    assert "  kept  its step is gone" in done.stdout.splitlines() and "Is this needed?" in done.stdout
    assert _run(spec, "--agree", "kept", *VIRTA).exit_code == 0
    assert "Is this needed?" not in _run(spec).stdout and "Is this needed?" in _run(spec, "--all").stdout


def test_a_review_file_is_no_spec(spec: Path) -> None:
    _run(spec, "--agree", "area", *VIRTA)
    assert spec_files([spec.parent]) == [spec]


def test_two_marks_made_at_one_time_are_both_kept(spec: Path) -> None:
    runs = [subprocess.Popen([sys.executable, "-c", START, "review", str(spec), "--agree", name, *VIRTA],
                             stdout=subprocess.DEVNULL) for name in ("area", "L1", "L2", "A1")]
    assert [run.wait(60) for run in runs] == [0] * 4
    assert {mark.name for mark in read_review(_beside(spec)).marks} == {"area", "L1", "L2", "A1"}


def test_line_ends_of_other_systems_are_written_as_new_lines(spec: Path) -> None:
    assert _run(spec, "--comment", "area", "--text", "One\r\ntwo\rthree", *VIRTA).exit_code == 0
    assert read_review(_beside(spec)).marks[0].text == "One\ntwo\nthree"


def test_a_refusal_tells_a_comment_of_several_lines_on_its_own_line(spec: Path) -> None:
    _run(spec, "--comment", "area", "--text", "One\n\n# two", *VIRTA)
    assert "found:    One # two\n" in _run(spec, "--sign", "checked", "--by", "S. Virta").stderr
