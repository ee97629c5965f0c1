"""Who is on duty: the responsible person, a team or its turn, and deputies of those away."""

from __future__ import annotations

import datetime as dt

import pytest
from django.utils.timezone import now

from qa_tracker.records import ledger
from qa_tracker.records.models import Person, Team, TeamMember
from qa_tracker.services import away, on_duty

MONDAY = dt.date(2026, 3, 2)
WEEK = dt.timedelta(weeks=1)


@pytest.fixture
def ward(shared_ward):
    return shared_ward


def team(*members, weeks=0):
    with ledger.command("rows.made", actor=None, at=now()) as act:
        made = act.insert(Team(name="Imaging", rota_weeks=weeks, rota_from_on=MONDAY if weeks else None))
        for position, person in enumerate(members):
            act.insert(TeamMember(team=made, person=person, position=position, from_on=MONDAY))
    return made


def away_on(person, deputy, first, last):
    return away.take_leave(
        person=person, deputy=deputy, from_on=first, until_on=last, actor=person,
        at=dt.datetime(2026, 3, 1, tzinfo=dt.UTC),
    )  # fmt: skip


def test_responsible_person_is_on_duty_unless_gone(ward):
    duties = on_duty.load(MONDAY)
    assert duties.of(ward.technician.pk, None) == (ward.technician.pk,)
    assert duties.of(None, None) == ()
    assert duties.of(10**6, None) == ()


def test_deputy_is_on_duty_from_the_first_to_the_last_day_of_leave(ward):
    away_on(ward.technician, ward.physicist, MONDAY, MONDAY + WEEK)
    days = (MONDAY - dt.timedelta(days=1), MONDAY, MONDAY + WEEK, MONDAY + WEEK + dt.timedelta(days=1))
    found = [on_duty.load(day).of(ward.technician.pk, None) for day in days]
    own, deputy = (ward.technician.pk,), (ward.physicist.pk,)
    assert found == [own, deputy, deputy, own]


def test_cancelled_leave_gives_the_duties_back(ward):
    made = away_on(ward.technician, ward.physicist, MONDAY, MONDAY + WEEK)
    away.cancel_leave(leave=made.uid, actor=ward.technician, at=dt.datetime(2026, 3, 1, tzinfo=dt.UTC))
    assert on_duty.load(MONDAY).of(ward.technician.pk, None) == (ward.technician.pk,)


def test_everyone_of_a_team_without_a_rota_is_on_duty_once(ward):
    made = team(ward.technician, ward.physicist)
    away_on(ward.technician, ward.physicist, MONDAY, MONDAY)
    assert on_duty.load(MONDAY + WEEK).of(None, made.pk) == (ward.technician.pk, ward.physicist.pk)
    assert on_duty.load(MONDAY).of(None, made.pk) == (ward.physicist.pk,)


def test_rota_gives_each_member_their_turn(ward):
    made = team(ward.technician, ward.physicist, weeks=1)
    found = [on_duty.load(MONDAY + number * WEEK).of(None, made.pk) for number in range(3)]
    assert found == [(ward.technician.pk,), (ward.physicist.pk,), (ward.technician.pk,)]


def test_team_is_nobody_before_its_members_came_and_after_it_ended(ward):
    made = team(ward.technician)
    assert on_duty.load(MONDAY - WEEK).of(None, made.pk) == ()
    with ledger.command("rows.made", actor=None, at=now()) as act:
        act.change(made, ended_at=now())
    assert on_duty.load(MONDAY).of(None, made.pk) == ()


def test_queries_stay_the_same_however_many_people_there_are(ward, django_assert_max_num_queries):
    team(*Person.objects.all(), weeks=1)
    with django_assert_max_num_queries(4):
        duties = on_duty.load(MONDAY)
        duties.of(ward.technician.pk, None)
