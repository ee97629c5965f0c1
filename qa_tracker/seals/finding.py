"""Verification of a sealed PDF, item by item; only all items together make the bottom line."""

from __future__ import annotations

import io
from collections.abc import Sequence
from dataclasses import dataclass
from datetime import UTC, datetime
from typing import Any

from asn1crypto import x509
from pyhanko.pdf_utils.reader import PdfFileReader
from pyhanko.sign.validation import (
    EmbeddedPdfSignature,
    PdfSignatureStatus,
    SignatureCoverageLevel,
    validate_pdf_signature,
)
from pyhanko_certvalidator import ValidationContext

PADES = "/ETSI.CAdES.detached"


@dataclass(frozen=True)
class Item:
    """One thing looked at; ``code`` names the refusal where it does not hold."""

    name: str
    holds: bool
    code: str


@dataclass(frozen=True)
class Certificate:
    """Whose key it was; ``trusted`` only if it leads to a certificate the reader trusts."""

    subject: str
    issuer: str
    serial: str
    valid_from: datetime
    valid_until: datetime
    trusted: bool


@dataclass(frozen=True)
class SealFinding:
    """What a verification found; ``claimed_at`` is the sealer's word, ``timestamped_at`` an authority's."""

    items: tuple[Item, ...]
    certificate: Certificate | None = None
    claimed_at: datetime | None = None
    timestamped_at: datetime | None = None
    reason: str = ""
    signatures: int = 0

    @property
    def bottom_line(self) -> bool:
        """Say whether everything looked at holds, and that something was looked at."""
        return bool(self.items) and all(item.holds for item in self.items)

    @property
    def code(self) -> str:
        """Name the first refusal, or nothing."""
        return next((item.code for item in self.items if not item.holds), "")


def verify_pdf(data: bytes, trusted_certificates: Sequence[bytes], *, moment: datetime) -> SealFinding:
    """Look at the seal of a file as it stands at a moment.

    ``trusted_certificates`` are DER bytes, those of a timestamp authority among them. Nothing is fetched: certificates are judged by what is given.
    A file that bears no or several signatures gets no further than that.
    """
    try:
        signatures = PdfFileReader(io.BytesIO(data)).embedded_signatures
    except Exception:  # a hostile file may break the parser anywhere; whatever it breaks, it is not readable
        return SealFinding((Item("readable", False, "seal.unreadable"),))
    counted = (
        Item("readable", True, "seal.unreadable"),
        Item("has_signature", bool(signatures), "seal.unsigned"),
        Item("one_signature", len(signatures) == 1, "seal.several_signatures"),
    )
    if len(signatures) != 1:
        return SealFinding(counted[: 2 if not signatures else 3], signatures=len(signatures))
    return _looked_into(data, signatures[0], counted, trusted_certificates, moment)


def _looked_into(
    data: bytes,
    signature: EmbeddedPdfSignature,
    counted: tuple[Item, ...],
    trusted: Sequence[bytes],
    moment: datetime,
) -> SealFinding:
    roots = [x509.Certificate.load(der) for der in trusted]
    context = ValidationContext(trust_roots=roots, moment=moment, allow_fetching=False)
    try:
        status = validate_pdf_signature(signature, context)
        certificate = _certificate(signature.signer_cert, status.trusted)
        items = _items(data, signature, status, certificate, moment)
    except Exception:  # as above: a seal that can't be evaluated is no seal
        return SealFinding((*counted, Item("valid", False, "seal.signature_invalid")), signatures=1)
    return SealFinding(
        (*counted, *items),
        certificate=certificate,
        claimed_at=signature.self_reported_timestamp,
        timestamped_at=status.timestamp_validity.timestamp if _timestamp_holds(status) else None,
        reason=str(signature.sig_object.get("/Reason", "")),
        signatures=1,
    )


def _items(
    data: bytes,
    signature: EmbeddedPdfSignature,
    status: PdfSignatureStatus,
    certificate: Certificate,
    moment: datetime,
) -> tuple[Item, ...]:
    """Judge each item by itself; the library's own bottom line comes last, for what only it looks at."""
    in_date = certificate.valid_from <= moment <= certificate.valid_until
    return (
        Item("intact", bool(status.intact), "seal.digest_differs"),
        Item("valid", bool(status.valid), "seal.signature_invalid"),
        Item("whole_file", _covers_whole_file(data, signature, status), "seal.not_whole_file"),
        Item("profile", signature.sig_object.get("/SubFilter") == PADES, "seal.profile_unknown"),
        Item("certificate_in_date", in_date, "seal.certificate_out_of_date"),
        Item("certificate_trusted", certificate.trusted, "seal.certificate_not_trusted"),
        *_timestamp_item(status),
        Item("bottom_line", bool(status.bottom_line), "seal.refused"),
    )


def _timestamp_item(status: PdfSignatureStatus) -> tuple[Item, ...]:
    """A timestamp is looked at only where there is one: B-B seals have none."""
    if status.timestamp_validity is None:
        return ()
    return (Item("timestamp", _timestamp_holds(status), "seal.timestamp_invalid"),)


def _timestamp_holds(status: PdfSignatureStatus) -> bool:
    stamp = status.timestamp_validity
    return stamp is not None and bool(stamp.intact and stamp.valid and stamp.trusted)


def _covers_whole_file(data: bytes, signature: EmbeddedPdfSignature, status: PdfSignatureStatus) -> bool:
    """Ask the library, and measure: an appended update leaves the digest intact."""
    start, first, second, rest = (int(number) for number in signature.byte_range)
    gap = data[first:second]
    return (
        status.coverage == SignatureCoverageLevel.ENTIRE_FILE
        and (start, second + rest) == (0, len(data))
        and gap.startswith(b"<")
        and gap.endswith(b">")
    )


def _certificate(certificate: Any, trusted: bool) -> Certificate:
    return Certificate(
        subject=certificate.subject.human_friendly,
        issuer=certificate.issuer.human_friendly,
        serial=format(certificate.serial_number, "x"),
        valid_from=certificate.not_valid_before.astimezone(UTC),
        valid_until=certificate.not_valid_after.astimezone(UTC),
        trusted=bool(trusted),
    )
