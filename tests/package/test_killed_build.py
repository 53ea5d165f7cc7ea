"""A build that is killed at any moment leaves every file whole, and the next one puts all right."""
from __future__ import annotations

import hashlib
import os
import random
import signal
import subprocess
import sys
import time
from pathlib import Path

import pytest
from package_sheets import chains, contents, differing, edit

from calcpack.building import build_package
from calcpack.errors import CommandError
from calcpack.render import site_folder as module
from calcpack.render.manifest import NAME
from calcpack.render.site_folder import ASIDE, site_folder

KILLS = 100
WITH_PDF = 12
"""Every so many-th of the killed builds makes PDFs too."""

BUILDER = """\
import os, sys
from pathlib import Path
from calcpack.building import build_package

def run(specs, folder, pdf, jobs):
    build_package([Path(specs)], Path(folder), pdf=pdf, jobs=jobs, tell=lambda text: None)

run(sys.argv[1], sys.argv[2], True, 1)
print("ready", flush=True)
for line in sys.stdin:
    words = line.rstrip("\\n").split("\\t")
    child = os.fork()
    if child == 0:
        run(words[0], words[1], words[2] == "pdf", int(words[3]))
        os._exit(0)
    print(child, flush=True)
    # Until it is asked for, the number of a child that has ended is nobody else's.
    sys.stdin.readline()
    print(os.waitpid(child, 0)[1], flush=True)
"""


class Builder:
    """A process that has built once, so that everything is imported, and forks a child for each build."""

    def __init__(self, specs: Path, site: Path) -> None:
        self.process = subprocess.Popen([sys.executable, "-c", BUILDER, str(specs), str(site)], stdin=subprocess.PIPE,
                                        stdout=subprocess.PIPE, text=True)
        assert self.process.stdout.readline() == "ready\n"

    def say(self, text: str) -> None:
        self.process.stdin.write(f"{text}\n")
        self.process.stdin.flush()

    def build(self, specs: Path, site: Path, *, pdf: bool = False, jobs: int = 1,
              kill_after: float | None = None) -> bool:
        """Build, and kill the build after so many seconds; whether it had ended before."""
        self.say(f"{specs}\t{site}\t{'pdf' if pdf else 'none'}\t{jobs}")
        child = int(self.process.stdout.readline())
        if kill_after is not None:
            time.sleep(kill_after)
            os.kill(child, signal.SIGKILL)
        self.say("wait")
        return int(self.process.stdout.readline()) == 0


@pytest.fixture
def builder(tmp_path):
    specs = tmp_path / "warm"
    specs.mkdir()
    chains(specs, 1, 1)
    made = Builder(specs, tmp_path / "warm-site")
    yield made
    made.process.stdin.close()
    made.process.wait(timeout=60)
    made.process.stdout.close()


def hashes(folder: Path) -> dict[str, str]:
    return {name: hashlib.sha256(content).hexdigest() for name, content in contents(folder).items()
            if not name.startswith(ASIDE) and name != NAME}


def test_a_build_killed_at_any_of_100_moments_leaves_whole_files_and_the_next_puts_all_right(tmp_path, builder):
    specs, site = tmp_path / "specs", tmp_path / "site"
    specs.mkdir()
    paths, extra = chains(specs, 2, 2), specs / "more.yaml"
    versions = {False: {}, True: {}}
    durations = {}
    for pdf in (False, True):
        for state in ("100 kW", "200 kW"):
            _set(paths[0], extra, state)
            fresh = tmp_path / f"fresh-{pdf}-{state[:3]}"
            started = time.monotonic()
            assert builder.build(specs, fresh, pdf=pdf)
            durations[pdf] = time.monotonic() - started
            versions[pdf][state] = contents(fresh)
    chance, killed, state, made = random.Random(7), 0, "200 kW", None
    for at in range(KILLS):
        pdf = at % WITH_PDF == 0
        before = hashes(site)
        other = "100 kW" if state == "200 kW" else "200 kW"
        _set(paths[0], extra, other)
        killed += not builder.build(specs, site, pdf=pdf, jobs=2 if at % 10 == 5 else 1,
                                    kill_after=chance.uniform(0.0, 0.8 * durations[pdf]))
        known = {(name, hashlib.sha256(content).hexdigest()) for kind in versions.values()
                 for version in kind.values() for name, content in version.items()}
        now = hashes(site)
        assert set(now.items()) <= known, "a file is not whole"
        # A build that did not end takes nothing away but what it is not to have: PDFs and the other state's sheet.
        lost = set(before) - set(now)
        assert all(name.endswith(".pdf") or "X-1" in name for name in lost)
        _require_figures(site)
        if at % 10 == 9:
            assert builder.build(specs, site, pdf=pdf)
            assert differing(contents(site), versions[pdf][other]) == [], f"after kill {at}"
            made = other
        state = other
    # How many come too late hangs on how busy the machine was while the whole builds were timed.
    assert made is not None and killed >= KILLS // 4


def _set(path: Path, extra: Path, state: str) -> None:
    """The one state has another value at the root and one sheet more than the other."""
    text = path.read_text("utf-8")
    for value in ("100 kW", "200 kW"):
        text = text.replace(value, state)
    path.write_text(text, "utf-8")
    if state == "200 kW":
        extra.write_text(text.replace("number: C-000", "number: X-1"), "utf-8")
    else:
        extra.unlink(missing_ok=True)


def _require_figures(site: Path) -> None:
    """Every picture and style that a page in place shows is in place."""
    import re
    for page in site.glob("*.html"):
        for address in re.findall(r'(?:src|<link rel="stylesheet" href)="([^":]+)"', page.read_text("utf-8")):
            assert (site / address).is_file(), f"{page.name} lacks {address}"


def test_pages_are_moved_after_what_they_show_and_the_manifest_knows_of_them_before(tmp_path, monkeypatch):
    specs, site, seen = tmp_path / "specs", tmp_path / "site", []
    specs.mkdir()
    chains(specs, 1, 1)
    moved = Path.replace

    def replace(self: Path, target: Path) -> Path:
        if Path(target) != site / NAME:
            known = (site / NAME).read_text("utf-8")
            assert f'"{Path(target).relative_to(site).as_posix()}"' in known
            seen.append(Path(target).relative_to(site).as_posix())
        return moved(self, target)
    monkeypatch.setattr(Path, "replace", replace)
    build_package([specs], site, pdf=True, jobs=1, tell=[].append)
    pages = [at for at, name in enumerate(seen) if name.endswith(".html")]
    assert seen[-1] == "index.html" and pages == list(range(len(seen) - len(pages), len(seen)))
    assert {"C-000.pdf", "C-000.json", "assets/styles/sheet.css"} <= set(seen)


def test_a_second_build_in_one_folder_waits_and_then_says_so(tmp_path, monkeypatch):
    monkeypatch.setattr(module, "PATIENCE_S", 0.2)
    with site_folder(tmp_path / "site") as place:
        with pytest.raises(CommandError, match="another build is at work"), site_folder(tmp_path / "site"):
            pass
        assert place.aside.is_dir()
    with site_folder(tmp_path / "site"):
        pass
    assert not (tmp_path / "site").exists()


def test_debris_of_a_dead_build_is_taken_away_and_files_of_others_stay(tmp_path):
    site = tmp_path / "site"
    (site / f"{ASIDE}dead" / "assets").mkdir(parents=True)
    (site / f"{ASIDE}dead" / "assets" / "x").write_text("x")
    (site / "notes.txt").write_text("mine")
    with site_folder(site):
        pass
    assert [path.name for path in site.iterdir()] == ["notes.txt"]


def test_a_folder_without_locks_is_built_in_and_nothing_there_is_taken_for_debris(tmp_path, monkeypatch):
    import fcntl

    def refuses(handle: int, how: int) -> None:
        raise OSError(95, "not supported")
    monkeypatch.setattr(fcntl, "flock", refuses)
    site = tmp_path / "site"
    (site / f"{ASIDE}other").mkdir(parents=True)
    with site_folder(site) as place:
        assert place.aside.is_dir()
    assert [path.name for path in site.iterdir()] == [f"{ASIDE}other"]


def test_workers_end_when_the_build_is_killed(tmp_path):
    code = ("import sys, os, time\n"
            "from calcpack.workers import workers\n"
            "with workers(2) as run:\n"
            "    list(run(time.sleep, [0, 0, 0]))\n"
            "    import multiprocessing\n"
            "    print(*(one.pid for one in multiprocessing.active_children()), flush=True)\n"
            "    time.sleep(60)\n")
    with subprocess.Popen([sys.executable, "-c", code], stdout=subprocess.PIPE, text=True) as parent:
        workers = [int(word) for word in parent.stdout.readline().split()]
        parent.kill()
    until = time.monotonic() + 20
    while any(_lives(pid) for pid in workers) and time.monotonic() < until:
        time.sleep(0.05)
    assert len(workers) == 2 and not any(_lives(pid) for pid in workers)


def _lives(pid: int) -> bool:
    """Whether a process runs; one that has ended and waits to be collected does not."""
    try:
        return Path(f"/proc/{pid}/stat").read_text().rpartition(")")[2].split()[0] != "Z"
    except FileNotFoundError:
        return False


def test_an_edit_after_a_kill_is_built_from_what_is_there(tmp_path):
    specs, site = tmp_path / "specs", tmp_path / "site"
    specs.mkdir()
    paths = chains(specs, 2, 2)
    build_package([specs], site, pdf=False, jobs=1, tell=[].append)
    whole = contents(site)
    # As a kill in the midst of moving leaves it: a new page beside the old manifest that knows of it.
    edit(paths[0], "100 kW", "300 kW")
    build_package([specs], tmp_path / "next", pdf=False, jobs=1, tell=[].append)
    (site / "C-000.html").write_bytes((tmp_path / "next" / "C-000.html").read_bytes())
    edit(paths[0], "300 kW", "100 kW")
    package = build_package([specs], site, pdf=False, jobs=1, tell=[].append)
    assert package.written == ("C-000",) and package.solved == ()
    assert differing(contents(site), whole) == []
