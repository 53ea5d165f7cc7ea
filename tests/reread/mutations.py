"""A page to the same page with one printed digit changed, and where such digits stand."""
from __future__ import annotations

import re
from dataclasses import dataclass

CALCULATION = re.compile(r'<section class="part calculation".*?(?=<section class="part )', re.DOTALL)
STATES = re.compile(r'<section class="part states".*?(?=<section class="part )', re.DOTALL)
RESULTS = re.compile(r'<section class="part results".*?(?=<section class="part )', re.DOTALL)

NUMBER = r"\d+(?:\.\d+)?"
KINDS = {
    "result": (CALCULATION, re.compile(rf"<div>= <b>(?:−|<[^>]*>)*({NUMBER})")),
    "answer": (CALCULATION, re.compile(rf'<p class="answer">.*?<b>(?:<[^>]*>|−)*({NUMBER})')),
    "cell": (CALCULATION, re.compile(rf'<td class="number">(?:<[^>]*>|−)*({NUMBER})')),
    "residual": (CALCULATION, re.compile(rf"the equation is (?:<[^>]*>|−)*({NUMBER})")),
    "choice": (CALCULATION, re.compile(rf'<td class="condition"><span class="math">(?:<[^>]*>|−)*({NUMBER})')),
    "state": (STATES, re.compile(rf'<td class="number">(?:<[^>]*>|−)*({NUMBER})')),
    "results table": (RESULTS, re.compile(rf'<td class="number">(?:<[^>]*>|−)*({NUMBER})')),
}
"""Where results are printed: the part of the page, and the number in it."""


@dataclass(frozen=True, slots=True)
class Place:
    """A digit of a printed result that is not its last."""

    kind: str
    at: int


def places(html: str) -> list[Place]:
    """All digits of all printed results but the last of each, outside the MathML twins."""
    hidden = [(found.start(), found.end()) for found in re.finditer(r"<math.*?</math>", html, re.DOTALL)]
    found = []
    for kind, (part, pattern) in KINDS.items():
        section = part.search(html)
        for match in pattern.finditer(html, section.start(), section.end()) if section else ():
            digits = [at for at in range(match.start(1), match.end(1)) if html[at].isdigit()]
            if not any(start <= match.start(1) < end for start, end in hidden):
                found += [Place(kind, at) for at in digits[:-1]]
    return found


def changed(html: str, place: Place, digit: str) -> str:
    """The page with ``digit`` at the place."""
    return html[:place.at] + digit + html[place.at + 1:]
