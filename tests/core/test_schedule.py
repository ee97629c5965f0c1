"""Due days with window and grace, standing by date, notice levels, and the two bases."""

from __future__ import annotations

from datetime import UTC, date, datetime, timedelta

import pytest
from hypothesis import given
from hypothesis import strategies as st

from qa_tracker.core.errors import Invalid
from qa_tracker.core.schedule import (
    LEVELS,
    ROLLS,
    STANDINGS,
    Rule,
    SiteDays,
    Window,
    due_for,
    missed_at,
    next_due,
    parse_rule,
    standing,
)
from qa_tracker.core.workflow import CHECK, CHECK_AWAITED

LONDON = SiteDays("Europe/London")
DUE = due_for(date(2025, 3, 28), Window(7, 3), LONDON)
BARE = due_for(date(2025, 3, 28), Window(), LONDON)
MOMENT = timedelta(microseconds=1)
DAYS = st.dates(date(1990, 1, 1), date(2060, 12, 31))


def utc(text):
    return datetime.fromisoformat(text).replace(tzinfo=UTC)


def series(rule, basis, anchor_on, window, site, count):
    found, after_on = [], None
    for _ in range(count):
        found.append(next_due(rule, basis, anchor_on, after_on, window, site))
        after_on = found[-1].due_on
    return found


def test_due_has_its_days_and_instants_when_clocks_change_within_grace():
    assert (DUE.opens_on, DUE.due_on, DUE.grace_ends_on) == (
        *(date(2025, 3, 21), date(2025, 3, 28), date(2025, 3, 31)),
    )
    assert [DUE.opens_at, DUE.due_at, DUE.late_at, DUE.overdue_at] == [
        *(utc("2025-03-21T00:00"), utc("2025-03-28T00:00"), utc("2025-03-29T00:00"), utc("2025-03-31T23:00")),
    ]


def test_window_is_counted_from_the_moved_day_when_the_slot_is_not_worked():
    due = due_for(date(2025, 3, 29), Window(2, 1, "forward"), LONDON)
    assert (due.slot_on, due.due_on) == (date(2025, 3, 29), date(2025, 3, 31))
    assert (due.opens_on, due.grace_ends_on) == (date(2025, 3, 29), date(2025, 4, 1))


@pytest.mark.parametrize(
    ("at", "expected"),
    [
        pytest.param(DUE.opens_at - MOMENT, "not_yet_open", id="just before it opens"),
        pytest.param(DUE.opens_at, "open", id="as it opens"),
        pytest.param(DUE.due_at - MOMENT, "open", id="just before the due day"),
        pytest.param(DUE.due_at, "due", id="as the due day begins"),
        pytest.param(DUE.late_at - MOMENT, "due", id="just before the due day ends"),
        pytest.param(DUE.late_at, "late", id="as the due day ends"),
        pytest.param(DUE.overdue_at - MOMENT, "late", id="just before grace ends"),
        pytest.param(DUE.overdue_at, "overdue", id="as grace ends"),
    ],
)
def test_check_stands_by_date_on_both_sides_of_each_boundary(at, expected):
    assert {standing(DUE, at, state) for state in CHECK_AWAITED} == {expected}


@pytest.mark.parametrize("state", [state for state in CHECK.states if state not in CHECK_AWAITED])
def test_check_has_no_standing_when_nothing_more_is_awaited(state):
    assert standing(DUE, DUE.overdue_at, state) is None


@pytest.mark.parametrize(
    ("at", "expected"),
    [
        pytest.param(BARE.due_at - MOMENT, "not_yet_open", id="before the day"),
        pytest.param(BARE.due_at, "due", id="on the day"),
        pytest.param(BARE.late_at, "overdue", id="after the day"),
    ],
)
def test_check_is_never_open_or_late_when_there_is_no_window_and_no_grace(at, expected):
    assert standing(BARE, at, "scheduled") == expected


@pytest.mark.parametrize(
    ("zone", "due_on", "hours"),
    [
        pytest.param("Europe/London", date(2025, 3, 30), 23, id="London forward"),
        pytest.param("Europe/London", date(2025, 10, 26), 25, id="London back"),
        pytest.param("America/New_York", date(2025, 3, 9), 23, id="New York forward"),
        pytest.param("America/New_York", date(2025, 11, 2), 25, id="New York back"),
        pytest.param("Asia/Beirut", date(2025, 3, 30), 23, id="Beirut, no midnight"),
    ],
)
def test_check_is_due_for_the_whole_local_day_when_clocks_change_on_it(zone, due_on, hours):
    due = due_for(due_on, Window(1, 1), SiteDays(zone))
    last = due.due_at + timedelta(hours=hours) - MOMENT
    assert [standing(due, at, "scheduled") for at in (due.due_at, last, last + MOMENT)] == [
        "due",
        "due",
        "late",
    ]


def test_calendar_slots_stay_on_the_anchor_when_the_checks_were_moved():
    found = series(Rule("MONTHLY"), "calendar", date(2025, 5, 31), Window(roll="backward"), LONDON, 4)
    assert [due.due_on for due in found] == [
        *(date(2025, 5, 30), date(2025, 6, 30), date(2025, 7, 31), date(2025, 8, 29)),
    ]
    assert [due.slot_on.day for due in found] == [31, 30, 31, 31]


def test_weekend_slots_are_one_due_day_when_they_move_to_the_same_one():
    found = series(Rule("DAILY"), "calendar", date(2025, 3, 7), Window(roll="forward"), LONDON, 3)
    assert [due.due_on for due in found] == [date(2025, 3, 7), date(2025, 3, 10), date(2025, 3, 11)]


@pytest.mark.parametrize(
    ("rule", "done_on", "expected"),
    [
        pytest.param(Rule("MONTHLY"), date(2025, 1, 31), date(2025, 2, 28), id="from a 31st"),
        pytest.param(Rule("YEARLY"), date(2024, 2, 29), date(2025, 2, 28), id="from a leap day"),
        pytest.param(Rule("WEEKLY", 2), date(2025, 3, 5), date(2025, 3, 19), id="fortnight"),
        pytest.param(Rule("DAILY"), date(2025, 3, 5), date(2025, 3, 6), id="the next day"),
    ],
)
def test_due_day_is_an_interval_on_when_counted_from_the_last_actual_day(rule, done_on, expected):
    assert next_due(rule, "last_actual", done_on, None, Window(), LONDON).due_on == expected


def test_due_day_comes_after_the_last_actual_one_when_moved_back_onto_it():
    due = next_due(Rule("DAILY"), "last_actual", date(2025, 3, 7), None, Window(roll="backward"), LONDON)
    assert due.due_on == date(2025, 3, 10)


@pytest.mark.parametrize(
    ("text", "basis", "code"),
    [
        ("FREQ=MONTHLY;BYMONTHDAY=2", "last_actual", "schedule.basis_needs_plain_rule"),
        ("FREQ=MONTHLY", "whenever", "schedule.unknown_basis"),
        ("FREQ=YEARLY;BYMONTH=2;BYMONTHDAY=30", "calendar", "schedule.never_due"),
    ],
)
def test_next_due_day_is_refused_when_rule_and_basis_give_none(text, basis, code):
    with pytest.raises(Invalid) as refusal:
        next_due(parse_rule(text), basis, date(2025, 1, 1), None, Window(), LONDON)
    assert refusal.value.code == code


@pytest.mark.parametrize(
    ("given_values", "code"),
    [
        ({"before_days": -1}, "schedule.days_out_of_range"),
        ({"grace_days": 367}, "schedule.days_out_of_range"),
        ({"roll": "up"}, "schedule.unknown_roll"),
    ],
)
def test_window_is_refused_when_it_makes_no_sense(given_values, code):
    with pytest.raises(Invalid) as refusal:
        Window(**given_values)
    assert refusal.value.code == code


def test_check_is_missed_when_the_next_opens_on_the_calendar_and_never_on_last_actual():
    following = due_for(date(2025, 4, 28), Window(7, 3), LONDON)
    assert missed_at("calendar", following) == utc("2025-04-20T23:00")
    assert missed_at("last_actual", following) is None


RULES = st.sampled_from(
    ["FREQ=DAILY", "FREQ=WEEKLY;BYDAY=SA,SU,TU", "FREQ=MONTHLY", "FREQ=MONTHLY;BYDAY=-1SA"]
)


@given(RULES, DAYS, st.sampled_from(ROLLS), st.frozensets(st.integers(0, 6), max_size=5))
def test_due_days_go_up_and_leave_out_no_slot_for_any_rule_and_roll(text, anchor_on, rolled, weekend):
    window, site, rule = Window(roll=rolled), SiteDays("UTC", weekend), parse_rule(text)
    found = series(rule, "calendar", anchor_on, window, site, 12)
    days = [due.due_on for due in found]
    assert days == sorted(set(days))
    slots = series(rule, "calendar", anchor_on, Window(), site, 12)
    moved = {due_for(due.slot_on, window, site).due_on for due in slots}
    assert {day for day in moved if day <= days[-1]} <= set(days)


@given(DAYS, st.integers(0, 60), st.integers(0, 60), st.sampled_from(["UTC", "Europe/London", "Asia/Beirut"]))
def test_instants_and_standings_come_in_order_for_any_window(slot_on, before_days, grace_days, zone):
    due = due_for(slot_on, Window(before_days, grace_days), SiteDays(zone))
    moments = [due.level_at(level) for level in LEVELS]
    assert moments == sorted(moments)
    assert due.due_at < due.late_at
    seen = [standing(due, at, "scheduled") for at in (due.opens_at - MOMENT, *moments)]
    assert [STANDINGS.index(each) for each in seen] == sorted(STANDINGS.index(each) for each in seen)
