"""Keys with certificates for seals, made when they are asked for."""
from __future__ import annotations

import datetime
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from cryptography import x509
from cryptography.hazmat.primitives import hashes
from cryptography.hazmat.primitives.asymmetric import rsa
from cryptography.hazmat.primitives.serialization import BestAvailableEncryption, Encoding
from cryptography.hazmat.primitives.serialization.pkcs12 import serialize_key_and_certificates
from cryptography.x509.oid import ExtendedKeyUsageOID, NameOID

PASSPHRASE = "three blue tiles"


@dataclass(frozen=True)
class Keys:
    """A key and its certificate, as objects and as files."""

    key: Any
    certificate: Any
    file: Path
    pem: Path


def make_keys(folder: Path, name: str, stamps: bool = False) -> Keys:
    """A key with a certificate that it signed itself."""
    key = rsa.generate_private_key(public_exponent=65537, key_size=2048)
    subject = x509.Name([x509.NameAttribute(NameOID.COMMON_NAME, name)])
    now = datetime.datetime.now(datetime.UTC)
    builder = (x509.CertificateBuilder().subject_name(subject).issuer_name(subject).public_key(key.public_key())
               .serial_number(x509.random_serial_number()).not_valid_before(now - datetime.timedelta(days=1))
               .not_valid_after(now + datetime.timedelta(days=30))
               .add_extension(x509.BasicConstraints(ca=False, path_length=None), critical=True)
               .add_extension(x509.KeyUsage(True, not stamps, False, False, False, False, False, False, False), True))
    if stamps:
        builder = builder.add_extension(x509.ExtendedKeyUsage([ExtendedKeyUsageOID.TIME_STAMPING]), critical=True)
    certificate = builder.sign(key, hashes.SHA256())
    file, pem = folder / f"{name}.p12", folder / f"{name}.pem"
    file.write_bytes(serialize_key_and_certificates(b"key", key, certificate, None,
                                                    BestAvailableEncryption(PASSPHRASE.encode())))
    pem.write_bytes(certificate.public_bytes(Encoding.PEM))
    return Keys(key, certificate, file, pem)
