"""An issued record and the files beside it to the PDF that is issued, from nothing else: it can be made again.

What the pages print beside the record's own content (the comparison, the run
of the published checks, the sheets before and after) lies in the record's
block ``issue``; how the checker's marks stand is had from the review file.
"""
from __future__ import annotations

from collections.abc import Mapping, Sequence
from pathlib import Path
from typing import TYPE_CHECKING, Any

from calcpack.issuing.archive import mend
from calcpack.issuing.attached import Attachment, attach
from calcpack.record import Record

if TYPE_CHECKING:
    import pikepdf

    from calcpack.render.pages import Extras
    from calcpack.render.site import Pages

VARIANT = "pdf/a-3u"
FOR_USE, FOR_INFORMATION = "for use", "for information"


def issued_pdf(record: Record, attachments: Sequence[Attachment]) -> bytes:
    """The PDF of an issued record, with the record and ``attachments`` inside.

    Parameters
    ----------
    record : Record
        One with the block ``issue``.
    attachments : sequence of Attachment
        The spec, the review file and the files that the spec reads; the
        record is attached too and need not be among them.

    Raises
    ------
    MissingPartError
        When the PDF engine is missing, or warns.
    BrokenPrintError
        For a page whose numbers cannot be had from what it prints.
    """
    return printed(issued_pages(record, attachments), record, attachments)


def issued_pages(record: Record, attachments: Sequence[Attachment]) -> Pages:
    """The finished page for print with the sheet's points; errors as of :func:`issued_pdf`."""
    from calcpack.render.site import draw, judged_pages
    comparison = record.data["issue"]["comparison"]
    return judged_pages(record, comparison, draw(record, comparison), True,
                        extras_of(record, attachments))


def printed(pages: Pages, record: Record, attachments: Sequence[Attachment]) -> bytes:
    """The PDF of pages that are finished."""
    from calcpack.render.pdf import pdf_bytes
    issue = record.data["issue"]
    files = [*(one for one in attachments if one.role != "record"), record_file(record)]

    def finish(pdf: pikepdf.Pdf) -> None:
        mend(pdf)
        attach(pdf, files, issue["date"])
    return pdf_bytes(pages.paper, record.number, variant=VARIANT, finish=finish)[0]


def extras_of(record: Record, attachments: Sequence[Attachment]) -> Extras:
    """What the issued record and its review file tell the pages beside the calculation."""
    from calcpack.render.pages import Extras
    issue = record.data["issue"]
    return Extras(verification=issue["verification"], review=_standing(record, attachments), family=issue["family"])


def _standing(record: Record, attachments: Sequence[Attachment]) -> Any:
    """How the marks and signatures stand; None where the sheet was issued without a review file."""
    named = record.data["issue"]["review"]
    if named is None:
        return None
    from calcpack.review.reading import read_review
    from calcpack.review.standing import standing
    content = next(one.content for one in attachments if one.name == named["file"])
    return standing(record.data, read_review(Path(named["file"]), text=content.decode("utf-8")))


def record_file(record: Record) -> Attachment:
    """The record as it is attached."""
    return Attachment(record.data["issue"]["record"], "record", record.to_json().encode())


def issue_stem(number: str, revision: str) -> str:
    """``NUMBER-REVISION``, as the files of an issue are called."""
    from calcpack.render.sheet import file_stem
    return f"{file_stem(number)}-{revision}"


def issue_name(number: str, revision: str, kind: str) -> str:
    """The name of the PDF of an issue."""
    return issue_stem(number, revision) + (".pdf" if kind == FOR_USE else "-for-information.pdf")


def print_engine() -> Mapping[str, str]:
    """The versions of what makes the PDF: pages of the same versions are the same, drawing by drawing."""
    import zlib

    import pikepdf
    import weasyprint
    from weasyprint.text.ffi import pango
    number = pango.pango_version()
    return {"weasyprint": weasyprint.__version__, "pikepdf": pikepdf.__version__, "harfbuzz": _harfbuzz(),
            "zlib": zlib.ZLIB_RUNTIME_VERSION, "pango": f"{number // 10000}.{number // 100 % 100}.{number % 100}"}


def _harfbuzz() -> str:
    """The version of the library that shapes text, which the engine's interface lets one ask for by comparison."""
    from weasyprint.text.ffi import harfbuzz
    found: list[int] = []
    for place in range(3):
        rest = (0,) * (2 - place)
        digit = next(n for n in range(999, -1, -1) if harfbuzz.hb_version_atleast(*found, n, *rest))
        found.append(digit)
    return ".".join(map(str, found))
