"""What is never below zero: no reading below it conforms, and no baseline below it is set."""

from __future__ import annotations

import pytest
from django.utils.timezone import now

from qa_tracker.core.errors import DomainError
from qa_tracker.records.models import Aperture
from qa_tracker.services import baselines, checks
from qa_tracker.services.baselines import Value
from qa_tracker.services.checks import Typed
from qa_tracker.services.entries import Entry
from tests import builders

ANNUAL = "annual-survey"
WARD = ((builders.MONTHLY, ANNUAL),)


@pytest.fixture
def ward(shared_ward):
    return shared_ward


def put(ward, text):
    part = Aperture.objects.get(device=ward.probe).uid
    baselines.set_values(
        device=ward.probe.uid, values=[Value("penetration", text, part)], test_object=None, reason="acceptance",
        password=builders.PASSWORD, actor=ward.physicist, at=now(),
    )  # fmt: skip


def test_reading_below_zero_is_not_assessable_when_the_quantity_never_is(ward):
    put(ward, "150")
    check = checks.open_unplanned(device=ward.probe.uid, procedure=ANNUAL, actor=ward.physicist, at=now())
    laid = checks.sheet(check=check.uid, actor=ward.physicist, at=now())
    key = next(item.key for item in laid.items if item.spec.code == "penetration")
    typed = Typed({key: Entry("-150", confirmed=True)})
    shown = checks.preview(check=check.uid, typed=typed, whole=False, actor=ward.physicist, at=now())
    said = next(each.judgement for each in shown.judged.items if each.item.key == key)
    assert (said.verdict, said.code) == ("not_assessable", "below_zero")


def test_baseline_below_zero_is_refused_when_the_quantity_never_is(ward):
    with pytest.raises(DomainError) as refused:
        put(ward, "-150")
    assert refused.value.code == "baseline.below_zero"
