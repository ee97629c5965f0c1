"""Plans: their rules, windows and bases, and which occurrence is awaited after what."""

from __future__ import annotations

import datetime as dt

import pytest
from django.utils.timezone import now

from qa_tracker.core.errors import Conflict, DomainError, Forbidden, Invalid, NotFound
from qa_tracker.records.models import Check, CheckPlan
from qa_tracker.services import checks, excuses, plans, sites
from qa_tracker.services.checks import Typed
from qa_tracker.services.devices import Place
from qa_tracker.services.plans import Recurrence
from tests import builders
from tests.builders import LONDON, PASSWORD

TODAY = now().astimezone(LONDON).date()
ONWARD = dt.timedelta(days=1)


@pytest.fixture
def ward(shared_ward):
    return shared_ward


@pytest.fixture
def device(ward):
    return builders.probe(ward.physicist, Place(site=ward.site, scanner=ward.scanner), serial="unplanned")


def planned(ward, device, anchor_on=TODAY, rule="FREQ=MONTHLY", basis="calendar", before=7, grace=7, roll="none",
            **changed):  # fmt: skip
    given = {
        "procedure": builders.MONTHLY, "responsible": ward.technician, "actor": ward.physicist,
    } | changed  # fmt: skip
    recurrence = Recurrence(rule, basis, anchor_on, before, grace, roll)
    return plans.make(device=device.uid, recurrence=recurrence, **given, at=now())


def done(ward, check, measured_at=None):
    entries = builders.answers(check, ward.technician)
    typed = Typed(entries, measured_at=measured_at, cleaned_before="Wipe")
    return builders.submitted(check, ward.technician, typed)


def awaited(plan):
    return plan.checks.get(state="scheduled")


REFUSED = {
    "rule outside the subset": ({"rule": "FREQ=HOURLY"}, "schedule.part_value"),
    "rule that is none": ({"rule": "monthly"}, "schedule.rule_malformed"),
    "unknown basis": ({"basis": "mood"}, "schedule.unknown_basis"),
    "named days counted from the last actual day": (
        {"rule": "FREQ=WEEKLY;BYDAY=MO", "basis": "last_actual"},
        "schedule.basis_needs_plain_rule",
    ),
    "window longer than a year": ({"before": 400}, "schedule.days_out_of_range"),
    "unknown roll": ({"roll": "sideways"}, "schedule.unknown_roll"),
    "unknown procedure": ({"procedure": "tea-round"}, "plan.procedure_not_adopted"),
}


@pytest.mark.parametrize("name", REFUSED)
def test_plan_is_refused_and_nothing_opened_when_it_makes_no_sense(ward, device, name):
    changed, code = REFUSED[name]
    with pytest.raises(DomainError) as refused:
        planned(ward, device, **changed)
    assert refused.value.code == code
    assert not Check.objects.filter(device=device).exists()
    assert not CheckPlan.objects.filter(device=device).exists()


def test_second_plan_of_a_procedure_is_refused_until_the_first_has_ended(ward):
    with pytest.raises(Conflict) as refused:
        planned(ward, ward.probe)
    assert refused.value.code == "plan.exists"
    plans.end(plan=ward.check.plan.uid, reason="monthly by the vendor", actor=ward.physicist, at=now())
    assert awaited(planned(ward, ward.probe, TODAY + ONWARD)).due_on == TODAY + ONWARD


def test_plan_is_refused_when_the_one_responsible_may_not_enter_there(ward, device):
    bay = builders.site(ward.admin, "KB", "Kestrel Bay")
    stranger = builders.person(ward.admin, "stranger", "technician", bay)
    for responsible in (stranger, ward.admin):
        with pytest.raises(Invalid) as refused:
            planned(ward, device, responsible=responsible)
        assert refused.value.code == "plan.responsible_may_not_enter"


def test_technician_makes_and_ends_no_plan(ward, device):
    with pytest.raises(Forbidden):
        planned(ward, device, actor=ward.technician)
    with pytest.raises(Forbidden):
        plans.end(plan=ward.check.plan.uid, reason="x", actor=ward.technician, at=now())


@pytest.mark.parametrize(("before", "grace"), [(0, 0), (7, 7), (3, 14)])
def test_moments_of_an_occurrence_are_the_sites_midnights(ward, device, before, grace):
    check = awaited(planned(ward, device, dt.date(2027, 3, 28), before=before, grace=grace))
    days = [0 - before, 0, 1, 1 + grace]
    wanted = [
        dt.datetime.combine(dt.date(2027, 3, 28) + dt.timedelta(days=each), dt.time(), LONDON)
        for each in days
    ]
    assert [check.opens_at, check.due_at, check.late_at, check.overdue_at] == wanted


@pytest.mark.parametrize(
    ("roll", "due_on"),
    [("none", dt.date(2027, 1, 2)), ("forward", dt.date(2027, 1, 5)), ("backward", dt.date(2026, 12, 31))],
)
def test_due_day_moves_off_days_the_site_does_not_work(ward, device, roll, due_on):
    days = {dt.date(2027, 1, 1): "New Year", dt.date(2027, 1, 4): "Founders"}
    sites.add_holidays(site=ward.site, days=days, actor=ward.admin, at=now())
    assert awaited(planned(ward, device, dt.date(2027, 1, 2), roll=roll)).due_on == due_on


def test_month_end_does_not_drift_when_check_after_check_is_done(ward, device):
    plan = planned(ward, device, dt.date(2027, 1, 31), before=366)
    for _month in range(3):
        done(ward, awaited(plan))
    days = list(plan.checks.order_by("due_on").values_list("due_on", flat=True))
    assert [day.isoformat() for day in days] == ["2027-01-31", "2027-02-28", "2027-03-31", "2027-04-30"]


def test_next_occurrence_is_counted_from_the_plan_when_the_basis_is_the_calendar(ward, device):
    plan = planned(ward, device, TODAY - 10 * ONWARD, rule="FREQ=WEEKLY;INTERVAL=2")
    done(ward, awaited(plan))
    assert awaited(plan).due_on == TODAY + 4 * ONWARD


def test_next_occurrence_is_counted_from_the_day_it_was_done_when_the_basis_is_last_actual(ward, device):
    plan = planned(ward, device, TODAY - 10 * ONWARD, rule="FREQ=DAILY;INTERVAL=14", basis="last_actual")
    measured_at = dt.datetime.combine(TODAY - 3 * ONWARD, dt.time(12), LONDON)
    done(ward, awaited(plan), measured_at)
    assert awaited(plan).due_on == TODAY + 11 * ONWARD


def test_check_is_refused_when_it_was_measured_before_its_window_or_in_the_future(ward):
    for moment, code in [
        (ward.check.opens_at - dt.timedelta(seconds=1), "check.not_yet_open"),
        (now() + dt.timedelta(hours=1), "check.measured_in_future"),
    ]:
        with pytest.raises(DomainError) as refused:
            done(ward, ward.check, moment)
        assert refused.value.code == code


def test_ended_plan_excuses_what_it_awaited_and_opens_no_more(ward):
    plans.end(plan=ward.check.plan.uid, reason="sold", actor=ward.physicist, at=now())
    ward.check.refresh_from_db()
    assert (ward.check.state, ward.check.excuse, hasattr(ward.check, "clock")) == ("excused", "sold", False)
    assert ward.check.plan.checks.count() == 1
    with pytest.raises(NotFound):
        plans.end(plan=ward.check.plan.uid, reason="again", actor=ward.physicist, at=now())


def test_excused_occurrence_is_followed_by_the_next(ward):
    excuses.excuse(check=ward.check.uid, reason="ward closed", actor=ward.physicist, at=now())
    ward.check.refresh_from_db()
    assert (ward.check.state, ward.check.excuse) == ("excused", "ward closed")
    assert awaited(ward.check.plan).due_on > ward.check.due_on
    with pytest.raises(Conflict):
        excuses.excuse(check=ward.check.uid, reason="again", actor=ward.physicist, at=now())


def test_check_that_was_sent_back_is_done_again_and_opens_no_second_occurrence(ward):
    first = done(ward, ward.check)
    checks.send_back(
        check=ward.check.uid, shown_sha256=first.shown_sha256, remark="Which port?", password=PASSWORD,
        actor=ward.physicist, at=now(),
    )  # fmt: skip
    following = awaited(ward.check.plan)
    ward.check.refresh_from_db()
    assert ward.check.state == "sent_back"
    second = done(ward, ward.check)
    ward.check.refresh_from_db()
    assert (second.number, ward.check.state) == (2, "submitted")
    assert awaited(ward.check.plan).pk == following.pk
