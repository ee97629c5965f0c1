"""What counts to which figure of compliance, and what a share is a share of."""

from __future__ import annotations

import datetime as dt
import doctest

import pytest

from qa_tracker.core import compliance
from qa_tracker.core.compliance import Duty, Tally, figures_of, reason_of, tally

DUE = dt.date(2027, 3, 1)


def on(day, hour=12):
    return dt.datetime(2027, 3, day, hour, tzinfo=dt.UTC)


def duty(state, done=None):
    return Duty(state, DUE, on(2, 0), on(9, 0), on(done) if done else None)


@pytest.mark.parametrize(
    ("state", "done", "asked", "figures"),
    [
        ("submitted", 1, 20, ("on_time",)),
        ("countersigned", 2, 20, ("late",)),
        ("submitted", 8, 20, ("late",)),
        ("submitted", 9, 20, ("late", "overdue")),
        ("submitted", None, 20, ("late",)),
        ("missed", None, 20, ("missed",)),
        ("excused", None, 20, ("excused",)),
        ("void", 1, 20, ("void",)),
        ("scheduled", None, 1, ("awaited",)),
        ("started", None, 2, ("awaited", "awaited_late")),
        ("sent_back", 1, 20, ("awaited", "awaited_late")),
    ],
)
def test_check_counts_to_its_figure(state, done, asked, figures):
    assert figures_of(duty(state, done), on(asked)) == figures


def test_share_leaves_out_what_was_excused_or_may_still_be_on_time():
    counted = tally([duty("submitted", 1), duty("missed"), duty("excused"), duty("void", 1)], on(20))
    assert (counted.owed, counted.done, counted.percent(counted.on_time)) == (2, 1, 50)
    early = tally([duty("submitted", 1), duty("scheduled")], on(1))
    assert (early.owed, early.percent(early.on_time)) == (1, 100)


@pytest.mark.parametrize(("count", "owed", "percent"), [(0, 7, 0), (7, 7, 100), (1, 500, 1), (499, 500, 99)])
def test_all_and_none_are_said_only_where_they_are_meant(count, owed, percent):
    assert Tally(on_time=count, missed=owed - count).percent(count) == percent


def test_tallies_add_up():
    assert Tally(on_time=2, late=1).and_also(Tally(late=1, overdue=1)) == Tally(2, 2, 1)


@pytest.mark.parametrize(
    ("excuse", "reason"),
    [("lost", "lost"), ("stored, 2027-01-01 to 2027-02-01", "stored"), ("Fire", "by_hand")],
)
def test_excuse_is_counted_by_the_devices_state_or_as_by_hand(excuse, reason):
    assert reason_of(excuse) == reason


def test_examples_give_what_they_say():
    assert doctest.testmod(compliance).failed == 0
