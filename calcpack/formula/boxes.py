"""Pieces of an equation, each its markup with its size, put together into larger ones.

A box is placed by numbers: heights come from :mod:`metrics`, and fractions,
roots, brackets and scripts get their places as CSS lengths, so that a browser
and the PDF engine set the same markup alike. The style sheet
templates/styles/equation.css draws the classes that are used here.
"""
from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import dataclass, replace
from html import escape

from calcpack.formula.metrics import ink

THIN = "\u202f"
MINUS = "\u2212"
AXIS = 0.258
"""Height of the math axis above the baseline, [em]: where fraction bars and operators are centred."""

# equation.css sets line-height 0.8. The fonts' content area is 0.762 em above and
# 0.238 em below the baseline, so a line of text takes 0.1 em less on each side.
LINE_ASCENT = 0.662
LINE_DESCENT = 0.138
# A box of no height stands in the middle of the content area.
MIDDLE = 0.262

SCRIPT = 0.7
NESTED = 0.88
BAR = 0.05
GAP_ABOVE_BAR = 0.17
GAP_BELOW_BAR = 0.18
FRACTION_SIDE = 0.12
SUBSCRIPT_DROP = 0.20
SUPERSCRIPT_RISE = 0.38
COVER = 0.92
STRETCH_FROM = 1.25


@dataclass(frozen=True, slots=True)
class Box:
    """Markup and its size in em of its own font size.

    ``ascent`` and ``descent`` bound the line box, ``top`` and ``bottom`` the
    ink (``bottom`` downwards); ``lean`` is how far an italic's ink hangs over to the right.
    """

    html: str
    width: float
    ascent: float = LINE_ASCENT
    descent: float = LINE_DESCENT
    top: float = 0.0
    bottom: float = 0.0
    lean: float = 0.0

    def scaled(self, factor: float) -> Box:
        """The same box in em of a font size that is 1/``factor`` as large."""
        return Box(self.html, self.width * factor, self.ascent * factor, self.descent * factor,
                   self.top * factor, self.bottom * factor, self.lean * factor)

    def raised(self, rise: float) -> Box:
        """The same box with its baseline ``rise`` higher."""
        return replace(self, ascent=self.ascent + rise, descent=self.descent - rise,
                       top=self.top + rise, bottom=self.bottom - rise)


def text(characters: str) -> Box:
    """Upright text."""
    return _run(escape(characters, quote=False), characters, italic=False)


def italic(characters: str) -> Box:
    """Italic text, for quantities."""
    return _run(f"<i>{escape(characters, quote=False)}</i>", characters, italic=True)


def row(*boxes: Box) -> Box:
    """Boxes side by side on one baseline."""
    return Box("".join(box.html for box in boxes), sum(box.width for box in boxes),
               max(box.ascent for box in boxes), max(box.descent for box in boxes),
               max(box.top for box in boxes), max(box.bottom for box in boxes), boxes[-1].lean)


def joined(boxes: Iterable[Box], separator: Box) -> Box:
    """Boxes side by side with ``separator`` between them."""
    return row(*_between(boxes, separator))


def dotted(letter: str) -> Box:
    """An italic letter with a dot over it that the font has no glyph for.

    The dot is the spacing one (U+02D9), pulled back over the letter, so that
    it takes no room of its own.
    """
    base, dot = italic(letter), ink("\u02d9")
    glyph = ink(letter, italic=True)
    # Over a capital the font's own dotted letters have the dot 0.144 em higher than U+02D9 stands.
    rise = 0.144 if glyph.top > 0.6 else 0.0
    back = glyph.advance - (glyph.left + glyph.right) / 2 + (dot.left + dot.right) / 2
    if rise:
        back -= 0.03            # the slant carries the middle of a capital's top to the right
    style = f"margin:0 {_em(back - dot.advance)} 0 {_em(-back)}"
    if rise:
        style += f";vertical-align:{_em(rise)}"
    html = f'<i>{escape(letter)}<span class="dot" style="{style}">\u02d9</span></i>'
    return replace(base, html=html, top=max(base.top, dot.top + rise))


def subscript(base: Box, below: Box) -> Box:
    """``base`` with ``below`` as its subscript."""
    small = below.scaled(SCRIPT).raised(-SUBSCRIPT_DROP)
    small = replace(small, html=f"<sub>{below.html}</sub>", lean=0.0)
    return row(base, small)


def superscript(base: Box, above: Box) -> Box:
    """``base`` with ``above`` as its superscript, which rises with its base."""
    rise = max(SUPERSCRIPT_RISE, base.top - 0.40, 0.34 + SCRIPT * above.bottom)
    style = [] if rise == SUPERSCRIPT_RISE else [f"vertical-align:{_em(rise / SCRIPT)}"]
    if base.lean > 0.02:
        style.append(f"margin-left:{_em(base.lean / SCRIPT)}")
    opening = f'<sup style="{";".join(style)}">' if style else "<sup>"
    small = above.scaled(SCRIPT).raised(rise)
    small = replace(small, html=f"{opening}{above.html}</sup>", width=small.width + base.lean)
    return row(base, small)


def fraction(above: Box, below: Box, *, nested: bool) -> Box:
    """A fraction whose bar lies on the math axis; a ``nested`` one is smaller."""
    size = NESTED if nested else 1.0
    over = max(0.0, GAP_ABOVE_BAR + above.bottom - above.descent)
    under = max(0.0, GAP_BELOW_BAR + below.top - below.ascent)
    baseline_to_bar = below.ascent + under + BAR / 2
    drop = AXIS / size - baseline_to_bar
    lift = AXIS / size + BAR / 2 + over + above.descent       # of the numerator's baseline
    html = (f'<span class="frac" style="vertical-align:{_em(drop)}">'
            f'<span{_padding("bottom", over)}>{above.html}</span>'
            f'<span{_padding("top", under)}>{below.html}</span></span>')
    return Box(html, max(above.width, below.width) + 2 * FRACTION_SIDE, lift + above.ascent,
               below.descent - drop, lift + above.top, below.bottom - drop).scaled(size)


def bracketed(inner: Box, opening: str = "(", closing: str = ")") -> Box:
    """``inner`` in brackets as high as its ink needs."""
    glyph = ink(opening)
    # Brackets stand even about the axis and cover most of the height, so that subscripts do not stretch them.
    half = COVER * max(inner.top - AXIS, AXIS + inner.bottom)
    if 2 * half / (glyph.top - glyph.bottom) < STRETCH_FROM:
        gap = Box("", 0.0) if inner.lean < 0.05 else text(THIN)
        return replace(row(text(opening), inner, gap, text(closing)), lean=0.0)
    ends = (_stretched(end, AXIS + half, AXIS - half) for end in (opening, closing))
    return row(next(ends), inner, next(ends))


def root(inner: Box) -> Box:
    """The square root of ``inner``, its line drawn over the whole of it."""
    glyph = ink("\u221a")
    over = max(0.0, inner.top + 0.10 - inner.ascent)
    line = inner.ascent + over + BAR                          # top edge of the line
    low = min(glyph.bottom + 0.12, -inner.bottom - 0.06)
    html = f'<span class="root"{_padding("top", over)}>{inner.html}</span>'
    radicand = replace(inner, html=html, width=inner.width + 0.13, ascent=line, top=line, lean=0.0)
    sign = _stretched("\u221a", line, low)
    return row(replace(sign, width=glyph.advance), radicand)


def shrunk(box: Box, width: float) -> Box:
    """``box`` in smaller type, so that it is at most ``width`` wide."""
    factor = width / box.width
    if factor >= 1.0:
        return box
    return replace(box.scaled(factor), html=f'<span style="font-size:{_em(factor)}">{box.html}</span>')


def _run(html: str, characters: str, *, italic: bool) -> Box:
    glyphs = [ink(character, italic=italic) for character in characters]
    if not glyphs:
        return Box(html, 0.0)
    lean = max(0.0, glyphs[-1].right - glyphs[-1].advance) if italic else 0.0
    return Box(html, sum(glyph.advance for glyph in glyphs), top=max(glyph.top for glyph in glyphs),
               bottom=max(-glyph.bottom for glyph in glyphs), lean=lean)


def _stretched(character: str, top: float, bottom: float) -> Box:
    """A glyph stretched upwards and downwards so that its ink runs from ``bottom`` to ``top``."""
    glyph = ink(character)
    factor = (top - bottom) / (glyph.top - glyph.bottom)
    shift = top - MIDDLE - factor * (glyph.top - MIDDLE)
    html = (f'<span class="tall" style="transform:scaleY({_number(factor)});'
            f'vertical-align:{_em(shift)}">{character}</span>')
    return Box(html, glyph.advance, top=top, bottom=-bottom)


def _padding(side: str, length: float) -> str:
    return f' style="padding-{side}:{_em(length)}"' if length > 0.004 else ""


def _em(length: float) -> str:
    number = _number(length)
    return number if number == "0" else f"{number}em"


def _number(value: float) -> str:
    short = f"{round(value, 3) + 0.0:.3f}".rstrip("0").rstrip(".")       # + 0.0: no minus before zero
    return short.replace("-0.", "-.") if short[0] == "-" else short.removeprefix("0") or "0"


def _between(boxes: Iterable[Box], separator: Box) -> Iterator[Box]:
    for index, box in enumerate(boxes):
        if index:
            yield separator
        yield box
