"""The manifest of a site: which files a build wrote, with their hashes, and what each sheet's files hang on."""
from __future__ import annotations

import hashlib
import json
from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field
from pathlib import Path, PurePosixPath
from typing import Any

from calcpack.points import Point

NAME = ".calcpack-site.json"
FORMAT = 2


@dataclass(frozen=True, slots=True)
class SheetEntry:
    """What a build did for one sheet.

    ``own``, ``solving``, ``comparing`` and ``page`` are keys: with equal keys
    the record, the comparison and the ``files`` come out the same. ``unmet``
    are the points of the checklist that the sheet does not meet.
    """

    number: str
    own: str = ""
    solving: str = ""
    comparing: str = ""
    page: str = ""
    files: tuple[str, ...] = ()
    unmet: tuple[Point, ...] = ()


@dataclass(frozen=True, slots=True)
class Manifest:
    """The files of a site with the hashes of their contents, and its sheets by number."""

    hashes: Mapping[str, str] = field(default_factory=dict)
    sheets: Mapping[str, SheetEntry] = field(default_factory=dict)

    def whole(self, folder: Path, names: Iterable[str]) -> bool:
        """Whether the files are there as the build left them."""
        return all(self.hashes.get(name) not in (None, "") and self.hashes[name] == hash_of(folder / name)
                   for name in names)

    def text(self) -> str:
        """The manifest as canonical text."""
        sheets = {number: {"own": one.own, "solving": one.solving, "comparing": one.comparing, "page": one.page,
                           "files": list(one.files),
                           "unmet": [[point.number, point.group, point.text, point.verdict, point.where]
                                     for point in one.unmet]}
                  for number, one in self.sheets.items()}
        data = {"calcpack site": FORMAT, "files": sorted(self.hashes), "hashes": dict(self.hashes), "sheets": sheets}
        return json.dumps(data, indent=1, sort_keys=True, ensure_ascii=False) + "\n"


def hash_of(path: Path) -> str | None:
    """The SHA-256 of a file; None where there is none that can be read."""
    try:
        with path.open("rb") as file:
            return hashlib.file_digest(file, "sha256").hexdigest()
    except OSError:
        return None


def read_manifest(folder: Path) -> Manifest:
    """The manifest that lies in a folder; an empty one where there is none.

    Names that lead out of the folder are left out; entries that are not of
    this format are as good as none, so that everything is made again.
    """
    try:
        data = json.loads((folder / NAME).read_text("utf-8"))
    except (OSError, ValueError, RecursionError):
        return Manifest()
    if not isinstance(data, dict):
        return Manifest()
    files, hashes = data.get("files"), data.get("hashes")
    names = [name for name in files if isinstance(name, str) and _inside(name)] if isinstance(files, list) else []
    known = hashes if isinstance(hashes, dict) else {}
    return Manifest({name: str(known.get(name, "")) for name in names},
                    _sheets(data.get("sheets")) if data.get("calcpack site") == FORMAT else {})


def _sheets(written: Any) -> dict[str, SheetEntry]:
    try:
        return {number: SheetEntry(number, *(str(one[name]) for name in ("own", "solving", "comparing", "page")),
                                   tuple(name for name in one["files"] if _inside(name)),
                                   tuple(Point(*point) for point in one["unmet"]))
                for number, one in written.items()}
    except (AttributeError, KeyError, TypeError):
        return {}


def _inside(name: str) -> bool:
    path = PurePosixPath(name)
    return not path.is_absolute() and ".." not in path.parts and "\\" not in name and bool(path.parts)
