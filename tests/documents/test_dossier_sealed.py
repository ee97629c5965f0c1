"""A sealed dossier: pdfsig and our own verification agree, and a changed reading is refused by both."""

from __future__ import annotations

from datetime import UTC, datetime

import pytest
from dossier_content import dossier

from qa_tracker.documents.device_dossier import device_dossier_pdf
from qa_tracker.seals.finding import verify_pdf
from qa_tracker.seals.keys import load_key, make_demo_key
from qa_tracker.seals.pades import sign_pdf

MOMENT = datetime(2025, 12, 1, 8, 5, tzinfo=UTC)


@pytest.fixture(scope="module")
def key():
    return load_key(make_demo_key("Tarnwater Hospitals Group", "tarn", MOMENT), "tarn")


@pytest.fixture(scope="module")
def sealed(key):
    pdf = device_dossier_pdf(dossier(demo_key=key.is_demo))
    return sign_pdf(pdf, key, moment=MOMENT, reason="Device dossier", name="Tarnwater Hospitals Group")


def test_sealed_dossier_when_whole_satisfies_both_programs(sealed, key, poppler):
    printed = poppler("pdfsig", sealed, "-nocert")
    assert "Signature is Valid" in printed
    assert "Total document signed" in printed
    assert verify_pdf(sealed, [key.certificate_der], moment=MOMENT).bottom_line


def test_sealed_dossier_when_a_drawn_byte_is_changed_is_refused_by_both(sealed, key, poppler):
    place = sealed.index(b"BT", sealed.index(b"stream")) + 40
    spoilt = sealed[:place] + bytes([sealed[place] ^ 1]) + sealed[place + 1 :]
    assert "Digest Mismatch" in poppler("pdfsig", spoilt, "-nocert")
    assert verify_pdf(spoilt, [key.certificate_der], moment=MOMENT).code == "seal.digest_differs"


def test_sealed_dossier_when_read_still_has_its_text_and_fonts(sealed, poppler):
    assert "Fjellet C5 convex probe" in poppler("pdftotext", sealed)
    assert all(row.split()[-5] == "yes" for row in poppler("pdffonts", sealed).splitlines()[2:])
