"""A symbol's name to its typeset form: ``Q_dot_sink`` to a dotted Q with the subscript 'sink'."""
from __future__ import annotations

import re
import unicodedata
from dataclasses import dataclass
from functools import cache

from calcpack.formula import boxes
from calcpack.formula.boxes import Box

GREEK = {
    "alpha": "α", "beta": "β", "gamma": "γ", "delta": "δ", "epsilon": "ε", "zeta": "ζ", "eta": "η",
    "theta": "θ", "iota": "ι", "kappa": "κ", "lambda": "λ", "mu": "μ", "nu": "ν", "xi": "ξ",
    "rho": "ρ", "sigma": "σ", "tau": "τ", "upsilon": "υ", "phi": "φ", "chi": "χ", "psi": "ψ", "omega": "ω",
    "Gamma": "Γ", "Delta": "Δ", "Theta": "Θ", "Lambda": "Λ", "Xi": "Ξ", "Sigma": "Σ",
    "Phi": "Φ", "Psi": "Ψ", "Omega": "Ω",
}
CONSTANT_LETTERS = {"pi": "π"}
DIFFERENCE = re.compile(r"d([A-Za-z])(\d*)")
NUMBERED = re.compile(r"([A-Za-z])(\d+)")
# Heat capacities are written without the underscore, c_p with an italic index.
HEAT_CAPACITIES = {"cp": "p", "cv": "v"}
NO_DOTTED_GLYPH = "aoAO"
"""Letters with a precomposed dotted form in Unicode that the fonts have no glyph for."""


@dataclass(frozen=True, slots=True)
class Parts:
    """What a symbol's name means.

    ``prefix`` is Δ or empty; ``letter`` is one letter in italics, or a
    ``word`` such as COP that stays upright; ``italic_index`` comes first in
    the subscript; ``below`` are the upright parts of the subscript.
    """

    letter: str
    prefix: str = ""
    word: bool = False
    dot: bool = False
    italic_index: str = ""
    below: tuple[str, ...] = ()


@cache
def parts(name: str) -> Parts:
    """Take a name apart; every name that the formula language allows has a form."""
    base, *rest = name.split("_")
    if base in CONSTANT_LETTERS and not rest:
        return Parts(CONSTANT_LETTERS[base], word=True)
    dot = bool(rest) and rest[0] == "dot"
    below = tuple(GREEK.get(part, part) for part in (rest[1:] if dot else rest))
    if base == "Delta" and below and len(below[0]) == 1 and not dot:
        return Parts(below[0], prefix="Δ", below=below[1:])
    if match := DIFFERENCE.fullmatch(base):
        return Parts(match[1], prefix="Δ", dot=dot, below=((match[2],) if match[2] else ()) + below)
    if match := NUMBERED.fullmatch(base):
        return Parts(match[1], dot=dot, below=(match[2], *below))
    if base in HEAT_CAPACITIES:
        return Parts("c", dot=dot, italic_index=HEAT_CAPACITIES[base], below=below)
    if base in GREEK or len(base) == 1:
        return Parts(GREEK.get(base, base), dot=dot, below=below)
    return Parts(base, word=True, below=(("dot", *below) if dot else below))


@cache
def symbol_box(name: str) -> Box:
    """The typeset symbol."""
    part = parts(name)
    box = _letter(part)
    if part.prefix:
        box = boxes.row(boxes.text(part.prefix), box)
    pieces = ([boxes.italic(part.italic_index)] if part.italic_index else [])
    if part.below:
        pieces.append(boxes.text(",".join(part.below)))
    return boxes.subscript(box, boxes.joined(pieces, boxes.text(","))) if pieces else box


def is_word(name: str) -> bool:
    """Whether the symbol is a word such as COP, which needs a sign beside it in a product."""
    part = parts(name)
    return part.word and len(part.letter) > 1


def is_named_by(name: str, letter: str) -> bool:
    """Whether the symbol is plainly of the property ``letter``: s_1 of s, T_e of T."""
    return not parts(name).prefix and name.split("_")[0].rstrip("0123456789") == letter


def _letter(part: Parts) -> Box:
    if part.word:
        return boxes.text(part.letter)
    if not part.dot:
        return boxes.italic(part.letter)
    composed = unicodedata.normalize("NFC", part.letter + "\u0307")
    if len(composed) == 1 and part.letter not in NO_DOTTED_GLYPH:
        return boxes.italic(composed)
    return boxes.dotted(part.letter)
