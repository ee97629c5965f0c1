"""Compliance as the database counts it, as it was known at a moment, and for whom."""

from __future__ import annotations

import datetime as dt

import pytest
from django.db import connection
from django.test.utils import CaptureQueriesContext
from django.utils.timezone import now

from qa_tracker.records.models import Check
from qa_tracker.records.queries import compliance
from qa_tracker.records.queries.compliance import Extent
from qa_tracker.records.queries.scope import EVERYTHING, Scope
from qa_tracker.services import checks, excuses, plans, sweep
from qa_tracker.services.checks import Typed
from qa_tracker.services.devices import Place
from qa_tracker.services.plans import Recurrence
from tests import builders
from tests.builders import LONDON

TODAY = now().astimezone(LONDON).date()
DAY = dt.timedelta(days=1)
PERIOD = Extent(TODAY - 30 * DAY, TODAY + 30 * DAY)


def device(ward, serial):
    return builders.probe(ward.physicist, Place(site=ward.site), serial=serial)


def planned(ward, due_in, rule="FREQ=DAILY;INTERVAL=40"):
    made = plans.make(
        device=device(ward, f"K{due_in}{rule}").uid, procedure=builders.MONTHLY, responsible=ward.technician,
        actor=ward.physicist, recurrence=Recurrence(rule, "calendar", TODAY + due_in * DAY, 3, 3), at=now(),
    )  # fmt: skip
    return made.checks.get()


def done(ward, check):
    builders.submitted(check, ward.technician)


@pytest.fixture(scope="module")
def before():
    """The moment before anything was done."""
    return now()


@pytest.fixture(scope="module")
def lived(before, ward_of_the_module, django_db_blocker):
    """One of each: on time (twice), late inside grace, after grace, missed, excused, awaited and past due."""
    ward = ward_of_the_module
    with django_db_blocker.unblock():
        done(ward, ward.check)
        done(ward, planned(ward, 2))
        done(ward, planned(ward, -2))
        done(ward, planned(ward, -9))
        planned(ward, -11, "FREQ=DAILY;INTERVAL=12")
        sweep.sweep(at=now())
        excuses.excuse(check=planned(ward, 1).uid, reason="closed", actor=ward.physicist, at=now())
        tried = planned(ward, -1)
        given = {"reason": "in_theatre", "remark": "", "actor": ward.user}
        checks.could_not_test(check=tried.uid, **given, at=now())
        return ward


@pytest.fixture
def ward(lived, shared_ward):
    return shared_ward


def figures(by="site", at=None, as_of=None, extent=PERIOD, scope=EVERYTHING):
    return {each.label: each.tally for each in compliance.groups(scope, extent, by, at or now(), as_of)}


def test_every_outcome_is_counted_apart(ward):
    (counted,) = figures().values()
    assert (counted.on_time, counted.late, counted.overdue, counted.missed) == (2, 2, 1, 1)
    assert (counted.excused, counted.awaited_late, counted.owed) == (1, 1, 6)
    assert counted.awaited == Check.objects.filter(
        state="scheduled", due_on__lte=PERIOD.until_on, due_on__gte=PERIOD.from_on
    ).count()  # fmt: skip


@pytest.mark.parametrize("by", compliance.GROUPS)
def test_what_was_known_now_is_what_is_counted_now(ward, by):
    at = now()
    assert figures(by, at, at) == figures(by, at)
    assert compliance.excuses(EVERYTHING, PERIOD, at) == compliance.excuses(EVERYTHING, PERIOD)


def test_figures_of_a_past_moment_leave_out_what_came_later(ward, before):
    then = figures("device", now(), before).values()
    assert [each.done for each in then] in ([], [0])


def test_early_check_inside_its_window_counts_to_the_day_it_was_due(ward):
    assert figures(extent=Extent(TODAY + 2 * DAY, TODAY + 2 * DAY))[ward.site.name].on_time == 1


def test_late_entry_counts_by_the_moment_of_measuring(ward):
    check = planned(ward, -3)
    measured_at = dt.datetime.combine(TODAY - 3 * DAY, dt.time(12), LONDON)
    typed = Typed(builders.answers(check, ward.technician), measured_at=measured_at, cleaned_before="Wipe")
    builders.submitted(check, ward.technician, typed)
    assert figures(extent=Extent(TODAY - 3 * DAY, TODAY - 3 * DAY))[ward.site.name].on_time == 1


@pytest.mark.parametrize(
    "figure", ["on_time", "late", "overdue", "missed", "excused", "awaited", "awaited_late"]
)
def test_list_behind_a_figure_has_as_many_checks_as_it_says(ward, figure):
    at = now()
    (counted,) = figures(at=at).values()
    assert len(compliance.behind(EVERYTHING, PERIOD, figure, at)) == getattr(counted, figure)


def test_excuses_are_told_by_reason(ward):
    assert compliance.excuses(EVERYTHING, PERIOD) == {"by_hand": 1}


def test_attempt_that_could_not_be_made_stays_awaited_and_counts_to_nothing_else(ward):
    counted = figures(extent=Extent(TODAY - DAY, TODAY - DAY))[ward.site.name]
    assert (counted.awaited, counted.awaited_late, counted.owed) == (1, 1, 1)


def test_another_sites_checks_are_counted_for_nobody_here(ward):
    other = builders.site(ward.admin, "KB", "Kestrel Bay")
    assert figures(scope=Scope(frozenset({other.pk}))) == {}
    assert list(figures(scope=Scope(frozenset({ward.site.pk})))) == [ward.site.name]


def test_figures_take_two_queries_however_many_checks_there_are(ward):
    with CaptureQueriesContext(connection) as asked:
        figures("device")
    assert len(asked) == 2
