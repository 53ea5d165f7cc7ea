"""An issued PDF to its copy that says on every page by which revision it is superseded, with a link to that."""
from __future__ import annotations

from io import BytesIO
from typing import TYPE_CHECKING
from urllib.parse import quote

from calcpack.issuing.archive import mend_links
from calcpack.render.issues import BESIDE
from calcpack.render.pdf import pdf_bytes

if TYPE_CHECKING:
    import pikepdf

STAMP = "SUPERSEDED BY REVISION"
"""How the stamp begins on every page of a copy of an issue that is in force no more."""
LAYER = "/Superseded"


def superseded_copy(content: bytes, number: str, words: str, address: str) -> bytes:
    """The stamped copy of an issued PDF; the same bytes for the same arguments.

    Parameters
    ----------
    content : bytes
        The PDF as it was issued. What it carries stays in the copy; its
        seal, which would be broken, does not.
    number, words : str
        The sheet's number, and what the stamp says.
    address : str
        Where the PDF that is in force lies, from the copy's own folder.

    Raises
    ------
    MissingPartError
        When the PDF engine is missing.
    """
    import pikepdf
    made = BytesIO()
    layers: dict[tuple[float, float], pikepdf.Pdf] = {}
    with pikepdf.open(BytesIO(content)) as pdf:
        _unseal(pdf)
        for page in pdf.pages:
            size = _size(page)
            if size not in layers:
                layers[size] = _layer(size, number, words, address)
            _lay_under(pdf, page, layers[size])
        _link(pdf, layers[_size(pdf.pages[0])], words)
        pdf.save(made, deterministic_id=True, object_stream_mode=pikepdf.ObjectStreamMode.generate)
    return made.getvalue()


def _size(page: pikepdf.Page) -> tuple[float, float]:
    left, bottom, right, top = (float(edge) for edge in page.mediabox)
    return right - left, top - bottom


def _layer(size: tuple[float, float], number: str, words: str, address: str) -> pikepdf.Pdf:
    """One page of that size in points with the stamp."""
    import pikepdf

    from calcpack.render.sheet import environment
    width, height = size
    html = environment().get_template("superseded.html").render(
        width=width, height=height, middle=round(0.43 * height, 2), words=words, address=BESIDE + quote(address))
    return pikepdf.open(BytesIO(pdf_bytes(html, number, tags=False)[0]))


def _lay_under(pdf: pikepdf.Pdf, page: pikepdf.Page, layer: pikepdf.Pdf) -> None:
    """Draw the layer before the page's own content, under a name that is the same each time."""
    import pikepdf
    drawn = pdf.copy_foreign(layer.pages[0].as_form_xobject())
    page.add_resource(drawn, pikepdf.Name.XObject, pikepdf.Name(LAYER))
    left, bottom = (float(edge) for edge in list(page.mediabox)[:2])
    page.contents_add(f"/Artifact BMC q 1 0 0 1 {left:g} {bottom:g} cm {LAYER} Do Q EMC\n".encode(), prepend=True)


def _link(pdf: pikepdf.Pdf, layer: pikepdf.Pdf, words: str) -> None:
    """The stamp's link, put on the first page."""
    import pikepdf
    page = pdf.pages[0].obj
    if "/Annots" not in page:
        page.Annots = pikepdf.Array()
    for note in layer.pages[0].obj.Annots:
        copied = pdf.copy_foreign(note)
        copied.F = 4                     # printed, as PDF/A asks of every annotation
        page.Annots.append(copied)
    mend_links(pdf, words)


def _unseal(pdf: pikepdf.Pdf) -> None:
    """Take the signature fields away: a copy with a stamp is not what was sealed."""
    import pikepdf
    for page in pdf.pages:
        if "/Annots" in page.obj:
            page.obj.Annots = pikepdf.Array(note for note in page.obj.Annots if note.get("/Subtype") != "/Widget")
    for name in ("/AcroForm", "/DSS", "/Perms"):
        if name in pdf.Root:
            del pdf.Root[name]
