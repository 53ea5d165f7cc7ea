"""All that was issued to the register of issues: one entry each, and which one is in force.

``register.yaml`` and the stamped copies are derived: whoever loses them gets
them again with the next issue. While the register is there it is a witness: an
issue that it names and that is gone, or is another file now, is told.
"""
from __future__ import annotations

import hashlib
import json
from collections.abc import Iterator, Mapping, Sequence
from pathlib import Path
from typing import Any

from calcpack.errors import Fault
from calcpack.issuing.overlay import STAMP, superseded_copy
from calcpack.issuing.paper import FOR_INFORMATION, FOR_USE
from calcpack.issuing.placing import make_folder
from calcpack.issuing.shelf import ISSUED_IN, KEPT, SUPERSEDED_IN, Issued, before, issued_sheets, successor
from calcpack.writing import write_whole

REGISTER = "register.yaml"
HEAD = ("# What was issued of the sheets in the folder above. Derived from the files here by 'calcpack issue'; "
        "do not edit it.")


def register_text(issues: Sequence[Issued]) -> str:
    """The register's text: sorted, a key a line, made for git."""
    lines = [HEAD, "issues:" if issues else "issues: []"]
    for one in issues:
        first, *others = _lines(_entry(one, issues))
        lines += [f"  - {first}", *(f"    {line}" for line in others)]
    return "\n".join(lines) + "\n"


def _entry(one: Issued, issues: Sequence[Issued]) -> dict[str, Any]:
    after = successor(issues, one) if one.standing else None
    prior = before(issues, one.number, one.revision) if one.kind == FOR_USE else None
    status = one.kind if one.kind == FOR_INFORMATION else "superseded" if after else "in force"
    return {"number": one.number, "title": one.title, "revision": one.revision, "date": one.date or None,
            "kind": one.kind, "file": one.path.name, "sha256": one.sha256,
            "spec_sha256": one.record.data["spec_sha256"], "record_sha256": one.record_sha256,
            **{role: one.signatures.get(role) for role in ("prepared", "checked", "approved")},
            "supersedes": prior.revision if prior else None, "superseded_by": after.revision if after else None,
            "status": status}


def _lines(entry: Mapping[str, Any]) -> Iterator[str]:
    for key, value in entry.items():
        if isinstance(value, Mapping):
            yield f"{key}: {{name: {_text(value.get('name'))}, date: {_text(value.get('date'))}}}"
        else:
            yield f"{key}: {_text(value)}"


def _text(value: str | None) -> str:
    """A YAML scalar: a JSON string, or null."""
    return json.dumps(value, ensure_ascii=False)


def lost(folder: Path) -> tuple[Fault, ...]:
    """What the register says was issued and is gone, or is another file now; nothing of a register that is damaged."""
    import yaml
    shelf = folder / ISSUED_IN
    try:
        # Texts alone: no scalar is given a meaning.
        read = yaml.load((shelf / REGISTER).read_text("utf-8"), Loader=yaml.BaseLoader)
        entries = [(shelf / Path(one["file"]).name, one["sha256"]) for one in read["issues"] if one["kind"] != KEPT]
    except (OSError, ValueError, TypeError, LookupError, yaml.YAMLError):
        return ()
    return tuple(fault for path, sha256 in entries if (fault := _lost(path, sha256)) is not None)


def _lost(path: Path, sha256: str) -> Fault | None:
    hint = f"put the file back as it was issued; if it never left the office, take its entry out of {REGISTER}"
    if not path.is_file():
        return Fault(f"{path} was issued and is gone", hint=hint)
    now = hashlib.sha256(path.read_bytes()).hexdigest()
    if now == sha256:
        return None
    return Fault(f"{path} is not the file that was issued", found=f"SHA-256 {now[:12]}…",
                 expected=f"SHA-256 {sha256[:12]}…, as {REGISTER} says", hint=hint)


def renew(folder: Path) -> tuple[Path, ...]:
    """Make the register and the stamped copies of the sheets in ``folder`` as they must be; the files written.

    Where nothing but records kept by hand lies there, nothing is derived from them.
    """
    issues, shelf = issued_sheets(folder), folder / ISSUED_IN
    if all(one.kind == KEPT for one in issues):
        return ()
    written = [path for one in issues if (path := _stamped(one, issues, shelf)) is not None]
    register, text = shelf / REGISTER, register_text(issues)
    if not register.is_file() or register.read_bytes() != text.encode():
        write_whole(register, text)
        written.append(register)
    return tuple(written)


def _stamped(one: Issued, issues: Sequence[Issued], shelf: Path) -> Path | None:
    """Make the stamped copy of a superseded issue, where it is missing."""
    after = successor(issues, one) if one.standing else None
    if after is None or one.kind == KEPT:
        return None
    path = shelf / SUPERSEDED_IN / one.path.name
    if path.is_file():
        return None
    words = f"{STAMP} {after.revision}, issued {after.date}"
    make_folder(path.parent)
    write_whole(path, superseded_copy(one.path.read_bytes(), one.number, words, f"../{after.path.name}"))
    return path
