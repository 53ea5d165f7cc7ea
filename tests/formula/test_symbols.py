"""Names of symbols and how they are set."""
from __future__ import annotations

import re
from pathlib import Path

import pytest

from calcpack.formula import metrics
from calcpack.formula.symbols import is_named_by, is_word, parts
from calcpack.formula.typeset import symbol_html

FONTS = Path(__file__).parents[2] / "templates" / "fonts"


@pytest.mark.parametrize(("name", "markup"), [
    ("T", "<i>T</i>"),
    ("T_source_in", "<i>T</i><sub>source,in</sub>"),
    ("m_dot_wf", "<i>ṁ</i><sub>wf</sub>"),
    ("W_dot", "<i>Ẇ</i>"),
    ("eta_is", "<i>η</i><sub>is</sub>"),
    ("dT_pinch_e", "Δ<i>T</i><sub>pinch,e</sub>"),
    ("dh", "Δ<i>h</i>"),
    ("Delta_p_c", "Δ<i>p</i><sub>c</sub>"),
    ("COP", "COP"),
    ("COP_h", "COP<sub>h</sub>"),
    ("NTU", "NTU"),
    ("LMTD_e", "LMTD<sub>e</sub>"),
    ("UA", "UA"),
    ("h1", "<i>h</i><sub>1</sub>"),
    ("h_2s", "<i>h</i><sub>2s</sub>"),
    ("dT1", "Δ<i>T</i><sub>1</sub>"),
    ("cp_sink", "<i>c</i><sub><i>p</i>,sink</sub>"),
    ("pi", "π"),
    ("Re", "Re"),
    ("C_dot_min", "<i>Ċ</i><sub>min</sub>"),
])
def test_name_is_set_as(name, markup):
    assert symbol_html(name) == f'<span class="math">{markup}</span>'


@pytest.mark.parametrize("letter", ["Q", "V", "q"])
def test_dot_without_a_glyph_takes_no_room(letter):
    """The dot's margins and its own width add up to nothing."""
    html = symbol_html(f"{letter}_dot")
    after, before = map(float, re.search(r"margin:0 (-?[\d.]+)em 0 (-?[\d.]+)em", html).groups())
    assert after + before + metrics.ink("˙").advance == pytest.approx(0.0, abs=0.002)
    assert re.sub(r"<[^>]*>", "", html) == f"{letter}˙"


def test_words_and_properties_are_known():
    assert is_word("COP_h") and not is_word("T_c") and not is_word("pi") and not is_word("dT_lm")
    assert is_named_by("s_1", "s") and is_named_by("T2", "T")
    assert not is_named_by("s_1", "p") and not is_named_by("dT_e", "T")
    assert parts("Q_dot_sink").dot and not parts("Q_sink").dot


@pytest.mark.parametrize(("file", "italic"), [
    ("STIXTwoText-Regular.ttf", False), ("STIXTwoText-Italic.ttf", True)])
def test_metrics_are_those_of_the_fonts(file, italic):
    from fontTools.ttLib import TTFont
    text, math = TTFont(FONTS / file), TTFont(FONTS / "STIXTwoMath-Regular.ttf")
    upright = TTFont(FONTS / "STIXTwoText-Regular.ttf")
    wrong = []
    for character, size in metrics.tables()[italic].items():
        own = text if not italic or character.isalpha() else upright
        font = own if ord(character) in own.getBestCmap() else math
        if _size(font, character) != size:
            wrong.append(character)
    assert wrong == []


def _size(font, character: str) -> metrics.Ink:
    from fontTools.pens.boundsPen import BoundsPen
    glyphs = font.getGlyphSet()
    glyph = glyphs[font.getBestCmap()[ord(character)]]
    pen = BoundsPen(glyphs)
    glyph.draw(pen)
    left, bottom, right, top = (round(edge) / 1000 for edge in pen.bounds or (0, 0, 0, 0))
    return metrics.Ink(glyph.width / 1000, bottom, top, left, right)
