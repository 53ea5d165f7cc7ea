"""What an issue does to those before it: a stamped copy, links both ways, a register that can always be made again."""
from __future__ import annotations

import hashlib
import shutil
from io import BytesIO
from pathlib import Path

import pikepdf
import pytest
import yaml
from issue_helpers import ON_B, check_sheet, pages_of, write_sheet

from calcpack.errors import CommandError
from calcpack.issuing.attached import carried_files
from calcpack.issuing.issue import NotIssuedError, issue
from calcpack.issuing.overlay import superseded_copy
from calcpack.issuing.paper import FOR_INFORMATION, FOR_USE
from calcpack.issuing.register import lost, renew
from calcpack.issuing.shelf import issued_sheets
from calcpack.pipeline import record_and_comparison


def links(pdf: pikepdf.Pdf) -> list[str]:
    return [str(note.A.URI) for page in pdf.pages for note in page.obj.get("/Annots", ()) if "/A" in note]


def test_the_earlier_issue_stays_byte_for_byte(ready: Path) -> None:
    first = issue(ready / "rinse.yaml", kind=FOR_USE, date="2026-10-06")
    content, times = first.path.read_bytes(), first.path.stat().st_mtime_ns
    check_sheet(write_sheet(ready, *ON_B))
    done = issue(ready / "rinse.yaml", kind=FOR_USE, date="2026-11-13")
    assert done.supersedes == "A"
    assert (first.path.read_bytes(), first.path.stat().st_mtime_ns) == (content, times)
    assert hashlib.sha256(content).hexdigest() == first.sha256


def test_every_page_of_the_copy_says_by_what_it_is_superseded(issued_twice: Path) -> None:
    shelf = issued_twice / "issued"
    old, stamped = pages_of(shelf / "RT-12-A.pdf"), pages_of(shelf / "superseded" / "RT-12-A.pdf")
    assert len(old) == len(stamped) > 3
    for before, after in zip(old, stamped, strict=True):
        assert "SUPERSEDED BY REVISION B, issued 2026-11-13" in after
        assert set(before.split()) <= set(after.split())


def test_the_copy_leads_to_what_is_in_force_and_that_to_the_copy(issued_twice: Path) -> None:
    shelf = issued_twice / "issued"
    with pikepdf.open(shelf / "superseded" / "RT-12-A.pdf") as copy, pikepdf.open(shelf / "RT-12-B.pdf") as new:
        [address] = links(copy)
        assert (shelf / "superseded" / address).resolve() == shelf / "RT-12-B.pdf"
        assert set(links(new)) == {"superseded/RT-12-A.pdf"}
        assert "/Annots" in copy.pages[0].obj


def test_the_new_issue_is_compared_with_the_file_of_the_one_before(issued_twice: Path) -> None:
    words = " ".join(" ".join(pages_of(issued_twice / "issued" / "RT-12-B.pdf")).split())
    assert "Compared with revision A (RT-12-A.pdf)." in words


def test_the_copy_carries_what_the_issue_carried(issued_twice: Path) -> None:
    shelf = issued_twice / "issued"
    assert carried_files((shelf / "superseded" / "RT-12-A.pdf").read_bytes()) \
        == carried_files((shelf / "RT-12-A.pdf").read_bytes())
    with pikepdf.open(shelf / "superseded" / "RT-12-A.pdf") as copy:
        assert b'pdfaid:part="3"' in copy.Root.Metadata.read_bytes() and len(copy.Root.AF) == 3


def test_the_title_page_says_when_it_was_issued_and_what_it_supersedes(issued_twice: Path) -> None:
    first, second = (" ".join(pages_of(issued_twice / "issued" / f"RT-12-{mark}.pdf")[0].split()) for mark in "AB")
    assert "Issued 2026-10-06, for use Supersedes nothing: first issue" in first
    assert "Issued 2026-11-13, for use" in second
    assert "Supersedes revision A of 2026-10-06, superseded/RT-12-A.pdf" in second
    assert "Status issued" in second and "FOR INFORMATION" not in second


def test_the_history_says_who_checked_and_approved_each_revision(issued_twice: Path) -> None:
    page = next(one for one in pages_of(issued_twice / "issued" / "RT-12-B.pdf") if "Revision history" in one
                and "Cooler rinse" in one)
    rows = {line.split()[0]: line for line in page.splitlines() if "R. Aldane" in line}
    for mark, day in (("A", "2026-10-01"), ("B", "2026-11-10")):
        assert all(word in rows[mark] for word in (day, "S. Virta", "M. Okoro")), rows[mark]


def test_the_register_tells_every_issue_and_which_is_in_force(issued_twice: Path) -> None:
    shelf = issued_twice / "issued"
    first, second = yaml.safe_load((shelf / "register.yaml").read_text("utf-8"))["issues"]
    for entry, file in ((first, "RT-12-A.pdf"), (second, "RT-12-B.pdf")):
        content = (shelf / file).read_bytes()
        record = next(raw for name, raw in carried_files(content).items() if name.endswith(".json"))
        assert entry["file"] == file and entry["sha256"] == hashlib.sha256(content).hexdigest()
        assert entry["record_sha256"] == hashlib.sha256(record).hexdigest()
    assert second["spec_sha256"] == hashlib.sha256((issued_twice / "rinse.yaml").read_bytes()).hexdigest()
    assert (first["status"], first["superseded_by"], first["supersedes"]) == ("superseded", "B", None)
    assert (second["status"], second["superseded_by"], second["supersedes"]) == ("in force", None, "A")
    assert second["checked"] == {"name": "S. Virta", "date": "2026-11-12"}
    assert second["kind"] == "for use" and second["date"] == "2026-11-13" and second["title"] == "Rinse water heater"


def test_the_copy_of_a_sealed_issue_does_not_pretend_to_be_sealed(issued_twice: Path) -> None:
    made = BytesIO()
    with pikepdf.open(issued_twice / "issued" / "RT-12-A.pdf") as pdf:
        field = pdf.make_indirect(pikepdf.Dictionary(
            Type=pikepdf.Name.Annot, Subtype=pikepdf.Name.Widget, FT=pikepdf.Name.Sig, T="Seal", Rect=[0, 0, 0, 0]))
        pdf.Root.AcroForm = pikepdf.Dictionary(Fields=[field], SigFlags=3)
        pdf.pages[0].obj.Annots.append(field)
        pdf.save(made)
    copy = superseded_copy(made.getvalue(), "RT-12", "SUPERSEDED", "../RT-12-B.pdf")
    with pikepdf.open(BytesIO(copy)) as pdf:
        assert "/AcroForm" not in pdf.Root
        assert {str(note.Subtype) for note in pdf.pages[0].obj.Annots} == {"/Link"}


def test_register_and_copies_come_again_as_they_were(issued_twice: Path) -> None:
    shelf = issued_twice / "issued"
    derived = {path: path.read_bytes() for path in (shelf / "register.yaml", shelf / "superseded" / "RT-12-A.pdf")}
    (shelf / "register.yaml").write_text("issues: by hand\n")
    shutil.rmtree(shelf / "superseded")
    assert set(renew(issued_twice)) == set(derived)
    assert {path: path.read_bytes() for path in derived} == derived
    assert renew(issued_twice) == ()


def test_an_issue_for_information_supersedes_nothing_and_is_compared_with_nothing(ready: Path) -> None:
    issue(ready / "rinse.yaml", kind=FOR_USE, date="2026-10-06")
    write_sheet(ready, *ON_B)
    done = issue(ready / "rinse.yaml", kind=FOR_INFORMATION, date="2026-11-11")
    assert done.supersedes is None and not (ready / "issued" / "superseded").exists()
    first, second = issued_sheets(ready)
    assert (first.standing, second.standing) == (True, False)
    check_sheet(write_sheet(ready, *ON_B))
    _, comparison = record_and_comparison(ready / "rinse.yaml")
    assert comparison["against"]["revision"] == "A"
    assert issue(ready / "rinse.yaml", kind=FOR_USE, date="2026-11-13").supersedes == "A"
    entries = yaml.safe_load((ready / "issued" / "register.yaml").read_text("utf-8"))["issues"]
    assert [(one["file"], one["status"]) for one in entries] == [
        ("RT-12-A.pdf", "superseded"), ("RT-12-B-for-information.pdf", "for information"), ("RT-12-B.pdf", "in force")]


def test_a_revision_is_compared_with_the_record_inside_the_last_issue(issued_twice: Path) -> None:
    _, comparison = record_and_comparison(issued_twice / "rinse.yaml")
    moved = {one["symbol"]: (one["old"], one["new"]) for one in comparison["inputs"]}
    assert moved["T_out"][0] != moved["T_out"][1] and list(moved) == ["T_out"]


def test_a_refusal_beside_a_kept_record_writes_nothing(issued_twice: Path) -> None:
    shelf = issued_twice / "issued"
    raw = next(raw for name, raw in carried_files((shelf / "RT-12-A.pdf").read_bytes()).items() if "json" in name)
    shutil.rmtree(shelf)
    shelf.mkdir()
    (shelf / "RT-12-A.json").write_bytes(raw)
    (issued_twice / "rinse.review.yaml").unlink()
    with pytest.raises(NotIssuedError):
        issue(issued_twice / "rinse.yaml", kind=FOR_USE, date="2026-11-13")
    assert [path.name for path in shelf.rglob("*")] == ["RT-12-A.json"]


def test_a_kept_record_is_superseded_and_has_no_copy(issued_twice: Path) -> None:
    shelf = issued_twice / "issued"
    raw = next(raw for name, raw in carried_files((shelf / "RT-12-A.pdf").read_bytes()).items() if "json" in name)
    for name in ("RT-12-A.pdf", "RT-12-B.pdf", "superseded/RT-12-A.pdf", "register.yaml"):
        (shelf / name).unlink()
    (shelf / "RT-12-A.json").write_bytes(raw)
    done = issue(issued_twice / "rinse.yaml", kind=FOR_USE, date="2026-11-13")
    assert done.supersedes == "A" and not list((shelf / "superseded").iterdir())
    assert "RT-12-A.json" in pages_of(done.path)[0]


@pytest.mark.parametrize("name, content", [("RT-12-C.pdf", b"%PDF-1.7\ncut off"), ("RT-12-C.json", b'{"calcpack": 1,')])
def test_a_damaged_issue_is_a_fault_and_no_gap(issued_twice: Path, name: str, content: bytes) -> None:
    (issued_twice / "issued" / name).write_bytes(content)
    with pytest.raises(CommandError, match="cannot be read, and may be an issue of a sheet"):
        issued_sheets(issued_twice)


def test_other_files_on_the_shelf_are_left_alone(issued_twice: Path) -> None:
    shelf, before = issued_twice / "issued", issued_sheets(issued_twice)
    empty = pikepdf.new()
    empty.add_blank_page()
    empty.save(shelf / "drawing.pdf")
    (shelf / "list.json").write_text("[1, 2]")
    (shelf / "notes.txt").write_text("keep")
    assert issued_sheets(issued_twice) == before


def test_a_locked_pdf_on_the_shelf_is_told_as_one_that_may_be_an_issue(tmp_path: Path) -> None:
    (tmp_path / "issued").mkdir()
    with pikepdf.new() as pdf:
        pdf.add_blank_page()
        pdf.save(tmp_path / "issued/x.pdf", encryption=pikepdf.Encryption(owner="o", user="u"))
    with pytest.raises(CommandError, match="may be an issue of a sheet"):
        issued_sheets(tmp_path)


def test_a_record_in_another_encoding_is_told_and_not_stumbled_over(tmp_path: Path) -> None:
    (tmp_path / "issued").mkdir()
    (tmp_path / "issued/x.json").write_text('{"calcpack": 1, "sheet": {}}', "utf-16")
    with pytest.raises(CommandError, match="is not a record"):
        issued_sheets(tmp_path)


def test_a_foreign_file_with_the_name_of_the_issue_is_told_by_a_dry_run_too(ready: Path) -> None:
    (ready / "issued").mkdir()
    with pikepdf.new() as pdf:
        pdf.add_blank_page()
        pdf.save(ready / "issued/RT-12-A.pdf")
    for dry_run in (True, False):
        with pytest.raises(CommandError, match=r"RT-12-A\.pdf is there already"):
            issue(ready / "rinse.yaml", kind=FOR_USE, date="2026-10-06", dry_run=dry_run)


def test_a_register_that_is_no_text_is_made_again(issued_twice: Path) -> None:
    register = issued_twice / "issued/register.yaml"
    whole = register.read_bytes()
    register.write_bytes(b"\xff\xfe\x80")
    assert renew(issued_twice) == (register,) and register.read_bytes() == whole


def test_a_file_in_the_place_of_the_copies_is_told(issued_twice: Path) -> None:
    shutil.rmtree(issued_twice / "issued/superseded")
    (issued_twice / "issued/superseded").touch()
    with pytest.raises(CommandError, match="cannot write into"):
        renew(issued_twice)


def test_an_issue_that_the_register_names_and_that_is_gone_or_another_stops_the_next_one(issued_twice: Path) -> None:
    shelf, elsewhere = issued_twice / "issued", issued_twice / "issued" / "superseded" / "RT-12-A.pdf"
    first, whole = shelf / "RT-12-A.pdf", (shelf / "RT-12-A.pdf").read_bytes()
    register = (shelf / "register.yaml").read_bytes()
    assert lost(issued_twice) == ()
    first.unlink()
    with pytest.raises(NotIssuedError, match=r"RT-12-A\.pdf was issued and is gone"):
        issue(issued_twice / "rinse.yaml", kind=FOR_USE, date="2026-11-20")
    shutil.copy(elsewhere, first)
    with pytest.raises(NotIssuedError, match=r"RT-12-A\.pdf is not the file that was issued"):
        issue(issued_twice / "rinse.yaml", kind=FOR_USE, date="2026-11-20", dry_run=True)
    assert (shelf / "register.yaml").read_bytes() == register
    first.write_bytes(whole)
    assert lost(issued_twice) == ()
