"""The pages of the fluids: one for each, complete, linked from sheet and register, in the manifest."""
from __future__ import annotations

import json
import re
from html import unescape
from pathlib import Path

import pytest
from render_helpers import solve_small
from test_cautions_part import SPEC, words

from calcpack.fluids.register import entries, facts_for
from calcpack.fluids.register.groups import GROUPS, absent, grouped
from calcpack.pipeline import solve_spec
from calcpack.record import Record
from calcpack.render.fluid_names import fluid_page_name
from calcpack.render.manifest import NAME as MANIFEST
from calcpack.render.site import build_site


@pytest.fixture(scope="module")
def record(tmp_path_factory: pytest.TempPathFactory) -> Record:
    path = tmp_path_factory.mktemp("fluids") / "wash.yaml"
    path.write_text(SPEC, "utf-8")
    return solve_spec(path)


@pytest.fixture(scope="module")
def site(record: Record, tmp_path_factory: pytest.TempPathFactory) -> Path:
    folder = tmp_path_factory.mktemp("site")
    build_site([(record, None)], folder, pdf=False)
    return folder


def test_each_fluid_has_a_page_that_is_in_the_manifest(site: Path) -> None:
    listed = json.loads((site / MANIFEST).read_text())["files"]
    assert [name for name in listed if name.startswith("fluids/")] == ["fluids/R-1234ze-E.html", "fluids/water.html"]
    assert sorted(path.name for path in (site / "fluids").iterdir()) == ["R-1234ze-E.html", "water.html"]


def test_links_are_relative_and_lead_to_files(site: Path) -> None:
    for page in (site / "fluids").glob("*.html"):
        found = {unescape(link) for link in re.findall(r'(?:href|src)="([^"#]+)', page.read_text("utf-8"))}
        assert "../index.html" in found and "../WP-7.html" in found
        for link in found:
            assert (page.parent / link).resolve().is_file(), link
    for page in ("index.html", "WP-7.html"):
        assert 'href="fluids/R-1234ze-E.html"' in (site / page).read_text("utf-8")


def test_a_page_holds_every_fact_with_source_and_confirmation(site: Path, record: Record) -> None:
    shown = words((site / "fluids/R-1234ze-E.html").read_text("utf-8"))
    fluid = record.data["case"]["fluids"]["wf"]
    for fact in fluid["facts"]:
        assert fact["quantity"] in shown and fact["source"] in shown
    for title in ("Flammability", "Warming potential over 100 years, by edition",
                  "Toxicity and limits of concentration"):
        assert title in shown
    assert "kg/m³" in shown and "second-hand: confirm against the edition in force" in shown
    assert "Not in the register: thermal stability, pressure equipment." in shown
    assert fluid["range"] in shown and "Thol" in shown
    for one in fluid["constants"]:
        assert one["title"] in shown and one["shown"] in shown
    assert "WP-7 Heat pump of the wash house A" in shown


def test_a_page_of_a_fluid_without_facts_says_so(tmp_path: Path) -> None:
    other = solve_small(tmp_path, change=lambda text: text.replace(
        "  inputs:", "  fluids: {hot: {composition: {N2: 70 %, CO2: 30 %}}}\n  inputs:", 1))
    build_site([(other, None)], tmp_path / "site", pdf=False)
    (page,) = (tmp_path / "site/fluids").iterdir()
    assert "Not in the register: safety class, flammability," in words(page.read_text("utf-8"))


def test_a_rebuild_without_fluids_takes_the_pages_away(record: Record, small: Record, tmp_path: Path) -> None:
    build_site([(record, None)], tmp_path / "s", pdf=False)
    build_site([(small, None)], tmp_path / "s", pdf=False)
    assert not (tmp_path / "s/fluids").exists()


def test_names_of_pages_differ_for_all_fluids_of_the_register() -> None:
    names = [fluid_page_name(one.designation).casefold() for one in entries()]
    assert len(names) == len(set(names)) and all(re.fullmatch(r"fluids/[a-z0-9.-]+\.html", name) for name in names)
    odd = {fluid_page_name(name) for name in ("gas mixture", "gas-mixture", "gas/mixture", "../x", "é" * 99)}
    assert len(odd) == 5 and all(re.fullmatch(r"fluids/[A-Za-z0-9][A-Za-z0-9.-]*\.html", name) for name in odd)


def test_every_quantity_of_the_register_has_its_heading() -> None:
    known = {name for _, names in GROUPS for name in names}
    for one in entries():
        facts = [{"quantity": fact.quantity} for fact in facts_for(one.designation)]
        assert {fact["quantity"] for fact in facts} <= known
        assert sum(len(found) for _, found in grouped(facts)) == len(facts)
        assert len(grouped(facts)) + len(absent(facts)) == len(GROUPS)
