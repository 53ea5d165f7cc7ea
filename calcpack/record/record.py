"""The record's shape: canonical JSON, and results as quantities.

Equal work gives equal bytes: keys sorted, floats in Python's shortest form
that reads back to the same number, one space of indent, a newline at the end.
"""
from __future__ import annotations

import json
from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from calcpack.errors import CommandError, Fault

FORMAT = 1
_NAMED = (("inputs", "symbol"), ("steps", "symbol"), ("limits", "id"))


@dataclass(frozen=True, slots=True)
class Record:
    """A solved sheet; ``data`` is the JSON object whose keys scripts may rely on."""

    data: Mapping[str, Any]

    def __getitem__(self, symbol: str) -> Any:
        """The pint quantity of an input or step, in its print unit.

        Raises
        ------
        KeyError
            For a symbol that the sheet gives no value.
        """
        from calcpack.units import pint_quantity, unit
        for item in (*self.data["steps"], *self.data["inputs"]):
            if item["symbol"] == symbol:
                return pint_quantity(item["value"], unit(item["unit"]))
        raise KeyError(symbol)

    def step(self, symbol: str) -> Mapping[str, Any]:
        """The step that gives ``symbol``; KeyError if none does."""
        for step in self.data["steps"]:
            if step["symbol"] == symbol:
                return step
        raise KeyError(symbol)

    @property
    def number(self) -> str:
        return self.data["sheet"]["number"]

    @property
    def revision(self) -> str:
        return self.data["sheet"]["revision"]

    @property
    def failed_limits(self) -> tuple[Mapping[str, Any], ...]:
        """The limits that do not hold and that nobody has waived."""
        return tuple(limit for limit in self.data["limits"] if limit["status"] == "fails" and not limit.get("waiver"))

    @property
    def waived_limits(self) -> tuple[Mapping[str, Any], ...]:
        """The limits that do not hold, and that somebody answers for."""
        return tuple(limit for limit in self.data["limits"] if limit["status"] == "fails" and limit.get("waiver"))

    def to_json(self) -> str:
        """The record as canonical text."""
        return json.dumps(self.data, sort_keys=True, ensure_ascii=False, indent=1, allow_nan=False) + "\n"


def read_record(path: Path, text: str | None = None) -> Record:
    """The record in a file, or in ``text`` that stands for it.

    Raises
    ------
    CommandError
        For a file that is no record of this format.
    """
    try:
        data = json.loads(path.read_text("utf-8") if text is None else text)
    except OSError as error:
        raise CommandError(Fault(f"cannot read {path}", detail=str(error))) from None
    except (json.JSONDecodeError, UnicodeDecodeError, RecursionError) as error:
        raise CommandError(Fault(f"{path} is not a record", expected="JSON written by 'calcpack solve --json'",
                                 detail=str(error))) from None
    missing = [key for key in ("sheet", "case", "inputs", "steps", "results", "limits", "spec_sha256")
               if not isinstance(data, dict) or key not in data]
    if missing or data.get("calcpack") != FORMAT:
        raise CommandError(Fault(f"{path} is not a record of format {FORMAT}",
                                 found="no " + ", ".join(missing) if missing else f"format {data.get('calcpack')!r}"))
    if wrong := _misshapen(data):
        raise CommandError(Fault(f"{path} is a damaged record", found=", ".join(wrong),
                                 expected="the file as 'calcpack solve --json' wrote it"))
    return Record(data)


def _misshapen(data: Mapping[str, Any]) -> list[str]:
    """The parts of a record that are not of the shape that all readers count on."""
    wrong = [f"{key} is not a mapping" for key in ("sheet", "case", "results") if not isinstance(data[key], Mapping)]
    if isinstance(data["sheet"], Mapping):
        wrong += [f"sheet.{key} is not a text" for key in ("number", "revision", "title", "status")
                  if not isinstance(data["sheet"].get(key), str)]
    return wrong + [f"{key} is not a list of mappings with a text {name}" for key, name in _NAMED
                    if not isinstance(data[key], list) or
                    not all(isinstance(one, Mapping) and isinstance(one.get(name), str) for one in data[key])]
