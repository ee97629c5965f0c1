"""Verification: a whole seal holds item by item, and everything else is refused under its own code."""

from __future__ import annotations

import io
from datetime import UTC, datetime, timedelta

import pytest
from pyhanko.pdf_utils.incremental_writer import IncrementalPdfFileWriter
from pyhanko.sign.signers import PdfSignatureMetadata, PdfSigner

from qa_tracker.seals.finding import SealFinding, verify_pdf
from qa_tracker.seals.keys import load_key, make_demo_key

MOMENT = datetime(2026, 3, 14, 9, 31, tzinfo=UTC)


@pytest.fixture
def looked_at(key):
    return lambda pdf, moment=MOMENT: verify_pdf(pdf, [key.certificate_der], moment=moment)


def updated(pdf: bytes) -> bytes:
    """Append a proper incremental update, as an editor would."""
    writer = IncrementalPdfFileWriter(io.BytesIO(pdf))
    writer.update_root()
    out = io.BytesIO()
    writer.write(out)
    return out.getvalue()


def signed_twice(pdf: bytes, key) -> bytes:
    meta = PdfSignatureMetadata(field_name="Another")
    return PdfSigner(meta, key.signer).sign_pdf(IncrementalPdfFileWriter(io.BytesIO(pdf))).getvalue()


def test_seal_when_whole_holds_in_every_item(sealed_pdf, looked_at):
    finding = looked_at(sealed_pdf)
    assert finding.bottom_line
    assert finding.code == ""
    assert [item.name for item in finding.items if not item.holds] == []


def test_finding_when_whole_describes_the_certificate(sealed_pdf, looked_at):
    certificate = looked_at(sealed_pdf).certificate
    assert "Tarnwater Hospitals Group" in certificate.subject
    assert "Demonstration key" in certificate.subject
    assert certificate.trusted


def test_finding_when_nothing_was_looked_at_is_no_bottom_line():
    assert not SealFinding(()).bottom_line


SPOILT = [
    ("a byte of the page", lambda pdf: pdf.replace(b"speed 1540", b"speed 1541"), "seal.digest_differs"),
    (
        "a byte of the reason",
        lambda pdf: pdf.replace(b"Device dossier", b"Device d0ssier"),
        "seal.digest_differs",
    ),
    ("a comment appended", lambda pdf: pdf + b"\n% note\n", "seal.not_whole_file"),
    ("one byte appended", lambda pdf: pdf + b"\n", "seal.not_whole_file"),
    ("an update appended", updated, "seal.not_whole_file"),
    ("half the file", lambda pdf: pdf[: len(pdf) // 2], "seal.unreadable"),
    ("nothing", lambda pdf: b"", "seal.unreadable"),
    ("not a PDF", lambda pdf: b"hello", "seal.unreadable"),
]


@pytest.mark.parametrize(("spoil", "code"), [row[1:] for row in SPOILT], ids=[row[0] for row in SPOILT])
def test_file_when_spoilt_is_refused_by_its_own_code(spoil, code, sealed_pdf, looked_at):
    finding = looked_at(spoil(sealed_pdf))
    assert (finding.bottom_line, finding.code) == (False, code)


def test_appended_file_when_looked_at_is_still_intact_and_refused(sealed_pdf, looked_at):
    holds = {item.name: item.holds for item in looked_at(updated(sealed_pdf)).items}
    assert holds["intact"]
    assert not holds["whole_file"]


@pytest.mark.parametrize("missing", [1, 2, 6, 7, 40, 400])
def test_file_when_its_end_is_cut_off_is_refused(missing, sealed_pdf, looked_at):
    assert not looked_at(sealed_pdf[:-missing]).bottom_line


def test_file_when_cut_back_to_before_the_seal_is_unsigned(plain_pdf, looked_at):
    assert looked_at(plain_pdf).code == "seal.unsigned"


def test_file_when_signed_twice_is_refused(sealed_pdf, key, looked_at):
    finding = looked_at(signed_twice(sealed_pdf, key))
    assert (finding.code, finding.signatures) == ("seal.several_signatures", 2)


def test_file_when_another_profile_sealed_it_is_refused(plain_pdf, key, looked_at):
    assert looked_at(signed_twice(plain_pdf, key)).code == "seal.profile_unknown"


def test_seal_when_its_certificate_is_not_trusted_is_refused(sealed_pdf):
    stranger = load_key(make_demo_key("Tarnwater Hospitals Group", "x", MOMENT), "x")
    finding = verify_pdf(sealed_pdf, [stranger.certificate_der], moment=MOMENT)
    assert (finding.bottom_line, finding.code) == (False, "seal.certificate_not_trusted")
    assert not finding.certificate.trusted


def test_seal_when_nothing_is_trusted_is_refused(sealed_pdf):
    assert verify_pdf(sealed_pdf, [], moment=MOMENT).code == "seal.certificate_not_trusted"


@pytest.mark.parametrize("days", [-1, 3651], ids=["too early", "too late"])
def test_seal_when_the_certificate_is_out_of_date_is_refused(days, sealed_pdf, looked_at):
    assert looked_at(sealed_pdf, MOMENT + timedelta(days=days)).code == "seal.certificate_out_of_date"


def test_every_byte_when_flipped_in_the_signed_range_is_refused(sealed_pdf, looked_at):
    places = range(0, len(sealed_pdf), max(1, len(sealed_pdf) // 40))
    gap = range(sealed_pdf.index(b"/Contents <") + 11, sealed_pdf.index(b"/Contents <") + 11 + 4096)
    for place in (p for p in places if p not in gap):
        spoilt = bytearray(sealed_pdf)
        spoilt[place] ^= 1
        assert not looked_at(bytes(spoilt)).bottom_line, place
