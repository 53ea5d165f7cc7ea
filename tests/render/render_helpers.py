"""A small sheet with every kind of step, and what can be read from a PDF."""
from __future__ import annotations

import subprocess
from collections.abc import Callable
from pathlib import Path

from calcpack.pipeline import solve_spec
from calcpack.record import Record

SMALL = """\
calcpack: 1
sheet:
  number: RT-12
  title: Rinse water heater
  project: Dye works
  revision: A
  status: draft
  purpose: Size the heater for the rinse.
  scope: The heater alone.
  units: UNITS
  page: PAGE
case:
  method: none
  inputs:
    Q_dot: {value: 120 kW, tol: 2 kW, source: R1}
    T_in: {value: 15 degC, title: Rinse water inlet, source: A1}
    T_out: 45 degC
    c_w: 4.18 kJ/(kg·K)
    f_foul: 1.2
steps:
  - {symbol: dT_w, title: Warming of the rinse water, formula: T_out - T_in}
  - {symbol: m_dot, title: Mass flow of the rinse water, formula: Q_dot / (c_w * dT_w), reference: energy balance}
  - symbol: area
    title: Area by the catalogue
    lookup:
      of: m_dot
      points: [[0.5 kg/s, 4 m2], [1 kg/s, 7 m2], [2 kg/s, 12 m2]]
      source: R2
  - {symbol: area_f, title: Area with fouling, formula: area * f_foul, note: the catalogue is for clean plates}
  - symbol: plates
    title: Kind of plates
    choice:
      - {when: m_dot < 1.2 kg/s and area_f > 0 m2, value: "1", label: small plates}
      - {otherwise: "2", label: large plates}
  - symbol: dT_m
    unit: K
    title: Mean difference that carries the heat
    root: {equation: "area_f * dT_m * 1500 W/(m2·K) - Q_dot", between: [1 K, 80 K]}
limits:
  - {id: L1, symbol: area_f, at_most: 12 m2, why: room on the frame, source: R2}
  - {id: L2, symbol: T_out, at_most: 40 degC, why: the dye}
assumptions:
  - {id: A1, text: No heat is lost to the hall., basis: lagging, status: open, owner: V. Brandt, due: 2027-01-15}
references:
  - {id: R1, text: Heat balance of the works}
  - {id: R2, text: Catalogue of plates}
results: [area_f, m_dot, dT_m, T_out]
revisions:
  - {revision: A, date: 2026-12-02, note: First issue}
"""


def solve_small(folder: Path, *, page: str = "A4", units: str = "si", change: Callable[[str], str] = str) -> Record:
    """The small sheet's record; ``change`` edits the text of the spec."""
    path = folder / "rinse.yaml"
    path.write_text(change(SMALL.replace("PAGE", page).replace("UNITS", units)), "utf-8")
    return solve_spec(path)


def text_of(pdf: Path, *options: str) -> str:
    """The text of a PDF, as pdftotext gives it; pages end with a form feed."""
    return subprocess.run(["pdftotext", *options, str(pdf), "-"], check=True, capture_output=True, text=True).stdout


def pages_of(pdf: Path) -> list[str]:
    """The text of each page."""
    return text_of(pdf, "-layout").split("\f")[:-1]
