"""A run that is killed at any moment leaves whole files alone behind, and the next run completes its work."""
from __future__ import annotations

import os
import random
import select
import shutil
import signal
import time
from collections.abc import Callable
from pathlib import Path

import pytest

from calcpack.errors import CommandError
from calcpack.issuing import issue as room
from calcpack.issuing.issue import NotIssuedError, issue
from calcpack.issuing.paper import FOR_USE
from calcpack.issuing.placing import alone, put_new

Files = dict[str, bytes]
MOMENTS = 100


def files_of(folder: Path) -> Files:
    """Every file by its name, hidden ones too."""
    return {str(path.relative_to(folder)): path.read_bytes() for path in folder.rglob("*") if path.is_file()}


def whole(files: Files) -> Files:
    """The files that a reader sees; what lies aside is hidden."""
    return {name: content for name, content in files.items() if not Path(name).name.startswith(".")}


@pytest.fixture
def at_b(issued_twice: Path, tmp_path: Path) -> tuple[Path, Files, Files]:
    """The sheets before revision B is issued; the files of issued/ then, and as they must be afterwards."""
    after = files_of(issued_twice / "issued")
    before = {"RT-12-A.pdf": after["RT-12-A.pdf"], "register.yaml": _register_of_a(issued_twice, tmp_path)}
    _put_back(issued_twice / "issued", before)
    return issued_twice, before, after


def _register_of_a(folder: Path, tmp_path: Path) -> bytes:
    from calcpack.issuing.register import renew
    alone_a = tmp_path / "a" / "issued"
    alone_a.mkdir(parents=True)
    shutil.copyfile(folder / "issued" / "RT-12-A.pdf", alone_a / "RT-12-A.pdf")
    renew(alone_a.parent)
    return (alone_a / "register.yaml").read_bytes()


def _put_back(shelf: Path, files: Files) -> None:
    shutil.rmtree(shelf)
    for name, content in files.items():
        (shelf / name).parent.mkdir(parents=True, exist_ok=True)
        (shelf / name).write_bytes(content)


def run(folder: Path) -> None:
    issue(folder / "rinse.yaml", kind=FOR_USE, date="2026-11-13")


def started(work: Callable[[], None]) -> int:
    """Do the work in a process of its own, which has everything imported; its id."""
    child = os.fork()
    if child == 0:
        try:
            work()
        finally:
            os._exit(0)
    return child


def killed_after(seconds: float, child: int) -> None:
    time.sleep(seconds)
    os.kill(child, signal.SIGKILL)
    os.waitpid(child, 0)


def complete(folder: Path) -> None:
    try:
        run(folder)
    except (NotIssuedError, CommandError) as error:
        # The killed run had put the PDF in place: the gates say so, or where they are remembered its name does.
        there = f"{folder}/issued/RT-12-B.pdf is there already"
        assert error.faults[0].what in ("revision B was issued already", there)


def look(sheets: tuple[Path, Files, Files]) -> frozenset[str]:
    """Look at what a killed run left, and let the next one complete it; the names of what was there."""
    folder, before, after = sheets
    left = files_of(folder / "issued")
    for name, content in whole(left).items():
        assert content in (before.get(name), after.get(name)), f"{name} is neither as it was nor as it must be"
    assert left["RT-12-A.pdf"] == before["RT-12-A.pdf"] and "register.yaml" in left
    if left != before:
        complete(folder)
        assert files_of(folder / "issued") == after
        _put_back(folder / "issued", before)
    return frozenset(left)


class Writing:
    """What comes before the writing of files is remembered; where a run begins to write, it says so in a pipe."""

    def __init__(self, monkeypatch: pytest.MonkeyPatch) -> None:
        self.known: dict[str, object] = {}
        self.heard, self.said = os.pipe()
        for name in ("gather", "_fit", "printed"):
            monkeypatch.setattr(room, name, self.remembered(name, getattr(room, name)))

    def remembered(self, name: str, real: Callable[..., object]) -> Callable[..., object]:
        def once(*arguments: object) -> object:
            if name not in self.known:
                self.known[name] = real(*arguments)
            if name == "printed":
                os.write(self.said, b"w")
            return self.known[name]
        return once

    def awaited(self) -> None:
        os.read(self.heard, 1)


@pytest.mark.slow
def test_a_run_killed_at_any_of_a_hundred_moments_loses_and_halves_nothing(
        at_b: tuple[Path, Files, Files], monkeypatch: pytest.MonkeyPatch) -> None:
    folder, before, after = at_b
    writing, chance = Writing(monkeypatch), random.Random(12)
    run(folder)
    writing.awaited()
    assert files_of(folder / "issued") == after
    _put_back(folder / "issued", before)
    child = started(lambda: run(folder))
    writing.awaited()
    start = time.perf_counter()
    os.waitpid(child, 0)
    lasts = time.perf_counter() - start
    _put_back(folder / "issued", before)
    seen = []
    for moment in range(MOMENTS):
        # Every other one early, while the issue itself is put in place; the stamped copy takes most of the time.
        latest = 1.2 * lasts if moment % 2 else 0.1 * lasts
        child = started(lambda: run(folder))
        writing.awaited()
        killed_after(chance.uniform(0.0, latest), child)
        seen.append(look(at_b))
        while select.select([writing.heard], [], [], 0)[0]:
            writing.awaited()
    # The moments fell between the files and after them, or the test has seen nothing.
    assert frozenset(after) in seen and len(set(seen)) > 1


@pytest.mark.slow
def test_a_whole_run_is_killed_as_safely(at_b: tuple[Path, Files, Files]) -> None:
    folder, before, _ = at_b
    start = time.perf_counter()
    run(folder)
    lasts, chance = time.perf_counter() - start, random.Random(5)
    _put_back(folder / "issued", before)
    for _ in range(4):
        killed_after(chance.uniform(0.0, lasts), started(lambda: run(folder)))
        look(at_b)


def test_a_name_that_is_taken_is_never_written_over(tmp_path: Path) -> None:
    path = tmp_path / "issued" / "A.pdf"
    put_new(path, b"first")
    with pytest.raises(CommandError, match="is there already"):
        put_new(path, b"second")
    assert files_of(tmp_path) == {"issued/A.pdf": b"first"}


def test_a_disk_without_links_between_names_keeps_the_promise(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def refused(*names: object) -> None:
        raise PermissionError("no links here")
    monkeypatch.setattr(os, "link", refused)
    put_new(tmp_path / "A.pdf", b"first")
    with pytest.raises(CommandError, match="is there already"):
        put_new(tmp_path / "A.pdf", b"second")
    assert files_of(tmp_path) == {"A.pdf": b"first"}


def test_a_second_run_waits_until_the_first_has_ended(tmp_path: Path) -> None:
    def hold() -> None:
        with alone(tmp_path):
            (tmp_path / "held").touch()
            time.sleep(0.3)
            (tmp_path / "done").touch()
    child = started(hold)
    while not (tmp_path / "held").exists():
        time.sleep(0.005)
    told: list[str] = []
    with alone(tmp_path, told.append):
        assert (tmp_path / "done").exists()
    assert told == [f"waiting for another run in {tmp_path}"]
    os.waitpid(child, 0)


def test_two_runs_at_one_time_issue_once(ready: Path) -> None:
    children = []
    for _ in range(2):
        child = os.fork()
        if child == 0:
            status = 9
            try:
                issue(ready / "rinse.yaml", kind=FOR_USE, date="2026-10-06")
                status = 0
            except NotIssuedError as error:
                status = 1 if "issued already" in error.faults[0].what else 8
            finally:
                os._exit(status)
        children.append(child)
    assert sorted(os.waitstatus_to_exitcode(os.waitpid(child, 0)[1]) for child in children) == [0, 1]
    assert sorted(files_of(ready / "issued")) == ["RT-12-A.pdf", "register.yaml"]
