"""What a build takes over from the one before: only what would come out the same, and never a byte that differs."""
from __future__ import annotations

from pathlib import Path

import pytest
from package_sheets import chains, contents, differing, edit, write_sheet

from calcpack.building import Package, build_package
from calcpack.errors import SpecError
from calcpack.render.manifest import NAME


def build(specs: Path, site: Path, told: list[str] | None = None, *, pdf: bool = False, jobs: int = 1,
          fresh: bool = False) -> Package:
    return build_package([specs], site, pdf=pdf, jobs=jobs, tell=(told if told is not None else []).append,
                         fresh=fresh)


def same_as_fresh(specs: Path, site: Path, folder: Path, **options: int) -> list[str]:
    """The files of a site that a build from nothing would write otherwise."""
    build(specs, folder, **options)
    return differing(contents(site), contents(folder))


@pytest.fixture
def specs(tmp_path: Path) -> Path:
    folder = tmp_path / "specs"
    folder.mkdir()
    return folder


def test_of_200_sheets_a_change_solves_only_what_hangs_on_it(specs, tmp_path):
    paths, site, told = chains(specs, 200, 5), tmp_path / "site", []
    assert len(build(specs, site, told, jobs=2).solved) == 200
    assert told[0] == "solving 200 sheets"
    untouched = build(specs, site, told := [])
    assert (untouched.solved, untouched.written) == ((), ()) and told[0] == "200 sheets unchanged, nothing to solve"
    edit(paths[35], "135 kW", "136 kW")
    changed = build(specs, site, told := [])
    assert changed.solved == changed.written == ("C-035", "C-036", "C-037", "C-038", "C-039")
    assert told[:2] == ["solving 1 of 200 sheets, 199 unchanged", "solving 1 more, whose sources have moved"]
    edit(paths[37], "eta: 0.9", "eta: 0.8")
    assert build(specs, site).solved == ("C-037", "C-038", "C-039")
    assert len(changed.records) == 200 and [one.number for one in changed.records][:2] == ["C-000", "C-001"]
    assert same_as_fresh(specs, site, tmp_path / "fresh", jobs=2) == []


def test_a_source_whose_value_stays_to_the_bit_moves_nobody(specs, tmp_path):
    paths, site = chains(specs, 10, 5), tmp_path / "site"
    build(specs, site)
    edit(paths[0], "scope: All.", "scope: Everything.")
    changed = build(specs, site)
    # The next sheet names the hash of the spec that its value is from: its page is written, nothing is solved.
    assert (changed.solved, changed.written) == (("C-000",), ("C-000", "C-001"))
    edit(paths[0], "Q_dot_0 * eta", "eta * Q_dot_0")
    assert build(specs, site).solved == ("C-000",)
    assert same_as_fresh(specs, site, tmp_path / "fresh") == []
    edit(paths[0], "100 kW", "100.0000000000001 kW")
    assert build(specs, site).solved == tuple(f"C-{at:03d}" for at in range(5))
    assert same_as_fresh(specs, site, tmp_path / "fresh") == []


def test_a_new_revision_of_a_source_is_named_by_its_takers_without_a_solution(specs, tmp_path):
    paths, site = chains(specs, 5, 5), tmp_path / "site"
    build(specs, site)
    edit(paths[1], "revision: A", "revision: B")
    edit(paths[1], "title: A sheet", "title: Another title")
    changed = build(specs, site)
    assert (changed.solved, changed.written) == (("C-001",), ("C-000", "C-001", "C-002"))
    assert "C-001 revision B, Q_dot, step 1.1" in (site / "C-002.json").read_text("utf-8")
    assert same_as_fresh(specs, site, tmp_path / "fresh") == []


def test_a_file_that_was_changed_by_hand_is_made_again(specs, tmp_path):
    chains(specs, 3, 3)
    site = tmp_path / "site"
    build(specs, site)
    whole = contents(site)
    (site / "C-001.html").write_text("edited", "utf-8")
    (site / "C-002.json").unlink()
    (site / "assets/styles/sheet.css").write_text("", "utf-8")
    again = build(specs, site)
    assert again.solved == ("C-002",) and again.written == ("C-001", "C-002")
    assert differing(contents(site), whole) == []


@pytest.mark.parametrize("text", ["", "{", "[]", "{}", '{"calcpack site": 2, "files": ["C-000.html"], "sheets": 3}',
                                  '{"calcpack site": 1, "files": ["C-000.html", "../x"]}'])
def test_a_manifest_that_says_nothing_means_that_all_is_made_again(specs, tmp_path, text):
    chains(specs, 2, 2)
    site = tmp_path / "site"
    build(specs, site)
    whole = contents(site)
    if "files" in text:
        (site / NAME).write_text(text.replace('"C-000.html"', ", ".join(f'"{name}"' for name in whole)), "utf-8")
        assert build(specs, site).solved == ("C-000", "C-001")
        assert differing(contents(site), whole) == []
    else:
        (site / NAME).write_text(text, "utf-8")
        with pytest.raises(Exception, match="did not write"):
            build(specs, site)


def test_fresh_makes_all_again(specs, tmp_path):
    chains(specs, 3, 3)
    site = tmp_path / "site"
    build(specs, site)
    whole = contents(site)
    assert build(specs, site, fresh=True).solved == ("C-000", "C-001", "C-002")
    assert differing(contents(site), whole) == []


def test_another_program_takes_nothing_over(specs, tmp_path, monkeypatch):
    from calcpack.package import reuse
    chains(specs, 2, 2)
    site = tmp_path / "site"
    build(specs, site)
    monkeypatch.setattr(reuse, "program", lambda: "another")
    assert build(specs, site).solved == ("C-000", "C-001")


def test_the_key_of_the_program_hangs_on_its_source_its_templates_and_its_libraries(tmp_path, monkeypatch):
    import calcpack
    from calcpack.package import reuse
    from calcpack.render import assets
    package, templates, libraries = tmp_path / "calcpack", tmp_path / "templates", tmp_path / "site-packages"
    for folder in (package, templates, libraries / "pint-0.24.dist-info"):
        folder.mkdir(parents=True)
    (package / "__init__.py").write_text("")
    (templates / "sheet.html").write_text("")
    monkeypatch.setattr(calcpack, "__file__", str(package / "__init__.py"))
    monkeypatch.setattr(assets, "templates_folder", lambda: templates)
    monkeypatch.setattr("sys.path", [str(libraries)])
    reads = reuse.program.__wrapped__
    seen = [reads()]
    (package / "__init__.py").write_text("1")
    seen.append(reads())
    (templates / "sheet.html").write_text("1")
    seen.append(reads())
    (libraries / "pint-0.24.dist-info").rename(libraries / "pint-0.25.dist-info")
    seen.append(reads())
    (package / "__pycache__").mkdir()
    (package / "__pycache__" / "x.pyc").write_text("1")
    assert len(set(seen)) == 4 and reads() == seen[-1]


def test_a_table_of_rows_and_a_baseline_are_looked_at(specs, tmp_path):
    site = tmp_path / "site"
    path = write_sheet(specs, "B-1", {"a": "2 kW"}, {"b": "2 * a"}, revision="B")
    build(specs, site)
    record = (site / "B-1.json").read_text("utf-8")
    (specs / "issued").mkdir()
    older = specs / "issued" / "B-1-A.json"
    record = record.replace('"revision": "B"', '"revision": "A"')
    older.write_text(record.replace('"shown": "4.0000"', '"shown": "3.0000"'), "utf-8")
    first = build(specs, site)
    assert (first.solved, first.written) == ((), ("B-1",))
    assert "Changes since the last revision" in (site / "B-1.html").read_text("utf-8")
    assert build(specs, site).written == ()
    older.write_text(older.read_text("utf-8").replace('"shown": "3.0000"', '"shown": "5.0000"'), "utf-8")
    assert build(specs, site).written == ("B-1",)
    assert same_as_fresh(specs, site, tmp_path / "fresh") == []
    edit(path, "title: A sheet", "title: Another title")
    assert build(specs, site).solved == ("B-1",)
    assert same_as_fresh(specs, site, tmp_path / "fresh") == []


def test_the_comparison_is_kept_where_only_something_beside_it_changed(specs, tmp_path, monkeypatch):
    from calcpack import building
    site = tmp_path / "site"
    write_sheet(specs, "B-1", {"a": "2 kW"}, {"b": "2 * a"}, revision="B")
    build(specs, site)
    (specs / "issued").mkdir()
    (specs / "issued" / "B-1-A.json").write_text(
        (site / "B-1.json").read_text("utf-8").replace('"revision": "B"', '"revision": "A"'), "utf-8")
    build(specs, site)
    # A taker appears: the page names it, the comparison stays.
    write_sheet(specs, "B-2", {"b": "{from: B-1.b}"}, {"c": "2 * b"})
    monkeypatch.setattr(building, "_compare", lambda task: pytest.fail(f"{task[0]} is compared again"))
    changed = build(specs, site)
    assert (changed.solved, changed.written) == (("B-2",), ("B-1", "B-2"))
    monkeypatch.undo()
    assert same_as_fresh(specs, site, tmp_path / "fresh") == []


def test_pdfs_are_made_again_when_they_are_asked_for_and_taken_over_after(specs, tmp_path):
    chains(specs, 2, 2)
    site = tmp_path / "site"
    build(specs, site)
    with_pdf = build(specs, site, pdf=True)
    assert (with_pdf.solved, with_pdf.written) == ((), ("C-000", "C-001"))
    assert build(specs, site, pdf=True).written == ()
    assert same_as_fresh(specs, site, tmp_path / "fresh", pdf=True) == []
    build(specs, site)
    assert not list(site.glob("*.pdf"))


def test_a_renamed_or_removed_sheet_leaves_no_page_behind(specs, tmp_path):
    paths, site = chains(specs, 4, 2), tmp_path / "site"
    build(specs, site)
    paths[3].unlink()
    edit(paths[2], "number: C-002", "number: D-002")
    build(specs, site)
    assert {path.name for path in site.glob("*.html")} == {"index.html", "C-000.html", "C-001.html", "D-002.html"}
    assert same_as_fresh(specs, site, tmp_path / "fresh") == []


def test_a_wrong_spec_leaves_the_site_as_it_was_and_tells_all_faults(specs, tmp_path):
    paths, site = chains(specs, 5, 5), tmp_path / "site"
    build(specs, site)
    before = contents(site)
    edit(paths[0], "eta: 0.9", "eta: 0.9 kgg")
    edit(paths[4], "eta: 0.9", "eta: 0.9 kgg")
    with pytest.raises(SpecError) as caught:
        build(specs, site)
    assert {Path(fault.place.file).name for fault in caught.value.faults} == {f"C-00{at}.yaml" for at in range(5)}
    assert contents(site) == before


def test_a_source_that_is_no_page_of_the_site_is_solved_and_not_linked(specs, tmp_path):
    paths, site = chains(specs, 2, 2), tmp_path / "site"
    package = build_package([paths[1]], site, pdf=False, jobs=1, tell=[].append)
    assert [one.number for one in package.records] == ["C-001"] and set(package.solved) == {"C-000", "C-001"}
    page = (site / "C-001.html").read_text("utf-8")
    assert "C-000 revision A" in page and "C-000.html" not in page


def test_two_builds_with_other_jobs_are_the_same_bytes(specs, tmp_path):
    chains(specs, 6, 3)
    build(specs, tmp_path / "one", jobs=1)
    build(specs, tmp_path / "two", jobs=2)
    assert differing(contents(tmp_path / "one"), contents(tmp_path / "two")) == []
    assert str(tmp_path) not in (tmp_path / "one" / NAME).read_text("utf-8")
