"""A site's ladder: who may set it, what it changes from then on, and the way back to the common one."""

from __future__ import annotations

import datetime as dt
from zoneinfo import ZoneInfo

import pytest
from django.utils.timezone import now

from qa_tracker.core.errors import Conflict, Forbidden, Invalid
from qa_tracker.core.ladder import Rung
from qa_tracker.records.models import CheckClock, LadderRung, Notice
from qa_tracker.services import ladders, sweep
from tests import builders

NIGHTS = (Rung("due", "responsible"), Rung("t1", "lead", 2), Rung("t2", "physicist", 4))


@pytest.fixture
def ward(shared_ward):
    return shared_ward


def put(ward, rungs=NIGHTS, site="own", actor=None):
    site = ward.site if site == "own" else site
    given = {"rungs": rungs, "reason": "Nights are covered", "actor": actor or ward.physicist}
    return ladders.set_ladder(site=site, **given, at=now())


def drop(ward, site):
    return ladders.drop_ladder(site=site, reason="As everywhere", actor=ward.physicist, at=now())


def swept(ward, day):
    there = dt.datetime.combine(
        ward.check.due_on + dt.timedelta(days=day), dt.time(9), ZoneInfo("Europe/London")
    )
    sweep.sweep(at=now(), as_if=there)


def test_site_goes_by_the_default_until_someone_sets_another(ward):
    known = ladders.in_force()
    assert (known.of(ward.site.pk), known.of(None)) == (ladders.DEFAULT, ladders.DEFAULT)
    assert known.origin(ward.site.pk) == "default"


def test_own_ladder_holds_at_its_site_alone(ward):
    put(ward)
    known = ladders.in_force()
    assert (known.of(ward.site.pk).rungs, known.of(None)) == (NIGHTS, ladders.DEFAULT)
    assert known.origin(ward.site.pk) == "site"


def test_ladder_of_the_group_holds_where_a_site_has_none(ward):
    put(ward, site=None)
    assert ladders.in_force().of(ward.site.pk).rungs == NIGHTS
    assert ladders.in_force().origin(ward.site.pk) == "group"
    drop(ward, None)
    assert ladders.in_force().of(ward.site.pk) == ladders.DEFAULT


def test_next_ladder_ends_the_one_before(ward):
    put(ward)
    put(ward, NIGHTS[:2])
    assert ladders.in_force().of(ward.site.pk).rungs == NIGHTS[:2]
    assert LadderRung.objects.filter(ended_at=None).count() == 2


def test_site_goes_back_to_the_common_ladder(ward):
    put(ward)
    drop(ward, ward.site)
    assert ladders.in_force().of(ward.site.pk) == ladders.DEFAULT


def test_ladder_as_of_a_moment_is_what_was_known_then(ward):
    before = now()
    put(ward)
    assert ladders.in_force(before).of(ward.site.pk) == ladders.DEFAULT
    assert ladders.in_force(now()).of(ward.site.pk).rungs == NIGHTS


def test_ladder_is_set_by_physicists_and_leads_alone(ward):
    lead = builders.person(ward.admin, "nakamura", "lead", ward.site)
    put(ward, actor=lead)
    for actor in (ward.technician, ward.user, ward.admin):
        with pytest.raises(Forbidden):
            put(ward, actor=actor)
    with pytest.raises(Forbidden):
        put(ward, site=None, actor=lead)


def test_same_ladder_and_none_of_its_own_are_refused(ward):
    with pytest.raises(Conflict, match="none_of_its_own"):
        drop(ward, ward.site)
    put(ward)
    with pytest.raises(Conflict, match="same"):
        put(ward, NIGHTS[::-1])


def test_reason_and_a_ladder_that_is_one_are_asked_for(ward):
    with pytest.raises(Invalid, match="reason_missing"):
        ladders.set_ladder(site=ward.site, rungs=NIGHTS, reason=" ", actor=ward.physicist, at=now())
    with pytest.raises(Invalid, match="steps_with_gap"):
        put(ward, NIGHTS[2:])


def test_changed_ladder_is_climbed_from_its_next_step_on(ward):
    swept(ward, 8)
    check = ward.check
    assert CheckClock.objects.get(check_of=check).level == "t1"
    check.refresh_from_db()
    at = check.overdue_at + dt.timedelta(days=3)
    given = {"rungs": NIGHTS, "reason": "Nights", "actor": ward.physicist}
    ladders.set_ladder(site=ward.site, **given, at=at)
    clock = CheckClock.objects.get(check_of=check)
    assert (clock.level, clock.at.date()) == ("t2", (check.overdue_at + dt.timedelta(days=4)).date())
    swept(ward, 13)
    assert Notice.objects.filter(level="t1").count() == 0
    assert {each.person_id for each in Notice.objects.filter(level="t2")} == {ward.physicist.pk}


def test_level_that_names_nobody_is_reached_in_silence(ward):
    put(ward)
    for day in range(-8, 9):
        swept(ward, day)
    assert set(Notice.objects.values_list("level", flat=True)) == {"due"}
