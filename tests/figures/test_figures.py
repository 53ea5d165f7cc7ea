"""All figures of a record: order, ids, equal bytes, no warnings, and records of the program itself."""

from __future__ import annotations

import json
import logging
import subprocess
import sys
import xml.etree.ElementTree as ElementTree

import pytest

from calcpack.errors import CommandError
from calcpack.figures import figures

HASHES = """
import hashlib, json, sys
from calcpack.figures import figures
record = json.load(open(sys.argv[1], encoding="utf-8"))
print([hashlib.sha256(one.svg_text.encode()).hexdigest() for one in figures(record)])
"""


def test_two_processes_give_equal_bytes(record, tmp_path):
    path = tmp_path / "record.json"
    path.write_text(json.dumps(record), encoding="utf-8")
    seen = {
        subprocess.run(
            [sys.executable, "-c", HASHES, str(path)],
            capture_output=True,
            text=True,
            check=True,
            env={"PYTHONHASHSEED": seed, "PATH": "", "HOME": str(tmp_path)},
        ).stdout
        for seed in ("1", "2")
    }
    assert len(seen) == 1 and len(json.loads(seen.pop().replace("'", '"'))) == 4


def test_order_ids_and_sizes(record):
    drawn = figures(record)
    assert [one.id for one in drawn] == ["arrangement", "t-s", "log-p-h", "profile-condenser"]
    assert {one.width_mm for one in drawn[1:]} == {80.0} and drawn[0].width_mm <= 165.0
    assert all(one.alt and one.caption and one.title for one in drawn)


def test_two_exchangers_of_one_name_have_two_ids(record):
    record["exchangers"] *= 2
    ids = [one.id for one in figures(record)]
    assert len(set(ids)) == len(ids)


def test_svg_is_whole_undated_and_of_the_stated_size(record):
    for one in figures(record):
        root = ElementTree.fromstring(one.svg_text)
        assert root.tag.endswith("svg") and "dc:date" not in one.svg_text
        assert float(root.get("width").removesuffix("pt")) == pytest.approx(
            one.width_mm / 25.4 * 72.0, abs=0.1
        )
        assert "<text" not in one.svg_text
        assert f"<title>{one.title}</title>" in one.svg_text


def test_drawing_warns_of_nothing_and_leaves_settings_alone(record, caplog):
    import matplotlib

    before = dict(matplotlib.rcParams)
    with caplog.at_level(logging.WARNING):
        figures(record)
    assert not caplog.records and dict(matplotlib.rcParams) == before


def test_letters_come_from_the_projects_fonts(record):
    from matplotlib.font_manager import FontProperties, findfont

    from calcpack.figures import canvas

    figures(record)
    assert findfont(FontProperties(family=canvas.FAMILY)).endswith("STIXTwoText-Regular.ttf")


@pytest.mark.parametrize("width", [10.0, 1000.0])
def test_a_width_out_of_reason_is_refused(record, width):
    with pytest.raises(CommandError, match="width"):
        figures(record, width)


def test_a_dollar_sign_in_a_name_starts_no_mathematics(record, seen):
    record["case"]["fluids"]["wf"]["designation"] = "K$_{2}$"
    record["sketch"]["nodes"][0]["name"] = "Condenser"
    figures(record)
    assert r"K\$_{2}\$" in {text for text, _ in seen.words}


HEAT_PUMP = """
calcpack: 1
sheet: {number: F-1, title: Heat pump, project: Brick kiln works, revision: A, status: draft}
case:
  method: vapour-compression
  options: {evaporating: pinch, condensing: pinch, source_stream: outlet, sink_stream: outlet}
  fluids: {wf: R-1234ze(E), source: water, sink: water}
  inputs: {T_source_in: 38 degC, T_source_out: 30 degC, p_source: 2 bar(g), T_sink_in: 55 degC, T_sink_out: 70 degC,
    p_sink: 3 bar(g), dT_pinch_e: 4 K, dT_pinch_c: 3 K, dT_sh: 6 K, dT_sc: 8 K, eta_is: 0.72, eta_drive: 1.0,
    eta_motor: 0.94, f_loss: 0.02, Q_dot_sink: 450 kW}
results: [COP]
"""
GAS_CYCLE = """
calcpack: 1
sheet: {number: F-2, title: Gas cycle, project: Brick kiln works, revision: A, status: draft}
case:
  method: carnot-cycle
  inputs: {n: 1 mol, gamma: 1.4, T_h: 327 degC, T_c: 27 degC, V_1: 2 L, V_2: 5 L}
results: [eta]
"""


@pytest.mark.parametrize(
    ("text", "ids"),
    [
        (HEAT_PUMP, ["arrangement", "t-s", "log-p-h", "profile-condenser", "profile-evaporator", "ladder"]),
        (GAS_CYCLE, ["p-v", "t-s"]),
    ],
    ids=["heat pump", "gas cycle"],
)
def test_records_of_the_program_are_drawn_whole(text, ids, seen, tmp_path):
    from calcpack.pipeline import solve_spec

    path = tmp_path / "sheet.yaml"
    path.write_text(text, encoding="utf-8")
    record = solve_spec(path)
    data = json.loads(json.dumps(getattr(record, "data", record)))
    drawn = figures(data)
    assert [one.id for one in drawn] == ids
    table = {state["number"] for state in data["states"]}
    assert set(seen.circles) == table
