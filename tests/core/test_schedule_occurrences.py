"""The days of a rule, against the published examples and an independent library."""

from __future__ import annotations

import csv
import json
from datetime import date, datetime, timedelta
from itertools import islice
from pathlib import Path

import pytest
from dateutil.rrule import rrulestr
from hypothesis import given
from hypothesis import strategies as st

from qa_tracker.core.errors import Invalid
from qa_tracker.core.schedule import Rule, add_months, next_on, occurrences, parse_rule
from qa_tracker.core.schedule_rule import WEEKDAYS

REFERENCE = Path(__file__).parents[2] / "fixtures" / "reference"
CASES = json.loads((REFERENCE / "rfc5545_rrule_open.json").read_text(encoding="utf-8"))["cases"]
# An end and a number belong to a plan, not to its rule: they are taken off, and the expected list ends anyway.
ENDS = ("COUNT=", "UNTIL=")
OUTSIDE = {
    **{"rfc5545-08": "WKST", "rfc5545-10": "WKST", "rfc5545-11": "WKST", "rfc5545-37": "WKST"},
    **{"rfc5545-23": "BYYEARDAY", "rfc5545-25": "BYWEEKNO", "rfc5545-31": "BYSETPOS"},
    **{"rfc5545-32": "BYSETPOS", "rfc5545-34": "FREQ", "rfc5545-35": "FREQ"},
}
by_id = {"ids": lambda case: case["id"]}


def rows(name):
    lines = (REFERENCE / name).read_text(encoding="utf-8").splitlines()
    return list(csv.DictReader(line for line in lines if not line.startswith("#")))


def endless(text):
    return ";".join(part for part in text.split(";") if not part.startswith(ENDS))


@pytest.mark.parametrize("case", [case for case in CASES if case["id"] not in OUTSIDE], **by_id)
def test_days_equal_those_of_the_rfc_for_each_example_in_the_subset(case):
    expected = [date.fromisoformat(text[:10]) for text in case["expected_local"]]
    anchor_on = datetime.strptime(case["dtstart"], "%Y%m%dT%H%M%S").date()  # noqa: DTZ007
    days = occurrences(parse_rule(endless(case["rrule"])), anchor_on)
    assert list(islice(days, len(expected))) == expected


@pytest.mark.parametrize("case", [case for case in CASES if case["id"] in OUTSIDE], **by_id)
def test_rule_is_refused_by_name_for_each_example_outside_the_subset(case):
    with pytest.raises(Invalid) as refusal:
        parse_rule(endless(case["rrule"]))
    assert refusal.value.parameters["part"] == OUTSIDE[case["id"]]


@pytest.mark.parametrize("case", [case for case in CASES if any(e in case["rrule"] for e in ENDS)], **by_id)
def test_rule_is_refused_when_an_example_carries_its_own_end(case):
    with pytest.raises(Invalid):
        parse_rule(case["rrule"])


@pytest.mark.parametrize("row", rows("month_end_clamp.csv"), ids=lambda row: row["start"] + row["operation"])
def test_months_are_clamped_as_published_for_each_row(row):
    day = date.fromisoformat(row["start"])
    for step in row["operation"].split(" then "):
        amount, noun = step.split()
        day = add_months(day, int(amount) * (12 if noun.startswith("year") else 1))
    assert day == date.fromisoformat(row["result"])


@pytest.mark.parametrize("row", rows("iso8601_weeks.csv"), ids=lambda row: row["date"])
def test_fortnight_begins_on_the_monday_of_the_iso_week_for_each_row(row):
    year, week, weekday = row["iso_week_date"].replace("W", "").split("-")
    day = date.fromisoformat(row["date"])
    monday = day - timedelta(days=int(weekday) - 1)
    rule = parse_rule("FREQ=WEEKLY;INTERVAL=2;BYDAY=MO,SU")
    found = list(occurrences(rule, monday, until_on=monday + timedelta(days=14)))
    assert found == [monday, monday + timedelta(days=6), monday + timedelta(days=14)]
    assert monday == date.fromisocalendar(int(year), int(week), 1)


@pytest.mark.parametrize(
    ("text", "anchor", "expected"),
    [
        pytest.param(
            "FREQ=MONTHLY",
            "2023-10-31",
            "2023-10-31 2023-11-30 2023-12-31 2024-01-31 2024-02-29 2024-03-31",
            id="31st never drifts, leap year",
        ),
        pytest.param("FREQ=MONTHLY", "2025-01-30", "2025-01-30 2025-02-28 2025-03-30", id="30th comes back"),
        pytest.param(
            "FREQ=MONTHLY;INTERVAL=3", "2025-08-31", "2025-08-31 2025-11-30 2026-02-28", id="quarterly"
        ),
        pytest.param(
            "FREQ=YEARLY",
            "2024-02-29",
            "2024-02-29 2025-02-28 2026-02-28 2027-02-28 2028-02-29",
            id="leap day each year",
        ),
        pytest.param(
            "FREQ=YEARLY;BYMONTH=3,6",
            "2025-03-31",
            "2025-03-31 2025-06-30 2026-03-31",
            id="named months clamp the anchor's day",
        ),
        pytest.param(
            "FREQ=MONTHLY;BYMONTHDAY=31",
            "2025-01-31",
            "2025-01-31 2025-03-31 2025-05-31",
            id="a named 31st is skipped, as in the RFC",
        ),
        pytest.param(
            "FREQ=MONTHLY;BYMONTHDAY=-1", "2024-01-31", "2024-01-31 2024-02-29 2024-03-31", id="last day"
        ),
        pytest.param(
            "FREQ=YEARLY;BYMONTH=2;BYMONTHDAY=29",
            "2024-02-29",
            "2024-02-29 2028-02-29",
            id="a named leap day",
        ),
        pytest.param(
            "FREQ=DAILY;BYDAY=MO,TU", "2025-03-04", "2025-03-04 2025-03-10 2025-03-11", id="weekdays"
        ),
        pytest.param(
            "FREQ=WEEKLY;BYDAY=MO", "2025-03-05", "2025-03-10 2025-03-17", id="anchor not on the rule"
        ),
        pytest.param("FREQ=MONTHLY;BYDAY=5MO", "2025-03-01", "2025-03-31 2025-06-30", id="a fifth Monday"),
    ],
)
def test_days_follow_the_rule_from_the_anchor(text, anchor, expected):
    wanted = [date.fromisoformat(day) for day in expected.split()]
    assert list(islice(occurrences(parse_rule(text), date.fromisoformat(anchor)), len(wanted))) == wanted


@pytest.mark.parametrize("text", ["FREQ=DAILY", "FREQ=WEEKLY", "FREQ=MONTHLY", "FREQ=YEARLY"])
def test_no_day_comes_before_the_anchor_when_earlier_ones_are_asked_for(text):
    anchor_on = date(2025, 3, 5)
    days = occurrences(parse_rule(text), anchor_on, from_on=date(2020, 1, 1))
    assert next(days) == anchor_on


def test_days_cross_a_century_without_leap_day_when_the_anchor_has_one():
    assert next_on(Rule("YEARLY", 4), date(2096, 2, 29), date(2096, 2, 29)) == date(2100, 2, 28)
    named = parse_rule("FREQ=YEARLY;BYMONTH=2;BYMONTHDAY=29")
    assert next_on(named, date(2096, 2, 29), date(2096, 2, 29)) == date(2104, 2, 29)


@pytest.mark.parametrize(
    ("text", "anchor"),
    [
        pytest.param("FREQ=YEARLY;BYMONTH=2;BYMONTHDAY=30", date(2025, 1, 1), id="30 February"),
        pytest.param("FREQ=MONTHLY;INTERVAL=12;BYMONTHDAY=31", date(2025, 4, 1), id="31st of every April"),
        pytest.param(
            "FREQ=DAILY;INTERVAL=7;BYDAY=TU", date(2025, 3, 3), id="every seventh day but never a Tuesday"
        ),
    ],
)
def test_next_day_is_refused_when_a_rule_never_falls_due(text, anchor):
    with pytest.raises(Invalid) as refusal:
        next_on(parse_rule(text), anchor, anchor)
    assert refusal.value.code == "schedule.never_due"


@pytest.mark.parametrize("text", ["FREQ=DAILY", "FREQ=WEEKLY", "FREQ=MONTHLY", "FREQ=YEARLY"])
def test_next_day_is_refused_when_the_calendar_ends(text):
    with pytest.raises(Invalid) as refusal:
        next_on(parse_rule(text), date(9999, 12, 31), date(9999, 12, 31))
    assert refusal.value.code == "schedule.never_due"


def test_month_arithmetic_is_refused_when_it_leaves_the_calendar():
    with pytest.raises(Invalid):
        add_months(date(9999, 12, 1), 1)


DAYS = st.dates(date(1990, 1, 1), date(2060, 12, 31))
INTERVALS = st.integers(1, 14)
WEEKDAY_LISTS = st.lists(st.sampled_from(WEEKDAYS), min_size=1, unique=True).map(",".join)
ORDINAL_LISTS = st.lists(
    st.builds("{}{}".format, st.sampled_from([1, 2, 3, 4, 5, -1, -2, -5]), st.sampled_from(WEEKDAYS)),
    min_size=1,
).map(",".join)
MONTH_DAY_LISTS = st.lists(st.integers(-31, 31).filter(bool).map(str), min_size=1).map(",".join)
MONTH_LISTS = st.lists(st.integers(1, 12).map(str), min_size=1).map(",".join)
RULES = st.one_of(
    st.builds("FREQ=DAILY;INTERVAL={}".format, INTERVALS),
    st.builds("FREQ=DAILY;INTERVAL={};BYDAY={}".format, INTERVALS, WEEKDAY_LISTS),
    st.builds("FREQ=WEEKLY;INTERVAL={};BYDAY={}".format, INTERVALS, WEEKDAY_LISTS),
    st.builds("FREQ=MONTHLY;INTERVAL={};BYDAY={}".format, INTERVALS, ORDINAL_LISTS | WEEKDAY_LISTS),
    st.builds("FREQ=MONTHLY;INTERVAL={};BYMONTHDAY={}".format, INTERVALS, MONTH_DAY_LISTS),
    st.builds("FREQ=MONTHLY;BYMONTHDAY={};BYDAY={}".format, MONTH_DAY_LISTS, WEEKDAY_LISTS),
    st.builds("FREQ=YEARLY;BYMONTH={};BYMONTHDAY={}".format, MONTH_LISTS, MONTH_DAY_LISTS),
    st.builds("FREQ=YEARLY;INTERVAL={};BYMONTH={};BYDAY={}".format, INTERVALS, MONTH_LISTS, ORDINAL_LISTS),
)


@given(RULES, DAYS, st.integers(0, 4000))
def test_days_equal_those_of_an_independent_library_for_any_rule_with_named_days(text, anchor_on, days_on):
    from_on = anchor_on + timedelta(days=days_on)
    until_on = from_on + timedelta(days=1500)
    library = rrulestr(text, dtstart=datetime(anchor_on.year, anchor_on.month, anchor_on.day))  # noqa: DTZ001
    start, end = (datetime(day.year, day.month, day.day) for day in (from_on, until_on))  # noqa: DTZ001
    expected = [moment.date() for moment in library.between(start, end, inc=True)]
    assert list(occurrences(parse_rule(text), anchor_on, from_on=from_on, until_on=until_on)) == expected


@given(st.sampled_from(["MONTHLY", "YEARLY"]), INTERVALS, DAYS, st.integers(0, 300))
def test_slot_is_the_anchor_plus_so_many_months_however_many_came_between(
    frequency, interval, anchor_on, count
):
    months = interval * count * (12 if frequency == "YEARLY" else 1)
    slot_on = add_months(anchor_on, months)
    assert next(occurrences(Rule(frequency, interval), anchor_on, from_on=slot_on)) == slot_on
    assert slot_on.day == min(anchor_on.day, (add_months(slot_on.replace(day=1), 1) - timedelta(days=1)).day)


@given(RULES, DAYS, st.integers(0, 2000))
def test_next_day_is_the_first_of_the_series_after_a_day_for_any_rule(text, anchor_on, days_on):
    rule, after_on = parse_rule(text), anchor_on + timedelta(days=days_on)
    series = occurrences(rule, anchor_on, until_on=after_on + timedelta(days=3000))
    expected = next((day for day in series if day > after_on), None)
    if expected is not None:
        assert next_on(rule, anchor_on, after_on) == expected
