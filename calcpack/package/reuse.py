"""What a step of a build hangs on, to a key: equal keys mean that it would come out the same, and need not be done."""
from __future__ import annotations

import hashlib
import platform
import sys
from collections.abc import Iterable, Mapping
from functools import cache
from pathlib import Path
from typing import Any

import calcpack
from calcpack.package.glance import Glance
from calcpack.record.carried import Carried

Data = Mapping[str, Any]


@cache
def program() -> str:
    """The program and its surroundings: own source, templates, installed libraries, Python, machine."""
    from calcpack.render.assets import templates_folder
    found = hashlib.sha256()
    for top in (Path(calcpack.__file__).parent, templates_folder()):
        for path in sorted(top.rglob("*")):
            if path.is_file() and "__pycache__" not in path.parts:
                found.update(f"{path.relative_to(top).as_posix()}\0".encode() + hashed(path.read_bytes()).encode())
    return key(found.hexdigest(), sorted(_installed()), sys.version, platform.machine(), platform.system())


def _installed() -> Iterable[str]:
    """Name and version of each library that can be imported, as installers write them down."""
    for folder in dict.fromkeys(sys.path):
        if folder and Path(folder).is_dir():
            yield from (one.name for one in Path(folder).iterdir() if one.name.endswith((".dist-info", ".egg-info")))


def hashed(content: bytes) -> str:
    """The SHA-256 of bytes, in hexadecimal."""
    return hashlib.sha256(content).hexdigest()


def key(*parts: Any) -> str:
    """A hash of plain values."""
    return hashed(repr(parts).encode("utf-8", "surrogatepass"))


def own_key(one: Glance) -> str:
    """What a sheet is solved from but for what it takes from others: its spec, the rows that it names, the program."""
    return key("own", program(), one.path.name, one.sha256, _file(one.rows_file))


def solving_key(one: Glance, carried: Mapping[str, Carried]) -> str:
    """What a sheet is solved from: a source whose value is the same to the bit changes nothing."""
    return key("solving", own_key(one), sorted((symbol, *value.solving) for symbol, value in carried.items()))


def comparing_key(record: str, one: Glance, baseline: str | None) -> str:
    """What a comparison hangs on: both records, and the files of rows that their specs may name.

    ``record`` and ``baseline`` are hashes of the two; a baseline of None means none.
    """
    rows = [_file(path) for path in sorted(one.path.parent.glob("*.csv"))] if baseline is not None else ()
    return key("comparing", program(), record, baseline, rows)


def page_key(record: str, comparing: str, pdf: str | None, beside: Any) -> str:
    """What the files of a sheet hang on; ``pdf`` has the versions of the print engine, None without a PDF.

    ``beside`` is what the page prints that the record does not hold.
    """
    return key("page", program(), record, comparing, pdf, beside)


def _file(path: Path | None) -> str | None:
    """The hash of a file; of one that is missing or cannot be read, a word that no file has."""
    if path is None:
        return None
    try:
        return hashed(path.read_bytes())
    except OSError:
        return "no such file"
