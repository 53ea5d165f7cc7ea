"""A folder with a sheet that is fit to be issued, and one where two revisions of it were issued."""
from __future__ import annotations

import shutil
from pathlib import Path

import pytest
from issue_helpers import ON_B, check_sheet, write_sheet, write_verification

from calcpack.issuing.issue import issue
from calcpack.issuing.paper import FOR_USE


@pytest.fixture(scope="session")
def _ready(tmp_path_factory: pytest.TempPathFactory) -> Path:
    folder = tmp_path_factory.mktemp("ready")
    write_verification(folder)
    check_sheet(write_sheet(folder))
    return folder


@pytest.fixture(scope="session")
def _issued_twice(_ready: Path, tmp_path_factory: pytest.TempPathFactory) -> Path:
    folder = tmp_path_factory.mktemp("twice") / "sheets"
    shutil.copytree(_ready, folder)
    issue(folder / "rinse.yaml", kind=FOR_USE, date="2026-10-06")
    check_sheet(write_sheet(folder, *ON_B))
    issue(folder / "rinse.yaml", kind=FOR_USE, date="2026-11-13")
    return folder


@pytest.fixture
def ready(_ready: Path, tmp_path: Path) -> Path:
    """A folder with revision A of the sheet, checked and signed; nothing issued."""
    return Path(shutil.copytree(_ready, tmp_path / "sheets"))


@pytest.fixture
def issued_twice(_issued_twice: Path, tmp_path: Path) -> Path:
    """The folder after revisions A and B were issued for use."""
    return Path(shutil.copytree(_issued_twice, tmp_path / "sheets"))
