"""Hostile and awkward content: it is drawn as text, stays on the paper, and reaches for nothing."""

from __future__ import annotations

from dataclasses import fields, is_dataclass, replace

import pytest
from dossier_content import CHECKS, FAULT, dossier

from qa_tracker.documents.canvas import BOTTOM, HEIGHT, RIGHT, WIDTH
from qa_tracker.documents.content import Reading, Signature
from qa_tracker.documents.device_dossier import device_dossier_pdf, laid_out
from qa_tracker.documents.fonts import text_width

AWKWARD = {
    "tag": "<img src='http://evil.example/x.png'/>",
    "entity": "&lt;para&gt; &#x41; <b>",
    "override": "abc\u202egnp.exe",
    "isolates": "\u2066\u2066\u2067left open",
    "escape": "(parentheses) \\ and ) ( unmatched",
    "operator": ") Tj ET Q q BT (",
    "control": "bell\x07 null\x00 escape\x1b",
    "one long word": "W" * 300,
    "long": "Anna-Lena von und zu " * 15,
    "Hebrew": "נועה ברק " * 20,
    "Arabic": "ليلى حداد",
    "combining": "a" + "\u0301" * 120,
    "no glyph": "漢字かな交じり文" * 20,
    "surrogate": "\ud800 alone",
}
KEPT = {"verdict", "schema", "labels", "line", "language", "due_on", "measured_at", "qualifier", "demo_key"}


def filled(value, text):
    """Put the text into every free field of the content, at every depth."""
    if is_dataclass(value):
        free = [field.name for field in fields(value) if field.name not in KEPT]
        return replace(value, **{name: filled(getattr(value, name), text) for name in free})
    if isinstance(value, tuple):
        return tuple(filled(item, text) for item in value)
    return text if isinstance(value, str) else value


def small(**changes):
    return dossier(checks=(CHECKS[1], CHECKS[-1]), **changes)


@pytest.mark.parametrize("text", AWKWARD.values(), ids=AWKWARD.keys())
def test_every_text_when_awkward_stays_on_the_paper(text):
    for page in laid_out(filled(small(demo_key=True), text)):
        for x, y, style, line in page.texts:
            assert x >= 0
            assert x + text_width(line, style.font, style.size) <= RIGHT + 0.5
            assert 15 < y < HEIGHT - 20


@pytest.mark.parametrize("text", AWKWARD.values(), ids=AWKWARD.keys())
def test_every_shape_when_texts_are_awkward_stays_on_the_paper(text):
    for page in laid_out(filled(small(), text)):
        for x, top, shape in page.shapes:
            for _, numbers in shape.steps:
                assert all(0 <= x + n <= WIDTH for n in numbers[::2])
                assert all(BOTTOM - 40 < top - n < HEIGHT for n in numbers[1::2])


@pytest.mark.parametrize("text", AWKWARD.values(), ids=AWKWARD.keys())
def test_pdf_when_texts_are_awkward_is_whole_for_another_program(text, poppler):
    printed = poppler("pdfinfo", device_dossier_pdf(filled(small(), text)))
    assert "Pages:" in printed
    assert "Error" not in printed


def test_tag_when_in_a_name_is_read_back_as_typed(poppler):
    signature = Signature("<b>Anna</b> & Co", "user", "2026-03-14T09:31:00+00:00", "performed")
    pdf = device_dossier_pdf(dossier(checks=(replace(CHECKS[0], signatures=(signature,)),)))
    assert "<b>Anna</b> & Co, user" in poppler("pdftotext", pdf)


def test_text_when_it_breaks_out_of_a_string_draws_no_operator(poppler):
    pdf = device_dossier_pdf(dossier(group=AWKWARD["operator"]))
    assert AWKWARD["operator"] in poppler("pdftotext", pdf)


def test_link_when_in_a_text_is_no_link(poppler):
    pdf = device_dossier_pdf(dossier(site="https://evil.example/ javascript:alert(1)"))
    assert b"/URI" not in pdf
    assert b"/JavaScript" not in pdf


def test_arabic_name_when_drawn_keeps_every_letter():
    lines = [line for page in laid_out(dossier(site="ليلى حداد")) for *_, line in page.texts]
    assert "دادح ىليل" in lines


def test_history_when_long_runs_over_many_pages():
    many = tuple(replace(CHECKS[0], leaf=str(number)) for number in range(120))
    pages = laid_out(dossier(checks=many, faults=(FAULT,) * 20))
    assert len(pages) > 40
    assert all(page.texts for page in pages)


def test_text_reading_when_longer_than_a_page_runs_on():
    reading = Reading("Remarks", "long words " * 3000, "conforming", "")
    pages = laid_out(dossier(checks=(replace(CHECKS[0], readings=(reading,)),)))
    drawn = sum(line.count("words") for page in pages for *_, line in page.texts)
    assert drawn == 3000
