"""Marks, lines and words of the templates."""

from __future__ import annotations

import datetime as dt
from decimal import Decimal

import pytest

from qa_tracker.core.figures import Judged
from qa_tracker.web import marks
from qa_tracker.web.presenters.entry import settings_of
from qa_tracker.web.refused import Refusal, Refused

VERDICTS = ("conforming", "remedial", "suspension", "indeterminate", "not_assessable")


@pytest.mark.parametrize("verdict", VERDICTS)
def test_a_verdict_is_a_mark_and_a_word(verdict):
    html = marks.verdict_mark(verdict)
    assert "<svg" in html
    assert verdict.replace("_", " ") in html
    assert "style" not in html


def test_the_marks_differ_in_outline_not_only_in_colour():
    paths = {marks.mark_only(verdict).partition(' fill="')[0] for verdict in VERDICTS}
    assert len(paths) == len(VERDICTS) - 1  # the two rings share their outline; one is half filled
    assert marks.mark_only("indeterminate").count("<path") == 2


def test_an_indeterminate_verdict_names_its_level():
    assert "at the suspension level" in marks.verdict_mark("indeterminate", "suspension")


def test_no_verdict_says_that_no_limit_applies():
    assert "no limit applies" in marks.verdict_mark("")


def test_the_allowance_line_says_its_share_in_words_and_to_a_screen_reader():
    html = marks.allowance_line(Judged(Decimal("152"), Decimal("149"), Decimal("6"), direction="below"))
    assert "50 % of the allowance used" in html
    assert 'aria-label="Allowance line: 50 %' in html


def test_no_line_is_drawn_without_a_comparison():
    assert marks.allowance_line(None) == ""


@pytest.mark.parametrize(
    ("moment", "said"),
    [
        (dt.datetime(2026, 3, 29, 0, 59, tzinfo=dt.UTC), "29 March 2026, 00:59"),
        (dt.datetime(2026, 3, 29, 1, 0, tzinfo=dt.UTC), "29 March 2026, 02:00"),
        (dt.datetime(2026, 10, 25, 1, 0, tzinfo=dt.UTC), "25 October 2026, 01:00"),
    ],
)
def test_a_moment_is_told_by_the_sites_clock(moment, said):
    assert marks.local_time(moment, "Europe/London") == said


def test_a_day_is_that_of_the_site():
    late = dt.datetime(2026, 6, 30, 23, 30, tzinfo=dt.UTC)
    assert marks.local_day(late, "Europe/London") == "1 July 2026"


def test_a_refusal_stands_beside_its_field_and_is_escaped():
    refused = Refused((Refusal("number.unit", "depth", "“<b>” is no unit."),))
    assert "&lt;b&gt;" in marks.refusal_at(refused, "depth")
    assert marks.refusal_at(refused, "other") == ""
    assert 'aria-invalid="true"' in marks.described_by(refused, "depth")


def test_recorded_settings_are_told_with_their_unit():
    told = settings_of('{"depth_mm": "170", "dynamic_range": "60 dB", "gain": "52 %"}')
    assert told == (("depth (mm)", "170"), ("dynamic range", "60 dB"), ("gain", "52 %"))
