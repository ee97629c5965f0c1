"""A check measured before its window: refused, or accepted by a physicist with a reason and the plan re-anchored."""

from __future__ import annotations

import datetime as dt

import pytest
from django.utils.timezone import now

from qa_tracker.core.errors import Conflict, DomainError, Invalid
from qa_tracker.records.models import CheckPlan
from qa_tracker.records.queries.ledger import list_leaves
from qa_tracker.records.queries.scope import EVERYTHING
from qa_tracker.services import checks, plans, upkeep
from qa_tracker.services.checks import Typed
from qa_tracker.services.devices import Place
from qa_tracker.services.plans import Recurrence
from qa_tracker.services.wording import leaf_sentence
from tests import builders
from tests.builders import LONDON

TODAY = now().astimezone(LONDON).date()
DAY = dt.timedelta(days=1)
REASON = "The room closes for six weeks"


@pytest.fixture
def ward(shared_ward):
    return shared_ward


def planned(ward, due_on=TODAY + 20 * DAY, rule="FREQ=DAILY;INTERVAL=30", basis="calendar", roll="none"):
    device = builders.probe(ward.physicist, Place(site=ward.site), serial="C5-9001")
    recurrence = Recurrence(rule, basis, due_on, before_days=7, grace_days=7, roll=roll)
    given = {"device": device.uid, "procedure": builders.MONTHLY, "recurrence": recurrence}
    plan = plans.make(**given, responsible=ward.technician, actor=ward.physicist, at=now())
    return plan.checks.get()


def done(check, actor, reason=REASON, measured_at=None):
    entries = builders.answers(check, actor)
    typed = Typed(entries, measured_at=measured_at, cleaned_before="Wipe", outside_reason=reason)
    return builders.submitted(check, actor, typed)


@pytest.mark.parametrize(
    ("who", "reason", "kind", "code"),
    [
        ("technician", "", Conflict, "check.not_yet_open"),
        ("technician", REASON, Conflict, "check.not_yet_open"),
        ("physicist", "  ", Invalid, "check.outside_reason_missing"),
    ],
)
def test_check_is_refused_outside_its_window_without_the_role_or_the_reason(ward, who, reason, kind, code):
    check = planned(ward)
    with pytest.raises(kind) as refused:
        done(check, getattr(ward, who), reason)
    assert refused.value.code == code
    assert not check.submissions.exists()


@pytest.mark.parametrize("basis", ["calendar", "last_actual"])
def test_plan_counts_from_the_actual_day_when_a_physicist_accepts_outside_the_window(ward, basis):
    check = planned(ward, basis=basis)
    submission = done(check, ward.physicist, measured_at=now() - 2 * DAY)
    check.refresh_from_db()
    measured_on = submission.measured_at.astimezone(LONDON).date()
    assert (check.state, submission.reason) == ("submitted", REASON)
    assert check.plan.checks.get(state="scheduled").due_on == measured_on + 30 * DAY
    assert CheckPlan.objects.get(pk=check.plan_id).anchor_on == measured_on
    assert upkeep.verify_ledger().problems == ()


def test_later_occurrences_go_on_from_the_new_anchor(ward):
    check = planned(ward)
    done(check, ward.physicist)
    following = check.plan.checks.get(state="scheduled")
    plan = CheckPlan.objects.select_related("device__site").get(pk=check.plan_id)
    assert plans.due_after(plan, following.due_on).due_on == TODAY + 60 * DAY


def test_leaf_gives_the_reason_and_the_day_it_is_due_next(ward):
    done(planned(ward), ward.physicist)
    leaf = list_leaves(EVERYTHING, most=1)[0]
    assert leaf.said["reason"] == REASON
    assert leaf.said["new"]["outside_window"]["next_due"] == (TODAY + 30 * DAY).isoformat()
    assert f"; accepted outside the window: {REASON}; next due on " in leaf_sentence(leaf)


def test_day_of_measuring_is_not_itself_due_again_when_it_rolls_to_a_working_day(ward):
    check = planned(ward, roll="forward")
    saturday = TODAY - (TODAY.weekday() + 2) * DAY
    done(check, ward.physicist, measured_at=dt.datetime.combine(saturday, dt.time(12), LONDON))
    assert check.plan.checks.get(state="scheduled").due_on == saturday + 30 * DAY


@pytest.mark.parametrize(
    ("rule", "due_on", "code"),
    [
        ("FREQ=WEEKLY;BYDAY=MO", TODAY + 21 * DAY, "check.days_are_named"),
        ("FREQ=DAILY;INTERVAL=20", TODAY + 20 * DAY, "check.due_day_taken"),
    ],
)
def test_acceptance_is_refused_when_the_plan_can_not_be_counted_from_that_day(ward, rule, due_on, code):
    check = planned(ward, due_on, rule)
    with pytest.raises(DomainError) as refused:
        done(check, ward.physicist)
    assert (refused.value.code, refused.value.field) == (code, "measured_at")


def test_reason_is_left_out_when_the_check_is_inside_its_window(ward):
    submission = done(planned(ward, TODAY), ward.physicist)
    assert submission.reason == ""
    assert "outside_window" not in list_leaves(EVERYTHING, most=1)[0].said["new"]


def test_what_was_accepted_may_be_done_again_when_it_is_sent_back(ward):
    check = planned(ward)
    submission = done(check, ward.physicist)
    other = builders.person(ward.admin, "rao", "physicist", None)
    checks.send_back(
        check=check.uid, shown_sha256=submission.shown_sha256, remark="Lens again",
        password=builders.PASSWORD, actor=other, at=now(),
    )  # fmt: skip
    check.refresh_from_db()
    assert done(check, ward.physicist).number == 2
    assert check.plan.checks.filter(state="scheduled").count() == 1
