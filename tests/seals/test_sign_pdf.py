"""Sealing: what the file then holds, said by the standard's own names."""

from __future__ import annotations

from datetime import UTC, datetime, timedelta

import pytest
from cryptography import x509

from qa_tracker.core.errors import Conflict, Invalid
from qa_tracker.seals.finding import verify_pdf
from qa_tracker.seals.keys import load_key, make_demo_key
from qa_tracker.seals.pades import sign_pdf

MOMENT = datetime(2026, 3, 14, 9, 31, tzinfo=UTC)


def test_sealed_file_when_made_starts_with_the_file_as_it_was(plain_pdf, sealed_pdf):
    assert sealed_pdf.startswith(plain_pdf)


def test_sealed_file_when_made_names_the_open_profile_and_one_approval_signature(sealed_pdf):
    assert sealed_pdf.count(b"/ETSI.CAdES.detached") == 1
    assert b"/DocMDP" not in sealed_pdf


def test_seal_when_read_back_claims_the_moment_and_reason_given(sealed_pdf, key):
    finding = verify_pdf(sealed_pdf, [key.certificate_der], moment=MOMENT)
    assert (finding.claimed_at, finding.reason) == (MOMENT, "Device dossier")


def test_sealed_file_when_sealed_again_is_refused(sealed_pdf, key):
    with pytest.raises(Conflict) as refusal:
        sign_pdf(sealed_pdf, key, moment=MOMENT, reason="again", name="x", field="Second")
    assert refusal.value.code == "seal.already_signed"


@pytest.mark.parametrize(
    "data", [b"", b"no PDF at all", b"%PDF-1.7\n%%EOF\n"], ids=["empty", "text", "hollow"]
)
def test_file_when_it_is_no_pdf_is_refused(data, key):
    with pytest.raises(Invalid) as refusal:
        sign_pdf(data, key, moment=MOMENT, reason="r", name="n")
    assert refusal.value.code == "seal.cannot_sign"


def test_demo_certificate_when_made_may_sign_and_issue_nothing(key):
    certificate = x509.load_der_x509_certificate(key.certificate_der)
    usage = certificate.extensions.get_extension_for_class(x509.KeyUsage).value
    assert (usage.digital_signature, usage.content_commitment, usage.key_cert_sign) == (True, True, False)
    assert not certificate.extensions.get_extension_for_class(x509.BasicConstraints).value.ca
    assert certificate.not_valid_before_utc < MOMENT < certificate.not_valid_after_utc - timedelta(days=3000)


def test_demo_key_when_loaded_says_so(key):
    assert (key.is_demo, key.common_name) == (True, "Tarnwater Hospitals Group")


@pytest.mark.parametrize(
    ("spoil", "password"),
    [(lambda p12: p12, "wrong"), (lambda p12: p12[:-20], "tarn"), (lambda p12: b"", "tarn")],
    ids=["wrong password", "cut short", "empty"],
)
def test_key_file_when_it_cannot_be_opened_is_refused(spoil, password):
    with pytest.raises(Invalid) as refusal:
        load_key(spoil(make_demo_key("Tarnwater", "tarn", MOMENT)), password)
    assert refusal.value.code == "seal.key_unreadable"
