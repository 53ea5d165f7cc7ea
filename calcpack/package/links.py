"""Specs to who takes what from whom: each link to the sheet that it names, or to why it leads nowhere."""
from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path

from calcpack.errors import CalcpackError, Fault, SpecError, nearest
from calcpack.package.glance import Glance, glance, specs_in
from calcpack.package.order import closure, levels, ring_through
from calcpack.spec.model import Link


@dataclass(frozen=True, slots=True)
class Text:
    """Bytes that stand for a spec's file, and the name that messages give it."""

    content: bytes
    name: str


Texts = Mapping[Path, Text]


@dataclass(frozen=True, slots=True)
class Family:
    """Sheets in the order in which they can be solved, by the path of their spec.

    ``glances`` has all that were looked at; ``levels`` those that are wanted
    and all that they take from; ``sources`` the paths that each takes from;
    ``wrong`` by path and input why a link cannot be followed.
    """

    glances: Mapping[Path, Glance]
    levels: tuple[tuple[Path, ...], ...]
    sources: Mapping[Path, tuple[Path, ...]]
    wrong: Mapping[Path, Mapping[str, CalcpackError]]

    @property
    def paths(self) -> list[Path]:
        """All that have to be solved, in order."""
        return [path for level in self.levels for path in level]

    def source(self, link: Link) -> Path:
        """The spec of the sheet that a link names; of a link that is not wrong."""
        return next(path for path, one in self.glances.items() if one.number == link.number)


def family_of(wanted: Sequence[Path], texts: Texts | None = None, *, beside: bool = True) -> Family:
    """The wanted specs with all that they take from.

    Other sheets are looked for among ``texts``, which stand for files, and
    with ``beside`` in the folders of the wanted specs.
    """
    texts = texts or {}
    glances = {path: glance(path, _content(path, texts)) for path in (*wanted, *texts)}
    if beside:
        others = [path for path in _beside(wanted) if path not in glances]
        glances |= {path: glance(path, _content(path, texts)) for path in others}
    return _followed(wanted, glances)


def takes_from_others(path: Path, texts: Texts | None = None) -> bool:
    """Whether a spec takes a value from another sheet."""
    return bool(glance(path, _content(path, texts or {})).links)


def _content(path: Path, texts: Texts) -> bytes:
    """The bytes of a spec; none of a file that cannot be read, which its own reading will tell."""
    if path in texts:
        return texts[path].content
    try:
        return path.read_bytes()
    except (OSError, ValueError):
        return b""


def _beside(wanted: Iterable[Path]) -> list[Path]:
    """The specs in the folders of the wanted ones that are not themselves among them, whatever their path is called."""
    known = {path.resolve() for path in wanted}
    folders = dict.fromkeys(path.parent for path in wanted if path.parent.is_dir())
    found = {path.resolve(): path for folder in folders for path in specs_in(folder)}
    return [path for real, path in found.items() if real not in known]


def _followed(wanted: Sequence[Path], glances: Mapping[Path, Glance]) -> Family:
    by_number: dict[str, list[Path]] = {}
    for path, one in glances.items():
        if one.number is not None:
            by_number.setdefault(one.number, []).append(path)
    wrong: dict[Path, dict[str, CalcpackError]] = {}
    sources: dict[Path, list[Path]] = {}
    for path, one in glances.items():
        for symbol, link in one.links.items():
            found = by_number.get(link.number, [])
            fault = _fault(one, link, found, by_number)
            if fault is None:
                sources.setdefault(path, []).append(found[0])
            else:
                wrong.setdefault(path, {})[symbol] = SpecError(fault)
    _break_rings(glances, by_number, sources, wrong)
    return Family(glances, tuple(map(tuple, levels(closure(wanted, sources), sources))),
                  {path: tuple(dict.fromkeys(some)) for path, some in sources.items()}, wrong)


def _fault(one: Glance, link: Link, found: Sequence[Path], known: Mapping[str, Sequence[Path]]) -> Fault | None:
    if link.number == one.number:
        return Fault("a sheet cannot take a value from itself", found=str(link),
                     hint=f"use {link.symbol} in a formula of the sheet")
    if not found:
        others = sorted(number for number in known if number != one.number)
        return Fault(f"there is no sheet {link.number} among the specs here",
                     expected="one of " + ", ".join(others[:12]) + (" …" if len(others) > 12 else "")
                     if others else "its spec in the same folder", hint=nearest(link.number, others))
    if len(found) > 1:
        return Fault(f"two sheets have the number {link.number}", found=", ".join(path.name for path in found),
                     hint="give each sheet a number of its own")
    return None


def _break_rings(glances: Mapping[Path, Glance], by_number: Mapping[str, Sequence[Path]],
                 sources: dict[Path, list[Path]], wrong: dict[Path, dict[str, CalcpackError]]) -> None:
    """Every link of a ring is wrong, and is followed no further."""
    whole = {path: tuple(some) for path, some in sources.items()}
    for path, one in glances.items():
        for symbol, link in one.links.items():
            if symbol in wrong.get(path, {}):
                continue
            source = by_number[link.number][0]
            ring = ring_through(path, source, whole)
            if ring is not None:
                words = " from ".join(str(glances[name].number) for name in ring)
                wrong.setdefault(path, {})[symbol] = SpecError(Fault(
                    "sheets take their values from each other in a ring", found=words,
                    hint="give one of them the value itself"))
                sources[path] = [name for name in sources[path] if name != source]
