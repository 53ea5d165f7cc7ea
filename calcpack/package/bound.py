"""PDFs one behind the other to one PDF: links, bookmarks and tags kept, and a count that runs through all pages.

Copying pages alone would lose the bookmarks and the tags for screen readers,
which refer to pages by number; both are carried over here by hand. Seals and
attached files stay with the PDFs that they belong to.
"""
from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, field
from io import BytesIO
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    import pikepdf

LAYER = "/PackageCount"
"""Begins the name of what is laid over a page, before the page's number: pages may share their resources."""

TO_SHEET = "package:"
"""Begins the address of a link, in a page in the making, to the first page of the bound part with that number."""


@dataclass(frozen=True, slots=True)
class Part:
    """A PDF that is bound, with the words of its bookmark; without words its own bookmarks stand at the top."""

    content: bytes
    bookmark: str | None = None


@dataclass(slots=True)
class _Binding:
    """The PDF in the making, with what is collected for it part by part."""

    pdf: pikepdf.Pdf
    first_pages: list[Any] = field(default_factory=list)
    bookmarks: list[Any] = field(default_factory=list)
    tags: list[Any] = field(default_factory=list)
    parents: list[Any] = field(default_factory=list)
    next_parent: int = 0


def bound(parts: Sequence[Part], title: str, count: Callable[[Sequence[tuple[float, float]]], bytes]) -> bytes:
    """The parts as one PDF called ``title``; equal parts give equal bytes.

    ``count`` makes the pages that are laid over all pages, one for each of the
    sizes [pt] that it is given.
    """
    import pikepdf
    with pikepdf.new() as pdf:
        binding = _Binding(pdf)
        sources = [pikepdf.open(BytesIO(part.content)) for part in parts]
        for part, source in zip(parts, sources, strict=True):
            _append(binding, source, part.bookmark)
        _lead_to_sheets(binding)
        _tag(binding)
        with pdf.open_outline() as outline:
            outline.root.extend(binding.bookmarks)
        _lay_over(pdf, count([_size(page) for page in pdf.pages]))
        _describe(pdf, title)
        made = BytesIO()
        pdf.save(made, deterministic_id=True, min_version="1.7",
                 object_stream_mode=pikepdf.ObjectStreamMode.generate)
        for source in sources:
            source.close()
    return made.getvalue()


def pages_of(content: bytes) -> int:
    """The number of pages of a PDF."""
    import pikepdf
    with pikepdf.open(BytesIO(content)) as pdf:
        return len(pdf.pages)


def parts_of(content: bytes) -> list[tuple[str, int]]:
    """The parts of a sheet with the page that each begins on, from 1: the bookmarks below its title."""
    import pikepdf
    with pikepdf.open(BytesIO(content)) as pdf:
        numbers = {page.obj.objgen: at for at, page in enumerate(pdf.pages, start=1)}
        with pdf.open_outline() as outline:
            return [(item.title, numbers[item.destination[0].objgen]) for top in outline.root for item in top.children]


def _append(binding: _Binding, source: pikepdf.Pdf, bookmark: str | None) -> None:
    """The pages of one PDF, and what hangs on them."""
    pdf, start = binding.pdf, len(binding.pdf.pages)
    # Places that links lead to come with the pages, and get another name where a sheet before has that name.
    pdf.add_pages_from(source, forms="strip", outlines="ignore")
    pages = {page.obj.objgen: pdf.pages[start + number].obj for number, page in enumerate(source.pages)}
    binding.first_pages.append(pdf.pages[start].obj)
    _shift(binding, start)
    _take_tags(binding, source)
    with source.open_outline() as outline:
        items = [_item(one, pages) for one in outline.root]
    binding.bookmarks += items if bookmark is None else [_headed(bookmark, items, binding.first_pages[-1])]


def _shift(binding: _Binding, start: int) -> None:
    """The numbers of tags begin behind those of the parts before; links to files beside a sheet lead nowhere."""
    for page in list(binding.pdf.pages)[start:]:
        for one in (page.obj, *page.obj.get("/Annots", ())):
            for key in ("/StructParents", "/StructParent"):
                if key in one:
                    one[key] = int(one[key]) + binding.next_parent
            if _leads_beside(one):
                del one["/A"]


def _leads_beside(note: Any) -> bool:
    address = str(note.get("/A", {}).get("/URI", "")) if "/A" in note else ""
    return bool(address) and ":" not in address


def _take_tags(binding: _Binding, source: pikepdf.Pdf) -> None:
    """The tags of a part, its document element as a part of the whole."""
    import pikepdf
    root = source.Root.get("/StructTreeRoot")
    if root is None:
        return
    # Pages were copied before: what refers to them now refers to the copies.
    copied = binding.pdf.copy_foreign(root if root.is_indirect else source.make_indirect(root))
    kids = list(copied.K) if isinstance(copied.K, pikepdf.Array) else [copied.K]
    for one in kids:
        if str(one.S) == "/Document":
            one.S = pikepdf.Name.Part
    _tell_cells_apart(kids, len(binding.first_pages))
    binding.tags += kids
    numbers = pikepdf.NumberTree(copied.ParentTree)
    highest = 0
    for number, elements in numbers.items():
        binding.parents += [binding.next_parent + number, elements]
        highest = max(highest, number + 1)
    binding.next_parent += highest


def _tell_cells_apart(kids: Sequence[Any], part: int) -> None:
    """Cells of tables name their headings; each name gets its part's number, since the parts use the same names."""
    import pikepdf
    waiting = list(kids)
    while waiting:
        element = waiting.pop()
        if "/ID" in element:
            element.ID = pikepdf.String(f"{part}-{element.ID}")
        for about in _listed(element.get("/A")):
            if "/Headers" in about:
                about.Headers = pikepdf.Array(pikepdf.String(f"{part}-{name}") for name in about.Headers)
        waiting += [kid for kid in _listed(element.get("/K")) if "/S" in kid]


def _listed(one: Any) -> list[Any]:
    """What one or several entries of a PDF's dictionary are, as far as they are dictionaries themselves."""
    import pikepdf
    several = list(one) if isinstance(one, pikepdf.Array) else [one]
    return [entry for entry in several if isinstance(entry, pikepdf.Dictionary)]


def _item(one: Any, pages: dict[tuple[int, int], Any]) -> Any:
    """A bookmark with those below it, on the pages as they are bound."""
    import pikepdf
    place = pikepdf.Array([pages[one.destination[0].objgen], *list(one.destination)[1:]])
    item = pikepdf.OutlineItem(one.title, place)
    item.is_closed = True
    item.children.extend(_item(child, pages) for child in one.children)
    return item


def _headed(words: str, items: list[Any], page: Any) -> Any:
    """One bookmark for a sheet, with those of its parts below it."""
    import pikepdf
    item = pikepdf.OutlineItem(words, pikepdf.Array([page, pikepdf.Name.Fit]))
    item.is_closed = True
    item.children.extend(child for one in items for child in one.children)
    return item


def _lead_to_sheets(binding: _Binding) -> None:
    """Links that name a part by its number lead to its first page."""
    import pikepdf
    for page in binding.pdf.pages:
        for note in page.obj.get("/Annots", ()):
            address = str(note.A.get("/URI", "")) if "/A" in note else ""
            if address.startswith(TO_SHEET):
                target = binding.first_pages[int(address.removeprefix(TO_SHEET))]
                del note["/A"]
                note.Dest = pikepdf.Array([target, pikepdf.Name.Fit])
                note.Contents = "to the sheet"


def _tag(binding: _Binding) -> None:
    """One tree of tags for all parts."""
    import pikepdf
    if not binding.tags:
        return
    pdf = binding.pdf
    root = pdf.make_indirect(pikepdf.Dictionary(Type=pikepdf.Name.StructTreeRoot))
    document = pdf.make_indirect(pikepdf.Dictionary(
        Type=pikepdf.Name.StructElem, S=pikepdf.Name.Document, P=root, K=pikepdf.Array(binding.tags)))
    for one in binding.tags:
        one.P = document
    root.K = pikepdf.Array([document])
    root.ParentTree = pikepdf.Dictionary(Nums=pikepdf.Array(binding.parents))
    root.ParentTreeNextKey = binding.next_parent
    pdf.Root.StructTreeRoot = root
    pdf.Root.MarkInfo = pikepdf.Dictionary(Marked=True)


def _size(page: Any) -> tuple[float, float]:
    left, low, right, high = (float(one) for one in page.mediabox)
    return right - left, high - low


def _lay_over(pdf: pikepdf.Pdf, content: bytes) -> None:
    """The pages of ``content`` over the pages of the PDF, as something that a screen reader passes over."""
    import pikepdf
    with pikepdf.open(BytesIO(content)) as over:
        for at, (page, above) in enumerate(zip(pdf.pages, over.pages, strict=True), start=1):
            form = pdf.copy_foreign(above.as_form_xobject())
            # A name that is given, since one that pikepdf finds is another each time.
            page.add_resource(form, pikepdf.Name.XObject, pikepdf.Name(f"{LAYER}{at}"))
            page.contents_add(b"q\n", prepend=True)
            page.contents_add(f"\nQ\n/Artifact BMC\nq\n{LAYER}{at} Do\nQ\nEMC\n".encode())


def _describe(pdf: pikepdf.Pdf, title: str) -> None:
    import pikepdf
    pdf.docinfo["/Title"] = title
    pdf.docinfo["/Creator"] = "calcpack"
    pdf.Root.Lang = pikepdf.String("en")
    pdf.Root.PageMode = pikepdf.Name.UseOutlines
    pdf.Root.ViewerPreferences = pikepdf.Dictionary(DisplayDocTitle=True)
