"""Small specs that feed each other, for the tests of this folder."""
from __future__ import annotations

from collections.abc import Mapping
from pathlib import Path

HEAD = """\
calcpack: 1
sheet:
  number: {number}
  title: {title}
  project: Works
  revision: {revision}
  status: {status}
  purpose: Test.
  scope: All.
case:
  method: none
  inputs:
{inputs}
steps:
{steps}
results: [{results}]
"""


def write_sheet(folder: Path, number: str, inputs: Mapping[str, str], steps: Mapping[str, str], *, name: str = "",
                revision: str = "A", status: str = "draft", title: str = "A sheet",
                units: Mapping[str, str] | None = None, more: str = "") -> Path:
    """A spec of own steps; ``inputs`` as written by symbol, ``steps`` formulas by symbol."""
    lines = [f"  - {{symbol: {symbol}, title: Value {symbol}, formula: {formula!r}"
             + (f", unit: {units[symbol]}" if units and symbol in units else "") + "}" for symbol, formula in
             steps.items()]
    path = folder / (name or f"{number}.yaml")
    path.write_text(HEAD.format(number=number, title=title, revision=revision, status=status,
                                inputs="\n".join(f"    {symbol}: {text}" for symbol, text in inputs.items()),
                                steps="\n".join(lines), results=", ".join(steps)) + more, "utf-8")
    return path


def edit(path: Path, old: str, new: str) -> None:
    """Put ``new`` for ``old``, which stands once, in a file."""
    text = path.read_text("utf-8")
    assert text.count(old) == 1, old
    path.write_text(text.replace(old, new), "utf-8")


def contents(folder: Path) -> dict[str, bytes]:
    """All files below a folder by name."""
    return {path.relative_to(folder).as_posix(): path.read_bytes() for path in folder.rglob("*") if path.is_file()}


def differing(one: Mapping[str, bytes], other: Mapping[str, bytes]) -> list[str]:
    """The names whose content is not the same."""
    return sorted(name for name in {*one, *other} if one.get(name) != other.get(name))


def chains(folder: Path, count: int, depth: int) -> list[Path]:
    """``count`` sheets in chains: each but the first of a chain takes the value of the one before."""
    paths = []
    for at in range(count):
        number, first = f"C-{at:03d}", at % depth == 0
        given = f"{100 + at} kW" if first else f"{{from: C-{at - 1:03d}.Q_dot}}"
        paths.append(write_sheet(folder, number, {"Q_dot_0": given, "eta": "0.9"}, {"Q_dot": "Q_dot_0 * eta"},
                                 units={"Q_dot": "kW"}))
    return paths
