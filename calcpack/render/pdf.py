"""A sheet's HTML to its PDF: tagged, the same bytes for the same page, nothing fetched from outside.

The PDF engine reads our style sheets, fonts and pictures, and what the page
carries in ``data:`` addresses. Whatever else a page asks for is refused, and
a page about which the engine warns becomes no PDF.
"""
from __future__ import annotations

import gc
import logging
import os
import warnings
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from io import BytesIO
from pathlib import Path
from typing import TYPE_CHECKING, Any

from calcpack.errors import Fault, MissingPartError
from calcpack.render.assets import templates_folder
from calcpack.writing import write_whole

if TYPE_CHECKING:
    import pikepdf

    from calcpack.record import Record

INSTALL = ("WeasyPrint needs Pango and HarfBuzz: on Debian and Ubuntu 'apt install libpango-1.0-0 "
           "libpangoft2-1.0-0 libharfbuzz-subset0', on macOS 'brew install pango'; "
           "'calcpack build --no-pdf' does without")
FIXED_CLOCK = "946684800"
"""2000-01-01 in seconds, for parts of the engine that write the time of day into what they make."""


def write_pdf(html: str, path: Path, record: Record) -> int:
    """Writes the page that ``html`` describes, as :func:`sheet_html` made it for print.

    Returns
    -------
    int
        The number of pages.

    Raises
    ------
    MissingPartError
        When the PDF engine or one of its libraries is not installed, or
        warns: a warning means that a sheet would not look as it should.
    """
    raw, pages = pdf_bytes(html, record.number)
    write_whole(path, raw)
    return pages


def pdf_bytes(html: str, number: str, *, variant: str | None = None, tags: bool = True,
              finish: Callable[[pikepdf.Pdf], None] | None = None) -> tuple[bytes, int]:
    """The PDF and its number of pages; ``number`` is for the messages.

    ``variant`` is a kind of PDF that the engine knows, such as ``pdf/a-3u``;
    ``tags`` says whether the structure goes with the page;
    ``finish`` is called with the object tree before it gets its identifier.
    """
    engine = _engine()
    with _clock(), _uncollected(), _warnings() as heard:
        document = engine.HTML(string=html, base_url=_base(), url_fetcher=_fetcher()).render()
        with warnings.catch_warnings():
            # The engine leaves the file of its colour profile for Python to close, which it does at once.
            warnings.simplefilter("ignore", ResourceWarning)
            raw = document.write_pdf(pdf_tags=tags, pdf_variant=variant)
    if heard:
        raise MissingPartError(Fault(f"the PDF of sheet {number} would not be complete", detail="; ".join(heard),
                                     hint="install calcpack again; if that does not help, report the detail"))
    return _settled(raw, finish), len(document.pages)


def _engine() -> Any:
    """WeasyPrint, or the fault that says what to install."""
    try:
        import weasyprint
    except ImportError as error:
        raise MissingPartError(Fault("the PDF engine WeasyPrint is not installed", hint=INSTALL,
                                     detail=str(error))) from None
    except OSError as error:
        raise MissingPartError(Fault("a library that the PDF engine needs is missing", hint=INSTALL,
                                     detail=str(error).splitlines()[0])) from None
    return weasyprint


def _base() -> str:
    return templates_folder().as_uri() + "/"


def _fetcher() -> Any:
    from urllib.parse import unquote, urlsplit

    from weasyprint.urls import URLFetcher
    folders = [(templates_folder() / name).resolve() for name in ("styles", "fonts")]

    class OwnAssets(URLFetcher):
        """Gives our own assets and ``data:`` addresses, and refuses the rest."""

        def fetch(self, url: str, headers: Any = None) -> Any:
            parts = urlsplit(url)
            if parts.scheme == "file" and not parts.netloc:
                wanted = Path(unquote(parts.path)).resolve()
                if any(folder in wanted.parents for folder in folders):
                    return super().fetch(url, headers)
            elif parts.scheme == "data":
                return super().fetch(url, headers)
            raise ValueError(f"a sheet reads nothing from outside: {url[:80]}")

    return OwnAssets(allowed_protocols=("file", "data"), allow_redirects=False)


@contextmanager
def _warnings() -> Iterator[list[str]]:
    """What the PDF engine warns of while the block runs, each once."""
    heard: list[str] = []

    class Listener(logging.Handler):
        """Keeps each message."""

        def emit(self, record: logging.LogRecord) -> None:
            if (text := record.getMessage()) not in heard:
                heard.append(text)

    logger, listener = logging.getLogger("weasyprint"), Listener(logging.WARNING)
    logger.addHandler(listener)
    try:
        yield heard
    finally:
        logger.removeHandler(listener)


@contextmanager
def _clock() -> Iterator[None]:
    """The fixed clock, where the caller has set none."""
    if "SOURCE_DATE_EPOCH" in os.environ:
        yield
        return
    os.environ["SOURCE_DATE_EPOCH"] = FIXED_CLOCK
    try:
        yield
    finally:
        del os.environ["SOURCE_DATE_EPOCH"]


@contextmanager
def _uncollected() -> Iterator[None]:
    """No garbage collection meanwhile: a third of the time of a layout goes into walking boxes that are in use."""
    if not gc.isenabled():
        yield
        return
    gc.disable()
    try:
        yield
    finally:
        gc.enable()


def _settled(raw: bytes, finish: Callable[[pikepdf.Pdf], None] | None) -> bytes:
    """The same PDF, finished, with an identifier that hangs on its content alone."""
    import pikepdf
    settled = BytesIO()
    with pikepdf.open(BytesIO(raw)) as pdf:
        if finish is not None:
            finish(pdf)
        pdf.save(settled, deterministic_id=True, object_stream_mode=pikepdf.ObjectStreamMode.generate)
    return settled.getvalue()
