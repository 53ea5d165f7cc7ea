"""Cautions, usual limits and waivers on the page."""
from __future__ import annotations

import re
from html import unescape
from pathlib import Path

import pytest

from calcpack.pipeline import solve_spec
from calcpack.record import Record
from calcpack.render.cautions import working_line
from calcpack.render.pdf import write_pdf
from calcpack.render.register import register_html
from calcpack.render.sheet import sheet_html
from calcpack.spec import read_spec

SPEC = """\
calcpack: 1
sheet: {number: WP-7, title: Heat pump of the wash house, project: Wash house, revision: A, status: draft}
case:
  method: vapour-compression
  options: {evaporating: pinch, condensing: pinch, source_stream: outlet, sink_stream: outlet}
  fluids: {wf: R-1234ze(E), source: water, sink: water}
  inputs:
    T_source_in: 38 degC
    T_source_out: 30 degC
    T_sink_in: 55 degC
    T_sink_out: 70 degC
    p_source: 2 bar(g)
    p_sink: 3 bar(g)
    dT_pinch_e: 5 K
    dT_pinch_c: 5 K
    dT_sh: 6 K
    dT_sc: 5 K
    eta_is: 0.70
    eta_drive: 1.0
    eta_motor: 0.93
    f_loss: 0.02
    Q_dot_sink: 300 kW
  safety: {charge: 60 kg, room_volume: 300 m³, room_level: below-ground, source: R1}
limits:
  - {id: L1, symbol: T_2, at_most: 80 degC, why: oil}
  - {id: L2, symbol: p_c, at_most: 2 bar, why: vessel,
     waiver: {reason: The new vessel is rated 25 bar., name: V. Brandt, date: 2026-11-30}}
references: [{id: R1, text: Plant list of the works}]
results: [COP, p_c]
"""


@pytest.fixture(scope="module")
def record(tmp_path_factory: pytest.TempPathFactory) -> Record:
    path = tmp_path_factory.mktemp("cautions") / "wash.yaml"
    path.write_text(SPEC, "utf-8")
    assert read_spec(path).case.safety.room_level == "below-ground"
    return solve_spec(path)


@pytest.fixture(scope="module")
def page(record: Record) -> str:
    return sheet_html(record)


def words(html: str) -> str:
    """The visible text of a piece of a page; what only screen readers get is left out."""
    plain = re.sub(r"<math.*?</math>", " ", html, flags=re.DOTALL)
    return re.sub(r"\s+", " ", unescape(re.sub(r"<[^>]+>", " ", plain)))


def part(page: str, name: str) -> str:
    """A part of the page, as HTML."""
    return re.search(rf'<section class="part {name}".*?</section>', page, re.DOTALL)[0]


def test_every_caution_stands_in_the_table_of_its_status(record: Record, page: str) -> None:
    tables = dict(re.findall(r"<caption>([^<]+)</caption>(.*?)</table>", part(page, "cautions"), re.DOTALL))
    for caption, status in (("Triggered", "triggered"), ("Evaluated, not triggered", "not triggered"),
                            ("Not evaluated", "not evaluated")):
        expected = [one["id"] for one in record.data["cautions"] if one["status"] == status]
        assert expected and re.findall(r'<tr id="caution-(C-\w+)"', tables[caption]) == expected
        hazards = list(dict.fromkeys(one["hazard"] for one in record.data["cautions"] if one["status"] == status))
        assert re.findall(r'scope="rowgroup"[^>]*>([^<]+)<', tables[caption]) == hazards


def test_workings_are_printed_with_their_numbers(record: Record, page: str) -> None:
    shown = words(part(page, "cautions"))
    count = sum(len(one["working"].splitlines()) for one in record.data["cautions"])
    assert count >= 10 and part(page, "cautions").count('<span class="worked">') == count
    assert "60 300 = 0.2000 kg/m³" in shown.replace("\u2009", " ").replace("\u202f", " ")


def test_a_working_line_is_taken_apart() -> None:
    one = working_line("m = c_lim * V = 0.2 * 300 = 60.00 kg, with c_lim in kg/m³, V in m³")
    assert len(one["formulas"]) == 2 and "60.00" in one["result"] and len(one["units"]) == 2
    assert working_line("f = a / b = 1 / 2 = 0.5000")["units"] == []


def test_safety_quantities_are_printed_as_written_with_their_source(page: str) -> None:
    shown = words(part(page, "cautions"))
    assert "charge Working fluid in the largest circuit; of a cascade, in the low one. 60" in shown
    assert "below-ground" in shown
    assert 'href="#reference-R1"' in part(page, "cautions")


def test_usual_limits_stand_below_those_of_the_sheet(record: Record, page: str) -> None:
    html = part(page, "results")
    own, usual = html.split("Usual practice", 1)
    assert "L1" in own and "U-K1" not in own
    rows = re.findall(r">(U-\w+)</a>", usual)
    assert rows == [one["id"] for one in record.data["usual_limits"]]
    assert all(f'id="caution-{one["caution"]}"' in page for one in record.data["usual_limits"])
    assert usual.count("<strong>outside</strong>") == sum(
        one["status"] == "outside" for one in record.data["usual_limits"]) > 0


def test_failed_and_waived_limits_stand_on_the_title_page(page: str) -> None:
    title = words(re.search(r"<header.*?</header>", page, re.DOTALL)[0])
    assert "1 of 2 limits FAILS: L1" in title and "1 limit fails and is waived: L2" in title
    results = words(part(page, "results"))
    assert "Waiver by V. Brandt, 2026-11-30: The new vessel is rated 25 bar." in results and "waived" in results


def test_the_register_tells_of_the_waiver(record: Record) -> None:
    shown = words(register_html([record], ["WP-7"], pdf=False))
    assert "1 of 2 limits FAILS" in shown and "1 limit fails and is waived: L2" in shown


def test_the_printed_sheet_has_them_too(record: Record, tmp_path: Path) -> None:
    import subprocess
    write_pdf(sheet_html(record, for_print=True), tmp_path / "wash.pdf", record)
    text = subprocess.run(["pdftotext", "-layout", str(tmp_path / "wash.pdf"), "-"], check=True, capture_output=True,
                          text=True).stdout
    first = text.split("\f")[0]
    assert "1 limit fails and is waived: L2" in " ".join(first.split()) and "FAILS" in first
    assert "Safety quantities, read by the cautions alone" in text and "14" in text
