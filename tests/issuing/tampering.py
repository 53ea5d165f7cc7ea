"""Ways to tamper with an issued PDF, each of which leaves a file that opens and looks right (but for the cut ones)."""
from __future__ import annotations

import hashlib
import json
import random
import re
from collections.abc import Callable
from io import BytesIO
from typing import Any

import pikepdf

Edit = Callable[[pikepdf.Pdf, random.Random], None]
GLYPHS = re.compile(rb"/(\w+) [\d.]+ Tf|<((?:[0-9a-f]{4})+)>")
PAIR = re.compile(rb"<([0-9a-f]{4})> <([0-9a-f]{4})>")


def edited(content: bytes, edit: Callable[[pikepdf.Pdf], Any]) -> bytes:
    """The PDF after an edit of its objects, written as calcpack writes it."""
    written = BytesIO()
    with pikepdf.open(BytesIO(content)) as pdf:
        edit(pdf)
        pdf.save(written, deterministic_id=True, object_stream_mode=pikepdf.ObjectStreamMode.generate)
    assert written.getvalue() != content, "nothing was changed"
    return written.getvalue()


SPEC, REVIEW, RECORD = "rinse.yaml", "rinse.review.yaml", "RT-12-B.json"


def file_of(content: bytes, name: str) -> bytes:
    """An attached file."""
    with pikepdf.open(BytesIO(content)) as pdf:
        return pdf.attachments[name].get_file().read_bytes()


def put_file(pdf: pikepdf.Pdf, name: str, raw: bytes) -> None:
    """Put other bytes in place of an attached file, with size and checksum made to fit."""
    entry = pdf.attachments[name].obj
    stream = entry.EF.F
    told = stream.Params
    stream.write(raw)
    told.Size, told.CheckSum = len(raw), pikepdf.String(hashlib.md5(raw, usedforsecurity=False).digest())
    stream.Params = told


def digit_on_page(content: bytes, seed: int) -> tuple[bytes, int, str, str]:
    """One digit in the text of a page turned into another; the page's number, the digit and the new one."""
    dice = random.Random(seed)
    told: list[Any] = []

    def edit(pdf: pikepdf.Pdf) -> None:
        number = dice.randrange(len(pdf.pages))
        page = pdf.pages[number]
        drawn = page.Contents.read_bytes()
        place, glyph, old, new = dice.choice(_digits(page, drawn, dice))
        page.Contents.write(drawn[:place] + glyph + drawn[place + 4:])
        told.extend((number + 1, old, new))
    return (edited(content, edit), *told)


def _digits(page: Any, drawn: bytes, dice: random.Random) -> list[tuple[int, bytes, str, str]]:
    """Where a digit is drawn, the glyph of another digit, and which digits they are."""
    fonts = {key.removeprefix("/"): _letters(font) for key, font in page.Resources.Font.items()}
    found, letters = [], {}
    for match in GLYPHS.finditer(drawn):
        if match[1]:
            letters = fonts[match[1].decode()]
            continue
        others = {letter: glyph for glyph, letter in letters.items() if letter.isdigit() and letter.isascii()}
        for at in range(match.start(2), match.end(2), 4):
            old = letters.get(drawn[at:at + 4], "")
            choice = sorted(set(others) - {old})
            if old in others and choice:
                new = dice.choice(choice)
                found.append((at, others[new], old, new))
    return found


def _letters(font: Any) -> dict[bytes, str]:
    return {pair[1]: chr(int(pair[2], 16)) for pair in PAIR.finditer(font.ToUnicode.read_bytes())}


def digit_in_text(text: str, pattern: str, dice: random.Random) -> str:
    """One digit within a match of ``pattern`` turned into another."""
    place = dice.choice([found.start() + index for found in re.finditer(pattern, text)
                         for index, letter in enumerate(found[0]) if letter.isdigit() and letter.isascii()])
    return text[:place] + dice.choice([one for one in "123456789" if one != text[place]]) + text[place + 1:]


def digit_in_record(content: bytes, seed: int, part: str = "") -> bytes:
    """One digit of a printed number or a value in the attached record, or in one part of it."""
    dice = random.Random(seed)
    text = file_of(content, RECORD).decode()
    start = text.index(f'\n "{part}": ') if part else text.index('\n "limits": ')
    end = text.index('\n "', start + 1) if part else len(text)
    changed = digit_in_text(text[start:end], r'"(?:shown|value|numbers)": "?[^",\n]*', dice)
    return edited(content, lambda pdf: put_file(pdf, RECORD, (text[:start] + changed + text[end:]).encode()))


def digit_in_spec(content: bytes, seed: int, *, fitted: bool = False) -> bytes:
    """One digit of an input in the attached spec; ``fitted``: with text and hashes of the record made to fit."""
    dice = random.Random(seed)
    changed = digit_in_text(file_of(content, SPEC).decode(), r"value: [^,}\n]*", dice)

    def edit(pdf: pikepdf.Pdf) -> None:
        put_file(pdf, SPEC, changed.encode())
        if fitted:
            put_file(pdf, RECORD, fit_record(json.loads(file_of(content, RECORD)), changed))
    return edited(content, edit)


def fit_record(data: dict[str, Any], spec: str) -> bytes:
    """A record made to fit another spec: its text, its hash, the hash in the list of files."""
    from calcpack.record import Record
    raw = spec.encode()
    data["spec_text"], data["spec_sha256"] = spec, hashlib.sha256(raw).hexdigest()
    for one in data["issue"]["files"]:
        if one["name"] == SPEC:
            one["sha256"], one["size"] = data["spec_sha256"], len(raw)
    return Record(data).to_json().encode()


def swapped(content: bytes, seed: int) -> tuple[bytes, str]:
    """An attached file with other bytes, which may be those of another file; and its name."""
    dice = random.Random(seed)
    name = dice.choice([SPEC, REVIEW])
    raw = file_of(content, name)
    others = [file_of(content, other) for other in (SPEC, REVIEW, RECORD) if other != name]
    made = [raw + b"\n", raw.replace(b": ", b":  ", 1), raw[::-1], b"", b"calcpack: 1\n"]
    return edited(content, lambda pdf: put_file(pdf, name, dice.choice([*others, *made]))), name


def cut(content: bytes, seed: int) -> bytes:
    """The file without its end."""
    return content[:random.Random(seed).randrange(1, len(content))]


def byte_turned(content: bytes, seed: int) -> bytes:
    """One byte of the file turned into another."""
    dice = random.Random(seed)
    place = dice.randrange(len(content))
    return content[:place] + bytes([content[place] ^ dice.randrange(1, 256)]) + content[place + 1:]


def added_to(content: bytes, edit: Callable[[Any], None]) -> bytes:
    """The file with an update behind its end, as many programs save changes."""
    from pyhanko.pdf_utils.incremental_writer import IncrementalPdfFileWriter
    writer, out = IncrementalPdfFileWriter(BytesIO(content)), BytesIO()
    edit(writer)
    writer.write(out)
    assert out.getvalue().startswith(content) and out.getvalue() != content
    return out.getvalue()


def page_removed(pdf: pikepdf.Pdf) -> None:
    del pdf.pages[1]


def page_doubled(pdf: pikepdf.Pdf) -> None:
    pdf.pages.insert(1, pdf.pages[1])


def pages_swapped(pdf: pikepdf.Pdf) -> None:
    first, second = pdf.pages[1].obj, pdf.pages[2].obj
    pdf.pages[1], pdf.pages[2] = pikepdf.Page(second), pikepdf.Page(first)


def note_added(pdf: pikepdf.Pdf) -> None:
    note = pikepdf.Dictionary(Type=pikepdf.Name.Annot, Subtype=pikepdf.Name.FreeText, Rect=[90, 600, 300, 640],
                              Contents="12.34", DA="/Helv 12 Tf 0 g")
    page = pdf.pages[0].obj
    page.Annots = pikepdf.Array([*page.get("/Annots", []), pdf.make_indirect(note)])


def rectangle_over(pdf: pikepdf.Pdf) -> None:
    pdf.pages[0].contents_add(b"q 1 g 100 500 60 14 re f Q")


def link_turned(pdf: pikepdf.Pdf) -> None:
    for page in pdf.pages:
        for note in page.obj.get("/Annots", ()):
            if "/Dest" in note:
                note.Dest = pikepdf.String("elsewhere")
                return


def link_to_program(pdf: pikepdf.Pdf) -> None:
    for page in pdf.pages:
        for note in page.obj.get("/Annots", ()):
            note.A = pdf.make_indirect(pikepdf.Dictionary(S=pikepdf.Name.Launch, F="a.exe"))
            return


def title_changed(pdf: pikepdf.Pdf) -> None:
    pdf.docinfo["/Title"] = "Another title"


def script_added(pdf: pikepdf.Pdf) -> None:
    pdf.Root.OpenAction = pikepdf.Dictionary(S=pikepdf.Name.JavaScript, JS="app.alert('x')")


def bookmark_changed(pdf: pikepdf.Pdf) -> None:
    pdf.Root.Outlines.First.Title = pikepdf.String("Results and nothing else")


def file_added(pdf: pikepdf.Pdf) -> None:
    pdf.attachments["more.csv"] = b"1,2\n"


def file_hidden(pdf: pikepdf.Pdf) -> None:
    hidden = pdf.make_stream(b"1,2\n")
    hidden.Type = pikepdf.Name.EmbeddedFile
    pdf.Root.Kept = hidden


def file_removed(pdf: pikepdf.Pdf) -> None:
    del pdf.attachments[REVIEW]


def record_removed(pdf: pikepdf.Pdf) -> None:
    del pdf.attachments[RECORD]


def relationship_changed(pdf: pikepdf.Pdf) -> None:
    next(iter(pdf.attachments.values())).obj.AFRelationship = pikepdf.Name.Alternative


def checksum_changed(pdf: pikepdf.Pdf) -> None:
    stream = next(iter(pdf.attachments.values())).obj.EF.F
    told = stream.Params
    told.CheckSum = pikepdf.String(b"0123456789abcdef")
    stream.Params = told


def letters_of_font_changed(pdf: pikepdf.Pdf) -> None:
    """The font says of one digit that it is another: the page looks the same and copies otherwise."""
    font = next(font for font in pdf.pages[0].Resources.Font.values()
                if re.search(rb"> <0031>", font.ToUnicode.read_bytes()))
    font.ToUnicode.write(font.ToUnicode.read_bytes().replace(b"> <0031>", b"> <0032>"))


def font_program_changed(pdf: pikepdf.Pdf) -> None:
    """The outlines of a font changed: the page looks otherwise and copies the same."""
    font = next(iter(pdf.pages[0].Resources.Font.values()))
    descriptor = font.DescendantFonts[0].FontDescriptor
    key = next(key for key in ("/FontFile3", "/FontFile2", "/FontFile") if key in descriptor)
    raw = bytearray(descriptor[key].read_bytes())
    raw[len(raw) // 2] ^= 1
    descriptor[key].write(bytes(raw))


def language_changed(pdf: pikepdf.Pdf) -> None:
    pdf.Root.Lang = pikepdf.String("de")


def size_of_page_changed(pdf: pikepdf.Pdf) -> None:
    box = pdf.pages[0].mediabox
    pdf.pages[0].mediabox = [box[0], box[1], box[2], float(box[3]) - 40]


EDITS = (page_removed, page_doubled, pages_swapped, note_added, rectangle_over, link_turned, link_to_program,
         title_changed, script_added, bookmark_changed, file_added, file_hidden, file_removed, record_removed,
         relationship_changed, checksum_changed, letters_of_font_changed, font_program_changed, language_changed,
         size_of_page_changed)
