"""A device's checks, newest first: those without a plan stand among the planned ones, by when they were done."""

from __future__ import annotations

import pytest
from django.utils.timezone import now

from qa_tracker.records.queries.checks import checks_of_device
from qa_tracker.services import checks
from qa_tracker.services.checks import Typed
from qa_tracker.services.entries import Entry
from tests import builders


@pytest.fixture
def ward(shared_ward):
    return shared_ward


def unplanned(ward):
    return checks.open_unplanned(
        device=ward.probe.uid, procedure=builders.MONTHLY, actor=ward.technician, at=now()
    )


def with_one_unread(ward, check):
    """A check that satisfies no other, since it leaves out what that one requires."""
    entries = builders.answers(check, ward.technician)
    key = next(key for key in entries if key.startswith("lens_grade"))
    return Typed(entries | {key: Entry(not_tested="in_use")}, cleaned_before="Wipe, Ifeoma, 12:10")


@pytest.mark.parametrize("planned_last", [True, False])
def test_check_done_last_is_the_newest_whether_it_was_planned_or_not(ward, planned_last):
    both = [ward.check, unplanned(ward)]
    for check in both[::-1] if planned_last else both:
        builders.submitted(check, ward.technician, with_one_unread(ward, check))
    newest = both[0 if planned_last else 1]
    assert checks_of_device(ward.probe.id, until=now(), most=1)[0].id == newest.id


def test_check_begun_without_a_plan_and_never_signed_takes_no_place_of_one_that_was(ward):
    builders.submitted(ward.check, ward.technician)
    begun = unplanned(ward)
    assert checks_of_device(ward.probe.id)[-1].id == begun.id
