"""Each character that the PDF engine draws is compared with the same glyph drawn from its font file.

Two font files of one family and style make the PDF engine draw wrong letters
while the text in the PDF stays right, so only the picture can tell.
"""
from __future__ import annotations

import shutil
from html import escape
from pathlib import Path

import numpy as np
import pytest

from calcpack.formula import metrics

SIZE = 48           # pixels an em: the pages are drawn at 72 dpi, so a point is a pixel
CELL = 72
FINER = 4
COLUMNS = 24
ASCENT = 0.762      # of the fonts' content area, as their hhea tables say
ENOUGH = 0.86       # overlap of ink: right glyphs reach 0.90 and more, O and Q or E and F have 0.81

MATH_ONLY = "√˙≤≥→✓≈"
PLAIN = [character for character in metrics.tables()[False]
         if not character.isspace() and character not in MATH_ONLY]
STYLES = {
    "STIXTwoText-Regular.ttf": ("font-style:normal;font-weight:400", PLAIN),
    "STIXTwoText-Italic.ttf": ("font-style:italic;font-weight:400", PLAIN),
    "STIXTwoText-Bold.ttf": ("font-style:normal;font-weight:700", PLAIN),
    "STIXTwoText-BoldItalic.ttf": ("font-style:italic;font-weight:700", PLAIN),
    "STIXTwoMath-Regular.ttf": ("font-style:normal;font-weight:400", list(MATH_ONLY)),
}


@pytest.mark.parametrize("file", STYLES)
def test_every_character_is_drawn_with_its_own_glyph(file, draw, fonts):
    style, characters = STYLES[file]
    overlaps = _overlaps(draw(*_grid(style, characters)), fonts / file, characters)
    wrong = {character: round(overlap, 2) for character, overlap in overlaps.items() if overlap < ENOUGH}
    assert not wrong


def test_a_font_with_wrong_glyphs_is_found(draw, fonts, tmp_path):
    """The control: h and T, as a font with their glyphs exchanged draws them, are reported, and no others."""
    shutil.copytree(fonts, tmp_path / "fonts")
    _exchange_glyphs(tmp_path / "fonts" / "STIXTwoText-Regular.ttf", "h", "T")
    style, _ = STYLES["STIXTwoText-Regular.ttf"]
    characters = list("hTQabc019")
    picture = draw(*_grid(style, characters), fonts=tmp_path / "fonts")
    overlaps = _overlaps(picture, fonts / "STIXTwoText-Regular.ttf", characters)
    assert {character for character, overlap in overlaps.items() if overlap < ENOUGH} == {"h", "T"}


def test_glyphs_that_look_alike_are_told_apart(fonts):
    """The measure itself: no capital or digit passes for another one."""
    characters = "ABCDEFGHIJKLMNOPQRSTUVWXYZ0123456789"
    file = fonts / "STIXTwoText-Regular.ttf"
    cells = {character: _drawn(file, character) for character in characters}
    taken_for_another = [(one, other) for one in characters for other in characters
                         if one < other and _overlap(cells[one], cells[other]) >= ENOUGH]
    assert taken_for_another == []


def test_each_family_and_style_has_one_file(fonts):
    sheet = (fonts.parent / "styles" / "fonts.css").read_text(encoding="utf-8")
    faces = [tuple(part.split(";")[:3]) for part in sheet.split("@font-face {")[1:]]
    assert len(faces) == len(set(faces)) == len(list(fonts.glob("*.ttf"))) == 5


def _grid(style: str, characters: list[str]) -> tuple[str, str]:
    """The characters, each with its origin at 12 from the left and 52 from the top of its own cell."""
    spans = []
    for index, character in enumerate(characters):
        row, column = divmod(index, COLUMNS)
        left, top = column * CELL + 12, row * CELL + 52 - ASCENT * SIZE
        spans.append(f'<span style="left:{left}pt;top:{top:.3f}pt">{escape(character)}</span>')
    rows = -(-len(characters) // COLUMNS)
    css = (f"@page {{ size: {COLUMNS * CELL}pt {rows * CELL}pt; margin: 0 }} body {{ margin: 0 }}"
           f'span {{ position: absolute; font: {SIZE}pt/1 "STIX Two Text", "STIX Two Math"; {style} }}')
    return "".join(spans), css


def _overlaps(picture: np.ndarray, file: Path, characters: list[str]) -> dict[str, float]:
    found = {}
    for index, character in enumerate(characters):
        row, column = divmod(index, COLUMNS)
        cell = picture[row * CELL:(row + 1) * CELL, column * CELL:(column + 1) * CELL]
        found[character] = _overlap(cell, _drawn(file, character))
    return found


def _drawn(file: Path, character: str) -> np.ndarray:
    """The character's cell as FreeType draws it from the font file."""
    from PIL import Image, ImageDraw, ImageFont
    # Drawn larger and reduced, so that FreeType's hinting does not bend the outlines.
    image = Image.new("L", (FINER * CELL, FINER * CELL), 0)
    font = ImageFont.truetype(file, FINER * SIZE, layout_engine=ImageFont.Layout.BASIC)
    ImageDraw.Draw(image).text((FINER * 12, FINER * 52), character, fill=255, anchor="ls", font=font)
    return np.asarray(image.reduce(FINER), dtype=float) / 255.0


def _overlap(one: np.ndarray, other: np.ndarray) -> float:
    """Common ink as a share of all ink, the better of the places one pixel around; 0 for a blank."""
    padded = np.pad(other, 1)
    height, width = one.shape
    shares = []
    for down in range(3):
        for right in range(3):
            moved = padded[down:down + height, right:right + width]
            shares.append(np.minimum(one, moved).sum() / max(np.maximum(one, moved).sum(), 1e-9))
    return float(max(shares))


def _exchange_glyphs(file: Path, one: str, other: str) -> None:
    from fontTools.ttLib import TTFont
    font = TTFont(file)
    for table in font["cmap"].tables:
        names = table.cmap
        if ord(one) in names and ord(other) in names:
            names[ord(one)], names[ord(other)] = names[ord(other)], names[ord(one)]
    font.save(file)
