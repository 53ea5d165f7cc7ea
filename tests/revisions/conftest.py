"""Small sheets that are solved once, and ways to have them again with one thing otherwise."""
from __future__ import annotations

import copy
import subprocess
from collections.abc import Callable
from pathlib import Path

import pytest

from calcpack.pipeline import solve_spec
from calcpack.record import Record

COOLER = """\
calcpack: 1
sheet:
  number: BC-7
  title: Wash water cooler
  project: Bottle works
  revision: A
  status: draft
  purpose: Size the cooler.
  scope: The cooler alone.
case:
  method: none
  inputs:
    Q_dot: {value: 120 kW, source: R1}
    T_in: {value: 60 degC, title: Wash water inlet}
    T_out: 35 degC
    c_w: 4.18 kJ/(kg·K)
    f_foul: 1.2
    spare: 3.5
steps:
  - {symbol: dT_w, title: Cooling of the wash water, formula: T_in - T_out}
  - {symbol: m_dot, title: Mass flow of the wash water, formula: Q_dot / (c_w * dT_w)}
  - symbol: area
    title: Area by the catalogue
    lookup:
      of: m_dot
      points: [[0.5 kg/s, 4 m2], [1 kg/s, 7 m2], [2 kg/s, 12 m2]]
      source: R2
  - {symbol: area_f, title: Area with fouling, formula: area * f_foul}
  - symbol: plates
    title: Kind of plates
    choice:
      - {when: m_dot < 1.2 kg/s, value: "1", label: small plates}
      - {otherwise: "2", label: large plates}
  - symbol: dT_m
    unit: K
    title: Mean difference that carries the heat
    root: {equation: "area_f * dT_m * 1500 W/(m2·K) - Q_dot", between: [1 K, 80 K]}
  - {symbol: kept, title: Kept in reserve, formula: spare * 2}
limits:
  - {id: L1, symbol: area_f, at_most: 12 m2, why: room on the frame}
  - {id: L2, symbol: T_out, at_most: 40 degC, why: the drain}
assumptions:
  - {id: A1, text: No heat is lost to the hall., basis: lagging, status: open}
references:
  - {id: R1, text: Heat balance of the works}
  - {id: R2, text: Catalogue of plates}
results: [area_f, m_dot, dT_m, T_out]
revisions:
  - {revision: A, date: 2026-02-03, note: First issue}
"""

CHILLER = """\
calcpack: 1
sheet:
  number: BC-9
  title: Heat pump on rinse water
  project: Bottle works
  revision: A
  status: draft
case:
  method: vapour-compression
  options: {evaporating: pinch, condensing: pinch, source_stream: outlet, sink_stream: outlet}
  fluids: {wf: R-1234ze(E), source: water, sink: water}
  inputs:
    T_source_in: 36 degC
    T_source_out: 29 degC
    p_source: 2 bar(g)
    T_sink_in: 52 degC
    T_sink_out: 66 degC
    p_sink: 3 bar(g)
    dT_pinch_e: 4 K
    dT_pinch_c: 3 K
    dT_sh: 6 K
    dT_sc: 7 K
    eta_is: 0.71
    eta_drive: 1.0
    eta_motor: 0.94
    f_loss: 0.02
    Q_dot_sink: 300 kW
results: [COP, W_dot_net, T_2]
"""

Solve = Callable[..., Record]


@pytest.fixture(scope="session")
def cooler_text() -> str:
    return COOLER


@pytest.fixture(scope="session")
def chiller_text() -> str:
    return CHILLER


def _solver(text: str) -> Solve:
    known: dict[str, Record] = {}

    def solve(*replacements: tuple[str, str]) -> Record:
        """The record of the sheet with each (old, new) replaced; a fresh copy, free to be edited."""
        changed = text
        for old, new in replacements:
            assert old in changed, f"{old!r} is not in the spec"
            changed = changed.replace(old, new)
        if changed not in known:
            known[changed] = solve_spec(Path("sheet.yaml"), text=changed, name="sheet.yaml")
        return Record(copy.deepcopy(dict(known[changed].data)))
    return solve


@pytest.fixture(scope="session")
def cooler() -> Solve:
    """Solves the sheet of the engineer's own steps."""
    return _solver(COOLER)


@pytest.fixture(scope="session")
def chiller() -> Solve:
    """Solves the heat pump."""
    return _solver(CHILLER)


@pytest.fixture
def git(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Callable[..., str]:
    """Runs git in a folder (by default ``works``) with settings of its own."""
    monkeypatch.setenv("GIT_CONFIG_GLOBAL", str(tmp_path / "no-settings"))
    monkeypatch.setenv("GIT_CONFIG_NOSYSTEM", "1")
    works = tmp_path / "works"
    works.mkdir()

    def run(*arguments: str, folder: Path = works, settings: tuple[str, ...] = ()) -> str:
        chosen = ("user.name=N. Tester", "user.email=tester@example.invalid", "commit.gpgsign=false", *settings)
        options = [part for setting in chosen for part in ("-c", setting)]
        done = subprocess.run(["git", "-C", str(folder), *options, *arguments], check=True, capture_output=True,
                              text=True)
        return done.stdout.strip()
    run("init", "-q", "-b", "main")
    return run
