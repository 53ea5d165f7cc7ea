"""A sealed PDF to what its seal says: who sealed it and when, whether it is whole, whether it is trusted."""
from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from datetime import datetime
from io import BytesIO
from pathlib import Path
from typing import Any

from calcpack.errors import CommandError, Fault, MissingPartError
from calcpack.issuing.carried import opened
from calcpack.issuing.seal import HINT, quiet
from calcpack.issuing.verify_report import Difference, Stage


@dataclass(frozen=True, slots=True)
class Seal:
    """The seals of a file: ``begins`` is where the first one's bytes begin, the file's length where there is none.

    ``signers`` says who sealed, in words; ``wrongs`` what is wrong with a
    seal; ``remarks`` what the reader should know of it.
    """

    begins: int
    signers: tuple[str, ...] = ()
    wrongs: tuple[Difference, ...] = ()
    remarks: tuple[str, ...] = ()

    @property
    def present(self) -> bool:
        return bool(self.signers)

    def stage(self) -> Stage:
        """What a report says of the seals."""
        words = "; ".join(self.signers) if self.present else "none"
        return Stage("seal", words, self.wrongs, remarks=self.remarks)


def read_seal(content: bytes, trust: Sequence[Path] = ()) -> Seal:
    """The seals of a PDF; with ``trust``, certificates in PEM, one that does not rest on them is wrong.

    Raises
    ------
    CommandError
        For a file of ``trust`` that is no certificate.
    MissingPartError
        For a sealed PDF where the library for seals is not installed.
    """
    if not _is_sealed(content):
        wrongs = (Difference("seal", "the file carries no seal", "none", "one that rests on the certificate given"),)
        return Seal(len(content), wrongs=wrongs if trust else ())
    try:
        from pyhanko.pdf_utils.reader import PdfFileReader
    except ImportError as error:
        raise MissingPartError(Fault("the file is sealed, and reading its seal needs pyHanko, which is not installed",
                                     hint=HINT, detail=str(error))) from None
    from pyhanko.pdf_utils.misc import PdfError
    roots = [root for path in trust for root in _certificates(path)]
    with quiet():
        try:
            return _read(content, PdfFileReader(BytesIO(content)), roots)
        except (PdfError, ValueError, TypeError, KeyError, AttributeError) as error:
            return Seal(len(content), ("CANNOT BE READ",), (Difference(
                "seal", f"the seal cannot be read: {str(error) or type(error).__name__}"),))


def _is_sealed(content: bytes) -> bool:
    with opened(content) as pdf:
        form = pdf.Root.get("/AcroForm")
        return form is not None and any(str(one.get("/FT", "")) == "/Sig" for one in form.get("/Fields", ()))


def _certificates(path: Path) -> list[Any]:
    from pyhanko.keys import load_certs_from_pemder_data
    try:
        found = list(load_certs_from_pemder_data(path.read_bytes()))
    except (OSError, ValueError) as error:
        raise CommandError(Fault(f"{path} cannot be read as a certificate", expected="a certificate in PEM",
                                 detail=str(error))) from None
    if not found:
        raise CommandError(Fault(f"{path} holds no certificate", expected="a certificate in PEM"))
    return found


def _read(content: bytes, reader: Any, roots: Sequence[Any]) -> Seal:
    embedded = reader.embedded_signatures
    if not embedded:
        return Seal(len(content), ("an empty field for a seal",), (Difference(
            "seal", "the file has a field for a seal, and no seal in it", "an empty field", "a seal"),))
    judged = [_judge(one, roots) for one in embedded]
    wrongs = [wrong for _, found, _ in judged for wrong in found]
    if reader.xrefs.total_revisions != 1 + len(embedded):
        wrongs.append(Difference("seal", "something else than a seal was added to the file",
                                 f"{reader.xrefs.total_revisions - 1} additions", f"{len(embedded)}, a seal each"))
    wrongs += [wrong for one in embedded for wrong in _beside(content, one)]
    begins = _end_of_first(content, reader)
    return Seal(begins, tuple(words for words, _, _ in judged), tuple(wrongs),
                tuple(remark for _, _, remarks in judged for remark in remarks))


def _end_of_first(content: bytes, reader: Any) -> int:
    """Where the file ended before anything was added to it."""
    end = content.index(b"%%EOF", reader.xrefs.get_startxref_for_revision(0)) + len(b"%%EOF")
    return end + 1 if content[end:end + 1] == b"\n" else end


def _beside(content: bytes, embedded: Any) -> list[Difference]:
    """Bytes in the one gap that a seal cannot cover, its own, which are not of it: the rest of the gap is zeros."""
    from asn1crypto.parser import peek
    _, start, end, _ = (int(one) for one in embedded.byte_range)
    held = bytes(embedded.pkcs7_content)
    digits = held.hex()
    written = content[start:end].decode("latin-1") in (f"<{digits}>", f"<{digits.upper()}>")
    if written and not any(held[peek(held):]):
        return []
    return [Difference("seal", "bytes were written into the gap that the seal leaves for itself")]


def _judge(embedded: Any, roots: Sequence[Any]) -> tuple[str, list[Difference], list[str]]:
    """One seal in words, what is wrong with it, and what is to be known."""
    from pyhanko.sign.validation.status import SignatureCoverageLevel
    status = _status(embedded, roots)
    wrongs, remarks = [], []
    name = status.signing_cert.subject.native.get("common_name") or status.signing_cert.subject.human_friendly
    if not (status.intact and status.valid):
        wrongs.append(Difference("seal", f"the seal of {name} is broken: the file was changed after it was sealed",
                                 "other bytes", "those that were sealed"))
    if status.coverage != SignatureCoverageLevel.ENTIRE_FILE:
        wrongs.append(Difference("seal", f"the seal of {name} does not cover the whole file", "bytes outside the seal",
                                 "none"))
    fingerprint = status.signing_cert.sha256.hex()
    if roots and not status.trusted:
        wrongs.append(Difference("seal", f"the seal of {name} does not rest on the certificate given",
                                 f"a certificate of {_issuer(status)}, sha256 {fingerprint}", "one that does"))
    if not roots:
        remarks.append(f"whether the seal is really by {name} is not told by this file: its certificate, sha256 "
                       f"{fingerprint}, is trusted by nobody here; '--trust CERTIFICATE.pem' names whom you trust")
    whole = "BROKEN" if wrongs and not roots else "whole"
    state = "trusted" if status.trusted else "not trusted"
    return f"of {name}, {_when(status)}: {'NOT IN ORDER' if wrongs else whole}, {state}", wrongs, remarks


def _status(embedded: Any, roots: Sequence[Any]) -> Any:
    """The library's judgement now; or at the time of a time stamp that is trusted, when certificates have expired."""
    status = _validated(embedded, roots, None)
    stamp = status.timestamp_validity
    if stamp is not None and stamp.valid and stamp.trusted and not status.trusted:
        return _validated(embedded, roots, stamp.timestamp)
    return status


def _validated(embedded: Any, roots: Sequence[Any], moment: datetime | None) -> Any:
    from pyhanko.sign.validation import KeyUsageConstraints, validate_pdf_signature
    from pyhanko_certvalidator import ValidationContext
    usage = KeyUsageConstraints(key_usage={"non_repudiation", "digital_signature"}, match_all_key_usages=False)
    now = ValidationContext(trust_roots=list(roots), allow_fetching=False)
    then = ValidationContext(trust_roots=list(roots), allow_fetching=False, moment=moment)
    return validate_pdf_signature(embedded, then, now, key_usage_settings=usage, skip_diff=True)


def _when(status: Any) -> str:
    stamp = status.timestamp_validity
    if stamp is not None:
        by = stamp.signing_cert.subject.native.get("common_name", "a service")
        return f"{_iso(stamp.timestamp)} by the time stamp of {by}" + ("" if stamp.valid else " (BROKEN)")
    reported = status.signer_reported_dt
    return f"{_iso(reported)} by the signer's clock" if reported else "at a time that is not told"


def _iso(moment: datetime) -> str:
    from datetime import UTC
    return moment.astimezone(UTC).strftime("%Y-%m-%d %H:%M:%S UTC")


def _issuer(status: Any) -> str:
    return status.signing_cert.issuer.native.get("common_name") or status.signing_cert.issuer.human_friendly
