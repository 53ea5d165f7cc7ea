"""One PDF of a package: its own pages, every sheet, links, bookmarks and tags that lead where they should."""
from __future__ import annotations

import csv
import os
import re
import subprocess
import sys
from collections.abc import Iterator
from io import BytesIO
from pathlib import Path
from typing import Any

import pikepdf
import pytest
from click.testing import CliRunner

from calcpack.cli import main
from calcpack.errors import CommandError
from calcpack.package.binding import bind
from calcpack.package.bound_sheets import sheets_now
from calcpack.package.transmittal import Transmittal, as_csv

SHEET = """\
calcpack: 1
sheet: {{number: {number}, title: {title}, project: Bottle works, revision: {revision}, status: draft,
        purpose: Heat., scope: All., page: {page}}}
signoff: {{prepared: {{name: B. Lindt, date: 2026-03-02}}}}
case:
  method: none
  inputs: {{m: {mass}, c_w: 4.18 kJ/(kg·K), dT: 40 K}}
steps:
  - {{symbol: Q, title: Heat to warm the tank, formula: m * c_w * dT, unit: MJ}}
limits:
  - {{id: L1, symbol: Q, at_most: 200 MJ, why: The heater gives no more in an hour.}}
results: [Q]
"""
LETTER = Transmittal("2026-03-31", "Harbour office <north>", "Review & comment")


def write_specs(folder: Path) -> Path:
    """Two sheets, the second on Letter and with a limit that fails."""
    folder.mkdir()
    (folder / "b-tank.yaml").write_text(SHEET.format(number="BC-1", title="Wash tank", revision="B", page="A4",
                                                     mass="1000 kg"), "utf-8")
    (folder / "a-tank.yaml").write_text(SHEET.format(number="BC-2", title="Rinse tank of the second line", revision="A",
                                                     page="Letter", mass="1500 kg"), "utf-8")
    return folder


@pytest.fixture(scope="module")
def specs(tmp_path_factory: pytest.TempPathFactory) -> Path:
    return write_specs(tmp_path_factory.mktemp("works") / "specs")


@pytest.fixture(scope="module")
def sheets(specs: Path) -> Any:
    return sheets_now([specs], jobs=1, tell=lambda text: None)


@pytest.fixture(scope="module")
def package(sheets: Any) -> Any:
    return bind(sheets, LETTER, issued=False)


@pytest.fixture
def pdf(package: Any, tmp_path: Path) -> Iterator[pikepdf.Pdf]:
    (tmp_path / "package.pdf").write_bytes(package.content)
    with pikepdf.open(tmp_path / "package.pdf") as opened:
        yield opened


def text_of(content: bytes, page: int, folder: Path) -> str:
    """What a reader sees on a page, from 1."""
    (folder / "read.pdf").write_bytes(content)
    done = subprocess.run(["pdftotext", "-f", str(page), "-l", str(page), "-layout", str(folder / "read.pdf"), "-"],
                          capture_output=True, check=True, text=True)
    return " ".join(done.stdout.split())


def numbered(pdf: pikepdf.Pdf) -> dict[tuple[int, int], int]:
    return {page.obj.objgen: at for at, page in enumerate(pdf.pages, start=1)}


def targets(pdf: pikepdf.Pdf) -> list[tuple[int, int]]:
    """Each link inside the PDF, as (page, page that it leads to)."""
    numbers, found = numbered(pdf), []
    names = dict(pikepdf.NameTree(pdf.Root.Names.Dests).items())
    for at, page in enumerate(pdf.pages, start=1):
        for note in page.obj.get("/Annots", ()):
            assert "/A" not in note, "a link that leads out of the package"
            place = names[str(note.Dest)] if isinstance(note.Dest, pikepdf.String) else note.Dest
            place = place.D if isinstance(place, pikepdf.Dictionary) else place
            found.append((at, numbers[place[0].objgen]))
    return found


def test_every_page_carries_the_count_of_the_package_beside_its_own(package, sheets, tmp_path):
    first = package.rows[0].first_page
    for at in range(1, package.pages + 1):
        text = text_of(package.content, at, tmp_path)
        assert re.findall(r"page (\d+) of (\d+) of the package", text) == [(str(at), str(package.pages))]
        assert ("Sheet " in text and re.search(r"Sheet \d+ of \d+", text) is not None) == (at >= first)
    assert "Sheet 1 of" in text_of(package.content, package.rows[1].first_page, tmp_path)


def test_the_count_lies_where_nothing_else_stands(package, tmp_path):
    (tmp_path / "read.pdf").write_bytes(package.content)
    boxes = subprocess.run(["pdftotext", "-bbox", str(tmp_path / "read.pdf"), "-"], capture_output=True, check=True,
                           text=True).stdout
    for page in boxes.split("<page ")[1:]:
        words = [(*map(float, found[:4]), found[4]) for found in re.findall(
            r'xMin="([-\d.]+)" yMin="([-\d.]+)" xMax="([-\d.]+)" yMax="([-\d.]+)">(.*?)</word>', page)]
        height = float(re.search(r'height="([\d.]+)"', page)[1])
        count = [word for word in words if word[1] > height - 30.0]
        assert [word[4] for word in count][:1] == ["page"] and count[-1][4] == "package"
        others = [word for word in words if word not in count]
        assert max(word[3] for word in others) < min(word[1] for word in count)
        assert max(word[3] for word in count) < height - 12.0


def test_contents_cover_and_list_name_the_pages_that_sheets_begin_on(package, pdf, tmp_path):
    front = " ".join(text_of(package.content, at, tmp_path) for at in range(1, package.rows[0].first_page))
    for row in package.rows:
        sheet = row.sheet.record.data["sheet"]
        assert text_of(package.content, row.first_page, tmp_path).startswith(f"{sheet['number']} {sheet['title']}")
        assert re.search(rf"{sheet['number']} {sheet['title']}, revision {sheet['revision']} ?\.+ ?{row.first_page}\b",
                         front)
    assert package.pages == len(pdf.pages) == sum(row.pages for row in package.rows) + package.rows[0].first_page - 1
    assert "Harbour office <north>" in front and "Review & comment" in front and "Not an issue." in front
    assert "BC-2: limit L1 FAILS; not signed: prepared, checked, approved" in front
    assert front.count("B. Lindt") == 2 and "named, not signed" in front
    for row in package.rows:
        assert row.sheet.record.data["spec_sha256"][:12] in front


def test_links_lead_from_the_contents_to_sheets_and_stay_inside_each_sheet(package, pdf):
    starts = [row.first_page for row in package.rows]
    spans = [range(start, start + row.pages) for start, row in zip(starts, package.rows, strict=True)]
    led = targets(pdf)
    assert {to for at, to in led if at < starts[0]} == set(starts)
    inside = [(at, to) for at, to in led if at >= starts[0]]
    assert len(inside) > 20
    for at, to in inside:
        assert any(at in span and to in span for span in spans)


def test_bookmarks_are_nested_by_sheet(package, pdf):
    numbers = numbered(pdf)
    with pdf.open_outline() as outline:
        tops = [(item.title, numbers[item.destination[0].objgen], len(item.children)) for item in outline.root]
        parts = [(child.title, numbers[child.destination[0].objgen]) for child in outline.root[-1].children]
    assert [title for title, _, _ in tops[:4]] == ["Cover", "Register", "Contents", "Transmittal list"]
    assert [(title, page) for title, page, _ in tops[4:]] == [
        ("BC-1 Wash tank, revision B", package.rows[0].first_page),
        ("BC-2 Rinse tank of the second line, revision A", package.rows[1].first_page)]
    assert len(parts) == tops[-1][2] > 8
    assert all(package.rows[1].first_page <= page <= package.pages for _, page in parts)


def test_tags_of_every_sheet_are_kept_and_refer_to_their_own_page(pdf):
    tree = dict(pikepdf.NumberTree(pdf.Root.StructTreeRoot.ParentTree).items())
    for page in pdf.pages:
        elements = [one for one in tree[int(page.obj.StructParents)] if one is not None]
        assert elements and all(one.Pg.objgen == page.obj.objgen for one in elements)
        for note in page.obj.get("/Annots", ()):
            kids = [kid for kid in tree[int(note.StructParent)].K if isinstance(kid, pikepdf.Dictionary)]
            assert any("/Obj" in kid and kid.Obj.objgen == note.objgen for kid in kids)
    ids, headers = [], set()
    for one in pdf.objects:
        if isinstance(one, pikepdf.Dictionary) and "/S" in one and "/P" in one:
            ids += [str(one.ID)] if "/ID" in one else []
            about = one.get("/A")
            for entry in [about] if isinstance(about, pikepdf.Dictionary) else list(about or ()):
                headers |= {str(name) for name in entry.get("/Headers", ())}
    assert len(ids) == len(set(ids)) and headers and headers <= set(ids)


def test_each_page_keeps_its_paper_and_fonts_are_inside(pdf, package):
    widths = [round(float(page.mediabox[2])) for page in pdf.pages]
    letter = package.rows[1].first_page - 1
    assert set(widths[:letter]) == {595} and set(widths[letter:]) == {612}
    described = [one for one in pdf.objects if isinstance(one, pikepdf.Dictionary)
                 and one.get("/Type") == pikepdf.Name.FontDescriptor]
    assert described and all("/FontFile2" in one or "/FontFile3" in one for one in described)


def test_two_bindings_are_the_same_bytes_and_name_no_folder(package, sheets, specs):
    assert bind(sheets, LETTER, issued=False).content == package.content
    with pikepdf.open(BytesIO(package.content)) as pdf:
        pdf.save(plain := BytesIO(), stream_decode_level=pikepdf.StreamDecodeLevel.all, compress_streams=False,
                 object_stream_mode=pikepdf.ObjectStreamMode.disable)
    assert b"BC-1 Wash tank" in plain.getvalue()
    for word in (str(specs.parent), "file:", "calcpack-", str(Path(__file__).parents[2])):
        assert word.encode() not in plain.getvalue()


def test_another_process_place_and_language_give_the_same_bytes(package, tmp_path):
    specs = write_specs(tmp_path / "elsewhere")
    command = ["package", str(specs), "-q", "-o", "out.pdf", "--date", LETTER.date, "--to", LETTER.to, "--purpose",
               LETTER.purpose]
    code = "from calcpack.cli import main; main()"
    done = subprocess.run([sys.executable, "-c", code, *command], cwd=tmp_path, capture_output=True, text=True,
                          env={**os.environ, "TZ": "Asia/Tokyo", "LC_ALL": "C", "PYTHONHASHSEED": "7"}, check=False)
    assert done.returncode == 1, done.stderr                 # a limit fails
    assert (tmp_path / "out.pdf").read_bytes() == package.content


def test_the_list_as_text_agrees_with_the_pages(package):
    rows = list(csv.DictReader(as_csv(package.rows).splitlines()))
    assert [(row["number"], row["revision"], row["status"], row["first_page"], row["pages"]) for row in rows] == [
        (one.sheet.number, one.sheet.record.revision, "draft", str(one.first_page), str(one.pages))
        for one in package.rows]
    assert all(len(row["sha256"]) == 64 and row["file"].endswith(".yaml") for row in rows)


def test_a_package_of_no_sheets_or_of_two_with_one_number_is_refused(sheets):
    with pytest.raises(CommandError, match="no sheet to bind"):
        bind([], LETTER, issued=False)
    with pytest.raises(CommandError, match="more than one spec"):
        bind([sheets[0], sheets[0]], LETTER, issued=False)


@pytest.mark.parametrize(("arguments", "told"), [
    (["-o", "issued/package.pdf"], "lies in the folder of what was issued"),
    (["-o", "issued/superseded/package.pdf"], "lies in the folder of what was issued"),
    (["-o", "nowhere/package.pdf"], "there is no folder nowhere"),
    (["-o", "note.yaml"], "note.yaml is there already, and is no PDF"), (["-o", "specs"], "cannot write specs"),
    (["--list", "note.yaml"], "note.yaml is there already, and is no list"),
    (["--list", "package.pdf"], "cannot be one file"), (["--date", "31.3.2026"], "not a day of the calendar"),
    (["--issued"], "sheet BC-1 has no PDF that was issued for use")])
def test_what_cannot_be_bound_is_refused_before_anything_is_written(arguments, told, tmp_path, monkeypatch):
    write_specs(tmp_path / "specs")
    (tmp_path / "issued/superseded").mkdir(parents=True)
    (tmp_path / "note.yaml").write_text("calcpack: 1\n", "utf-8")
    monkeypatch.chdir(tmp_path)
    done = CliRunner().invoke(main, ["package", *arguments])
    assert done.exit_code == 2 and told in done.stderr
    assert sorted(path.name for path in tmp_path.rglob("*") if path.is_file()) == ["a-tank.yaml", "b-tank.yaml",
                                                                                      "note.yaml"]
    assert (tmp_path / "note.yaml").read_text("utf-8") == "calcpack: 1\n"


def test_every_sheet_that_was_not_issued_is_told(specs):
    done = CliRunner().invoke(main, ["package", str(specs), "--issued"])
    assert "sheet BC-1 has no PDF" in done.stderr and "sheet BC-2 has no PDF" in done.stderr
