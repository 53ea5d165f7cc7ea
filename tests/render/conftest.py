"""The small sheet solved once, its page and its PDF."""
from __future__ import annotations

from pathlib import Path

import pytest
from render_helpers import solve_small

from calcpack.record import Record
from calcpack.render.pdf import write_pdf
from calcpack.render.sheet import sheet_html


@pytest.fixture(scope="session")
def small(tmp_path_factory: pytest.TempPathFactory) -> Record:
    return solve_small(tmp_path_factory.mktemp("spec"))


@pytest.fixture(scope="session")
def small_page(small: Record) -> str:
    return sheet_html(small)


@pytest.fixture(scope="session")
def small_pdf(small: Record, tmp_path_factory: pytest.TempPathFactory) -> Path:
    path = tmp_path_factory.mktemp("pdf") / "RT-12.pdf"
    write_pdf(sheet_html(small, for_print=True), path, small)
    return path
