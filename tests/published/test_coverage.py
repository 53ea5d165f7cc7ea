"""Every published row is either reached by a spec or a test, or listed with the reason why not."""
from __future__ import annotations

import re

import test_facts
import yaml

from calcpack.verification.published import companions, published_folder, read_companion


def _read(name: str) -> dict:
    return yaml.safe_load((published_folder() / name).read_text("utf-8"))


def _reached() -> set[str]:
    by_spec = {read_companion(path)["row"] for path in companions()}
    names = (re.match(r"test_row_(\d+)_(\d+)_", name) for name in vars(test_facts))
    return by_spec | {f"{found[1]}.{found[2]}" for found in names if found}


def test_every_row_is_reached_or_said_not_to_be() -> None:
    known = {row for rows in _read("rows.yaml").values() for row in rows}
    not_reached = {entry["row"] for entry in _read("not_reached.yaml")["rows"]}
    assert _reached() | not_reached == known
    assert not _reached() & not_reached


def test_what_is_not_reached_has_its_reason() -> None:
    written = _read("not_reached.yaml")
    for entry in (*written["rows"], *written["parts"]):
        assert entry["what"] and len(entry["reason"]) > 20
    assert {entry["row"] for entry in written["parts"]} <= _reached()


def test_every_spec_has_its_companion_and_every_companion_its_spec() -> None:
    specs = {path.stem for path in published_folder().glob("[0-9]*.yaml") if not path.name.endswith(".expected.yaml")}
    assert specs == {path.name.removesuffix(".expected.yaml") for path in companions()}
