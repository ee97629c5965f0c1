"""How a check stands, by word and date, over windows, year ends and both changes of the clock."""

from __future__ import annotations

import datetime as dt
import uuid

import pytest

from qa_tracker.core.schedule import SiteDays, Window, due_for
from qa_tracker.core.workflow import CHECK
from qa_tracker.records.queries.checks import CheckRow
from qa_tracker.services.wording import check_state_word, due_words, excuse_words, recurrence_words

LONDON = "Europe/London"
BLANK = dict.fromkeys(CheckRow.__dataclass_fields__, "") | {
    "uid": uuid.UUID(int=1),
    "due_on": None,
    "opens_at": None,
    "due_at": None,
    "late_at": None,
    "overdue_at": None,
}


def _check(due_on, before_days=4, grace_days=7, state="scheduled", zone=LONDON):
    due = due_for(due_on, Window(before_days, grace_days), SiteDays(zone))
    moments = {name: getattr(due, name) for name in ("due_on", "opens_at", "due_at", "late_at", "overdue_at")}
    return CheckRow(**(BLANK | moments | {"state": state, "grace_days": grace_days}))


def _utc(text):
    return dt.datetime.fromisoformat(f"{text}+00:00")


MARCH = dt.date(2025, 3, 5)
SPRING = dt.date(2025, 3, 30)  # the clock goes from 01:00 to 02:00 that night
AUTUMN = dt.date(2025, 10, 26)  # and here from 02:00 back to 01:00
STANDINGS = [
    ("before the window", MARCH, "2025-02-28 12:00", "opens 1 March, due 5 March"),
    ("the window's first instant", MARCH, "2025-03-01 00:00", "open until 12 March, due 5 March"),
    ("the day before", MARCH, "2025-03-04 23:59", "open until 12 March, due 5 March"),
    ("the day's first instant", MARCH, "2025-03-05 00:00", "due today"),
    ("the day's last minute", MARCH, "2025-03-05 23:59", "due today"),
    ("the day after", MARCH, "2025-03-06 00:00", "late, 6 days of grace left"),
    ("three days left", MARCH, "2025-03-09 15:00", "late, 3 days of grace left"),
    ("one day left", MARCH, "2025-03-11 15:00", "late, 1 day of grace left"),
    ("the last day of grace", MARCH, "2025-03-12 23:59", "late, last day of grace"),
    ("grace is over", MARCH, "2025-03-13 00:00", "overdue since today"),
    ("one day over", MARCH, "2025-03-14 00:00", "overdue since 13 March (1 day)"),
    ("four days over", MARCH, "2025-03-17 09:00", "overdue since 13 March (4 days)"),
    ("a year over", MARCH, "2026-03-13 09:00", "overdue since 13 March 2025 (365 days)"),
    (
        "over the turn of the year",
        dt.date(2026, 1, 2),
        "2025-12-31 12:00",
        "open until 9 January 2026, due 2 January 2026",
    ),
    ("spring, before midnight", SPRING, "2025-03-29 23:59", "open until 6 April, due 30 March"),
    ("spring, midnight", SPRING, "2025-03-30 00:00", "due today"),
    ("spring, the 23-hour day ends", SPRING, "2025-03-30 22:59", "due today"),
    ("spring, the day after", SPRING, "2025-03-30 23:00", "late, 6 days of grace left"),
    ("autumn, before midnight", AUTUMN, "2025-10-25 22:59", "open until 2 November, due 26 October"),
    ("autumn, midnight", AUTUMN, "2025-10-25 23:00", "due today"),
    ("autumn, the 25-hour day ends", AUTUMN, "2025-10-26 23:59", "due today"),
    ("autumn, the day after", AUTUMN, "2025-10-27 00:00", "late, 6 days of grace left"),
]


@pytest.mark.parametrize(
    ("due_on", "at", "words"), [row[1:] for row in STANDINGS], ids=[r[0] for r in STANDINGS]
)
def test_due_words_at_a_moment(due_on, at, words):
    assert due_words(_check(due_on), _utc(at), LONDON) == words


def test_due_words_go_by_the_site_and_not_by_utc():
    check = _check(MARCH, zone="Pacific/Auckland")
    assert due_words(check, _utc("2025-03-04 11:00"), "Pacific/Auckland") == "due today"


def test_due_words_without_window_and_grace():
    check = _check(MARCH, before_days=0, grace_days=0)
    assert due_words(check, _utc("2025-03-04 12:00"), LONDON) == "opens 5 March"
    assert due_words(check, _utc("2025-03-06 00:00"), LONDON) == "overdue since today"


def test_due_words_without_grace_name_the_due_day_only():
    assert due_words(_check(MARCH, grace_days=0), _utc("2025-03-02 12:00"), LONDON) == "open, due 5 March"


def test_check_that_was_sent_back_says_so_and_when_it_is_due():
    check = _check(MARCH, state="sent_back")
    assert due_words(check, _utc("2025-03-09 15:00"), LONDON) == "sent back; late, 3 days of grace left"


def test_unplanned_check_is_due_on_no_day():
    check = CheckRow(**(BLANK | {"state": "started"}))
    assert due_words(check, _utc("2025-03-09 15:00"), LONDON) == "unplanned"


@pytest.mark.parametrize("state", sorted(set(CHECK.states) - {"scheduled", "started", "sent_back"}))
def test_check_that_awaits_nothing_says_its_state(state):
    assert due_words(_check(MARCH, state=state), _utc("2025-03-09 15:00"), LONDON) == check_state_word(state)


RULES = [
    ("FREQ=DAILY", "calendar", "every day, by the calendar"),
    ("FREQ=DAILY;BYDAY=MO,FR", "calendar", "every Monday and Friday, by the calendar"),
    ("FREQ=WEEKLY;INTERVAL=2;BYDAY=TH", "calendar", "every 2 weeks on Thursday, by the calendar"),
    ("FREQ=MONTHLY", "calendar", "every month, by the calendar"),
    ("FREQ=MONTHLY;INTERVAL=3", "last_actual", "every 3 months, counted from the last check"),
    ("FREQ=MONTHLY;BYDAY=1MO", "calendar", "every month on the first Monday, by the calendar"),
    ("FREQ=MONTHLY;BYDAY=-1FR", "calendar", "every month on the last Friday, by the calendar"),
    ("FREQ=MONTHLY;BYDAY=-2FR", "calendar", "every month on the last Friday but one, by the calendar"),
    ("FREQ=MONTHLY;BYMONTHDAY=15", "calendar", "every month on day 15, by the calendar"),
    ("FREQ=MONTHLY;BYMONTHDAY=-1", "calendar", "every month on the last day, by the calendar"),
    ("FREQ=MONTHLY;BYMONTHDAY=-3", "calendar", "every month on day 3 from the end, by the calendar"),
    (
        "FREQ=YEARLY;BYMONTH=3,9;BYMONTHDAY=1",
        "calendar",
        "every year in March and September on day 1, by the calendar",
    ),
    ("FREQ=YEARLY;INTERVAL=2", "last_actual", "every 2 years, counted from the last check"),
]


@pytest.mark.parametrize(("rule", "basis", "words"), RULES, ids=[row[0] for row in RULES])
def test_recurrence_reads(rule, basis, words):
    assert recurrence_words(rule, basis) == words


@pytest.mark.parametrize(
    ("kept", "said"),
    [
        ("ward closed, again", "ward closed, again"),
        ("", ""),
        ("quarantined", "the device was quarantined"),
        ("at_repair, 2027-03-01 to 2027-03-20", "the device was at repair, 1 March to 20 March 2027"),
        (
            "on_loan_out, 2026-12-28 to 2027-01-04",
            "the device was lent out, 28 December 2026 to 4 January 2027",
        ),
    ],
)
def test_excuse_is_said_in_words_where_it_was_the_devices_state(kept, said):
    assert excuse_words(kept) == said
