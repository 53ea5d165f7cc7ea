"""Waivers: a limit that fails and that somebody answers for stays a failure in plain sight, and fails no build."""
from __future__ import annotations

from pathlib import Path

import pytest
from check_cases import LIMITS, heat_pump_text
from click.testing import CliRunner

from calcpack.cli import main
from calcpack.pipeline import solve_spec
from calcpack.record import Record
from calcpack.revisions import compare_records

WAIVER = "waiver: {reason: The new vessel is rated 25 bar., name: V. Brandt, date: 2026-11-30}"
WAIVED = LIMITS.replace("that is far too low, source: R1}", f"that is far too low, source: R1, {WAIVER}}}").replace(
    "why: oil, source: R1}", f"why: oil, source: R1, {WAIVER}}}")


@pytest.fixture(scope="module")
def waived(tmp_path_factory: pytest.TempPathFactory) -> tuple[Path, Record]:
    path = tmp_path_factory.mktemp("waived") / "case.yaml"
    path.write_text(heat_pump_text(limits=WAIVED), "utf-8")
    return path, solve_spec(path)


def test_the_record_keeps_the_failure_and_the_waiver(waived: tuple[Path, Record]) -> None:
    limits = {one["id"]: one for one in waived[1].data["limits"]}
    assert limits["L4"]["status"] == "fails" and limits["L4"]["verdict"] == "waived"
    assert limits["L4"]["waiver"] == {"reason": "The new vessel is rated 25 bar.", "name": "V. Brandt",
                                      "date": "2026-11-30"}
    assert limits["L1"]["status"] == limits["L1"]["verdict"] == "holds" and limits["L1"]["waiver"]
    assert limits["L2"]["waiver"] is None
    assert waived[1].failed_limits == () and [one["id"] for one in waived[1].waived_limits] == ["L4"]


def test_a_waived_limit_fails_no_command_and_is_told(waived: tuple[Path, Record], tmp_path: Path) -> None:
    done = CliRunner().invoke(main, ["solve", "-q", str(waived[0])])
    words = " ".join(done.output.split())
    assert done.exit_code == 0 and "L4 FAILS, waived" in words
    assert "Waived by V. Brandt, 2026-11-30: The new vessel is rated 25 bar." in words
    plain = tmp_path / "plain.yaml"
    plain.write_text(heat_pump_text(), "utf-8")
    assert CliRunner().invoke(main, ["solve", "-q", str(plain)]).exit_code == 1


def test_a_new_waiver_is_a_change_of_the_limit(waived: tuple[Path, Record], tmp_path: Path) -> None:
    path = tmp_path / "case.yaml"
    path.write_text(heat_pump_text(), "utf-8")
    changed = {one["id"]: one for one in compare_records(solve_spec(path), waived[1])["limits"]}
    assert changed["L4"]["kind"] == "changed"
    assert "waiver: V. Brandt, 2026-11-30: The new vessel is rated 25 bar." in changed["L4"]["new"]
