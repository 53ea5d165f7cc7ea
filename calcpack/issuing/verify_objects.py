"""The object trees of two PDFs to the parts in which they differ: drawings, fonts, links, bookmarks, metadata.

What a reader sees depends on more than text: a rectangle can cover a number,
a font can draw another digit. Each object is written out with the path to it
in place of its number, so that the two trees can be set side by side; what a
seal adds is left aside.
"""
from __future__ import annotations

import hashlib
import zlib
from collections import deque
from collections.abc import Iterator, Mapping
from typing import TYPE_CHECKING, Any

from calcpack.issuing.verify_report import Difference

if TYPE_CHECKING:
    import pikepdf

ACTIVE = ("/JS", "/AA", "/OpenAction", "/XFA", "/RichMediaContent")
ACTIONS = ("/URI", "/GoTo")
"""What a link of a sheet may do: open an address, go to a place in the document."""
SEALED_KEYS = ("/AcroForm", "/DSS", "/Extensions")
LARGEST = 50_000_000
"""No stream of a sheet comes near this size; one that would is not unpacked."""
DRAWN, ATTACHED = "what is drawn", "the files attached"
PARTS = {"/Contents": DRAWN, "/Annots": "links and notes", "/Resources": "fonts and pictures"}
WHOLE = {"/Outlines": "bookmarks", "/Metadata": "metadata", "/Names": "named places", "/AF": ATTACHED,
         "/StructTreeRoot": "tags", "/OutputIntents": "the colour profile", "/Info": "metadata",
         "/Pages": "the order of pages", "/Dests": "named places"}


def parts(pdf: pikepdf.Pdf) -> dict[str, str]:
    """Each part of the document by name (``page 3, what is drawn``), with a hash of all that hangs on it."""
    hashes: dict[str, Any] = {}
    for part, path, text in _written(pdf):
        hashes.setdefault(part, hashlib.sha256()).update(f"{path}\n".encode() + text)
    return {part: one.hexdigest() for part, one in hashes.items()}


def compare_parts(carried: Mapping[str, str], here: Mapping[str, str]) -> dict[str, tuple[str, ...]]:
    """What is not the same in both: by page (``page 3``) or for the whole file, the names of its parts."""
    found: dict[str, list[str]] = {}
    for part in dict.fromkeys((*carried, *here)):
        if carried.get(part) != here.get(part):
            where, comma, name = part.partition(", ")
            if not comma:
                where, name = (part, "its frame") if part.startswith("page ") else ("whole file", part)
            found.setdefault(where, []).append(name)
    return {where: tuple(names) for where, names in found.items()}


def active(pdf: pikepdf.Pdf) -> Iterator[Difference]:
    """What a sheet never holds: scripts, notes laid over a page, actions that start something."""
    import pikepdf
    for one in pdf.objects:
        if isinstance(one, pikepdf.Dictionary | pikepdf.Stream):
            for key in ACTIVE:
                if key in one:
                    yield Difference("whole file", "the PDF holds something that runs when it is opened", key, "none")
    for number, page in enumerate(pdf.pages, start=1):
        for note in _notes(page.obj):
            yield from _foreign_note(note, f"page {number}")


def _foreign_note(note: Any, where: str) -> Iterator[Difference]:
    kind = str(note.get("/Subtype", ""))
    if kind != "/Link" and not _is_seal(note):
        yield Difference(where, "something is laid over the page", kind.removeprefix("/") or "a note", "links only")
    action = note.get("/A")
    does = str(action.get("/S", "")) if action is not None else "/GoTo"
    if does not in ACTIONS:
        yield Difference(where, "a link starts something", does, "an address or a place in the document")


def _notes(page: Any) -> list[Any]:
    return list(page.get("/Annots", ()))


def _is_seal(note: Any) -> bool:
    """Whether an annotation is the field of a signature that shows nothing on the page."""
    return (str(note.get("/Subtype", "")) == "/Widget" and str(note.get("/FT", "")) == "/Sig"
            and all(float(side) == 0 for side in note.get("/Rect", (1,))))


def _written(pdf: pikepdf.Pdf) -> Iterator[tuple[str, str, bytes]]:
    """``(part, path, text)`` of every object that can be reached, each once, pages first."""
    writer = _Writer()
    for number, page in enumerate(pdf.pages, start=1):
        writer.name(page.obj, f"page {number}", f"page {number}")
    yield from writer.run()
    root = pdf.Root
    for key in sorted(root.keys()):
        if key not in SEALED_KEYS:
            part = WHOLE.get(key, f"catalogue {key}")
            yield part, key, writer.text(root[key], part, key)
            yield from writer.run()
    if "/Info" in pdf.trailer:
        yield WHOLE["/Info"], "/Info", writer.text(pdf.trailer.Info, WHOLE["/Info"], "/Info")
        yield from writer.run()


class _Writer:
    """Writes objects out and keeps the path by which each was first reached."""

    def __init__(self) -> None:
        self.paths: dict[tuple[int, int], str] = {}
        self.waiting: deque[tuple[Any, str, str]] = deque()

    def name(self, one: Any, part: str, path: str) -> str:
        """The path of an indirect object; new ones are written out later."""
        if one.objgen not in self.paths:
            self.paths[one.objgen] = path
            self.waiting.append((one, part, path))
        return self.paths[one.objgen]

    def run(self) -> Iterator[tuple[str, str, bytes]]:
        """Write out what is waiting, and all that it leads to."""
        while self.waiting:
            one, part, path = self.waiting.popleft()
            yield part, path, self.inside(one, part, path)

    def text(self, one: Any, part: str, path: str) -> bytes:
        """A value, with a path where it points to another object."""
        if getattr(one, "is_indirect", False):
            return b"->" + self.name(one, part, path).encode()
        return self.inside(one, part, path)

    def inside(self, one: Any, part: str, path: str) -> bytes:
        """A value's own content."""
        import pikepdf
        if isinstance(one, pikepdf.Array):
            kept = [item for item in one if not _sealing(item)] if path.endswith("/Annots") else list(one)
            return b"[" + b" ".join(self.text(item, part, f"{path}/{index}")
                                    for index, item in enumerate(kept)) + b"]"
        if isinstance(one, pikepdf.Dictionary | pikepdf.Stream):
            keys = sorted(key for key in one if key != "/Length" and not self.passed_over(key, one))
            written = b" ".join(key.encode() + b" " + self.text(one[key], _part(part, key), f"{path}{key}")
                                for key in keys)
            data = hashlib.sha256(_unpacked(one)).digest() if isinstance(one, pikepdf.Stream) else b""
            return b"<<" + written + b">>" + data
        return one.unparse() if isinstance(one, pikepdf.Object) else repr(one).encode()

    def passed_over(self, key: str, one: Any) -> bool:
        """An empty list of notes is as good as none: a seal leaves one behind on a page without links."""
        return key == "/Annots" and all(_sealing(item) for item in one[key])


def _unpacked(stream: Any) -> bytes:
    """The bytes of a stream as they were before they were packed: the library that packs differs by machine."""
    raw = stream.read_raw_bytes()
    if str(stream.get("/Filter", "")) != "/FlateDecode" or "/DecodeParms" in stream:
        return raw
    unpacker = zlib.decompressobj()
    try:
        unpacked = unpacker.decompress(raw, LARGEST)
    except zlib.error:
        return raw
    return unpacked if unpacker.eof else raw


def _sealing(item: Any) -> bool:
    import pikepdf
    return isinstance(item, pikepdf.Dictionary) and _is_seal(item)


def _part(part: str, key: str) -> str:
    """The part that a key of a page leads into."""
    return f"{part}, {PARTS[key]}" if key in PARTS and part.startswith("page ") and "," not in part else part
