"""Revision marks to their order: numbers as numbers, then letters as drawings count them."""
from __future__ import annotations

LETTERS = "ABCDEFGHJKLMNPRTUVWY"
"""The letters of revisions: I, O, Q, S, X and Z are taken for 1, 0, 5 and 2 on prints."""


def place_in_order(mark: str) -> tuple[int, int]:
    """A key that sorts revisions: 1 … 9, 10 …, A … Y, AA, AB …; numbers stand before letters.

    Raises
    ------
    ValueError
        For a text that is no revision mark.
    """
    if mark.isascii() and mark.isdigit():
        return 0, int(mark)
    place = 0
    for letter in mark:
        place = place * len(LETTERS) + LETTERS.index(letter) + 1
    if not place:
        raise ValueError("an empty text is no revision mark")
    return 1, place
