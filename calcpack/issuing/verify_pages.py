"""The pages of two PDFs to where their visible text differs, word by word.

PDFium reads the text, an engine other than the one that makes the pages: what
it reads is what a reader sees and copies, by the fonts in the file itself.
"""
from __future__ import annotations

import re
from collections.abc import Iterator, Sequence
from difflib import SequenceMatcher

from calcpack.errors import Fault
from calcpack.issuing.carried import NotVerifiableError
from calcpack.issuing.verify_report import Difference

NUMBER = re.compile(r"\d")
BEFORE = 3
"""Words before a difference that are quoted with it, so that it can be found on the page."""
LONGEST = 120


def page_texts(content: bytes) -> tuple[str, ...]:
    """The text of each page, in the order in which it is drawn.

    Raises
    ------
    NotVerifiableError
        Where the pages cannot be read.
    """
    import pypdfium2
    try:
        document = pypdfium2.PdfDocument(content)
        try:
            return tuple(_text(page) for page in document)
        finally:
            document.close()
    except pypdfium2.PdfiumError as error:
        raise NotVerifiableError(Fault("the pages cannot be read", detail=str(error))) from None


def _text(page: object) -> str:
    held = page.get_textpage()
    try:
        return held.get_text_range()
    finally:
        held.close()
        page.close()


def counts(texts: Sequence[str]) -> tuple[int, int]:
    """How many words the pages have, and how many of them hold a digit."""
    words = [word for text in texts for word in text.split()]
    return len(words), sum(1 for word in words if NUMBER.search(word))


def compare_flow(printed: Sequence[str], here: Sequence[str]) -> tuple[Difference, ...]:
    """Where the text differs, whatever page it stands on: other versions of the engine may break pages elsewhere."""
    flows = [[word for text in texts for word in text.split()] for texts in (printed, here)]
    return () if flows[0] == flows[1] else compare_pages(printed, here)


def compare_pages(printed: Sequence[str], here: Sequence[str]) -> tuple[Difference, ...]:
    """Where the text on the pages differs from the pages that calcpack gives."""
    return tuple(_differences(printed, here))


def _differences(printed: Sequence[str], here: Sequence[str]) -> Iterator[Difference]:
    if len(printed) != len(here):
        yield Difference("pages", "the number of pages differs", str(len(printed)), str(len(here)))
    for tag, first, last, start, stop in _matched(printed, here):
        if tag == "replace" and last - first == stop - start:
            for page, other in zip(range(first, last), range(start, stop), strict=True):
                yield from _words(page, printed[page].split(), here[other].split())
        elif tag != "equal":
            yield from _moved(printed[first:last], first, here[start:stop], start)


def _matched(printed: Sequence[str], here: Sequence[str]) -> list[tuple[str, int, int, int, int]]:
    return SequenceMatcher(None, printed, here, autojunk=False).get_opcodes()


def _moved(printed: Sequence[str], first: int, here: Sequence[str], start: int) -> Iterator[Difference]:
    """Pages that are there and should not be, and pages that should be there and are not."""
    for index, text in enumerate(printed):
        yield Difference(f"page {first + index + 1}", "calcpack gives no such page here", _cut(text), "another page")
    for index, text in enumerate(here):
        yield Difference(f"page {start + index + 1}", "calcpack gives a page that is not in this place",
                         "another page, or none", _cut(text))


def _words(page: int, printed: list[str], here: list[str]) -> Iterator[Difference]:
    where = f"page {page + 1}"
    for tag, first, last, start, stop in SequenceMatcher(None, printed, here, autojunk=False).get_opcodes():
        if tag != "equal":
            lead = " ".join(printed[max(0, first - BEFORE):first])
            what = f"another text is printed after '{lead}'" if lead else "another text is printed"
            yield Difference(where, what, _quoted(printed[first:last]), _quoted(here[start:stop]))
    if printed == here:
        # Words the same, so what differs is where they break.
        yield Difference(where, "the same words stand otherwise on the page", "other spaces or line ends",
                         "those of calcpack")


def _quoted(words: Sequence[str]) -> str:
    return f"'{_cut(' '.join(words))}'" if words else "nothing"


def _cut(text: str) -> str:
    plain = " ".join(text.split())
    return plain if len(plain) <= LONGEST else plain[:LONGEST - 1] + "…"
