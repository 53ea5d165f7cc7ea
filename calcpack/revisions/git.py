"""A revision and a path to the bytes that git keeps there, by git's own commands."""
from __future__ import annotations

import os
import subprocess
from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path, PurePosixPath

from calcpack.errors import CommandError, Fault, MissingPartError, nearest

SECONDS = 30
"""How long one command of git may take; a history of calculation sheets is small."""

# A hook exports where its own repository is; the folder of the spec decides here.
_FROM_HOOKS = ("GIT_DIR", "GIT_WORK_TREE", "GIT_INDEX_FILE", "GIT_PREFIX", "GIT_OBJECT_DIRECTORY")
_MEANING = {"LC_ALL": "C", "GIT_OPTIONAL_LOCKS": "0", "GIT_TERMINAL_PROMPT": "0", "GIT_LITERAL_PATHSPECS": "1"}


@dataclass(frozen=True, slots=True)
class Repository:
    """A work tree of git: its ``top`` folder, and the ``folder`` in it that paths are relative to."""

    top: Path
    folder: Path

    def content(self, revision: str, path: str) -> bytes:
        """The bytes of a file at a revision.

        ``path`` is relative to the folder, else to the top of the work tree. A
        file that had another name at that revision is found by git's rename
        detection.

        Raises
        ------
        CommandError
            For an unknown revision, or where no such file stood at it.
        """
        commit = self.commit(revision)
        for candidate in self._candidates(path):
            for name in (candidate, self.earlier_name(commit, candidate)):
                content = name and self.blob(commit, name)
                if content is not None and name:
                    return content
        raise self._no_such_path(revision, commit, path)

    def commit(self, revision: str) -> str:
        """The full hash of the commit that ``revision`` names."""
        found = None
        if not _is_odd(revision):
            found = _run(self.top, "rev-parse", "--verify", "--quiet", f"{revision}^{{commit}}")
        if found is not None and found.returncode == 0:
            return found.stdout.decode("ascii").strip()
        shallow = _run(self.top, "rev-parse", "--is-shallow-repository").stdout.strip() == b"true"
        raise CommandError(Fault(
            f"git knows no revision {revision!r}", expected="a tag, a branch or a commit, such as v1.0 or HEAD~1",
            hint="this clone holds only the newest commits; 'git fetch --unshallow --tags' brings the rest"
            if shallow else nearest(revision, self._names()) or "'git tag' and 'git log' list what there is"))

    def earlier_name(self, commit: str, path: str) -> str | None:
        """The name that the file now at ``path`` had at ``commit``, as far as git can follow it; None without one."""
        name = path
        log = _run(self.top, "log", "--follow", "-M", "--diff-filter=R", "--name-status", "--format=", "-z",
                   f"{commit}..HEAD", "--", path)
        for old, new in _renames(log.stdout if log.returncode == 0 else b""):
            name = old if new == name else name
        if name == path:
            # Renamed in the index only, or on a branch that does not come from the commit.
            name = next((old for old, new in self.renamed_since(commit) if new == path), name)
        return name if name != path else None

    def files(self, commit: str, folder: str) -> list[str]:
        """The files in and below a folder at a commit, named from the top, as ``folder`` is."""
        listed = _run(self.top, "ls-tree", "-r", "-z", "--name-only", "--full-tree", commit,
                      *([] if folder == "." else ["--", f"{folder}/"]))
        return [name for name in listed.stdout.decode("utf-8", "surrogateescape").split("\0") if name]

    def beside(self, revision: str, path: str) -> dict[str, bytes]:
        """The YAML files of the folder of ``path`` as they stood at a revision, by their names."""
        commit = self.commit(revision)
        for candidate in self._candidates(path):
            folder = PurePosixPath(candidate).parent
            names = [name for name in self.files(commit, str(folder)) if PurePosixPath(name).parent == folder
                     and name.endswith((".yaml", ".yml"))]
            found = {PurePosixPath(name).name: content for name in names
                     if (content := self.blob(commit, name)) is not None}
            if found:
                return found
        return {}

    def renamed_since(self, commit: str) -> list[tuple[str, str]]:
        """``(old, new)`` names of what git takes for renamed between a commit and the work tree."""
        diff = _run(self.top, "diff", "-M", "--no-ext-diff", "--no-textconv", "--diff-filter=R", "--name-status", "-z",
                    commit)
        return list(_renames(diff.stdout))

    def _candidates(self, path: str) -> list[str]:
        """The path from the folder and from the top, as git names files: relative to the top, with '/'."""
        # An absolute path stays itself when it is joined to a folder.
        tried = (self.folder / path, self.top / path)
        names = (os.path.relpath(os.path.normpath(one), self.top) for one in tried)
        return [name for one in dict.fromkeys(names) if not (name := Path(one).as_posix()).startswith("../")]

    def blob(self, commit: str, name: str) -> bytes | None:
        """A file's bytes as git keeps them, without any filter of the machine's; None where no such file stood there.
        """
        found = _run(self.top, "cat-file", "blob", f"{commit}:{name}")
        return found.stdout if found.returncode == 0 else None

    def _names(self) -> list[str]:
        listed = _run(self.top, "for-each-ref", "--format=%(refname:short)").stdout
        return listed.decode("utf-8", "replace").split()

    def _no_such_path(self, revision: str, commit: str, path: str) -> CommandError:
        listed = _run(self.top, "ls-tree", "-r", "-z", "--name-only", "--full-tree", commit).stdout
        names = {PurePosixPath(name).name: name for name in listed.decode("utf-8", "replace").split("\0") if name}
        alike = nearest(PurePosixPath(path).name, names)
        there = next((full for name, full in names.items() if alike and repr(name) in alike), None)
        return CommandError(Fault(
            f"there is no file {path!r} at revision {revision}", hint=f"did you mean {revision}:{there}?" if there
            else f"'git ls-tree -r --name-only {revision}' lists what stood there"))


def repository(folder: Path) -> Repository:
    """The work tree that ``folder`` lies in.

    Raises
    ------
    CommandError
        Where the folder is in no work tree of git.
    MissingPartError
        Where git is not installed.
    """
    found = _run(folder, "rev-parse", "--show-toplevel")
    if found.returncode == 0:
        return Repository(Path(os.fsdecode(found.stdout.rstrip(b"\n"))), folder.resolve())
    detail = found.stderr.decode("utf-8", "replace").strip()
    if "dubious ownership" in detail:
        raise CommandError(Fault(f"git does not trust {folder.resolve()}: it belongs to another user",
                                 hint="if you trust it, name it in git's setting safe.directory", detail=detail))
    raise CommandError(Fault(f"{folder.resolve()} is not in a work tree of git",
                             hint="a revision is read from one; without git, name the record or the PDF that was kept",
                             detail=detail))


def _run(folder: Path, *arguments: str) -> subprocess.CompletedProcess[bytes]:
    """One command of git in ``folder``; its status is for the caller to judge."""
    environment = {key: value for key, value in os.environ.items() if key not in _FROM_HOOKS} | _MEANING
    # A folder's own settings may name a program to watch its files: a comparison runs none.
    command = ["git", "-C", str(folder), "-c", "core.fsmonitor=false", *arguments]
    try:
        return subprocess.run(command, capture_output=True, check=False, timeout=SECONDS, env=environment,
                              stdin=subprocess.DEVNULL)
    except FileNotFoundError as error:
        raise MissingPartError(Fault("git is not installed, and a revision is read through it",
                                     hint="install git, or name a spec, a record or an issued PDF",
                                     detail=str(error))) from None
    except subprocess.TimeoutExpired as error:
        raise CommandError(Fault(f"git gave no answer within {SECONDS} s", detail=str(error))) from None


def _is_odd(revision: str) -> bool:
    """Whether a text cannot name a revision, and could be read as an option."""
    return not revision or revision.startswith("-") or not revision.isprintable() or " " in revision


def _renames(listed: bytes) -> Iterator[tuple[str, str]]:
    """``(old, new)`` from ``R100 NUL old NUL new NUL …``; a log parts its commits by more NULs and line ends."""
    words = [word.lstrip("\n") for word in listed.decode("utf-8", "surrogateescape").split("\0")]
    words = [word for word in words if word]
    for status, old, new in zip(words[0::3], words[1::3], words[2::3], strict=False):
        if status.startswith("R"):
            yield old, new
