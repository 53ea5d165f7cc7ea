"""Two PDFs of one engine to what a reader would see or click otherwise, though the text may be the same."""
from __future__ import annotations

from collections.abc import Iterator, Mapping, Set
from functools import lru_cache
from typing import Any

from calcpack.issuing.carried import opened
from calcpack.issuing.seal_reading import Seal
from calcpack.issuing.verify_objects import DRAWN, compare_parts, parts
from calcpack.issuing.verify_report import Difference, Stage

DOTS_PER_MM = 4.0
"""How finely a page is drawn to see where it differs, about 100 dots per inch."""
POINTS_PER_MM = 72 / 25.4


def drawings_stage(content: bytes, seal: Seal, made: bytes, told: Set[str], packed: str) -> Stage:
    """Where a file differs from the one that calcpack makes, beside its text.

    ``told`` are the places (``page 3``) and parts whose difference stands in
    the report already: what is drawn on a page differs where its text does.
    ``packed`` says that another library packed the file, or is empty: then
    equal parts do not give equal bytes.
    """
    whole = content[:seal.begins] == made
    found: tuple[Difference, ...] = ()
    if not whole or seal.present:
        # What a seal adds could also change a page, so a sealed file is compared part by part as it opens.
        other = compare_parts(parts(opened(content)), _parts_of(made))
        found = tuple(_told(other, told, content, made))
        if not whole and not other and not packed:
            found = (Difference("whole file", "its bytes are not those that calcpack writes, though its parts are",
                                f"{seal.begins} bytes", f"{len(made)} bytes"),)
    words = "lines, fonts, links, bookmarks, metadata: "
    if found or not (whole or packed):
        return Stage("drawings", words + "NOT THE SAME", found)
    if not whole:
        return Stage("drawings", words + "all the same, part by part", remarks=(packed,))
    return Stage("drawings", words + "the file is the same byte for byte" + " up to its seal" * seal.present)


@lru_cache(maxsize=2)
def _parts_of(made: bytes) -> Mapping[str, str]:
    """The parts of a PDF that was made here; one who verifies many copies of a sheet asks for them again and again."""
    return parts(opened(made))


def _told(other: Mapping[str, tuple[str, ...]], told: Set[str], content: bytes, made: bytes) -> Iterator[Difference]:
    for where, names in other.items():
        left = [name for name in names if name not in told and not (where in told and name in (DRAWN, "its frame"))]
        if left:
            yield Difference(where, f"not as calcpack makes it: {', '.join(left)}{_seen(where, content, made)}")


def _seen(where: str, content: bytes, made: bytes) -> str:
    """Where on a page the eye sees the difference."""
    if not where.startswith("page "):
        return ""
    number = int(where.removeprefix("page ")) - 1
    one, other = _picture(content, number), _picture(made, number)
    if one is None or other is None or one.shape != other.shape:
        return ""
    rows, columns = (one != other).any(axis=2).nonzero()
    if not len(rows):
        return "; it looks the same"
    left, top, right, bottom = (int(side / DOTS_PER_MM) for side in (
        columns.min(), rows.min(), columns.max() + 1, rows.max() + 1))
    return (f"; it looks otherwise in a field {right - left + 1} mm wide and {bottom - top + 1} mm high, "
            f"{left} mm from the left and {top} mm from the top")


def _picture(content: bytes, number: int) -> Any:
    """A page as dots; None where the file has no such page."""
    import pypdfium2
    document = pypdfium2.PdfDocument(content)
    try:
        if number >= len(document):
            return None
        page = document[number]
        try:
            return page.render(scale=DOTS_PER_MM / POINTS_PER_MM).to_numpy().copy()
        finally:
            page.close()
    finally:
        document.close()
