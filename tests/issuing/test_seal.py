"""The seal: made with a key in a file or on a token, read again, and broken by any change."""
from __future__ import annotations

import dataclasses
import shutil
import subprocess
import sys
import threading
from collections.abc import Callable, Iterator
from http.server import BaseHTTPRequestHandler, HTTPServer
from io import BytesIO
from pathlib import Path
from typing import Any

import pikepdf
import pytest
from click.testing import CliRunner, Result
from cryptography.hazmat.primitives.serialization import Encoding, NoEncryption, PrivateFormat
from seal_keys import PASSPHRASE, Keys, make_keys
from tampering import added_to, rectangle_over

from calcpack.cli import main
from calcpack.errors import CommandError, MissingPartError
from calcpack.issuing.seal import KeyFile, Token, seal
from calcpack.issuing.seal_reading import read_seal
from calcpack.issuing.verify import verify
from calcpack.issuing.verify_again import AGAIN
from calcpack.issuing.verify_report import DIFFERS, SAME, Report, report_text

PIN = "4711"


@pytest.fixture(scope="module")
def keys(tmp_path_factory: pytest.TempPathFactory) -> Keys:
    return make_keys(tmp_path_factory.mktemp("keys"), "M. Okoro")


@pytest.fixture(scope="module")
def content(_issued_twice: Path) -> bytes:
    return (_issued_twice / "issued" / "RT-12-B.pdf").read_bytes()


@pytest.fixture(scope="module")
def sealed(content: bytes, keys: Keys) -> bytes:
    return seal(content, KeyFile(keys.file, PASSPHRASE))


@pytest.fixture(scope="module")
def verified(content: bytes) -> Callable[..., Report]:
    again = dataclasses.replace(AGAIN, make=lambda record, attachments: content)
    return lambda sealed, *trust: verify(sealed, "sealed.pdf", again=again, trust=trust)


def told(report: Report) -> str:
    return " ".join(report_text(report).split())


def test_a_seal_is_added_behind_the_file_and_the_whole_is_still_the_same(
        content: bytes, sealed: bytes, verified: Callable[..., Report]) -> None:
    assert sealed.startswith(content) and sealed != content
    report = verified(sealed)
    assert report.status == SAME, report_text(report)
    assert "of M. Okoro" in told(report) and "whole, not trusted" in told(report)
    assert "byte for byte up to its seal" in told(report)


def test_a_seal_is_trusted_by_the_certificate_that_one_names(sealed: bytes, keys: Keys, tmp_path: Path,
                                                            verified: Callable[..., Report]) -> None:
    report = verified(sealed, keys.pem)
    assert report.status == SAME and "whole, trusted" in told(report)
    other = make_keys(tmp_path, "Another")
    report = verified(sealed, other.pem)
    assert report.status == DIFFERS and "does not rest on the certificate given" in told(report)


def test_a_file_without_a_seal_is_not_what_one_trusts(content: bytes, keys: Keys,
                                                      verified: Callable[..., Report]) -> None:
    assert verified(content).status == SAME
    report = verified(content, keys.pem)
    assert report.status == DIFFERS and "the file carries no seal" in told(report)


def test_another_reader_of_seals_says_that_it_holds(sealed: bytes, tmp_path: Path) -> None:
    (tmp_path / "sealed.pdf").write_bytes(sealed)
    done = subprocess.run(["pdfsig", "-nocert", "sealed.pdf"], cwd=tmp_path, capture_output=True, text=True,
                          check=False, timeout=60)
    assert "Signature is Valid" in done.stdout and "Total document signed" in done.stdout
    assert "ETSI.CAdES.detached" in done.stdout


def test_a_sealed_file_is_still_pdf_a_and_shows_nothing_of_its_seal(content: bytes, sealed: bytes) -> None:
    with pikepdf.open(BytesIO(content)) as before, pikepdf.open(BytesIO(sealed)) as after:
        assert after.Root.Metadata.read_bytes() == before.Root.Metadata.read_bytes()
        assert after.docinfo == before.docinfo
        assert [page.Contents.read_bytes() for page in after.pages] == [page.Contents.read_bytes()
                                                                         for page in before.pages]
        [field] = after.Root.AcroForm.Fields
        assert [float(side) for side in field.Rect] == [0, 0, 0, 0] and "/AP" not in field
        assert int(field.F) & 4, "PDF/A asks for the flag of print"
        assert "/DR" not in after.Root.AcroForm, "no font comes with the seal"


@pytest.mark.parametrize("seed", range(12))
def test_one_byte_changed_in_a_sealed_file_is_found(sealed: bytes, content: bytes, verified: Callable[..., Report],
                                                    seed: int) -> None:
    import random
    dice = random.Random(seed)
    # The first half of the seeds in what was issued, the other in what the seal added.
    place = dice.randrange(len(content)) if seed < 6 else dice.randrange(len(content), len(sealed))
    copy = sealed[:place] + bytes([sealed[place] ^ 1]) + sealed[place + 1:]
    assert verified(copy).status != SAME


def test_a_byte_of_the_signature_changed_breaks_the_seal(sealed: bytes, verified: Callable[..., Report]) -> None:
    start = sealed.index(b"/Contents <", sealed.rindex(b"/ByteRange") - 40000) + len(b"/Contents <") + 2000
    copy = sealed[:start] + (b"0" if sealed[start:start + 1] != b"0" else b"1") + sealed[start + 1:]
    report = verified(copy)
    assert report.status == DIFFERS
    assert any(one.where == "seal" for one in report.differences), report_text(report)


def test_what_is_written_into_the_gap_of_the_seal_is_found(sealed: bytes, verified: Callable[..., Report]) -> None:
    # The gap is wider than the signature and filled with zeros that no signature covers.
    place = sealed.index(b"0" * 200 + b">") + 100
    report = verified(sealed[:place] + b"6869" + sealed[place + 4:])
    assert report.status == DIFFERS and "into the gap" in told(report)


def test_an_update_behind_the_seal_is_found(sealed: bytes, verified: Callable[..., Report]) -> None:
    def retitle(writer: Any) -> None:
        from pyhanko.pdf_utils import generic
        writer.root["/Lang"] = generic.pdf_string("de")
        writer.update_root()
    report = verified(added_to(sealed, retitle))
    assert report.status == DIFFERS
    assert "does not cover the whole file" in told(report) and "something else than a seal" in told(report)


def test_a_page_changed_and_sealed_again_by_another_key_is_found(content: bytes, tmp_path: Path,
                                                                verified: Callable[..., Report]) -> None:
    with pikepdf.open(BytesIO(content)) as pdf:
        rectangle_over(pdf)
        pdf.save(tmp_path / "covered.pdf", deterministic_id=True)
    keys = make_keys(tmp_path, "Another")
    report = verified(seal((tmp_path / "covered.pdf").read_bytes(), KeyFile(keys.file, PASSPHRASE)), keys.pem)
    assert report.status == DIFFERS
    assert "whole, trusted" in told(report) and "page 1: not as calcpack makes it" in told(report)


def test_a_page_changed_in_the_same_update_as_the_seal_is_found(content: bytes, keys: Keys,
                                                               verified: Callable[..., Report]) -> None:
    from pyhanko.pdf_utils import generic
    from pyhanko.pdf_utils.incremental_writer import IncrementalPdfFileWriter
    from pyhanko.sign import fields, signers
    writer, out = IncrementalPdfFileWriter(BytesIO(content)), BytesIO()
    page = writer.root["/Pages"]["/Kids"][0]
    drawn = generic.StreamObject(stream_data=b"q 1 g 100 500 60 14 re f Q")
    page["/Contents"] = generic.ArrayObject([page.raw_get("/Contents"), writer.add_object(drawn)])
    writer.update_container(page["/Contents"])
    signer = signers.SimpleSigner.load_pkcs12_data(keys.file.read_bytes(), [], PASSPHRASE.encode())
    signers.sign_pdf(writer, signers.PdfSignatureMetadata(field_name="Seal"), signer,
                     new_field_spec=fields.SigFieldSpec("Seal"), output=out)
    report = verified(out.getvalue(), keys.pem)
    assert report.status == DIFFERS and "page 1: not as calcpack makes it" in told(report)


@pytest.mark.parametrize(("name", "passphrase"), [("M. Okoro.p12", "six tiles"), ("M. Okoro.p12", ""),
                                                  ("M. Okoro.pem", PASSPHRASE), ("none.p12", PASSPHRASE)])
def test_a_key_that_cannot_be_opened_is_a_fault_that_tells_no_secret(content: bytes, keys: Keys, name: str,
                                                                     passphrase: str) -> None:
    with pytest.raises(CommandError) as caught:
        seal(content, KeyFile(keys.file.with_name(name), passphrase))
    assert name in str(caught.value)
    assert not passphrase or passphrase not in f"{caught.value}{caught.value.faults}"


def test_a_key_shows_no_passphrase_when_it_is_printed(keys: Keys) -> None:
    assert PASSPHRASE not in repr(KeyFile(keys.file, PASSPHRASE))
    assert PIN not in repr(Token(Path("lib.so"), "works", "key", PIN))


def run(*words: Any, **options: Any) -> Result:
    return CliRunner().invoke(main, [*map(str, words)], **options)


def test_issue_seals_what_it_writes(ready: Path, keys: Keys) -> None:
    secret = ready.parent / "passphrase"
    secret.write_text(PASSPHRASE + "\n", "utf-8")
    result = run("issue", ready / "rinse.yaml", "--date", "2026-10-06", "--seal", keys.file,
                 "--passphrase-file", secret)
    assert result.exit_code == 0, result.output
    assert PASSPHRASE not in plain(result)
    made = (ready / "issued" / "RT-12-A.pdf").read_bytes()
    assert read_seal(made, [keys.pem]).signers and not read_seal(made, [keys.pem]).wrongs
    result = run("verify", ready / "issued" / "RT-12-A.pdf", "--trust", keys.pem)
    assert result.exit_code == 0, result.output
    assert PASSPHRASE.encode() not in made


def plain(result: Result) -> str:
    """What a command printed, whatever the width it was wrapped to."""
    return " ".join(result.output.split())


@pytest.mark.parametrize(("words", "says"), [
    (("--passphrase-file", "x"), "without a key"), (("--seal", "a.p12", "--seal-token", "b.so"), "two keys"),
    (("--seal", "a.p12", "--key-label", "x"), "go with --seal-token"),
    (("--seal-token", "b.so", "--token-label", "x"), "labels of token and key"),
    (("--seal", "a.p12"), "no terminal to ask"),
    (("--seal", "a.p12", "--passphrase-file", "none"), "cannot read none")])
def test_options_that_do_not_fit_are_faults_and_nothing_is_written(ready: Path, words: tuple[str, ...],
                                                                  says: str) -> None:
    result = run("issue", ready / "rinse.yaml", *words)
    assert result.exit_code == 2 and says in plain(result)
    assert not (ready / "issued").exists()


def test_a_wrong_passphrase_is_told_before_anything_is_solved(ready: Path, keys: Keys) -> None:
    secret = ready.parent / "wrong"
    secret.write_text("other\n", "utf-8")
    (ready / "rinse.yaml").write_text("not a spec", "utf-8")
    result = run("issue", ready / "rinse.yaml", "--seal", keys.file, "--passphrase-file", secret)
    assert result.exit_code == 2 and "cannot be opened" in plain(result)
    assert "Traceback" not in plain(result) and "other" not in plain(result)


def test_without_the_library_sealing_and_reading_say_what_to_install(sealed: bytes, content: bytes, keys: Keys,
                                                                    monkeypatch: pytest.MonkeyPatch) -> None:
    for name in [name for name in sys.modules if name.split(".")[0] == "pyhanko"]:
        monkeypatch.setitem(sys.modules, name, None)
    monkeypatch.setitem(sys.modules, "pyhanko", None)
    for call in (lambda: seal(content, KeyFile(keys.file, PASSPHRASE)), lambda: read_seal(sealed)):
        with pytest.raises(MissingPartError) as caught:
            call()
        assert "pip install 'calcpack[seal]'" in (caught.value.faults[0].hint or "")
        assert caught.value.exit_status == 4
    assert not read_seal(content).present, "a file without a seal needs no library for seals"


@pytest.fixture
def stamps(tmp_path: Path) -> Iterator[tuple[str, Keys]]:
    """A service of time stamps at this machine: its address, and its key."""
    from asn1crypto import tsp
    from pyhanko.keys import load_cert_from_pemder, load_private_key_from_pemder_data
    from pyhanko.sign.timestamps import DummyTimeStamper
    from pyhanko_certvalidator.registry import SimpleCertificateStore
    keys = make_keys(tmp_path, "Works clock", stamps=True)
    raw = keys.key.private_bytes(Encoding.PEM, PrivateFormat.PKCS8, NoEncryption())
    maker = DummyTimeStamper(load_cert_from_pemder(str(keys.pem)), load_private_key_from_pemder_data(raw, None),
                             certs_to_embed=SimpleCertificateStore())

    class Answer(BaseHTTPRequestHandler):
        """Answers each request with a time stamp."""

        def do_POST(self) -> None:
            asked = tsp.TimeStampReq.load(self.rfile.read(int(self.headers["Content-Length"])))
            answer = maker.request_tsa_response(asked).dump()
            self.send_response(200)
            self.send_header("Content-Type", "application/timestamp-reply")
            self.send_header("Content-Length", str(len(answer)))
            self.end_headers()
            self.wfile.write(answer)

        def log_message(self, *words: Any) -> None:
            pass
    server = HTTPServer(("127.0.0.1", 0), Answer)
    thread = threading.Thread(target=server.serve_forever)
    thread.start()
    yield f"http://127.0.0.1:{server.server_port}/", keys
    server.shutdown()
    thread.join()
    server.server_close()


def test_a_time_stamp_says_when_the_seal_was_made(content: bytes, keys: Keys, stamps: tuple[str, Keys],
                                                 verified: Callable[..., Report]) -> None:
    address, clock = stamps
    stamped = seal(content, KeyFile(keys.file, PASSPHRASE), address)
    report = verified(stamped, keys.pem, clock.pem)
    assert report.status == SAME, report_text(report)
    assert "by the time stamp of Works clock" in told(report) and "whole, trusted" in told(report)


@pytest.mark.parametrize(("address", "kind"), [("http://127.0.0.1:9/", MissingPartError), ("ftp://x", CommandError)])
def test_a_service_of_time_stamps_that_gives_none_is_a_fault(content: bytes, keys: Keys, address: str,
                                                            kind: type[Exception]) -> None:
    with pytest.raises(kind, match="time stamp"):
        seal(content, KeyFile(keys.file, PASSPHRASE), address)


LIBRARIES = ("/usr/lib/softhsm/libsofthsm2.so", "/usr/lib/x86_64-linux-gnu/softhsm/libsofthsm2.so",
             "/usr/lib/aarch64-linux-gnu/softhsm/libsofthsm2.so", "/usr/local/lib/softhsm/libsofthsm2.so")


@pytest.fixture(scope="module")
def token(keys: Keys, tmp_path_factory: pytest.TempPathFactory) -> Iterator[tuple[Path, Path]]:
    """A token in software with the key on it: its library, and the setting that finds it."""
    library = next((Path(name) for name in LIBRARIES if Path(name).is_file()), None)
    assert library is not None and shutil.which("softhsm2-util"), "'.ci/prepare test' installs softhsm2"
    folder = tmp_path_factory.mktemp("token")
    (folder / "tokens").mkdir()
    setting = folder / "softhsm2.conf"
    setting.write_text(f"directories.tokendir = {folder / 'tokens'}\nobjectstore.backend = file\nlog.level = ERROR\n")
    with pytest.MonkeyPatch.context() as patch:
        patch.setenv("SOFTHSM2_CONF", str(setting))
        subprocess.run(["softhsm2-util", "--init-token", "--free", "--label", "works", "--so-pin", "87654321", "--pin",
                        PIN], check=True, capture_output=True, timeout=60)
        _put_on_token(library, keys)
        yield library, setting


def _put_on_token(library: Path, keys: Keys) -> None:
    import pkcs11
    from pkcs11.util.rsa import decode_rsa_private_key
    from pkcs11.util.x509 import decode_x509_certificate
    raw = keys.key.private_bytes(Encoding.DER, PrivateFormat.TraditionalOpenSSL, NoEncryption())
    on_token = {pkcs11.Attribute.LABEL: "okoro", pkcs11.Attribute.TOKEN: True}
    with pkcs11.lib(str(library)).get_token(token_label="works").open(rw=True, user_pin=PIN) as session:
        session.create_object({**decode_rsa_private_key(raw), **on_token, pkcs11.Attribute.SIGN: True})
        session.create_object({**decode_x509_certificate(keys.certificate.public_bytes(Encoding.DER)), **on_token})


def test_a_key_on_a_token_seals(content: bytes, keys: Keys, token: tuple[Path, Path],
                                verified: Callable[..., Report]) -> None:
    report = verified(seal(content, Token(token[0], "works", "okoro", PIN)), keys.pem)
    assert report.status == SAME, report_text(report)
    assert "of M. Okoro" in told(report) and "whole, trusted" in told(report)


@pytest.mark.parametrize(("change", "says"), [
    ({"pin": "0000"}, "cannot be opened"), ({"token": "other"}, "cannot be opened"),
    ({"key": "other"}, "holds no key"), ({"library": Path("/nowhere.so")}, "cannot be opened")])
def test_a_token_that_cannot_be_used_is_a_fault_that_tells_no_pin(content: bytes, token: tuple[Path, Path],
                                                                 change: dict[str, Any], says: str) -> None:
    key = dataclasses.replace(Token(token[0], "works", "okoro", PIN), **change)
    with pytest.raises(CommandError, match=says) as caught:
        seal(content, key)
    assert key.pin not in f"{caught.value}{caught.value.faults}"
