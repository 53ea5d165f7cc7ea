"""A build looks at every page before anything is moved into place."""
from __future__ import annotations

from pathlib import Path
from typing import Any

import pytest
from click.testing import CliRunner
from mutations import Place, changed

from calcpack.cli import main
from calcpack.render import site
from calcpack.render.sheet import sheet_html

SPEC = str(Path(__file__).parent.parent.parent / "specs" / "kiln-exhaust-bound.yaml")


def _broken(record: Any, *, only_print: bool = False, **options: Any) -> str:
    """The sheet with a wrong first digit in the result of step 3.1."""
    html = sheet_html(record, **options)
    if only_print and not options.get("for_print"):
        return html
    at = html.index("<b>", html.index('class="equation"', html.index('id="step-3.1"'))) + 3
    return changed(html, Place("result", at), "9" if html[at] != "9" else "8")


def test_a_page_that_cannot_be_had_from_its_print_is_not_written(tmp_path: Path,
                                                                 monkeypatch: pytest.MonkeyPatch) -> None:
    good = CliRunner().invoke(main, ["build", SPEC, "-o", str(tmp_path / "site"), "--no-pdf", "-q"])
    assert good.exit_code == 0
    before = {path: path.read_bytes() for path in (tmp_path / "site").rglob("*") if path.is_file()}
    monkeypatch.setattr(site, "sheet_html", _broken)
    bad = CliRunner().invoke(main, ["build", SPEC, "-o", str(tmp_path / "site"), "--no-pdf", "-q", "--fresh"])
    assert bad.exit_code == 3
    assert "MT-101: step 3.1" in bad.stderr and "nothing was written" in bad.stderr
    assert {path: path.read_bytes() for path in (tmp_path / "site").rglob("*") if path.is_file()} == before


def test_the_page_for_the_pdf_must_print_the_same(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(site, "sheet_html", lambda record, **options: _broken(record, only_print=True, **options))
    bad = CliRunner().invoke(main, ["build", SPEC, "-o", str(tmp_path / "site"), "-q"])
    assert bad.exit_code == 3 and "print different numbers" in bad.stderr
    assert not (tmp_path / "site").exists()
