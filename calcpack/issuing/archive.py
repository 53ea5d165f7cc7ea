"""A finished PDF to one that keeps: files attached, headings of tables told apart, links beside itself.

The PDF engine gives PDF/A-3u (ISO 19005-3) but for three things, which are
mended in the object tree: a heading of a table does not say whether it heads
a row or a column, attached files would be listed twice, and an address beside
the file becomes an absolute one, with the machine's folders in it.
"""
from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING, Any

from calcpack.render.issues import BESIDE

if TYPE_CHECKING:
    import pikepdf

def mend(pdf: pikepdf.Pdf) -> None:
    """Put right what the PDF engine leaves."""
    _scopes(pdf)
    mend_links(pdf)


def mend_links(pdf: pikepdf.Pdf, words: str | None = None) -> None:
    """Make the addresses that begin with ``beside:`` relative; ``words`` say what the links are."""
    for page in pdf.pages:
        for note in page.obj.get("/Annots", ()):
            action = note.get("/A")
            if action is None or not str(action.get("/URI", "")).startswith(BESIDE):
                continue
            address = str(action.URI).removeprefix(BESIDE)
            action.URI = address
            note.Contents = words or f"File beside this one: {address}"


def _scopes(pdf: pikepdf.Pdf) -> None:
    """Each heading cell says what it heads: a column in the head of its table, else its row."""
    import pikepdf
    root = pdf.Root.get("/StructTreeRoot")
    if root is None:
        return
    for cell, in_head in _headings(root, False):
        scope = "/Column" if in_head else "/Row"
        cell.A = pikepdf.Dictionary(O=pikepdf.Name.Table, Scope=pikepdf.Name(scope))


def _headings(element: Any, in_head: bool) -> Iterator[tuple[Any, bool]]:
    """Every heading cell below an element of the structure, and whether it stands in the head of a table."""
    kind = str(element.get("/S", ""))
    if kind == "/TH":
        yield element, in_head
        return
    for child in _children(element):
        yield from _headings(child, in_head or kind == "/THead")


def _children(element: Any) -> list[Any]:
    import pikepdf
    kids = element.get("/K")
    if kids is None:
        return []
    listed = list(kids) if isinstance(kids, pikepdf.Array) else [kids]
    return [one for one in listed if isinstance(one, pikepdf.Dictionary) and "/S" in one]
