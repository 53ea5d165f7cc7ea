"""The carried spec against one in a folder or in git: byte for byte the same, or the lines in which they differ."""
from __future__ import annotations

from difflib import SequenceMatcher
from pathlib import Path

from calcpack.issuing.carried import CarriedSheet
from calcpack.issuing.verify_report import Difference, Stage
from calcpack.revisions.sources import content_of

LISTED = 5


def against_stage(carried: CarriedSheet, named: str, base: Path | None = None) -> Stage:
    """Whether the carried spec is the one that ``named`` names: a path, or ``REV:path`` in git.

    Raises
    ------
    CommandError
        Where there is no such file or revision.
    MissingPartError
        Where git is needed and not installed.
    """
    inside, outside = carried.content(carried.spec_name), content_of(named, base)
    if inside == outside:
        return Stage("spec", f"the one inside is {named}, byte for byte")
    return Stage("spec", f"the one inside is NOT {named}", _lines(inside, outside, carried.spec_name, named))


def _lines(inside: bytes, outside: bytes, name: str, named: str) -> tuple[Difference, ...]:
    """The first lines that differ."""
    one, other = (raw.decode("utf-8", "replace").splitlines() for raw in (inside, outside))
    changed = [code for code in SequenceMatcher(None, one, other, autojunk=False).get_opcodes() if code[0] != "equal"]
    what = f"the spec inside is not {named}"
    if not changed:
        return (Difference(f"{name}", f"{what}: the ends of its lines or the mark at its beginning differ",
                           f"{len(inside)} bytes", f"{len(outside)} bytes"),)
    return tuple(Difference(f"{name} line {first + 1}", what, _quoted(one[first:last]), _quoted(other[start:stop]))
                 for _, first, last, start, stop in changed[:LISTED])


def _quoted(rows: list[str]) -> str:
    text = " / ".join(row.strip() for row in rows[:3]) + (" / …" if len(rows) > 3 else "")
    return text if rows else "no such line"
