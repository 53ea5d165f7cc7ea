"""A package of issued sheets: the issue in force is bound, links to files beside it are taken away."""
from __future__ import annotations

import hashlib
from io import BytesIO

import pikepdf
from click.testing import CliRunner

from calcpack.cli import main
from calcpack.package.bound_sheets import sheets_issued


def test_the_last_issue_for_use_is_bound_and_named_with_its_hash(issued_twice, tmp_path):
    [sheet] = sheets_issued([issued_twice])
    path = issued_twice / "issued" / sheet.file
    assert sheet.record.revision == "B" and path.name.endswith("-B.pdf")
    assert sheet.sha256 == hashlib.sha256(path.read_bytes()).hexdigest()
    assert [one.state for one in sheet.signatures] == ["signed"] * 3 and all(one.name for one in sheet.signatures)
    done = CliRunner().invoke(main, ["package", str(issued_twice), "--issued", "--date", "2026-12-01",
                                     "-o", str(tmp_path / "package.pdf")])
    assert done.exit_code == 0, done.stderr
    with pikepdf.open(tmp_path / "package.pdf") as pdf:
        with pikepdf.open(path) as source:
            assert len(pdf.pages) > len(source.pages)
        assert not any("/A" in note for page in pdf.pages for note in page.obj.get("/Annots", ()))
        assert len(pdf.attachments) == 0 and "/AcroForm" not in pdf.Root


def test_an_issue_for_information_is_none_for_use(issued_twice):
    shelf = issued_twice / "issued"
    for path in (*shelf.glob("*.pdf"), shelf / "register.yaml"):
        path.unlink()
    assert CliRunner().invoke(main, ["issue", str(issued_twice / "rinse.yaml"), "--for-information",
                                     "--date", "2026-12-01"]).exit_code == 0
    [information] = shelf.glob("*.pdf")
    assert pikepdf.open(BytesIO(information.read_bytes())).pages
    done = CliRunner().invoke(main, ["package", str(issued_twice), "--issued", "-o", str(shelf.parent / "p.pdf")])
    assert done.exit_code == 2 and "has no PDF that was issued for use" in done.stderr
