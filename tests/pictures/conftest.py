"""Pages drawn by the PDF engine with the project's fonts and styles, as grey pictures."""
from __future__ import annotations

import os
import shutil
import subprocess
from collections.abc import Callable
from pathlib import Path

import numpy as np
import pytest

TEMPLATES = Path(__file__).parents[2] / "templates"
Picture = np.ndarray
"""Ink from 0 (paper) to 1 (black), a row of pixels a row."""


@pytest.fixture(scope="session")
def fonts() -> Path:
    return TEMPLATES / "fonts"


@pytest.fixture(scope="session")
def draw(tmp_path_factory) -> Callable[..., Picture]:
    """``draw(body, style, dpi=…, fonts=…)``: one page as ink; ``fonts`` stands in for the fonts' folder."""
    if shutil.which("pdftoppm") is None and "CI" not in os.environ:
        pytest.skip("pdftoppm (poppler-utils) is not installed")

    def page(body: str, style: str, *, dpi: int = 72, fonts: Path | None = None) -> Picture:
        folder = tmp_path_factory.mktemp("page")
        return _rasterised(_page_html(body, style, fonts), folder, dpi)
    return page


def _page_html(body: str, style: str, fonts: Path | None) -> str:
    sheets = [(TEMPLATES / "styles" / f"{name}.css").read_text(encoding="utf-8")
              for name in ("fonts", "equation")]
    css = "\n".join(sheets).replace("../fonts/", (fonts or TEMPLATES / "fonts").as_uri() + "/")
    return (f'<!doctype html><html lang="en"><meta charset="utf-8"><title>page</title>'
            f"<style>{css}\n{style}</style><body>{body}")


def _rasterised(html: str, folder: Path, dpi: int) -> Picture:
    from PIL import Image
    from weasyprint import HTML
    HTML(string=html).write_pdf(folder / "page.pdf")
    subprocess.run(["pdftoppm", "-r", str(dpi), "-gray", "-singlefile", folder / "page.pdf", folder / "page"],
                   check=True)
    with Image.open(folder / "page.pgm") as image:
        return 1.0 - np.asarray(image, dtype=float) / 255.0
