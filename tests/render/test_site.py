"""The site: its files, its links, its bytes, and what it leaves alone."""
from __future__ import annotations

import hashlib
import json
import os
import re
import subprocess
import sys
from html import unescape
from pathlib import Path

import pytest
from render_helpers import solve_small

from calcpack.errors import CommandError
from calcpack.record import Record
from calcpack.render import assets, site
from calcpack.render.assets import templates_folder
from calcpack.render.manifest import NAME as MANIFEST
from calcpack.render.site import build_site


@pytest.fixture(scope="module")
def second(tmp_path_factory: pytest.TempPathFactory) -> Record:
    return solve_small(tmp_path_factory.mktemp("second"), change=lambda text: text.replace(
        "RT-12", "RT-13").replace("at_most: 40 degC", "at_most: 50 degC").replace("status: open", "status: confirmed"))


@pytest.fixture(scope="module")
def built(small: Record, second: Record, tmp_path_factory: pytest.TempPathFactory) -> Path:
    folder = tmp_path_factory.mktemp("site") / "deep" / "site"
    files = build_site([(small, None), (second, None)], folder).files
    assert sorted(files) == sorted(path for path in folder.rglob("*") if path.is_file() and path.name != MANIFEST)
    return folder


def contents(folder: Path) -> dict[str, bytes]:
    return {path.relative_to(folder).as_posix(): path.read_bytes() for path in folder.rglob("*") if path.is_file()}


def test_every_sheet_has_page_pdf_and_record(built: Path, small: Record) -> None:
    for number in ("RT-12", "RT-13"):
        assert (built / f"{number}.html").is_file() and (built / f"{number}.pdf").read_bytes().startswith(b"%PDF")
    assert (built / "RT-12.json").read_text("utf-8") == small.to_json()


def test_the_page_names_the_hashes_of_spec_and_record(built: Path, small: Record) -> None:
    page = (built / "RT-12.html").read_text("utf-8")
    assert hashlib.sha256((built / "RT-12.json").read_bytes()).hexdigest() in page
    assert small.data["spec_sha256"] in page


def test_all_links_are_relative_and_lead_to_files(built: Path) -> None:
    names = set(contents(built))
    for page in built.glob("*.html"):
        text = page.read_text("utf-8")
        found = {unescape(link) for link in re.findall(r'(?:href|src)="([^"#]+)', text)}
        assert found and found <= names, page.name
    for style in (built / "assets/styles").glob("*.css"):
        for address in re.findall(r'url\("([^"]+)"\)', style.read_text("utf-8")):
            assert (style.parent / address).resolve().is_file(), address


def test_the_register_tells_how_each_sheet_stands(built: Path, small: Record) -> None:
    text = re.sub(r"\s+", " ", unescape(re.sub(r"<[^>]+>", " ", (built / "index.html").read_text("utf-8"))))
    assert "2 sheets; 1 has a hold open; 1 fails a limit" in text
    first, other = text.split("RT-12", 1)[1].split("RT-13", 1)
    assert "1 of 2 limits FAILS" in first and "1 hold open: A1" in first
    assert "all 2 limits hold" in other and "no hold open" in other
    assert small.data["results"]["m_dot"]["shown"] in first and "A, draft" in first
    assert small.data["spec_sha256"][:12] in first


def test_jobs_and_hash_seeds_change_no_byte(built: Path, small: Record, second: Record, tmp_path: Path) -> None:
    told: list[str] = []
    build_site([(small, None), (second, None)], tmp_path / "two", jobs=2, progress=told.append)
    assert told == ["RT-12", "RT-13"]
    assert contents(tmp_path / "two") == contents(built)
    code = ("import sys, pathlib; from calcpack.record.record import read_record; "
            "from calcpack.render.site import build_site; "
            "build_site([(read_record(pathlib.Path(p)), None) for p in sys.argv[2:]], pathlib.Path(sys.argv[1]))")
    subprocess.run([sys.executable, "-c", code, str(tmp_path / "other"), str(built / "RT-12.json"),
                    str(built / "RT-13.json")], check=True, env={**os.environ, "PYTHONHASHSEED": "7"})
    assert contents(tmp_path / "other") == contents(built)


def test_a_rebuild_removes_what_no_sheet_needs_and_nothing_else(small: Record, second: Record, tmp_path: Path) -> None:
    build_site([(small, None), (second, None)], tmp_path / "s", pdf=False)
    (tmp_path / "s" / "notes.txt").write_text("mine")
    (tmp_path / "kept.txt").write_text("outside")
    manifest = tmp_path / "s" / MANIFEST
    listed = json.loads(manifest.read_text())
    listed["files"] += ["../kept.txt", str(tmp_path / "kept.txt"), "gone.html", 3]
    manifest.write_text(json.dumps(listed))
    build_site([(second, None)], tmp_path / "s", pdf=False)
    names = set(contents(tmp_path / "s"))
    assert "RT-12.html" not in names and "RT-12.json" not in names
    assert {"RT-13.html", "RT-13.json", "notes.txt", "index.html"} <= names
    assert (tmp_path / "kept.txt").read_text() == "outside"
    assert not [name for name in names if name.endswith(".pdf")]


def test_a_failed_build_leaves_everything_as_it_was(small: Record, tmp_path: Path,
                                                    monkeypatch: pytest.MonkeyPatch) -> None:
    def fails(*_: object, **__: object) -> int:
        raise CommandError(site.Fault("no"))

    monkeypatch.setattr(site, "pdf_bytes", fails)
    with pytest.raises(CommandError):
        build_site([(small, None)], tmp_path / "new" / "site")
    assert not (tmp_path / "new").exists()
    build_site([(small, None)], tmp_path / "old", pdf=False)
    before = contents(tmp_path / "old")
    with pytest.raises(CommandError):
        build_site([(small, None)], tmp_path / "old")
    assert contents(tmp_path / "old") == before


def test_two_sheets_of_one_number_are_refused(small: Record, tmp_path: Path) -> None:
    other = Record({**small.data, "sheet": {**small.data["sheet"], "number": "rt-12"}})
    with pytest.raises(CommandError) as caught:
        build_site([(small, None), (other, None)], tmp_path / "s", pdf=False)
    assert "RT-12 and rt-12" in caught.value.faults[0].found
    assert not (tmp_path / "s").exists()


def test_a_folder_that_is_a_file_is_refused(small: Record, tmp_path: Path) -> None:
    (tmp_path / "file").write_text("x")
    with pytest.raises(CommandError, match="cannot write into"):
        build_site([(small, None)], tmp_path / "file", pdf=False)


def test_templates_are_found_in_the_source_tree_and_in_a_wheel(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    assert templates_folder() == Path(__file__).resolve().parents[2] / "templates"
    inside = tmp_path / "calcpack"
    (inside / "templates").mkdir(parents=True)
    (inside / "templates" / "sheet.html").write_text("x")
    monkeypatch.setattr(assets, "__file__", str(inside / "render" / "assets.py"))
    assert templates_folder() == inside / "templates"
    (inside / "templates" / "sheet.html").unlink()
    with pytest.raises(assets.MissingPartError):
        templates_folder()


def test_a_folder_with_files_of_somebody_else_is_left_alone(small: Record, tmp_path: Path) -> None:
    (tmp_path / "index.html").write_text("mine", "utf-8")
    with pytest.raises(CommandError, match="did not write"):
        build_site([(small, None)], tmp_path, pdf=False)
    assert (tmp_path / "index.html").read_text("utf-8") == "mine"
    assert [one.name for one in tmp_path.iterdir()] == ["index.html"]
