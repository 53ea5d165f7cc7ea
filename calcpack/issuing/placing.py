"""Finished bytes to a file that was not there before, in one step, one run in a folder at a time.

A run that is killed leaves at most a hidden part aside, which the next one
takes away: while a run holds its folder, no other is at work there.
"""
from __future__ import annotations

import os
from collections.abc import Callable, Iterable, Iterator
from contextlib import contextmanager
from pathlib import Path

from calcpack.errors import CommandError, Fault

PARTS = ".*.part"
"""What a run that was killed may have left; whole files never have such a name."""


@contextmanager
def alone(folder: Path, tell: Callable[[str], None] = lambda words: None) -> Iterator[None]:
    """Hold the folder for this run; another run says so and waits until this one has ended, however it ends.

    The folder itself is locked, so that nothing is left behind. Where the
    system has no such lock, two runs at one time are the user's to avoid.
    """
    try:
        import fcntl
    except ImportError:
        yield
        return
    try:
        handle = os.open(folder, os.O_RDONLY)
    except OSError as error:
        raise CommandError(Fault(f"cannot read the folder {folder}", detail=str(error))) from None
    try:
        try:
            fcntl.flock(handle, fcntl.LOCK_EX | fcntl.LOCK_NB)
        except BlockingIOError:
            tell(f"waiting for another run in {folder}")
            fcntl.flock(handle, fcntl.LOCK_EX)
        yield
    finally:
        os.close(handle)


def clear(folders: Iterable[Path]) -> None:
    """Take away what killed runs left in these folders; only for one that holds them."""
    for folder in folders:
        for part in folder.glob(PARTS):
            part.unlink(missing_ok=True)


def put_new(path: Path, content: bytes) -> None:
    """The bytes at ``path``, where nothing was: a reader sees the whole file or none.

    Raises
    ------
    CommandError
        Where a file is there already, or the folder cannot be written to.
    """
    aside = path.with_name(f".{path.name}.{os.getpid()}.part")
    make_folder(path.parent)
    require_free(path)
    try:
        _write(aside, content)
        _take_name(aside, path)
    except FileExistsError:
        raise _taken(path) from None
    except OSError as error:
        raise CommandError(Fault(f"cannot write {path}", detail=str(error))) from None
    finally:
        aside.unlink(missing_ok=True)


def require_free(path: Path) -> None:
    """CommandError where something lies at ``path`` already."""
    if os.path.lexists(path):
        raise _taken(path)


def _taken(path: Path) -> CommandError:
    return CommandError(Fault(f"{path} is there already", hint="an issue is never overwritten"))


def make_folder(folder: Path) -> None:
    """The folder, and those above it; CommandError where it cannot be made."""
    try:
        folder.mkdir(parents=True, exist_ok=True)
    except OSError as error:
        raise CommandError(Fault(f"cannot write into {folder}", detail=str(error))) from None


def _write(path: Path, content: bytes) -> None:
    """All the bytes, on the disk itself: after a loss of power too the name must stand for the whole file."""
    with path.open("wb") as file:
        file.write(content)
        file.flush()
        os.fsync(file.fileno())


def _take_name(aside: Path, path: Path) -> None:
    """Give the finished file its name; FileExistsError where the name is taken."""
    try:
        os.link(aside, path)
    except FileExistsError:
        raise
    except OSError:
        # A disk without links between names: the folder is held, so nobody takes the name in between.
        if path.exists():
            raise FileExistsError(path) from None
        aside.rename(path)
