"""The folder of a site to build in: nobody else builds there meanwhile, and files are moved in whole or not at all.

A build may be killed at any moment. What it had not moved lies in a hidden
folder, which the next build takes away; what it had moved is whole, and the
manifest knew of it before.
"""
from __future__ import annotations

import os
import shutil
import tempfile
import time
from collections.abc import Callable, Collection, Iterator, Mapping, Sequence
from contextlib import ExitStack, contextmanager
from dataclasses import dataclass, replace
from pathlib import Path
from typing import Literal

from calcpack.errors import CommandError, Fault
from calcpack.render.manifest import NAME, Manifest, SheetEntry, hash_of, read_manifest

ASIDE = ".calcpack-building-"
PATIENCE_S = 10.0
"""How long a build waits for another one that is at work in its folder."""


@dataclass(frozen=True, slots=True)
class SiteFolder:
    """A site that is being built: its ``folder``, the hidden folder ``aside`` in it, the ``former`` manifest."""

    folder: Path
    aside: Path
    former: Manifest

    def forgetful(self) -> SiteFolder:
        """The same, for a build that takes nothing over."""
        return replace(self, former=replace(self.former, sheets={}))

    def entry(self, number: str | None) -> SheetEntry:
        """What the former build did for a sheet; an empty entry where it had none."""
        return self.former.sheets.get(number or "") or SheetEntry(number or "")

    def kept_text(self, number: str, key: str, kind: Literal["solving", "comparing"], name: str) -> str | None:
        """The text of a file of the former build; None where its key was another, or it is not whole."""
        if not key or getattr(self.entry(number), kind) != key or not self.former.whole(self.folder, [name]):
            return None
        return (self.folder / name).read_text("utf-8")

    def write(self, name: str, content: str | bytes) -> None:
        """Write a file of the new site aside."""
        path = self.aside / name
        path.parent.mkdir(parents=True, exist_ok=True)
        path.write_bytes(content.encode() if isinstance(content, str) else content)

    def finish(self, kept: Collection[str], sheets: Mapping[str, SheetEntry]) -> list[str]:
        """Move what was written into place and take away what no sheet needs any more; the names of all files.

        ``kept`` are files of the former site that stay as they are.
        """
        written = [path.relative_to(self.aside).as_posix() for path in self.aside.rglob("*") if path.is_file()]
        former = set(self.former.hashes)
        self._require_ours(written)
        hashes = {name: self.former.hashes[name] for name in kept}
        hashes |= {name: str(hash_of(self.aside / name)) for name in written}
        # First of all, so that a build that is killed from here on leaves no file that the next takes for another's.
        promised = {name: self.former.hashes.get(name, "") for name in former | set(written)}
        self._put(Manifest(promised, self.former.sheets))
        self._move([name for name in written if hashes[name] != hash_of(self.folder / name)])
        self._remove(former - set(hashes))
        self._put(Manifest(hashes, sheets))
        return sorted(hashes)

    def _require_ours(self, names: Collection[str]) -> None:
        """Refuse to write over a file that no former build wrote."""
        foreign = sorted(name for name in names if name not in self.former.hashes and (self.folder / name).is_file())
        if foreign:
            raise CommandError(Fault(f"{self.folder} holds files that calcpack did not write",
                                     found=", ".join(foreign[:3]),
                                     hint="name another folder with -o, or move them away"))

    def _put(self, manifest: Manifest) -> None:
        self.write(NAME, manifest.text())
        self._move([NAME])

    def _move(self, names: Collection[str]) -> None:
        """Figures, styles and records first, then the pages that show them, the register last."""
        try:
            for name in sorted(names, key=lambda name: (name == "index.html", name.endswith(".html"), name)):
                (self.folder / name).parent.mkdir(parents=True, exist_ok=True)
                (self.aside / name).replace(self.folder / name)
        except OSError as error:
            raise CommandError(Fault(f"cannot write into {self.folder}", detail=str(error))) from None

    def _remove(self, names: Collection[str]) -> None:
        """Takes away files of a former build, and folders that are empty then."""
        for name in sorted(names):
            path = self.folder / name
            if path.is_file() and path.resolve().is_relative_to(self.folder.resolve()):
                path.unlink()
                if path.parent != self.folder and path.parent.is_dir() and not any(path.parent.iterdir()):
                    path.parent.rmdir()


@contextmanager
def site_folder(folder: Path) -> Iterator[SiteFolder]:
    """The folder, for this build alone; what a build that fails has made of it is gone afterwards.

    Raises
    ------
    CommandError
        Where it cannot be written to, or another build is at work in it.
    """
    made = [one for one in (folder, *folder.parents) if not one.exists()]
    with ExitStack() as undone:
        undone.callback(_leave_no_empty, made)
        try:
            folder.mkdir(parents=True, exist_ok=True)
            if undone.enter_context(_lock(folder)):
                _clear(folder)
            aside = Path(tempfile.mkdtemp(prefix=ASIDE, dir=folder))
        except OSError as error:
            raise CommandError(Fault(f"cannot write into {folder}", detail=str(error))) from None
        undone.callback(shutil.rmtree, aside, ignore_errors=True)
        yield SiteFolder(folder, aside, read_manifest(folder))


def _leave_no_empty(folders: Sequence[Path]) -> None:
    for one in folders:
        if one.is_dir() and not any(one.iterdir()):
            one.rmdir()


def _clear(folder: Path) -> None:
    """Take away what dead builds have left; no living one is here while the lock is held."""
    for debris in folder.glob(f"{ASIDE}*"):
        shutil.rmtree(debris, ignore_errors=True)


@contextmanager
def _lock(folder: Path) -> Iterator[bool]:
    """Hold the folder's lock, which the system takes back when the build ends, however it ends; False without locks."""
    try:
        import fcntl
    except ImportError:
        yield False
        return
    handle = os.open(folder, os.O_RDONLY)
    try:
        yield _locked(lambda: fcntl.flock(handle, fcntl.LOCK_EX | fcntl.LOCK_NB), folder)
    finally:
        os.close(handle)


def _locked(lock: Callable[[], None], folder: Path) -> bool:
    until = time.monotonic() + PATIENCE_S
    while True:
        try:
            lock()
        except BlockingIOError:
            if time.monotonic() > until:
                raise CommandError(Fault(f"another build is at work in {folder}",
                                         hint="wait until it has ended, or name another folder with -o")) from None
            time.sleep(0.05)
        except OSError:
            # A file system of another machine may have no locks: then nothing is taken for debris.
            return False
        else:
            return True
