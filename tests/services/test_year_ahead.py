"""The year ahead as the plans in sight give it, and spreading it."""

from __future__ import annotations

import datetime as dt

import pytest
from django.db import connection
from django.test.utils import CaptureQueriesContext
from django.utils.timezone import now

from qa_tracker.core.errors import DomainError
from qa_tracker.records.models import Check
from qa_tracker.records.queries.scope import EVERYTHING, Scope
from qa_tracker.services import due_days, year_ahead
from qa_tracker.services.devices import Place
from tests import builders
from tests.builders import LONDON

TODAY = now().astimezone(LONDON).date()
DAY = dt.timedelta(days=1)


@pytest.fixture
def ward(shared_ward):
    return shared_ward


def another(ward, serial, due_in=0):
    device = builders.probe(ward.physicist, Place(site=ward.site), serial=serial)
    return builders.plan(device, builders.MONTHLY, ward.technician, ward.physicist, TODAY + due_in * DAY)


def test_minutes_are_the_procedures_and_fall_to_who_is_responsible(ward):
    year = year_ahead.look(EVERYTHING, TODAY)
    assert len(year.weeks) == 53
    assert {person for _week, person in year.loads} == {ward.technician.pk}
    assert sum(year.loads.values()) == pytest.approx(year.checks * min(year.loads.values()))
    assert year.checks in (12, 13)


def test_other_sites_work_is_out_of_sight(ward):
    other = builders.site(ward.admin, "KB", "Kestrel Bay")
    assert year_ahead.look(Scope(frozenset({other.pk})), TODAY).checks == 0


def test_proposals_are_those_the_command_accepts(ward):
    for number in range(3):
        another(ward, f"Y{number}", 9)
    proposed = year_ahead.look(EVERYTHING, TODAY).proposed
    assert proposed
    moves = [(each.row.check_uid, each.to_on) for each in proposed]
    year_ahead.spread(moves=moves, reason="To even the weeks out", actor=ward.physicist, at=now())
    assert Check.objects.filter(slot_on__isnull=False).count() == len(moves)
    assert year_ahead.look(EVERYTHING, TODAY).proposed == ()


def test_spreading_moves_all_or_none(ward):
    check = another(ward, "Y9", 9)
    moves = [(check.uid, TODAY + 10 * DAY), (ward.check.uid, TODAY + 90 * DAY)]
    with pytest.raises(DomainError) as refused:
        year_ahead.spread(moves=moves, reason="x", actor=ward.physicist, at=now())
    assert refused.value.code == "due_day.outside"
    assert not Check.objects.filter(slot_on__isnull=False).exists()


def test_moved_check_is_not_proposed_again(ward):
    check = another(ward, "Y8", 9)
    due_days.move(check=check.uid, to_on=TODAY + 10 * DAY, reason="x", actor=ward.physicist, at=now())
    proposed = year_ahead.look(EVERYTHING, TODAY).proposed
    assert check.uid not in {each.row.check_uid for each in proposed}


def test_year_takes_no_more_queries_when_there_are_more_plans(ward):
    counts = []
    for number in range(2):
        with CaptureQueriesContext(connection) as asked:
            year_ahead.look(EVERYTHING, TODAY)
        counts.append(len(asked))
        another(ward, f"Z{number}")
    assert counts[0] == counts[1]
