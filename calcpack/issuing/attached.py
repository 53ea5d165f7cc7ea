"""Files to attachments of a PDF, and an issued PDF to the files that it carries.

Each attached file is told with its kind and its part in the sheet, as ISO
19005-3 (PDF/A-3) asks: a MIME type, a date, a relationship, one entry among
the associated files.
"""
from __future__ import annotations

import hashlib
from collections.abc import Sequence
from dataclasses import dataclass
from io import BytesIO
from pathlib import PurePosixPath
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    import pikepdf

MIME = {".yaml": "application/yaml", ".yml": "application/yaml", ".json": "application/json", ".csv": "text/csv"}
RELATIONSHIPS = {"spec": "Source", "rows": "Source", "record": "Data", "review": "Supplement"}
"""What each role of a file is to the pages, in the words of ISO 32000-2, 7.11.3."""
TITLES = {"spec": "spec", "rows": "rows of the spec", "record": "record", "review": "review file"}


@dataclass(frozen=True, slots=True)
class Attachment:
    """A file that an issued PDF carries: its ``role`` is one of :data:`RELATIONSHIPS`."""

    name: str
    role: str
    content: bytes

    @property
    def mime(self) -> str:
        """The MIME type by the name's ending."""
        return MIME.get(PurePosixPath(self.name).suffix.lower(), "application/octet-stream")

    @property
    def sha256(self) -> str:
        return hashlib.sha256(self.content).hexdigest()

    def listed(self) -> dict[str, Any]:
        """The entry of a record's ``issue.files``."""
        return {"name": self.name, "role": self.role, "size": len(self.content), "sha256": self.sha256}


def attach(pdf: pikepdf.Pdf, files: Sequence[Attachment], date: str) -> None:
    """Attach the files to an open PDF; ``date`` is ISO and stands for their creation and change."""
    import pikepdf
    stamp = f"D:{date.replace('-', '')}000000Z"
    associated = pikepdf.Array()
    for one in sorted(files, key=lambda one: one.name):
        entry = pikepdf.AttachedFileSpec(
            pdf, one.content, description=TITLES[one.role], filename=one.name, mime_type=one.mime,
            creation_date=stamp, mod_date=stamp, relationship=pikepdf.Name(f"/{RELATIONSHIPS[one.role]}"))
        pdf.attachments[one.name] = entry
        associated.append(pdf.attachments[one.name].obj)
    pdf.Root.AF = associated


def carried_files(content: bytes) -> dict[str, bytes]:
    """The files that a PDF carries, by name.

    Raises
    ------
    pikepdf.PdfError
        For bytes that are no PDF, or a damaged one.
    """
    import pikepdf
    with pikepdf.open(BytesIO(content)) as pdf:
        return {name: entry.get_file().read_bytes() for name, entry in pdf.attachments.items()}
