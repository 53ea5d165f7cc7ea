"""A small sheet, and ways to have it solved again with one thing otherwise, and marked."""
from __future__ import annotations

from collections.abc import Callable, Sequence
from pathlib import Path
from typing import Any

import pytest

from calcpack.pipeline import solve_spec
from calcpack.review.marks import Mark, ReviewFile, Signature
from calcpack.review.targets import Target, record_identity, targets_of

SPEC = """\
calcpack: 1
sheet:
  number: MT-7
  title: Cooler of the wash water
  project: Marrowfield tile works
  revision: A
  status: for-review
  date: 2026-02-03
  purpose: Size the cooler.
  scope: The cooler alone.
signoff:
  prepared: {name: R. Aldane, date: 2026-02-03}
case:
  method: none
  inputs:
    Q_dot: {value: 120 kW, title: Heat to take away, source: R1, tol: 2 kW}
    T_in: {value: 60 degC, title: Wash water inlet, source: R1}
    T_out: {value: 35 degC, title: Wash water outlet, source: R1, note: at the drain}
    c_w: {value: 4.18 kJ/(kg·K), title: Heat capacity, source: R1}
    f_foul: {value: 1.2, title: Fouling, source: R1}
steps:
  - {symbol: dT_w, title: Cooling of the wash water, formula: T_in - T_out, reference: definition}
  - {symbol: m_dot, title: Mass flow of the wash water, formula: Q_dot / (c_w * dT_w), reference: energy balance}
  - {symbol: area, title: Area, formula: Q_dot / (1500 W/(m2·K) * dT_w) * f_foul, note: flat plates}
  - {symbol: kept, title: Heat kept in reserve, formula: 0.1 * Q_dot, reference: practice of the works}
limits:
  - {id: L1, symbol: area, at_most: 12 m2, why: room on the frame, source: R1}
  - {id: L2, symbol: T_out, at_most: 40 degC, why: the drain, source: R1}
assumptions:
  - {id: A1, text: No heat is lost to the hall., basis: lagging, effect: small, status: confirmed}
references:
  - {id: R1, text: "Heat balance of the works, page 3"}
results: [area, m_dot]
revisions:
  - {revision: A, date: 2026-02-03, note: First issue, by: R. Aldane}
"""


def solved(text: str) -> dict[str, Any]:
    """The record of a spec's text."""
    return solve_spec(Path("cooler.yaml"), text=text, name="cooler.yaml").data


def otherwise(old: str, new: str) -> dict[str, Any]:
    """The record of the sheet with one text in the place of another."""
    assert SPEC.count(old) == 1, old
    return solved(SPEC.replace(old, new))


def mark_on(target: Target, verdict: str = "agreed", by: str = "S. Virta", **more: Any) -> Mark:
    """A mark made today on what a target is now."""
    return Mark(target.kind, target.name, more.pop("revision", "A"), target.identity, target.shown, verdict, by,
                more.pop("date", "2026-02-04"), **more)


def agreed(data: dict[str, Any], marks: Sequence[Mark] = (), roles: Sequence[str] = ()) -> ReviewFile:
    """A review file in which everything is agreed, then ``marks``, and signed in some roles."""
    people = {"prepared": "R. Aldane", "checked": "S. Virta", "approved": "M. Okoro"}
    revision = data["sheet"]["revision"]
    return ReviewFile(data["sheet"]["number"],
                      (*(mark_on(one, revision=revision) for one in targets_of(data)), *marks),
                      tuple(Signature(role, people[role], "2026-02-05", revision, record_identity(data))
                            for role in roles))


@pytest.fixture(scope="session")
def cooler() -> dict[str, Any]:
    return solved(SPEC)


@pytest.fixture(scope="session")
def change() -> Callable[[str, str], dict[str, Any]]:
    return otherwise


@pytest.fixture(scope="session")
def review_kit() -> Any:
    """The helpers of this folder by name: ``SPEC``, ``solved``, ``mark_on``, ``agreed``."""
    from types import SimpleNamespace
    return SimpleNamespace(SPEC=SPEC, solved=solved, mark_on=mark_on, agreed=agreed)
