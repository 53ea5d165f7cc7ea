"""Broken specs: the whole message of each, as the command line prints it.

Each ``broken/NAME.yaml`` has its message in ``broken/NAME.txt``.
"""
from __future__ import annotations

from pathlib import Path

import pytest

from calcpack.errors import SpecError, describe
from calcpack.spec import read_for_faults, read_spec

BROKEN = Path(__file__).parent / "broken"
NAMES = sorted(path.stem for path in BROKEN.glob("*.yaml"))


def message(name: str) -> str:
    """What is printed for the broken spec ``name``."""
    path = BROKEN / f"{name}.yaml"
    with pytest.raises(SpecError) as raised:
        read_spec(path, name=path.name)
    return describe(raised.value.faults, {path.name: path.read_text(encoding="utf-8", errors="replace")})


@pytest.mark.parametrize("name", NAMES)
def test_the_message_of_a_broken_spec(name):
    assert message(name) + "\n" == (BROKEN / f"{name}.txt").read_text(encoding="utf-8")


def test_every_broken_spec_has_its_message():
    assert len(NAMES) >= 25
    assert {path.stem for path in BROKEN.glob("*.txt")} == set(NAMES)


@pytest.mark.parametrize("name", NAMES)
def test_every_fault_of_a_spec_that_can_be_read_has_a_place_in_it(name):
    _, faults = read_for_faults(BROKEN / f"{name}.yaml", name=name)
    rows = (BROKEN / f"{name}.yaml").read_text(encoding="utf-8", errors="replace").splitlines() or [""]
    for fault in faults:
        if fault.what.startswith("there may be"):
            continue
        assert fault.place is not None and fault.place.file == name
        assert 1 <= fault.place.line <= len(rows)
        assert 1 <= fault.place.column <= len(rows[fault.place.line - 1]) + 1
