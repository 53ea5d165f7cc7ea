"""The part from the reversible bound to the net figure: table, figure, flow exergies."""
from __future__ import annotations

import re
from pathlib import Path

import pytest

from calcpack.figures import figures
from calcpack.methods.starter import starter
from calcpack.pipeline import solve_spec
from calcpack.record import Record
from calcpack.render.sheet import sheet_html

TITLE = "From the reversible bound to the net figure"


@pytest.fixture(scope="module")
def engine() -> Record:
    text = starter("organic-rankine", {"evaporating": "temperature", "condensing": "temperature"})
    return solve_spec(Path("engine.yaml"), text=text, name="engine.yaml")


@pytest.fixture(scope="module")
def page(engine: Record) -> str:
    return sheet_html(engine, figures=figures(engine.data))


def part(page: str) -> str:
    start = page.index('id="part-bound"')
    return page[start:page.index('id="part-verification"', start)]


def test_every_rung_is_in_the_table_with_its_printed_value(engine: Record, page: str) -> None:
    table = part(page)
    assert TITLE in page
    for rung in engine.data["ladder"]["rungs"]:
        assert rung["label"][1:] in table and f">{rung['shown']}<" in table
    for end in ("start", "end"):
        assert engine.data["ladder"][end]["label"] in table and engine.data["ladder"][end]["shown"] in table


def test_the_dead_state_and_the_flows_are_told(engine: Record, page: str) -> None:
    table = part(page)
    assert "Dead state" in table and "of this sheet" in table
    assert len(re.findall(r"<tr><td>State \d", table)) == len(engine.data["states"])


def test_the_ladders_figure_stands_with_it_and_not_with_the_diagrams(page: str) -> None:
    assert 'id="figure-ladder"' in part(page)
    assert page.count('id="figure-ladder"') == 1


def test_a_sheet_without_ladder_and_bound_leaves_the_part_out() -> None:
    record = solve_spec(Path("own.yaml"), text=starter("none", {}), name="own.yaml")
    assert record.data["ladder"] is None and record.data["exergy"] is None
    assert TITLE not in sheet_html(record)


def test_a_record_from_before_ladders_still_prints(engine: Record) -> None:
    old = {key: value for key, value in engine.data.items() if key not in ("ladder", "exergy")}
    page = sheet_html(Record(old))
    assert TITLE in page and "Found by" not in page


def test_a_ladder_that_goes_up_adds_its_rungs() -> None:
    text = starter("vapour-compression", {"evaporating": "temperature", "condensing": "temperature"})
    record = solve_spec(Path("pump.yaml"), text=text, name="pump.yaml")
    table = part(sheet_html(record))
    assert "+ Compressor" in table and "shares are of the power drawn in all" in table
