"""Files are written whole or not at all, and nothing is overwritten unasked."""
from __future__ import annotations

import os
import stat

import pytest

from calcpack.errors import CommandError
from calcpack.writing import spare_sources, write_new, write_whole


def test_text_and_bytes_are_written_as_they_are(tmp_path):
    write_whole(tmp_path / "a.txt", "Δ ≤ 3\n")
    write_whole(tmp_path / "b.bin", b"\x00\xff")
    assert (tmp_path / "a.txt").read_bytes() == "Δ ≤ 3\n".encode()
    assert (tmp_path / "b.bin").read_bytes() == b"\x00\xff"


def test_nothing_is_left_beside_the_file(tmp_path):
    write_whole(tmp_path / "a.txt", "one")
    write_whole(tmp_path / "a.txt", "two")
    assert [path.name for path in tmp_path.iterdir()] == ["a.txt"]
    assert (tmp_path / "a.txt").read_text() == "two"


@pytest.mark.parametrize("mask, mode", [(0o022, 0o644), (0o077, 0o600)])
def test_the_file_has_the_rights_that_the_umask_leaves(tmp_path, mask, mode):
    before = os.umask(mask)
    try:
        write_whole(tmp_path / "a.txt", "x")
    finally:
        os.umask(before)
    assert stat.S_IMODE((tmp_path / "a.txt").stat().st_mode) == mode


def test_a_move_that_fails_leaves_the_old_file_and_no_part(tmp_path, monkeypatch):
    path = tmp_path / "a.txt"
    path.write_text("old")

    def refuse(self, target):
        raise OSError("no space left")
    monkeypatch.setattr("pathlib.Path.replace", refuse)
    with pytest.raises(CommandError) as caught:
        write_whole(path, "new")
    assert caught.value.faults[0].what == f"cannot write {path}"
    assert [one.name for one in tmp_path.iterdir()] == ["a.txt"] and path.read_text() == "old"


def test_an_interruption_leaves_no_part(tmp_path, monkeypatch):
    def interrupt(self, target):
        raise KeyboardInterrupt
    monkeypatch.setattr("pathlib.Path.replace", interrupt)
    with pytest.raises(KeyboardInterrupt):
        write_whole(tmp_path / "a.txt", "new")
    assert list(tmp_path.iterdir()) == []


def test_a_missing_folder_is_told(tmp_path):
    with pytest.raises(CommandError) as caught:
        write_whole(tmp_path / "none" / "a.txt", "x")
    assert caught.value.faults[0].what == f"cannot write into {tmp_path / 'none'}"
    assert caught.value.exit_status == 2


def test_a_folder_in_the_files_place_is_told(tmp_path):
    (tmp_path / "a").mkdir()
    with pytest.raises(CommandError) as caught:
        write_whole(tmp_path / "a", "x")
    assert caught.value.faults[0].what == f"cannot write {tmp_path / 'a'}"
    assert [one.name for one in tmp_path.iterdir()] == ["a"]


def test_a_new_file_does_not_take_the_place_of_another(tmp_path):
    path = tmp_path / "a.txt"
    write_new(path, "one")
    with pytest.raises(CommandError) as caught:
        write_new(path, "two")
    assert (caught.value.faults[0].what, path.read_text()) == (f"{path} is there already", "one")


@pytest.mark.parametrize("name", ["pump.yaml", "pump.YML", "MT-103-B.pdf"])
def test_a_report_does_not_take_the_place_of_a_spec_or_a_pdf(tmp_path, name):
    (tmp_path / name).write_text("kept")
    with pytest.raises(CommandError, match="is there already, and is no report"):
        spare_sources(tmp_path / name)
    spare_sources(tmp_path / f"new-{name}")
    (tmp_path / "report.md").write_text("old")
    spare_sources(tmp_path / "report.md")
