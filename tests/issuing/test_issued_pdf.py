"""The issued PDF: PDF/A-3u with its files inside, the same bytes wherever it is made, no folder of a machine in it."""
from __future__ import annotations

import hashlib
import os
import re
import subprocess
import sys
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pikepdf
import pytest

from calcpack.issuing.attached import carried_files
from calcpack.issuing.issue import issue
from calcpack.issuing.paper import FOR_USE, issue_name, issued_pdf, print_engine
from calcpack.issuing.shelf import issued_sheets


@pytest.fixture
def opened(issued_twice: Path) -> Iterator[pikepdf.Pdf]:
    with pikepdf.open(issued_twice / "issued" / "RT-12-B.pdf") as pdf:
        yield pdf


def test_it_says_that_it_is_pdf_a_3u_and_carries_what_that_asks(opened: pikepdf.Pdf) -> None:
    assert opened.pdf_version == "1.7" and not opened.is_encrypted
    [intent] = opened.Root.OutputIntents
    assert intent.S == "/GTS_PDFA1" and len(intent.DestOutputProfile.read_bytes()) > 1000
    assert len(opened.trailer.ID) == 2
    packet = opened.Root.Metadata.read_bytes().decode()
    assert 'pdfaid:part="3"' in packet and 'pdfaid:conformance="U"' in packet
    assert opened.Root.MarkInfo.Marked is True and "/StructTreeRoot" in opened.Root
    assert str(opened.Root.Lang) == "en"


def test_its_properties_and_its_metadata_say_the_same(opened: pikepdf.Pdf) -> None:
    packet = opened.Root.Metadata.read_bytes().decode()
    for key in ("/Title", "/Author", "/Creator", "/Producer"):
        assert str(opened.docinfo[key]) in packet
    assert str(opened.docinfo["/CreationDate"]) == "D:20261113"
    assert "<xmp:CreateDate>2026-11-13</xmp:CreateDate>" in packet


def objects(pdf: pikepdf.Pdf, kind: str) -> list[Any]:
    return [one for one in pdf.objects if isinstance(one, pikepdf.Dictionary) and one.get("/Type") == kind]


@pytest.mark.parametrize("file", ["RT-12-B.pdf", "superseded/RT-12-A.pdf"])
def test_every_font_is_embedded_and_every_glyph_has_a_character(issued_twice: Path, file: str) -> None:
    with pikepdf.open(issued_twice / "issued" / file) as pdf:
        fonts = objects(pdf, "/Font")
        outer = [one for one in fonts if one.Subtype == "/Type0"]
        assert len(outer) >= 3
        for font in outer:
            assert "/ToUnicode" in font
            [inner] = font.DescendantFonts
            descriptor = inner.FontDescriptor
            assert any(key in descriptor for key in ("/FontFile2", "/FontFile3"))
        assert {str(one.Subtype) for one in fonts} <= {"/Type0", "/CIDFontType2", "/CIDFontType0"}


@pytest.mark.parametrize("file", ["RT-12-B.pdf", "superseded/RT-12-A.pdf"])
def test_nothing_in_it_runs_or_looks_outside(issued_twice: Path, file: str) -> None:
    with pikepdf.open(issued_twice / "issued" / file) as pdf:
        assert not {"/OpenAction", "/AA", "/AcroForm"} & set(pdf.Root.keys())
        assert "/JavaScript" not in pdf.Root.Names
        actions = [note.A for page in pdf.pages for note in page.obj.get("/Annots", ()) if "/A" in note]
        assert actions and {str(one.S) for one in actions} <= {"/URI", "/GoTo"}
        assert not [one for one in actions if one.S == "/URI" and re.match(r"[a-z]+:|/", str(one.URI))]
        assert all(int(note.F) & 4 for page in pdf.pages for note in page.obj.get("/Annots", ()))


def test_each_file_is_associated_once_with_its_kind_and_its_part(opened: pikepdf.Pdf) -> None:
    told = {}
    for one in opened.Root.AF:
        stream = one.EF.F
        told[str(one.UF)] = (str(stream.Subtype), str(one.AFRelationship), str(stream.Params.ModDate))
        assert one.F == one.UF and int(stream.Params.Size) == len(stream.read_bytes())
        checksum = hashlib.md5(stream.read_bytes(), usedforsecurity=False).digest()
        assert bytes(stream.Params.CheckSum) == checksum
    assert len(opened.Root.AF) == len(told) == len(opened.attachments)
    day = "D:20261113000000Z"
    assert told == {"rinse.yaml": ("/application/yaml", "/Source", day),
                    "RT-12-B.json": ("/application/json", "/Data", day),
                    "rinse.review.yaml": ("/application/yaml", "/Supplement", day)}


def test_the_files_inside_are_byte_for_byte_those_beside(issued_twice: Path) -> None:
    files = carried_files((issued_twice / "issued" / "RT-12-B.pdf").read_bytes())
    assert files["rinse.yaml"] == (issued_twice / "rinse.yaml").read_bytes()
    assert files["rinse.review.yaml"] == (issued_twice / "rinse.review.yaml").read_bytes()


def test_a_heading_of_a_table_says_what_it_heads(opened: pikepdf.Pdf) -> None:
    found = [one for one in opened.objects if isinstance(one, pikepdf.Dictionary) and one.get("/S") == "/TH"]
    scopes = {str(one.A.Scope) for one in found}
    assert len(found) > 20 and scopes == {"/Column", "/Row"}
    assert all(one.A.O == "/Table" for one in found)


def test_no_folder_of_this_machine_is_in_it(issued_twice: Path) -> None:
    root = Path(__file__).resolve().parent.parent.parent
    for file in ("RT-12-B.pdf", "superseded/RT-12-A.pdf"):
        with pikepdf.open(issued_twice / "issued" / file) as pdf:
            raw = b"".join(one.read_bytes() if isinstance(one, pikepdf.Stream) and "/Width" not in one
                           else b"" for one in pdf.objects)
            raw += b"".join(one.unparse(resolved=True) for one in pdf.objects if not isinstance(one, pikepdf.Stream))
        for folder in (root, issued_twice, Path.home(), Path.cwd()):
            assert str(folder).encode() not in raw


def test_it_can_be_made_again_from_what_it_carries(issued_twice: Path) -> None:
    from calcpack.issuing.attached import Attachment
    [_, last] = issued_sheets(issued_twice)
    files = carried_files(last.path.read_bytes())
    roles = {one["name"]: one["role"] for one in last.record.data["issue"]["files"]}
    assert issued_pdf(last.record, [Attachment(name, role, files[name]) for name, role in roles.items()]) \
        == last.path.read_bytes()


def test_another_folder_another_language_and_another_process_give_the_same_bytes(ready: Path) -> None:
    made = issue(ready / "rinse.yaml", kind=FOR_USE, date="2026-10-06").path.read_bytes()
    for name in ("RT-12-A.pdf", "register.yaml"):
        (ready / "issued" / name).unlink()
    settings = {**os.environ, "LC_ALL": "C", "TZ": "Asia/Tokyo", "PYTHONHASHSEED": "7", "LANG": "de_DE.UTF-8"}
    subprocess.run([sys.executable, "-c", "from calcpack.cli import main; main()", "issue", "../rinse.yaml",
                    "--date", "2026-10-06"], cwd=ready / "issued", env=settings, check=True,
                   capture_output=True, timeout=120)
    assert (ready / "issued" / "RT-12-A.pdf").read_bytes() == made


def test_the_record_inside_tells_what_made_the_pages(issued_twice: Path) -> None:
    [_, last] = issued_sheets(issued_twice)
    told = last.record.data["issue"]["print"]
    assert told == dict(print_engine()) and set(told) >= {"weasyprint", "pango", "harfbuzz", "pikepdf"}
    assert all(re.fullmatch(r"\d+(\.\d+)+", version) for version in told.values())


def test_an_issue_is_named_by_number_revision_and_kind() -> None:
    assert issue_name("MT-103", "B", "for use") == "MT-103-B.pdf"
    assert issue_name("MT 1/3", "2", "for information") == "MT-1-3-2-for-information.pdf"
