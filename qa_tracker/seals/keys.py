"""The institution's sealing key: made for demonstrations, or loaded from the PKCS#12 file it came in."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import datetime, timedelta

from asn1crypto import x509 as asn1_x509
from cryptography import x509
from cryptography.hazmat.primitives import hashes, serialization
from cryptography.hazmat.primitives.asymmetric import ec
from cryptography.hazmat.primitives.serialization import pkcs12
from cryptography.x509.oid import NameOID
from pyhanko.sign.signers import SimpleSigner

from qa_tracker.core.errors import Invalid

DEMO_UNIT = "Demonstration key, proves nothing"
DEMO_LIFETIME = timedelta(days=3650)


@dataclass(frozen=True)
class SealKey:
    """A key ready to sign with, its certificate, and whether it is a demonstration key."""

    signer: SimpleSigner
    certificate: asn1_x509.Certificate
    common_name: str
    is_demo: bool

    @property
    def certificate_der(self) -> bytes:
        """Give the certificate, to be kept as the trusted one."""
        return self.certificate.dump()  # type: ignore[no-any-return, unused-ignore]  # untyped


def make_demo_key(common_name: str, password: str, moment: datetime) -> bytes:
    """Make an EC P-256 key under a self-signed certificate, as a PKCS#12 file.

    The certificate says that it is a demonstration key, may sign and commit to content, and may issue
    nothing.
    """
    key = ec.generate_private_key(ec.SECP256R1())
    name = _demo_name(common_name)
    certificate = (
        x509.CertificateBuilder()
        .subject_name(name)
        .issuer_name(name)
        .public_key(key.public_key())
        .serial_number(x509.random_serial_number())
        .not_valid_before(moment - timedelta(minutes=5))
        .not_valid_after(moment + DEMO_LIFETIME)
        .add_extension(x509.BasicConstraints(ca=False, path_length=None), critical=True)
        .add_extension(_signing_only(), critical=True)
        .add_extension(x509.SubjectKeyIdentifier.from_public_key(key.public_key()), critical=False)
        .sign(key, hashes.SHA256())
    )
    protection = serialization.BestAvailableEncryption(password.encode())
    return pkcs12.serialize_key_and_certificates(common_name.encode(), key, certificate, None, protection)


def _demo_name(common_name: str) -> x509.Name:
    return x509.Name(
        [
            x509.NameAttribute(NameOID.COMMON_NAME, common_name),
            x509.NameAttribute(NameOID.ORGANIZATIONAL_UNIT_NAME, DEMO_UNIT),
        ]
    )


def _signing_only() -> x509.KeyUsage:
    return x509.KeyUsage(
        digital_signature=True,
        content_commitment=True,
        key_encipherment=False,
        data_encipherment=False,
        key_agreement=False,
        key_cert_sign=False,
        crl_sign=False,
        encipher_only=False,
        decipher_only=False,
    )


def load_key(pkcs12_bytes: bytes, password: str) -> SealKey:
    """Read key and certificate, refusing a file that is damaged or locked with another password."""
    try:
        signer = SimpleSigner.load_pkcs12_data(pkcs12_bytes, other_certs=[], passphrase=password.encode())
    except ValueError as error:
        raise Invalid("seal.key_unreadable") from error
    certificate = signer.signing_cert
    subject = certificate.subject.native
    return SealKey(
        signer=signer,
        certificate=certificate,
        common_name=str(subject.get("common_name", "")),
        is_demo=subject.get("organizational_unit_name") == DEMO_UNIT,
    )
