"""The options of a command that seals to a function that seals; a passphrase is never an option."""
from __future__ import annotations

import sys
from collections.abc import Callable
from pathlib import Path
from typing import TYPE_CHECKING, Any

import click

from calcpack.errors import CommandError, Fault

if TYPE_CHECKING:
    from calcpack.issuing.seal import KeyFile, Token

OPTIONS = (
    click.option("--seal", "seal_key", type=click.Path(path_type=Path), metavar="KEY.p12",
                 help="Seal the PDF with this key and certificate (PKCS #12)."),
    click.option("--seal-token", type=click.Path(path_type=Path), metavar="LIBRARY",
                 help="Seal with a key on a token, through this PKCS #11 library."),
    click.option("--token-label", metavar="LABEL", help="Label of the token."),
    click.option("--key-label", metavar="LABEL", help="Label of key and certificate on the token."),
    click.option("--passphrase-file", type=click.Path(path_type=Path), metavar="FILE",
                 help="File whose first line is the passphrase of the key, or the PIN of the token; else it is "
                      "asked for."),
    click.option("--timestamp", metavar="URL", help="Address of a service of time stamps (RFC 3161) for the seal."),
)


def seal_options(command: Callable[..., Any]) -> Callable[..., Any]:
    """Give a command the options of :func:`sealer`."""
    for option in reversed(OPTIONS):
        command = option(command)
    return command


def sealer(*, seal_key: Path | None, seal_token: Path | None, token_label: str | None, key_label: str | None,
           passphrase_file: Path | None, timestamp: str | None) -> Callable[[bytes], bytes] | None:
    """What seals a PDF as the options say; None where no seal is asked for.

    Raises
    ------
    CommandError
        Where the options do not fit, or the key cannot be opened.
    MissingPartError
        Where the library for seals is not installed.
    """
    if seal_key is None and seal_token is None:
        if any((token_label, key_label, passphrase_file, timestamp)):
            raise CommandError(Fault("options of a seal without a key", expected="--seal or --seal-token too"))
        return None
    from calcpack.issuing.seal import require_library, seal, try_key
    require_library()
    key = _key(seal_key, seal_token, token_label, key_label, passphrase_file)
    try_key(key)
    return lambda pdf: seal(pdf, key, timestamp)


def _key(file: Path | None, token: Path | None, token_label: str | None, key_label: str | None,
         passphrase_file: Path | None) -> KeyFile | Token:
    from calcpack.issuing.seal import KeyFile, Token
    if file is not None and token is not None:
        raise CommandError(Fault("--seal and --seal-token are two keys", expected="one of them"))
    if file is not None:
        if token_label or key_label:
            raise CommandError(Fault("--token-label and --key-label go with --seal-token"))
        return KeyFile(file, _secret(passphrase_file, f"Passphrase of {file}"))
    if token is None or not token_label or not key_label:
        raise CommandError(Fault("--seal-token needs the labels of token and key",
                                 expected="--token-label LABEL and --key-label LABEL"))
    return Token(token, token_label, key_label, _secret(passphrase_file, f"PIN of token {token_label}"))


def _secret(file: Path | None, asked: str) -> str:
    """The first line of a file, or what the user types, which is not shown."""
    if file is not None:
        try:
            return (file.read_text("utf-8").splitlines() or [""])[0]
        except (OSError, UnicodeDecodeError) as error:
            raise CommandError(Fault(f"cannot read {file}", detail=type(error).__name__)) from None
    if not sys.stdin.isatty():
        raise CommandError(Fault("the key needs a passphrase, and there is no terminal to ask for it at",
                                 hint="--passphrase-file FILE names a file whose first line it is"))
    return click.prompt(asked, hide_input=True, default="", show_default=False, err=True)
