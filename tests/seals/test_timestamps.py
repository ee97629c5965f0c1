"""PAdES B-T against an authority answering on this machine: proven moment, distrust, silence."""

from __future__ import annotations

import threading
from datetime import UTC, datetime, timedelta
from http.server import BaseHTTPRequestHandler, HTTPServer

import pytest
from asn1crypto import keys, tsp
from asn1crypto import x509 as asn1_x509
from cryptography import x509
from cryptography.hazmat.primitives import hashes, serialization
from cryptography.hazmat.primitives.asymmetric import rsa
from cryptography.x509.oid import ExtendedKeyUsageOID, NameOID
from pyhanko.sign.timestamps import DummyTimeStamper

from qa_tracker.core.errors import Conflict, Invalid
from qa_tracker.seals.finding import verify_pdf
from qa_tracker.seals.pades import sign_pdf
from qa_tracker.seals.timestamps import Authority

MOMENT = datetime(2026, 3, 14, 9, 31, tzinfo=UTC)
STAMPED = MOMENT + timedelta(seconds=2)


def authority_certificate(key) -> x509.Certificate:
    name = x509.Name([x509.NameAttribute(NameOID.COMMON_NAME, "Lakeside timestamps")])
    usage = x509.ExtendedKeyUsage([ExtendedKeyUsageOID.TIME_STAMPING])
    builder = x509.CertificateBuilder().subject_name(name).issuer_name(name).public_key(key.public_key())
    builder = builder.serial_number(7).not_valid_before(MOMENT - timedelta(days=1))
    builder = builder.not_valid_after(MOMENT + timedelta(days=1)).add_extension(usage, critical=True)
    return builder.sign(key, hashes.SHA256())


@pytest.fixture(scope="module")
def stamper():
    key = rsa.generate_private_key(65537, 2048)
    private = key.private_bytes(
        serialization.Encoding.DER, serialization.PrivateFormat.PKCS8, serialization.NoEncryption()
    )
    der = authority_certificate(key).public_bytes(serialization.Encoding.DER)
    return DummyTimeStamper(
        asn1_x509.Certificate.load(der), keys.PrivateKeyInfo.load(private), fixed_dt=STAMPED
    )


@pytest.fixture
def served(stamper):
    """An authority on this machine; what it answers can be spoilt by setting ``reply``."""

    class Handler(BaseHTTPRequestHandler):
        def do_POST(self):
            body = self.rfile.read(int(self.headers["Content-Length"]))
            answer = stamper.request_tsa_response(tsp.TimeStampReq.load(body)).dump()
            self.send_response(200)
            self.send_header("Content-Type", server.kind)
            self.end_headers()
            self.wfile.write(answer)

        def log_message(self, *arguments):
            """Keep the test's output clean."""

    server = HTTPServer(("127.0.0.1", 0), Handler)
    server.kind = "application/timestamp-reply"
    thread = threading.Thread(target=server.serve_forever, daemon=True)
    thread.start()
    yield server
    server.shutdown()
    server.server_close()
    thread.join()


def address(server) -> str:
    return f"http://127.0.0.1:{server.server_port}/"


def sealed_by(server, pdf: bytes, key) -> bytes:
    stamps = Authority(address(server), timeout_s=5)
    return sign_pdf(pdf, key, moment=MOMENT, reason="r", name="n", timestamper=stamps)


def test_seal_when_timestamped_proves_the_authoritys_moment(plain_pdf, key, served, stamper):
    trusted = [key.certificate_der, stamper.tsa_cert.dump()]
    finding = verify_pdf(sealed_by(served, plain_pdf, key), trusted, moment=MOMENT + timedelta(minutes=1))
    assert (finding.bottom_line, finding.code, finding.timestamped_at) == (True, "", STAMPED)


def test_seal_when_the_authority_is_not_trusted_is_refused(plain_pdf, key, served):
    sealed = sealed_by(served, plain_pdf, key)
    finding = verify_pdf(sealed, [key.certificate_der], moment=MOMENT + timedelta(minutes=1))
    assert (finding.code, finding.timestamped_at) == ("seal.timestamp_invalid", None)


def test_seal_when_not_timestamped_has_no_such_item(sealed_pdf, key):
    finding = verify_pdf(sealed_pdf, [key.certificate_der], moment=MOMENT)
    assert "timestamp" not in [item.name for item in finding.items]


def test_seal_when_the_authority_answers_something_else_is_not_made(plain_pdf, key, served):
    served.kind = "text/html"
    with pytest.raises(Conflict) as refusal:
        sealed_by(served, plain_pdf, key)
    assert refusal.value.code == "seal.timestamp_unavailable"


def test_seal_when_the_authority_is_silent_is_not_made(plain_pdf, key):
    stamps = Authority("http://127.0.0.1:9/", timeout_s=1)
    with pytest.raises(Conflict) as refusal:
        sign_pdf(plain_pdf, key, moment=MOMENT, reason="r", name="n", timestamper=stamps)
    assert refusal.value.code == "seal.timestamp_unavailable"


@pytest.mark.parametrize("url", ["", "file:///etc/hostname", "ftp://x/"])
def test_authority_when_its_address_is_no_web_address_is_refused(url):
    with pytest.raises(Invalid) as refusal:
        Authority(url)
    assert refusal.value.code == "seal.timestamp_address"
