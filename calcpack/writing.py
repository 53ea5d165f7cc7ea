"""Text to files, whole or not at all: written aside and moved into place."""
from __future__ import annotations

import os
import tempfile
from pathlib import Path

from calcpack.errors import CommandError, Fault


def write_whole(path: Path, content: str | bytes) -> None:
    """Write ``content`` to ``path``; a reader sees the old file or the new one, never a part.

    Raises
    ------
    CommandError
        Where the folder is missing or cannot be written to.
    """
    raw = content.encode() if isinstance(content, str) else content
    try:
        handle, name = tempfile.mkstemp(prefix=f".{path.name}.", suffix=".part", dir=path.parent)
    except OSError as error:
        raise CommandError(Fault(f"cannot write into {path.parent}", detail=str(error))) from None
    aside = Path(name)
    try:
        with os.fdopen(handle, "wb") as file:
            file.write(raw)
        aside.chmod(0o666 & ~_umask())
        aside.replace(path)
    except OSError as error:
        aside.unlink(missing_ok=True)
        raise CommandError(Fault(f"cannot write {path}", detail=str(error))) from None
    except BaseException:
        aside.unlink(missing_ok=True)
        raise


def write_new(path: Path, content: str) -> None:
    """Write ``content`` to a file that does not exist yet.

    Raises
    ------
    CommandError
        Where the file is there already.
    """
    if path.exists():
        raise CommandError(Fault(f"{path} is there already", hint="name another file; nothing is overwritten"))
    write_whole(path, content)


def spare_sources(path: Path) -> None:
    """CommandError where ``path`` is a spec, a review file or a PDF that is there: a report never replaces one."""
    if path.suffix.lower() in (".yaml", ".yml", ".pdf") and os.path.lexists(path):
        raise CommandError(Fault(f"{path} is there already, and is no report",
                                 hint="name another file; a spec or a PDF is never overwritten by a report"))


def _umask() -> int:
    current = os.umask(0)
    os.umask(current)
    return current
