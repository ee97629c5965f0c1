"""Moving a due day inside its window: what is refused, what stays, and what the next one is counted from."""

from __future__ import annotations

import datetime as dt

import pytest
from django.utils.timezone import now

from qa_tracker.core.errors import DomainError
from qa_tracker.records.models import Check, CheckClock, Notice
from qa_tracker.services import due_days, excuses, plans, sweep
from qa_tracker.services.devices import Place
from qa_tracker.services.plans import Recurrence
from tests import builders
from tests.builders import LONDON

TODAY = now().astimezone(LONDON).date()
DAY = dt.timedelta(days=1)


@pytest.fixture
def ward(shared_ward):
    return shared_ward


def moved(ward, to_on, check=None, actor=None, reason="Theatre list is full"):
    row = check or ward.check
    due_days.move(check=row.uid, to_on=to_on, reason=reason, actor=actor or ward.physicist, at=now())
    return Check.objects.get(pk=row.pk)


def planned(ward, rule, before, grace, basis="calendar"):
    device = builders.probe(ward.physicist, Place(site=ward.site), serial=f"M-{rule}")
    made = plans.make(
        device=device.uid, procedure=builders.MONTHLY, responsible=ward.technician, actor=ward.physicist,
        recurrence=Recurrence(rule, basis, TODAY, before, grace), at=now(),
    )  # fmt: skip
    return made.checks.get()


def test_moved_due_day_keeps_its_window_and_the_rules_own_day(ward):
    before = ward.check
    row = moved(ward, TODAY + 3 * DAY)
    assert (row.due_on, row.slot_on) == (TODAY + 3 * DAY, TODAY)
    assert (row.opens_at, row.overdue_at) == (before.opens_at, before.overdue_at)
    midnights = [dt.datetime.combine(TODAY + n * DAY, dt.time(), LONDON) for n in (3, 4)]
    assert [row.due_at, row.late_at] == midnights


def test_day_may_be_moved_again_and_back_and_never_out_of_the_first_window(ward):
    moved(ward, TODAY + 7 * DAY)
    with pytest.raises(DomainError) as refused:
        moved(ward, TODAY + 8 * DAY)
    assert refused.value.code == "due_day.outside"
    row = moved(ward, TODAY)
    assert (row.due_on, row.slot_on) == (TODAY, None)


def test_next_occurrence_is_counted_from_the_slot_when_the_day_was_moved(ward):
    row = moved(ward, TODAY + 5 * DAY)
    builders.submitted(row, ward.technician)
    following = row.plan.checks.get(state="scheduled")
    assert following.due_on == plans.due_after(row.plan, TODAY).due_on


def test_next_occurrence_is_counted_from_the_slot_when_the_moved_one_is_excused(ward):
    row = moved(ward, TODAY + 5 * DAY)
    excuses.excuse(check=row.uid, reason="ward closed", actor=ward.physicist, at=now())
    assert row.plan.checks.get(state="scheduled").due_on == plans.due_after(row.plan, TODAY).due_on


def test_notices_go_by_the_new_day_and_what_was_told_is_not_told_again(ward):
    sweep.sweep(at=now())
    told = Notice.objects.count()
    moved(ward, TODAY + 3 * DAY)
    sweep.sweep(at=now())
    assert Notice.objects.count() == told
    clock = CheckClock.objects.get(check_of=ward.check)
    assert clock.at == dt.datetime.combine(TODAY + 3 * DAY, dt.time(), LONDON)


REFUSED = {
    "before the window": (-8, "due_day.outside"),
    "after its grace": (8, "due_day.outside"),
    "a day that has passed": (-1, "due_day.past"),
    "the day it is due": (0, "due_day.same"),
}


@pytest.mark.parametrize("name", REFUSED)
def test_move_is_refused_when_the_day_is_not_to_be_had(ward, name):
    days, code = REFUSED[name]
    with pytest.raises(DomainError) as refused:
        moved(ward, TODAY + days * DAY)
    assert (refused.value.code, refused.value.field) == (code, "to_on")


def test_move_is_refused_when_the_next_occurrence_is_due_by_then(ward):
    check = planned(ward, "FREQ=WEEKLY", 1, 10)
    with pytest.raises(DomainError) as refused:
        moved(ward, TODAY + 7 * DAY, check)
    assert refused.value.code == "due_day.following"
    assert moved(ward, TODAY + 6 * DAY, check).due_on == TODAY + 6 * DAY


def test_move_is_refused_when_the_plan_has_a_check_on_that_day(ward):
    check = planned(ward, "FREQ=DAILY;INTERVAL=3", 3, 1)
    excuses.excuse(check=check.uid, reason="closed", actor=ward.physicist, at=now())
    with pytest.raises(DomainError) as refused:
        moved(ward, TODAY, check.plan.checks.get(state="scheduled"))
    assert refused.value.code == "due_day.taken"


@pytest.mark.parametrize(
    ("who", "reason", "code"),
    [("technician", "x", "role.not_allowed"), ("physicist", "  ", "due_day.reason_missing")],
)
def test_move_is_refused_when_the_role_may_not_or_nothing_is_said(ward, who, reason, code):
    with pytest.raises(DomainError) as refused:
        moved(ward, TODAY + DAY, actor=getattr(ward, who), reason=reason)
    assert refused.value.code == code


def test_move_is_refused_when_the_check_is_done_or_was_never_planned(ward):
    builders.submitted(ward.check, ward.technician)
    with pytest.raises(DomainError) as refused:
        moved(ward, TODAY + DAY)
    assert refused.value.code == "due_day.not_awaited"
    asked = due_days.may_move(ward.check.uid, actor=ward.physicist, at=now())
    assert asked is not None
    assert asked.code == "due_day.not_awaited"
