"""A small sheet that is fit to be issued: its spec, its check by another person, its signatures."""
from __future__ import annotations

import json
import subprocess
from collections.abc import Callable
from pathlib import Path

from calcpack.pipeline import record_and_comparison, solve_spec
from calcpack.review.marks import Mark, ReviewFile, Signature
from calcpack.review.targets import record_identity, targets_of
from calcpack.review.writing import review_path, review_text

VERIFIED = Path(__file__).parent.parent.parent / "specs" / "verification.json"
RINSE = """\
calcpack: 1
sheet:
  number: RT-12
  title: Rinse water heater
  project: Dye works, rinse
  revision: A
  status: for-review
  date: 2026-10-01
  purpose: Size the heater for the rinse.
  scope: The heater alone.
  grade: "1: checked by a second engineer"
  codes: ["Works rule 7, edition 2020"]
signoff:
  prepared: {name: R. Aldane, date: 2026-10-01}
case:
  method: none
  inputs:
    Q_dot: {value: 120 kW, tol: 2 kW, source: R1}
    T_in: {value: 15 degC, title: Rinse water inlet, source: A1}
    T_out: {value: 45 degC, source: R1}
    c_w: {value: 4.18 kJ/(kg·K), source: R1}
steps:
  - {symbol: dT_w, title: Warming of the rinse water, formula: T_out - T_in, reference: definition}
  - {symbol: m_dot, title: Mass flow of the rinse water, formula: Q_dot / (c_w * dT_w), reference: energy balance}
limits:
  - {id: L1, symbol: m_dot, at_most: 1.2 kg/s, why: the pump, source: R1}
assumptions:
  - {id: A1, text: Water comes in at 15 °C., basis: log of the well, effect: on the flow, status: confirmed}
references:
  - {id: R1, text: "Heat balance of the works, 2026, page 3"}
results: [m_dot]
revisions:
  - {revision: A, date: 2026-10-01, note: First issue, by: R. Aldane}
"""
LINE_B = "  - {revision: B, date: 2026-11-10, note: Cooler rinse, by: R. Aldane}\n"
ON_B = (("revision: A\n", "revision: B\n"), ("date: 2026-10-01\n  purpose", "date: 2026-11-10\n  purpose"),
        ("value: 45 degC", "value: 44 degC"), ("Aldane, date: 2026-10-01", "Aldane, date: 2026-11-10"),
        ("by: R. Aldane}\n", "by: R. Aldane}\n" + LINE_B))
"""What revision B changes."""
SIGNERS = {"prepared": "R. Aldane", "checked": "S. Virta", "approved": "M. Okoro"}
DAYS = {"A": "2026-10-05", "B": "2026-11-12", "C": "2026-11-20"}


def write_sheet(folder: Path, *changes: tuple[str, str], text: str = RINSE, name: str = "rinse.yaml") -> Path:
    """The spec in a folder, each (old, new) replaced."""
    for old, new in changes:
        assert text.count(old) == 1, f"{old!r} stands {text.count(old)} times in the spec"
        text = text.replace(old, new)
    path = folder / name
    path.write_text(text, "utf-8")
    return path


def check_sheet(path: Path, change: Callable[[ReviewFile], ReviewFile] = lambda review: review) -> Path:
    """Have a second engineer agree to everything, and sign three times; ``change`` edits the review file."""
    record, _ = record_and_comparison(path)
    data, day = record.data, DAYS[record.revision]
    marks = tuple(Mark(one.kind, one.name, record.revision, one.identity, one.shown, "agreed", "S. Virta", day)
                  for one in targets_of(data))
    signed = tuple(Signature(role, name, day, record.revision, record_identity(data)) for role, name in SIGNERS.items())
    review_path(path).write_text(review_text(change(ReviewFile(record.number, marks, signed))), "utf-8")
    return path


def write_verification(folder: Path) -> None:
    """The record of a run of the published checks for the sheets of a folder, as if it were made on this machine."""
    run = json.loads(VERIFIED.read_text("utf-8"))
    engine = solve_spec(Path("rinse.yaml"), text=RINSE).data["engine"]
    kept = {key: engine[key] for key in run["engine"]}
    (folder / "verification.json").write_text(json.dumps(run | {"engine": kept}), "utf-8")


def pages_of(pdf: Path) -> list[str]:
    """Each page's text, as pdftotext lays it out."""
    done = subprocess.run(["pdftotext", "-layout", str(pdf), "-"], check=True, capture_output=True, text=True)
    return done.stdout.split("\f")[:-1]
