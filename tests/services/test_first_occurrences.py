"""What a device owes when it is back in use: one check at most of each plan, and no untested month."""

from __future__ import annotations

import datetime as dt
import uuid

import pytest
from django.utils.timezone import now

from qa_tracker.records.models import Check, CheckPlan, Notice
from qa_tracker.records.queries.ledger import list_leaves
from qa_tracker.records.queries.scope import EVERYTHING
from qa_tracker.services import checks, plans, states, sweep
from qa_tracker.services.checks import Typed
from qa_tracker.services.devices import Place
from qa_tracker.services.plans import Recurrence
from tests import builders
from tests.builders import LONDON, PASSWORD

NOW = now()
DAY = dt.timedelta(days=1)
TODAY = NOW.astimezone(LONDON).date()


def on(days):
    """Noon of a day from today, in London."""
    return dt.datetime.combine(TODAY + days * DAY, dt.time(12), LONDON)


@pytest.fixture
def ward(shared_ward):
    return shared_ward


def planned(ward, due_in, rule="FREQ=MONTHLY", basis="calendar", before=7, grace=7):
    device = builders.probe(ward.physicist, Place(site=ward.site), serial=f"F-{rule}-{basis}-{due_in}")
    return plans.make(
        device=device.uid, procedure=builders.MONTHLY, responsible=ward.technician, actor=ward.physicist,
        recurrence=Recurrence(rule, basis, TODAY + due_in * DAY, before, grace), at=now(),
    )  # fmt: skip


def lent(ward, plan, out_in, back_in):
    """Lent from one day and accepted again on another, the sweep beating at the end."""
    device, given = plan.device.uid, {"note": "To Kestrel Bay", "actor": ward.physicist}
    states.move_on(device=device, verb="lend_out", **given, at=on(out_in))
    sweep.sweep(at=on(back_in) - DAY)
    states.move_on(device=device, verb="return_from_loan", **given, at=on(back_in))
    states.accept(device=device, remark="", password=PASSWORD, actor=ward.physicist, at=on(back_in))
    return [(each.state, (each.due_on - TODAY).days) for each in plan.checks.order_by("id")]


def test_one_check_is_due_on_the_day_of_return_when_one_came_due_meanwhile(ward):
    plan = planned(ward, 10)
    assert lent(ward, plan, 5, 20) == [("excused", 10), ("scheduled", 20)]
    excused, first = plan.checks.order_by("id")
    went, back = (TODAY + n * DAY for n in (5, 20))
    assert excused.excuse == f"on_loan_out, {went.isoformat()} to {back.isoformat()}"
    assert first.opens_at == dt.datetime.combine(back, dt.time(), LONDON)
    assert first.overdue_at == dt.datetime.combine(back + 8 * DAY, dt.time(), LONDON)
    assert CheckPlan.objects.get(pk=plan.pk).anchor_on == back


def test_one_check_alone_is_due_when_several_were_excused_meanwhile(ward):
    plan = planned(ward, 10, "FREQ=DAILY;INTERVAL=14", before=3, grace=3)
    after = lent(ward, plan, 5, 63)
    assert [state for state, _day in after].count("scheduled") == 1
    assert ("scheduled", 63) in after
    assert {state for state, _day in after} == {"excused", "scheduled"}


def test_return_makes_no_storm_of_notices(ward):
    plan = planned(ward, 10, "FREQ=DAILY;INTERVAL=14", before=3, grace=3)
    lent(ward, plan, 5, 63)
    sweep.sweep(at=on(63))
    told = Notice.objects.filter(check_of__plan=plan).values_list("level", "channel", "skipped")
    assert set(told) == {("due", "in_app", "upcoming"), ("due", "mail", "upcoming")}


def test_plan_goes_on_as_it_was_when_nothing_came_due_meanwhile(ward):
    plan = planned(ward, 40)
    assert lent(ward, plan, 5, 20) == [("scheduled", 40)]
    assert CheckPlan.objects.get(pk=plan.pk).anchor_on == TODAY + 40 * DAY


def test_check_that_was_late_before_the_device_went_out_is_still_owed(ward):
    plan = planned(ward, -3)
    assert lent(ward, plan, 2, 10) == [("scheduled", -3)]


def test_last_actual_plan_owes_one_check_on_the_day_of_return(ward):
    plan = planned(ward, 10, "FREQ=DAILY;INTERVAL=90", "last_actual")
    assert lent(ward, plan, 5, 40) == [("excused", 10), ("scheduled", 40)]


def test_rule_that_names_its_days_keeps_them_and_still_owes_one(ward):
    day = (TODAY + 10 * DAY).day
    plan = planned(ward, 10, f"FREQ=MONTHLY;BYMONTHDAY={min(day, 28)}")
    first_on = plan.checks.get().due_on
    out, back = (first_on - TODAY).days - 5, (first_on - TODAY).days + 10
    assert lent(ward, plan, out, back) == [("excused", back - 10), ("scheduled", back)]
    owed = plan.checks.get(state="scheduled")
    assert plans.due_after(plan, owed.slot_on or owed.due_on).slot_on.day == min(day, 28)


def quarantined_and_proved(ward, plan, procedure, out_in, back_in):
    device = plan.device.uid
    states.quarantine(device=device, seen="Lens cracked", actor=ward.user, at=on(out_in))
    at = on(back_in)
    check = checks.open_unplanned(device=device, procedure=procedure, actor=ward.physicist, at=at)
    typed = Typed(builders.answers(check, ward.physicist), cleaned_before="Wipe")
    given = {"check": check.uid, "typed": typed, "actor": ward.physicist, "at": at}
    shown = checks.preview(**given, whole=True).shown_sha256
    checks.submit(**given, form_uid=uuid.uuid4(), shown_sha256=shown, password=PASSWORD)
    states.restore(
        device=device, proving_check=check.uid, remark="new lens", password=PASSWORD, actor=ward.physicist,
        at=at + dt.timedelta(hours=1),
    )  # fmt: skip
    return [(each.state, (each.due_on - TODAY).days) for each in plan.checks.order_by("id")]


def test_proving_check_of_the_procedure_is_the_first_occurrence(ward):
    plan = planned(ward, 10, "FREQ=DAILY;INTERVAL=30")
    after = quarantined_and_proved(ward, plan, builders.MONTHLY, 5, 20)
    assert after == [("submitted", 10), ("scheduled", 50)]
    assert CheckPlan.objects.get(pk=plan.pk).anchor_on == TODAY + 20 * DAY


def test_proving_check_before_the_window_moves_the_next_to_one_interval_on(ward):
    plan = planned(ward, 25, "FREQ=DAILY;INTERVAL=30", before=2)
    after = quarantined_and_proved(ward, plan, builders.MONTHLY, 5, 20)
    assert after == [("scheduled", 50)]


def test_return_tells_in_its_leaf_what_became_of_the_plans(ward):
    plan = planned(ward, 10)
    lent(ward, plan, 5, 20)
    (leaf,) = list_leaves(EVERYTHING, most=1)
    (told,) = leaf.said["new"]["plans"]
    excused, first = plan.checks.order_by("id")
    assert (told["excused"], told["opened"]) == (f"{excused.uid}", f"{first.uid}")
    assert (leaf.kind, told["first_due"]) == ("device.accepted", (TODAY + 20 * DAY).isoformat())


def test_ended_plan_excuses_the_doing_again_of_what_was_sent_back(ward):
    made = builders.submitted(ward.check, ward.technician)
    given = {"shown_sha256": made.shown_sha256, "remark": "Which port?", "password": PASSWORD}
    checks.send_back(check=ward.check.uid, **given, actor=ward.physicist, at=now())
    plans.end(plan=ward.check.plan.uid, reason="sold", actor=ward.physicist, at=now())
    ended = Check.objects.filter(plan=ward.check.plan).values_list("state", "excuse")
    assert set(ended) == {("excused", "sold")}


def test_device_accepted_for_the_first_time_keeps_its_plans_as_made(ward):
    assert [each.due_on for each in ward.check.plan.checks.all()] == [ward.check.due_on]
