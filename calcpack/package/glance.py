"""A spec to what can be seen of it at a glance: its number, what it takes from other sheets, the files that it names.

The quick reading finds other sheets and what has changed. It finds no faults:
of a spec that cannot be read it says as much as stands before the break.
"""
from __future__ import annotations

import hashlib
import re
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from calcpack.spec.model import Link

SUFFIXES = (".yaml", ".yml")
_MEANS_TO_BE_ONE = re.compile(r"^['\"]?calcpack['\"]?\s*:", re.MULTILINE)
_DEEPEST = 5

KeyPath = tuple[str, ...]


@dataclass(frozen=True, slots=True)
class Glance:
    """What is seen of a spec: the title block's texts as written, ``links`` by input, ``rows`` of a series.

    What is left out is None.
    """

    path: Path
    sha256: str
    number: str | None
    links: Mapping[str, Link]
    rows: str | None
    baseline: str | None
    title: str | None
    revision: str | None
    status: str | None

    @property
    def rows_file(self) -> Path | None:
        """The file of rows beside the spec, where it names one."""
        named = self.rows is not None and "\n" not in self.rows.strip() and self.rows.endswith(".csv")
        return self.path.parent / str(self.rows) if named else None


def glance(path: Path, content: bytes) -> Glance:
    """What the spec with this ``content`` shows of itself."""
    seen = dict(_scalars(content.decode("utf-8", "replace")))
    links = {}
    for key, text in seen.items():
        if len(key) == 4 and key[:2] == ("case", "inputs") and key[3] == "from":
            number, _, symbol = text.rpartition(".")
            links[key[2]] = Link(number, symbol)
    block = {name: seen.get(("sheet", name)) for name in ("number", "baseline", "title", "revision", "status")}
    return Glance(path, hashlib.sha256(content).hexdigest(), links=links, rows=seen.get(("case", "series", "rows")),
                  **block)


def specs_in(folder: Path) -> list[Path]:
    """The files of a folder that mean to be specs, by name; a review file beside one, say, does not."""
    return sorted(path for path in folder.iterdir()
                  if path.suffix in SUFFIXES and path.is_file() and is_spec(path.read_bytes()))


def is_spec(content: bytes) -> bool:
    """Whether a file's bytes mean to be a spec."""
    return _MEANS_TO_BE_ONE.search(content.decode("utf-8", "replace")) is not None


def _scalars(text: str) -> Iterator[tuple[KeyPath, str]]:
    """The scalars of the mappings near the top, each by the keys that lead to it."""
    import yaml
    frames: list[_Frame] = []
    # The faster reader where the library was built with it: both give the same events.
    reader: Any = getattr(yaml, "CBaseLoader", yaml.BaseLoader)
    try:
        for event in yaml.parse(text, Loader=reader):
            if isinstance(event, yaml.ScalarEvent | yaml.AliasEvent):
                value = event.value if isinstance(event, yaml.ScalarEvent) else ""
                if frames and frames[-1].takes(value) and len(frames) <= _DEEPEST:
                    yield tuple(frame.key or "" for frame in frames), value
                if frames:
                    frames[-1].next()
            elif isinstance(event, yaml.MappingStartEvent | yaml.SequenceStartEvent):
                frames.append(_Frame(isinstance(event, yaml.MappingStartEvent)))
            elif isinstance(event, yaml.MappingEndEvent | yaml.SequenceEndEvent):
                frames.pop()
                if frames:
                    frames[-1].takes("")
                    frames[-1].next()
    except (yaml.YAMLError, ValueError):
        return


class _Frame:
    """A mapping or list that is open: in a mapping texts are a key and its value by turns."""

    def __init__(self, mapping: bool) -> None:
        self.mapping, self.key, self.value_next = mapping, None if mapping else "-", not mapping

    def takes(self, text: str) -> bool:
        """Whether the text that comes now is a value; a key is kept."""
        if not self.value_next:
            self.key = text
        return self.value_next

    def next(self) -> None:
        """Go on to what stands behind the text."""
        self.value_next = not self.value_next if self.mapping else True
