"""A finished PDF and a key to the same PDF with a seal: a digital signature over every byte of it.

The seal is a PAdES signature (ETSI EN 319 142-1, level B-B, or B-T with a time
stamp), added behind the file's end, so that what was issued stays byte for
byte. It shows nothing on the page: a picture of a signature would prove
nothing, and its font would break PDF/A.
"""
from __future__ import annotations

import logging
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass, field
from io import BytesIO
from pathlib import Path
from typing import Any

from calcpack.errors import CommandError, Fault, MissingPartError

FIELD = "Seal"
"""Name of the signature field."""
HINT = "pip install 'calcpack[seal]'"
SECONDS = 30
"""How long a service of time stamps may take."""


@dataclass(frozen=True, slots=True)
class KeyFile:
    """A key with its certificate in a file (PKCS #12, ``.p12`` or ``.pfx``), and the passphrase that opens it."""

    path: Path
    passphrase: str = field(repr=False)


@dataclass(frozen=True, slots=True)
class Token:
    """A key that never leaves a token: the PKCS #11 library that speaks to it, the labels of token and key, its PIN.

    The certificate is the one on the token with the label of the key.
    """

    library: Path
    token: str
    key: str
    pin: str = field(repr=False)


def seal(pdf: bytes, key: KeyFile | Token, timestamp: str | None = None) -> bytes:
    """The PDF with a seal behind its end.

    Parameters
    ----------
    pdf : bytes
        A finished PDF.
    key : KeyFile or Token
        What signs.
    timestamp : str, optional
        Address of a service of time stamps (RFC 3161); the network is used for nothing else.

    Raises
    ------
    CommandError
        Where the key cannot be had, with no more of the secret than that it does not fit.
    MissingPartError
        Where the library for seals is not installed, or the service of time stamps gives no answer.
    """
    require_library()
    with quiet(), _signer(key) as signer:
        return _signed(pdf, signer, timestamp)


def try_key(key: KeyFile | Token) -> None:
    """Open the key and close it again, so that a wrong passphrase is told before anything else is done."""
    with quiet(), _signer(key):
        pass


def require_library() -> None:
    """Raise MissingPartError where the library for seals is not installed."""
    try:
        import pyhanko.sign  # noqa: F401
    except ImportError as error:
        raise MissingPartError(Fault("seals need pyHanko, which is not installed", hint=HINT,
                                     detail=str(error))) from None


@contextmanager
def quiet() -> Iterator[None]:
    """No messages of the library's own: what went wrong is told as a fault."""
    loggers = [logging.getLogger(name) for name in ("pyhanko", "pyhanko_certvalidator")]
    before = [one.level for one in loggers]
    for one in loggers:
        one.setLevel(logging.CRITICAL + 1)
    try:
        yield
    finally:
        for one, level in zip(loggers, before, strict=True):
            one.setLevel(level)


def _signed(pdf: bytes, signer: Any, timestamp: str | None) -> bytes:
    from pyhanko.sign import fields, signers
    meta = signers.PdfSignatureMetadata(field_name=FIELD, md_algorithm="sha256",
                                        subfilter=fields.SigSeedSubFilter.PADES)
    maker = signers.PdfSigner(meta, signer=signer, timestamper=_timestamper(timestamp),
                              new_field_spec=fields.SigFieldSpec(FIELD))
    sealed = BytesIO()
    try:
        maker.sign_pdf(_writer(pdf), output=sealed)
    except _signing_errors() as error:
        raise _no_seal(error, timestamp) from None
    return sealed.getvalue()


def _writer(pdf: bytes) -> Any:
    """A writer that adds to a PDF and leaves title, dates and producer as they were issued."""
    from pyhanko.pdf_utils.incremental_writer import IncrementalPdfFileWriter

    class AsIssued(IncrementalPdfFileWriter):
        """Writes no new metadata: the library would put itself and the time of day into them."""

        def _update_meta(self) -> None:
            pass

    return AsIssued(BytesIO(pdf))


def _signing_errors() -> tuple[type[Exception], ...]:
    """What the library raises where it cannot sign; the token's own errors only where its part is installed."""
    from pyhanko.sign.general import SigningError
    from pyhanko.sign.timestamps.common_utils import TimestampRequestError
    found: list[type[Exception]] = [SigningError, TimestampRequestError, OSError, TimeoutError]
    try:
        from pkcs11.exceptions import PKCS11Error
        found.append(PKCS11Error)
    except ImportError:
        pass
    return tuple(found)


def _no_seal(error: Exception, timestamp: str | None) -> CommandError | MissingPartError:
    from pyhanko.sign.timestamps.common_utils import TimestampRequestError
    if timestamp is not None and isinstance(error, TimestampRequestError | OSError | TimeoutError):
        return MissingPartError(Fault(f"no time stamp could be had from {timestamp}", detail=_first_line(error),
                                      hint="try again, name another service, or seal without --timestamp"))
    return CommandError(Fault("the file could not be sealed", detail=_first_line(error),
                              hint="see that key and certificate belong together"))


def _timestamper(address: str | None) -> Any:
    if address is None:
        return None
    from pyhanko.sign.timestamps import HTTPTimeStamper
    if not address.startswith(("https://", "http://")):
        raise CommandError(Fault(f"{address} is no address of a service of time stamps", expected="https://…"))
    return HTTPTimeStamper(address, timeout=SECONDS)


@contextmanager
def _signer(key: KeyFile | Token) -> Iterator[Any]:
    if isinstance(key, KeyFile):
        yield _of_file(key)
    else:
        with _session(key) as signer:
            yield signer


def _of_file(key: KeyFile) -> Any:
    from pyhanko.sign import signers
    try:
        content = key.path.read_bytes()
    except OSError as error:
        raise CommandError(Fault(f"cannot read the key {key.path}", detail=str(error))) from None
    try:
        return signers.SimpleSigner.load_pkcs12_data(content, [], key.passphrase.encode("utf-8") or None)
    except (ValueError, AttributeError, TypeError):
        # The library's own words could hold parts of the file; none of them are passed on.
        raise CommandError(Fault(f"the key {key.path} cannot be opened", hint="the passphrase is wrong, or the file "
                                 "is not PKCS #12 with one key and its certificate")) from None


@contextmanager
def _session(key: Token) -> Iterator[Any]:
    """A signer on a token, while it is open."""
    try:
        from pkcs11.exceptions import PKCS11Error
        from pyhanko.config.pkcs11 import TokenCriteria
        from pyhanko.sign.pkcs11 import PKCS11Signer, open_pkcs11_session
    except ImportError as error:
        raise MissingPartError(Fault("a token needs python-pkcs11, which is not installed", hint=HINT,
                                     detail=str(error))) from None
    from pyhanko.pdf_utils.misc import PdfError
    try:
        session = open_pkcs11_session(str(key.library), token_criteria=TokenCriteria(label=key.token),
                                      user_pin=key.pin)
    except (PKCS11Error, PdfError, RuntimeError, OSError) as error:
        raise CommandError(Fault(f"the token {key.token} cannot be opened through {key.library}",
                                 hint="see that it is plugged in, that its label is right and that the PIN is",
                                 detail=type(error).__name__)) from None
    with session:
        signer = PKCS11Signer(session, key_label=key.key, cert_label=key.key)
        try:
            # Asking for the certificate reads key and certificate from the token.
            found = signer.signing_cert
        except PKCS11Error as error:
            raise _no_such_key(key, _first_line(error)) from None
        if found is None:
            raise _no_such_key(key, None)
        yield signer


def _no_such_key(key: Token, detail: str | None) -> CommandError:
    return CommandError(Fault(f"the token {key.token} holds no key with a certificate labelled {key.key}",
                              detail=detail))


def _first_line(error: Exception) -> str:
    return (str(error).splitlines() or [type(error).__name__])[0]
