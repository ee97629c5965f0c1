"""The test ground itself: copies of the template, and who sees what is committed."""

from __future__ import annotations

import datetime as dt

import pytest
from django.conf import settings
from django.db import connection

from qa_tracker.records import ledger

AT = dt.datetime(2026, 3, 2, 9, 30, tzinfo=dt.UTC)


def write_one():
    with ledger.command("ground.tried", actor=None, at=AT):
        pass


@pytest.mark.parametrize("time", ["first", "second"])
def test_ledger_is_empty_when_an_earlier_test_was_rolled_back(db, time):
    assert ledger.state()[0] == 0
    write_one()
    assert ledger.state()[0] == 1


@pytest.mark.parametrize("time", ["first", "second"])
def test_ledger_is_empty_when_an_earlier_test_committed(committed_db, time):
    assert ledger.state()[0] == 0
    write_one()
    connection.close()
    assert ledger.state()[0] == 1


@pytest.mark.django_db
def test_marked_test_runs_on_the_engine_of_its_pass(engine):
    assert connection.vendor == engine


def test_database_of_a_test_is_the_engine_of_its_pass(committed_db, engine):
    assert connection.vendor == engine == committed_db.engine
    assert str(settings.DATABASES["default"]["NAME"]) in committed_db.url
