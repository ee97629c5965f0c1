"""Judging a whole check asks the database a handful of questions, however long the history."""

from __future__ import annotations

import pytest
from django.db import connection
from django.test.utils import CaptureQueriesContext
from django.utils.timezone import now

from qa_tracker.records.models import Aperture
from qa_tracker.services import baselines, checks
from qa_tracker.services.baselines import Value
from qa_tracker.services.checks import Typed
from tests import builders

ANNUAL = "annual-survey"
WARD = ((builders.MONTHLY, ANNUAL),)
MOST = 10


@pytest.fixture
def ward(shared_ward):
    return shared_ward


def queries(ward, used):
    """Preview a survey as for signing; the number of its readings and of its queries."""
    check = checks.open_unplanned(device=ward.probe.uid, procedure=ANNUAL, actor=ward.physicist, at=now())
    laid = checks.sheet(check=check.uid, test_object=used.uid, actor=ward.physicist, at=now())
    entries = {item.key: builders.Entry(builders.good_answer(item), confirmed=True) for item in laid.items}
    typed = Typed(entries, test_object=used.uid, cleaned_before="Wipe")
    with CaptureQueriesContext(connection) as asked:
        seen = checks.preview(check=check.uid, typed=typed, whole=True, actor=ward.physicist, at=now())
    return sum(one.is_read for one in seen.judged.items), len(asked), typed, check


def test_preview_of_a_survey_asks_at_most_ten_questions_when_history_grows(ward):
    used = builders.phantom(ward.physicist, ward.site)
    part = Aperture.objects.get(device=ward.probe).uid
    baselines.set_values(
        device=ward.probe.uid, values=[Value("penetration", "150", part)], test_object=used.uid, reason="New",
        password=builders.PASSWORD, actor=ward.physicist, at=now(),
    )  # fmt: skip
    readings, first, typed, check = queries(ward, used)
    for _ in range(3):
        builders.submitted(check, ward.physicist, typed)
        _, later, typed, check = queries(ward, used)
        assert later == first
    assert readings >= 20
    assert first <= MOST
