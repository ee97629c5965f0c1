"""Text before it is drawn: nothing acts, nothing vanishes, lines fit, and letters stand in reading order."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from qa_tracker.documents.fonts import REGULAR, text_width
from qa_tracker.documents.text import joined, moment_text, printable, shortened, wrapped

PRINTED = [
    ("plain", "Hywel Dragić", "Hywel Dragić"),
    ("Greek", "Ελένη Παππά", "Ελένη Παππά"),
    ("Cyrillic", "Наталія Ярош", "Наталія Ярош"),
    ("decomposed accents", "Dragic\u0301", "Dragić"),
    ("markup", "<img src='file:///etc/passwd'/>", "<img src='file:///etc/passwd'/>"),
    ("line breaks and tabs", "a\r\n\tb", "a b"),
    ("an override", "abc\u202egpj", "abc[U+202E]gpj"),
    ("an isolate", "a\u2068b", "a[U+2068]b"),
    ("a direction mark", "a\u200fb", "ab"),
    ("a soft hyphen", "a\u00adb", "ab"),
    ("a control character", "a\x07b", "a[U+0007]b"),
    ("a letter without a glyph", "中", "[U+4E2D]"),
    ("beyond the first plane", "\U0001f600", "[U+1F600]"),
]


@pytest.mark.parametrize(("text", "drawn"), [row[1:] for row in PRINTED], ids=[row[0] for row in PRINTED])
def test_printable_when_given(text, drawn):
    assert printable(text) == drawn


ORDERED = [
    ("Hebrew alone", printable("נועה ברק"), "קרב העונ"),
    ("Hebrew inside Latin", printable("signed by נועה ברק today"), "signed by קרב העונ today"),
    ("brackets turn round", printable("נועה (ברק)"), "(קרב) העונ"),
    ("brackets inside Latin", printable("Dr נועה (ברק) and"), "Dr (קרב) העונ and"),
    ("a bracketed number at the end", printable("Dr נועה (12)"), "Dr (12) העונ"),
    ("Latin brackets hold a name", printable("a (נועה) b"), "a (העונ) b"),
    ("an unmatched bracket", printable("נועה )"), "( העונ"),
    ("nested brackets", printable("נועה ([א])"), "([א]) העונ"),
    ("a number after a name stays after it", joined(("נועה", "2026-03-14")), "העונ · 2026-03-14"),
    ("two names keep their places", joined(("נועה", "ברק"), separator=", "), "העונ, קרב"),
    ("Latin is left alone", joined(("a", "b (c)")), "a · b (c)"),
]


@pytest.mark.parametrize(("text", "drawn"), [row[1:] for row in ORDERED], ids=[row[0] for row in ORDERED])
def test_line_when_drawn_is_in_reading_order(text, drawn):
    assert wrapped(text, REGULAR, 9, 400) == (drawn,)


def test_joined_when_a_field_is_empty_leaves_no_separator():
    assert wrapped(joined(("a", "", "b")), REGULAR, 9, 400) == ("a · b",)


def test_wrapped_when_nothing_is_given_gives_no_line():
    assert wrapped("", REGULAR, 9, 100) == ()


def test_wrapped_when_words_fit_breaks_at_spaces():
    assert wrapped("one two three", REGULAR, 10, text_width("one two", REGULAR, 10)) == ("one two", "three")


def test_wrapped_when_a_word_is_too_long_loses_no_letter():
    lines = wrapped("W" * 300, REGULAR, 9, 100)
    assert "".join(lines) == "W" * 300
    assert len(lines) > 20


def test_shortened_when_too_long_ends_in_an_ellipsis_and_fits():
    line = shortened("word " * 60, REGULAR, 8, 120)
    assert line.endswith("…")
    assert text_width(line, REGULAR, 8) <= 120


@given(st.text(max_size=120), st.integers(40, 300))
def test_lines_when_text_is_anything_fit_their_column(text, width):
    for line in wrapped(printable(text), REGULAR, 9, width):
        assert text_width(line, REGULAR, 9) <= width + 0.01


@given(st.text(max_size=60))
def test_printable_when_text_is_anything_holds_nothing_that_acts(text):
    drawn = printable(text)
    assert not set(drawn) & set("\u202a\u202b\u202c\u202d\u202e\u2066\u2067\u2068\u2069\u200e\u200f")
    assert drawn.isprintable()


MOMENTS = [
    ("2026-03-14T09:31:20+00:00", "2026-03-14 09:31 +00:00"),
    ("2026-03-14T09:31:20.123456+01:00", "2026-03-14 09:31 +01:00"),
    ("2026-03-14T09:31:20Z", "2026-03-14 09:31 +00:00"),
    ("2026-03-14T09:31-03:30", "2026-03-14 09:31 -03:30"),
    ("2026-03-14", "2026-03-14"),
    ("", ""),
]


@pytest.mark.parametrize(("moment", "written"), MOMENTS)
def test_moment_when_written_keeps_its_offset(moment, written):
    assert moment_text(moment) == written
