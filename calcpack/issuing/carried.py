"""The bytes of an issued PDF to what it carries, checked against itself: its record, its spec, and the files beside.

Nothing is believed here that the file says of itself: each attached file is
read by its bytes and set against the list in the record, the checksums of the
PDF and the hashes of the spec.
"""
from __future__ import annotations

import hashlib
import json
import re
import zlib
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from io import BytesIO
from pathlib import Path
from typing import TYPE_CHECKING, Any

from calcpack.errors import CalcpackError, CommandError, Fault
from calcpack.issuing.attached import RELATIONSHIPS, Attachment
from calcpack.issuing.verify_report import Difference
from calcpack.record import Record, read_record
from calcpack.record.record import FORMAT

if TYPE_CHECKING:
    import pikepdf

MAX_BYTES = 100_000_000
MAX_ATTACHED = 30_000_000
"""No issued sheet comes near these sizes; a larger file is not read, since it could fill the machine's memory."""

PLAIN_NAME = re.compile(r"(?!\.)[^\\\x00-\x1f:~/]{1,200}")
NEEDED = {"sheet": ("number", "revision", "title", "status"), "issue": ("kind", "date"), "engine": ("calcpack",)}
"""What a verification reads of a record before it compares it."""
Data = Mapping[str, Any]


class NotVerifiableError(CalcpackError):
    """A file about which nothing can be said: damaged, or without what a verification needs."""

    exit_status = 1


@dataclass(frozen=True, slots=True)
class CarriedFile:
    """An attached file: its bytes, and what the PDF says of it."""

    name: str
    content: bytes
    mime: str
    relationship: str
    size: int | None
    checksum: bytes | None

    @property
    def sha256(self) -> str:
        return hashlib.sha256(self.content).hexdigest()


@dataclass(frozen=True, slots=True)
class CarriedSheet:
    """What an issued PDF carries, and where that does not agree with itself (``wrongs``).

    ``roles`` gives the role of each file by its name, as the record lists it.
    """

    record: Record
    record_name: str
    spec_name: str
    files: tuple[CarriedFile, ...]
    roles: Mapping[str, str]
    pages: int
    wrongs: tuple[Difference, ...]

    def content(self, name: str) -> bytes:
        """The bytes of an attached file."""
        return next(one.content for one in self.files if one.name == name)

    def attachments(self) -> tuple[Attachment, ...]:
        """The files as they are attached, each with its role."""
        return tuple(Attachment(one.name, self.roles[one.name], one.content) for one in self.files)


def read_carried(content: bytes) -> CarriedSheet:
    """What the PDF with these bytes carries.

    Raises
    ------
    NotVerifiableError
        For a file that is damaged, carries no record of this format, or not
        the spec of its record.
    """
    with opened(content) as pdf:
        files = tuple(_files(pdf))
        loose = tuple(_loose(pdf, len(files)))
        pages = len(pdf.pages)
    record, record_name = _record(files)
    listed = _listed(record)
    spec_name = next((name for name, one in listed.items() if one.get("role") == "spec"), None)
    if spec_name is None or spec_name not in {one.name for one in files}:
        raise NotVerifiableError(Fault("the file does not carry the spec of its record",
                                       found=_names(one.name for one in files), expected=spec_name))
    wrongs = (*loose, *_told_wrongly(files), *_against_list(files, listed, record_name), *_review(record, listed),
              *_of_record(files, record, record_name, spec_name))
    roles = {one.name: listed[one.name]["role"] for one in files if one.name in listed} | {record_name: "record"}
    return CarriedSheet(record, record_name, spec_name, tuple(one for one in files if one.name in roles), roles, pages,
                   wrongs)


def opened(content: bytes) -> pikepdf.Pdf:
    """The PDF, opened without any repair.

    Raises
    ------
    NotVerifiableError
        For bytes that are no PDF, are cut short, or would have to be repaired.
    """
    import pikepdf
    if not content.startswith(b"%PDF-"):
        raise NotVerifiableError(Fault("the file is not a PDF"))
    if len(content) > MAX_BYTES:
        raise NotVerifiableError(Fault("the file is larger than 100 MB and is not read"))
    if not re.search(rb"startxref\s+\d+\s+%%EOF\s*\Z", content[-1024:]):
        raise NotVerifiableError(Fault("the file is cut short, or something stands after its end"))
    try:
        pdf = pikepdf.open(BytesIO(content), attempt_recovery=False)
        pages, warned = len(pdf.pages), pdf.get_warnings()
    except pikepdf.PasswordError:
        raise NotVerifiableError(Fault("the file is locked by a password")) from None
    except pikepdf.PdfError as error:
        raise NotVerifiableError(Fault("the file is damaged", detail=str(error))) from None
    if warned or not pages or pdf.is_encrypted:
        raise NotVerifiableError(Fault("the file is damaged, or was made by something else",
                                       detail="; ".join(str(one) for one in warned) or None))
    return pdf


def _files(pdf: pikepdf.Pdf) -> Iterator[CarriedFile]:
    """The attached files, by name."""
    import pikepdf
    try:
        entries = {name: entry.obj for name, entry in pdf.attachments.items()}
        for name, entry in sorted(entries.items()):
            stream = entry.EF.F
            told = stream.get("/Params", pikepdf.Dictionary())
            size, checksum = told.get("/Size"), told.get("/CheckSum")
            yield CarriedFile(name, _unpacked(stream, name), str(stream.get("/Subtype", "")).removeprefix("/"),
                              str(entry.get("/AFRelationship", "")).removeprefix("/"),
                              None if size is None else int(size), None if checksum is None else bytes(checksum))
    except (pikepdf.PdfError, AttributeError, TypeError, ValueError) as error:
        raise NotVerifiableError(Fault("the files attached cannot be read", detail=str(error))) from None


def _unpacked(stream: pikepdf.Stream, name: str) -> bytes:
    """The bytes of an attached file, of which no more are unpacked than is sensible."""
    kind = str(stream.get("/Filter", ""))
    raw = stream.read_raw_bytes()
    if not raw:
        return raw
    if kind == "/FlateDecode" and "/DecodeParms" not in stream:
        unpacker = zlib.decompressobj()
        try:
            content = unpacker.decompress(raw, MAX_ATTACHED)
        except zlib.error as error:
            raise NotVerifiableError(Fault(f"the attached file {name} is damaged", detail=str(error))) from None
        if unpacker.eof:
            return content
        reason = "is larger than 30 MB" if unpacker.unconsumed_tail else "is cut short"
        raise NotVerifiableError(Fault(f"the attached file {name} {reason}"))
    if kind:
        raise NotVerifiableError(Fault(f"the attached file {name} is packed in a way that calcpack does not use",
                                       found=kind))
    return raw


def _loose(pdf: pikepdf.Pdf, count: int) -> Iterator[Difference]:
    """Embedded files that the list of attachments does not name."""
    import pikepdf
    inside = sum(1 for one in pdf.objects if isinstance(one, pikepdf.Stream)
                 and str(one.get("/Type", "")) == "/EmbeddedFile")
    if inside != count:
        yield Difference("attachments", "the PDF holds files that are not listed", f"{inside} files inside",
                         f"{count}, as many as its list of attachments names")


def _told_wrongly(files: tuple[CarriedFile, ...]) -> Iterator[Difference]:
    """Where the PDF says something else of an attached file than its bytes do."""
    for one in files:
        where = f"attachment {one.name}"
        if PLAIN_NAME.fullmatch(one.name) is None:
            yield Difference(where, "this is no plain name of a file", repr(one.name), "a name without a folder")
        if one.size != len(one.content):
            yield Difference(where, "the PDF states another size", str(one.size), f"{len(one.content)} bytes")
        computed = hashlib.md5(one.content, usedforsecurity=False).digest()
        if one.checksum != computed:
            stated = "none" if one.checksum is None else one.checksum.hex()
            yield Difference(where, "the PDF states another checksum", stated, computed.hex())


def _record(files: tuple[CarriedFile, ...]) -> tuple[Record, str]:
    """The one record among the files."""
    records = [one for one in files if one.name.lower().endswith(".json")]
    if len(records) != 1:
        raise NotVerifiableError(Fault(
            "the file carries several files that may be its record" if records else "the file carries no record",
            found=_names(one.name for one in files), expected="a PDF written by 'calcpack issue'"))
    [file] = records
    try:
        text = file.content.decode("utf-8")
        data = json.loads(text)
    except (UnicodeDecodeError, ValueError, RecursionError) as error:
        raise NotVerifiableError(Fault(f"the record {file.name} cannot be read", detail=str(error))) from None
    made = data.get("calcpack") if isinstance(data, dict) else None
    if isinstance(made, int) and made > FORMAT:
        raise NotVerifiableError(Fault(f"the record is of format {made}, and this calcpack reads format {FORMAT}",
                                       hint="verify it with the version that made it, or a later one"))
    try:
        record = read_record(Path(file.name), text)
    except CommandError as error:
        raise NotVerifiableError(error.faults) from None
    lacking = _lacking(data)
    if lacking:
        raise NotVerifiableError(Fault("the record inside is not one of an issued sheet", found="no " + lacking,
                                       expected="a PDF written by 'calcpack issue'"))
    return record, file.name


def _lacking(data: Data) -> str:
    """What an issued sheet's record has and ``data`` has not, by name; empty where it has all."""
    for part, keys in NEEDED.items():
        inside = data.get(part)
        for key in keys:
            if not isinstance(inside, dict) or not isinstance(inside.get(key), str):
                return f"{part}: {key}"
    lists = next((key for key in ("inputs", "steps") if not isinstance(data[key], list)
                  or not all(isinstance(one, dict) for one in data[key])), "")
    return lists or ("spec_sha256" if not isinstance(data["spec_sha256"], str) else "")


def _listed(record: Record) -> dict[str, Data]:
    """The files that the record lists, by name."""
    files = record.data["issue"].get("files")
    if not isinstance(files, list) or not all(isinstance(one, dict) and isinstance(one.get("name"), str)
                                              and one.get("role") in RELATIONSHIPS for one in files):
        raise NotVerifiableError(Fault("the record does not list the files attached to its sheet"))
    return {one["name"]: one for one in files}


def _against_list(files: tuple[CarriedFile, ...], listed: Mapping[str, Data], record: str) -> Iterator[Difference]:
    """Where the files are not those that the record lists, byte for byte."""
    here = {one.name for one in files} - {record}
    for name in sorted(set(listed) - here):
        yield Difference(f"attachment {name}", "the record lists this file, and it is not there", "no such file",
                         _hash(listed[name].get("sha256")))
    for name in sorted(here - set(listed)):
        yield Difference(f"attachment {name}", "this file is attached, and the record does not list it", name,
                         _names(listed))
    for one in files:
        stated = listed.get(one.name, {})
        if one.name in listed and (one.sha256, len(one.content)) != (stated.get("sha256"), stated.get("size")):
            yield Difference(f"attachment {one.name}", "this is not the file that the record lists",
                             f"{_hash(one.sha256)}, {len(one.content)} bytes",
                             f"{_hash(stated.get('sha256'))}, {stated.get('size')} bytes")
        role = "record" if one.name == record else stated.get("role")
        if role in RELATIONSHIPS and one.relationship != RELATIONSHIPS[role]:
            yield Difference(f"attachment {one.name}", "the PDF gives it another relationship", one.relationship,
                             RELATIONSHIPS[role])


def _review(record: Record, listed: Mapping[str, Data]) -> Iterator[Difference]:
    """Where the review file that the record names is not the one that it lists."""
    stated = record.data["issue"].get("review")
    in_list = next(({"file": name, "sha256": one.get("sha256")} for name, one in listed.items()
                    if one["role"] == "review"), None)
    if stated != in_list:
        yield Difference("record issue, review", "this is not the review file in the list of files", repr(stated),
                         repr(in_list))


def _of_record(files: tuple[CarriedFile, ...], record: Record, record_name: str, spec: str) -> Iterator[Difference]:
    """Where the record is not canonical, or does not hold the spec that is attached."""
    by_name = {one.name: one for one in files}
    canonical = record.to_json().encode()
    if by_name[record_name].content != canonical:
        yield Difference(f"attachment {record_name}", "the record is not written as calcpack writes it",
                         _hash(by_name[record_name].sha256),
                         f"{_hash(hashlib.sha256(canonical).hexdigest())} for the same content")
    attached = by_name[spec]
    if attached.sha256 != record.data["spec_sha256"]:
        yield Difference(f"attachment {spec}", "the record was made from another spec", _hash(attached.sha256),
                         _hash(record.data["spec_sha256"]))
    if str(record.data.get("spec_text")).encode() != attached.content:
        yield Difference("record spec_text", "the text in the record is not that of the attached spec",
                         f"{len(str(record.data.get('spec_text')))} characters",
                         f"those of {spec}, {len(attached.content)} bytes")
    if record.data.get("spec_file") != spec:
        yield Difference("record spec_file", "the record names another spec", str(record.data.get("spec_file")), spec)


def _hash(value: Any) -> str:
    """The beginning of a hash, which tells two files apart and fits a line."""
    return f"sha256 {str(value)[:24]}…"


def _names(names: Any) -> str:
    return ", ".join(sorted(names)) or "nothing"
