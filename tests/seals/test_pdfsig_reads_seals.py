"""Another program's word on our seals: poppler's pdfsig, by what it prints."""

from __future__ import annotations


def test_pdfsig_when_the_seal_is_whole_says_valid_and_total(sealed_pdf, pdfsig):
    printed = pdfsig(sealed_pdf)
    assert "Signature is Valid" in printed
    assert "Total document signed" in printed
    assert "Not total document signed" not in printed
    assert "ETSI.CAdES.detached" in printed


def test_pdfsig_when_a_signed_byte_is_changed_says_so(sealed_pdf, pdfsig):
    printed = pdfsig(sealed_pdf.replace(b"speed 1540", b"speed 1541"))
    assert "Digest Mismatch" in printed
    assert "Signature is Valid" not in printed


def test_pdfsig_when_bytes_are_appended_says_not_total(sealed_pdf, pdfsig):
    assert "Not total document signed" in pdfsig(sealed_pdf + b"\n% note\n")


def test_pdfsig_when_there_is_no_seal_says_so(plain_pdf, pdfsig):
    assert "does not contain any signatures" in pdfsig(plain_pdf)


def test_pdfsig_when_the_seal_is_read_prints_the_moment_given(sealed_pdf, pdfsig):
    assert "Mar 14 2026 09:31:00" in pdfsig(sealed_pdf)
