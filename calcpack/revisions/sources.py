"""What a comparison is asked to read to a record: a spec, a record, an issued PDF, or one of them in git."""
from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path, PurePosixPath
from typing import TYPE_CHECKING

from calcpack.errors import CommandError, Fault, nearest
from calcpack.record import Record, read_record

if TYPE_CHECKING:
    from calcpack.package.links import Texts

SPECS = (".yaml", ".yml")
RECORDS = (".json",)
ISSUED = (".pdf",)
ISSUED_IN = "issued"
"""The folder beside a spec that keeps what was issued."""


@dataclass(frozen=True, slots=True)
class Found:
    """The bytes that were found, the path they belong to, and the name that messages give them.

    ``then`` is the revision of git and the path there, where they are from git.
    """

    content: bytes
    path: Path
    name: str
    then: tuple[str, str] | None = None


def load(text: str, base: Path | None = None) -> Record:
    """The record of what ``text`` names: a path, or ``REV:path`` in git.

    Parameters
    ----------
    text : str
        A spec (solved now), a record, or an issued PDF that carries its
        record. A path that exists is a path, whatever stands in its name.
    base : Path, optional
        The folder that relative paths start from; the current one by default.

    Raises
    ------
    CommandError
        For what is not there or holds no record.
    CalcpackError
        For a spec that is wrong or has no answer.
    MissingPartError
        Where git is needed and not installed.
    """
    folder = base if base is not None else Path.cwd()
    found = _find(text, folder)
    suffix = found.path.suffix.lower()
    if suffix in SPECS:
        return _solved(found)
    if suffix in RECORDS:
        return _record(found.content, found.name)
    if suffix in ISSUED:
        return _carried(found)
    raise CommandError(Fault(f"{found.name} is no spec, record or issued PDF by its name",
                             expected="a file in " + ", ".join((*SPECS, *RECORDS, *ISSUED))))


def content_of(text: str, base: Path | None = None) -> bytes:
    """The bytes of what ``text`` names, a path or ``REV:path`` in git; raises as :func:`load` for what is not there."""
    return _find(text, base if base is not None else Path.cwd()).content


def folder_of(text: str, base: Path | None = None) -> Path:
    """The folder that the spec of what ``text`` names lies in; a kept record's is the one above ``issued/``."""
    folder = base if base is not None else Path.cwd()
    inside = text if (folder / text).is_file() else text.partition(":")[2]
    found = (folder / PurePosixPath(inside)).parent if inside else folder
    return found.parent if found.name == ISSUED_IN else found


def _find(text: str, folder: Path) -> Found:
    if "\0" in text:
        raise CommandError(Fault("a path has no character that cannot be seen", found=repr(text)))
    path = folder / text
    if path.is_file():
        return Found(_content(path), path, text)
    revision, colon, inside = text.partition(":")
    if not colon or path.exists():
        raise CommandError(Fault(f"{text!r} is not a file" if path.exists() else f"there is no file {text!r}",
                                 expected="a spec, a record, an issued PDF, or REV:path in git",
                                 hint=_alike(path)))
    if not inside:
        raise CommandError(Fault(f"{text!r} names a revision and no file",
                                 expected="REV:path, such as v1.0:specs/a.yaml"))
    from calcpack.revisions.git import repository
    return Found(repository(folder).content(revision, inside), folder / PurePosixPath(inside), text,
                 (revision, inside))


def _content(path: Path) -> bytes:
    try:
        return path.read_bytes()
    except OSError as error:
        raise CommandError(Fault(f"cannot read {path}", detail=str(error))) from None


def _alike(path: Path) -> str | None:
    if not path.parent.is_dir():
        return f"there is no folder {path.parent}"
    return nearest(path.name, (one.name for one in path.parent.iterdir() if one.suffix in (*SPECS, *RECORDS, *ISSUED)))


def _solved(found: Found) -> Record:
    """A spec's record, from the bytes that were found, so that its hash is of the same bytes."""
    from calcpack.pipeline import solve_spec
    from calcpack.spec.source import source_of_bytes
    source_of_bytes(found.content, found.name)       # refuses what is no text, with its place
    return solve_spec(found.path, text=found.content.decode("utf-8"), name=found.name, beside=_beside_then(found))


def _beside_then(found: Found) -> Texts | None:
    """The specs that stood beside one at its revision, where it takes values from them; None for those of today."""
    from calcpack.package.glance import is_spec
    from calcpack.package.links import Text, takes_from_others
    if found.then is None or not takes_from_others(found.path, {found.path: Text(found.content, found.name)}):
        return None
    from calcpack.revisions.git import repository
    revision, inside = found.then
    folder = found.path.parent
    there = repository(folder if folder.is_dir() else Path.cwd()).beside(revision, inside)
    return {folder / name: Text(content, f"{revision}:{PurePosixPath(inside).parent / name}")
            for name, content in there.items() if is_spec(content)}


def _record(content: bytes, name: str) -> Record:
    try:
        text = content.decode("utf-8")
    except UnicodeDecodeError as error:
        raise CommandError(Fault(f"{name} is not a record", expected="JSON in UTF-8", detail=str(error))) from None
    return read_record(Path(name), text)


def _carried(found: Found) -> Record:
    """The record that an issued PDF carries as its attached file ``*.json``."""
    import pikepdf

    from calcpack.issuing.attached import carried_files
    try:
        attached = {name: content for name, content in carried_files(found.content).items()
                    if name.lower().endswith(RECORDS)}
    except (pikepdf.PdfError, pikepdf.PasswordError) as error:
        raise CommandError(Fault(f"{found.name} cannot be read as a PDF", detail=str(error))) from None
    if len(attached) != 1:
        carries = "several files that may be its record" if attached else "no record"
        raise CommandError(Fault(f"{found.name} carries {carries}", found=", ".join(sorted(attached)) or None,
                                 expected="a PDF with one record attached",
                                 hint="name the record itself, if you have it"))
    [(name, content)] = attached.items()
    return _record(content, f"{found.name}: {name}")
