"""The work ahead by week and person, and which due days to move to even the weeks out."""

from __future__ import annotations

import datetime as dt
import doctest

import pytest

from qa_tracker.core import forecast
from qa_tracker.core.forecast import Course, Movable, due_days, spread
from qa_tracker.core.schedule import SiteDays, Window

UTC = SiteDays("UTC")
MONDAY = dt.date(2027, 3, 1)
DAY = dt.timedelta(days=1)
LAST = dt.date(2028, 3, 5)


def course(rule, basis="calendar", roll="none", slot_in=0):
    due_on = MONDAY + slot_in * DAY
    return Course(rule, basis, MONDAY, Window(7, 7, roll), due_on, due_on)


@pytest.mark.parametrize(
    ("rule", "basis", "count"),
    [
        ("FREQ=MONTHLY", "calendar", 13),
        ("FREQ=MONTHLY", "last_actual", 13),
        ("FREQ=YEARLY", "calendar", 2),
        ("FREQ=WEEKLY", "calendar", 53),
        ("FREQ=YEARLY;INTERVAL=2", "calendar", 1),
        ("FREQ=YEARLY;INTERVAL=3", "last_actual", 1),
    ],
)
def test_year_has_as_many_due_days_as_the_rule_gives(rule, basis, count):
    assert len(due_days(course(rule, basis), UTC, LAST)) == count


def test_moved_check_comes_once_and_the_next_is_counted_from_its_slot():
    moved = Course("FREQ=MONTHLY", "calendar", MONDAY, Window(7, 7), MONDAY + 5 * DAY, MONDAY)
    assert due_days(moved, UTC, dt.date(2027, 4, 30)) == (MONDAY + 5 * DAY, dt.date(2027, 4, 1))


def test_due_days_go_to_working_days_as_the_plan_says():
    found = due_days(course("FREQ=MONTHLY", roll="forward"), UTC, dt.date(2027, 5, 31))
    assert [day.isoformat() for day in found] == ["2027-03-01", "2027-04-01", "2027-05-03"]


def movable(key, due_in, before, after, minutes=60, who=(7,)):
    due_on = MONDAY + due_in * DAY
    return Movable(key, due_on, due_on - before * DAY, due_on + after * DAY, minutes, who, UTC)


def loaded(movables):
    loads = {}
    for each in movables:
        forecast.add_load(loads, forecast.monday_of(each.due_on, MONDAY), each.who, each.minutes)
    return loads


def after(movables, moves):
    to = {move.key: move.to_on for move in moves}
    loads = {}
    for each in movables:
        day = to.get(each.key, each.due_on)
        forecast.add_load(loads, forecast.monday_of(day, MONDAY), each.who, each.minutes)
    return loads


def test_piled_up_surveys_are_spread_over_the_weeks_of_their_windows():
    surveys = [movable(key, 30, 30, 30) for key in range(1, 9)]
    moves = spread(loaded(surveys), surveys, MONDAY)
    assert max(after(surveys, moves).values()) <= 120
    assert all(
        each.first_on <= move.to_on <= each.last_on
        for each in surveys
        for move in moves
        if move.key == each.key
    )


def test_spreading_is_the_same_whatever_the_order_of_asking():
    surveys = [movable(key, 30, 30, 30, minutes=20 + 10 * (key % 3)) for key in range(1, 30)]
    loads = loaded(surveys)
    assert spread(loads, surveys, MONDAY) == spread(loads, list(reversed(surveys)), MONDAY)


def test_nothing_is_moved_where_no_week_gets_lighter():
    alone = [movable(1, 7, 7, 7)]
    assert spread(loaded(alone), alone, MONDAY) == ()
    assert spread({}, [], MONDAY) == ()


def test_check_goes_to_a_working_day_inside_its_window_only():
    weekend = [movable(1, 4, 0, 2), movable(2, 4, 0, 2)]
    assert spread(loaded(weekend), weekend, MONDAY) == ()


def test_people_on_duty_share_a_check_equally():
    loads = {}
    forecast.add_load(loads, MONDAY, (1, 2), 30)
    assert loads == {(MONDAY, 1): 15, (MONDAY, 2): 15}


def test_what_is_overdue_is_work_of_the_first_week():
    assert forecast.monday_of(MONDAY - 40 * DAY, MONDAY) == MONDAY


def test_examples_give_what_they_say():
    assert doctest.testmod(forecast).failed == 0
