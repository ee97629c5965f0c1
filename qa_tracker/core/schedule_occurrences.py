"""The days a recurrence rule falls on, counted from an anchor day."""

from __future__ import annotations

import calendar
from collections.abc import Iterator
from datetime import MAXYEAR, date, timedelta

from qa_tracker.core.errors import Invalid
from qa_tracker.core.schedule_rule import Rule

# The Gregorian calendar repeats after 4800 months: a rule that has met no day in so many periods meets none.
EMPTY_PERIODS = 4800


def add_months(day: date, months: int) -> date:
    """Day so many months later (earlier where negative), at the month's end where it has no such day.

    Source: RFC 7529, section 4.1 (SKIP=BACKWARD). It can't be undone: 31 January, a month on and a month back,
    is 28 or 29 January; a series is therefore always counted from its anchor.

    Examples
    --------
    >>> add_months(date(2024, 1, 31), 1), add_months(date(2024, 2, 29), 12)
    (datetime.date(2024, 2, 29), datetime.date(2025, 2, 28))
    """
    year, month = _month(day, months)
    if not 1 <= year <= MAXYEAR:
        raise Invalid("schedule.beyond_calendar", on=day, months=months)
    return _clamped(year, month, day.day)


def occurrences(
    rule: Rule, anchor_on: date, *, from_on: date | None = None, until_on: date | None = None
) -> Iterator[date]:
    """Iterate over the days of a rule, in order, none before the anchor.

    The anchor is the first of them where the rule falls on it. A rule without BY parts, and one with BYMONTH
    alone, takes its day from the anchor and clamps it to the month's end; a day named by BYMONTHDAY is skipped
    in months without it (RFC 5545, 3.3.10). Weeks begin on Monday.

    Parameters
    ----------
    rule
        The recurrence.
    anchor_on
        Day the series is counted from.
    from_on, until_on
        First and last day wanted, both included; without an end the days go on to the year 9999. What lies
        between the anchor and ``from_on`` isn't counted through, so its length costs nothing.

    Examples
    --------
    >>> days = occurrences(Rule("MONTHLY"), date(2025, 1, 31), until_on=date(2025, 4, 30))
    >>> [day.isoformat() for day in days]
    ['2025-01-31', '2025-02-28', '2025-03-31', '2025-04-30']
    """
    first = max(anchor_on, from_on or anchor_on)
    last = until_on or date.max
    period, empty = _period_of(rule, anchor_on, first), 0
    while empty < EMPTY_PERIODS:
        days = _days_in_period(rule, anchor_on, period)
        if days is None or (days and days[0] > last):
            return
        for day in days:
            if first <= day <= last:
                yield day
        empty = 0 if days else empty + 1
        period += 1


def next_on(rule: Rule, anchor_on: date, after_on: date) -> date:
    """First day of a rule after a day; refused where there is none.

    Examples
    --------
    >>> next_on(Rule("MONTHLY"), date(2025, 1, 31), date(2025, 2, 28))
    datetime.date(2025, 3, 31)
    """
    if after_on < date.max:
        for day in occurrences(rule, anchor_on, from_on=after_on + timedelta(days=1)):
            return day
    raise Invalid("schedule.never_due", field="rule", rule=rule.text, anchor_on=anchor_on)


def _period_of(rule: Rule, anchor_on: date, day: date) -> int:
    """Number of the period a day lies in or before whose first day it lies; the anchor's is 0."""
    if rule.frequency == "DAILY":
        return (day - anchor_on).days // rule.interval
    if rule.frequency == "WEEKLY":
        return (day - _monday(anchor_on)).days // (7 * rule.interval)
    years = day.year - anchor_on.year
    if rule.frequency == "YEARLY":
        return years // rule.interval
    return (12 * years + day.month - anchor_on.month) // rule.interval


def _days_in_period(rule: Rule, anchor_on: date, period: int) -> list[date] | None:
    """Days of a rule in one of its periods, in order; ``None`` beyond the end of the calendar."""
    steps = period * rule.interval
    try:
        if rule.frequency == "DAILY":
            return _if_weekday(rule, anchor_on + timedelta(days=steps))
        if rule.frequency == "WEEKLY":
            return _days_in_week(rule, anchor_on, _monday(anchor_on) + timedelta(weeks=steps))
    except OverflowError:
        return None
    year, month = _month(anchor_on, steps if rule.frequency == "MONTHLY" else 12 * steps)
    if year > MAXYEAR:
        return None
    return [day for each in rule.months or (month,) for day in _days_in_month(rule, anchor_on, year, each)]


def _if_weekday(rule: Rule, day: date) -> list[date]:
    wanted = {weekday for _, weekday in rule.weekdays}
    return [day] if not wanted or day.weekday() in wanted else []


def _days_in_week(rule: Rule, anchor_on: date, monday: date) -> list[date]:
    weekdays = [weekday for _, weekday in rule.weekdays] or [anchor_on.weekday()]
    return [monday + timedelta(days=weekday) for weekday in weekdays]


def _days_in_month(rule: Rule, anchor_on: date, year: int, month: int) -> list[date]:
    if not (rule.weekdays or rule.month_days):
        return [_clamped(year, month, anchor_on.day)]
    length = calendar.monthrange(year, month)[1]
    days = set(range(1, length + 1))
    if rule.month_days:
        days &= {day if day > 0 else length + 1 + day for day in rule.month_days}
    if rule.weekdays:
        days &= _numbered_weekdays(rule, year, month, length)
    return [date(year, month, day) for day in sorted(days)]


def _numbered_weekdays(rule: Rule, year: int, month: int, length: int) -> set[int]:
    """Days of a month that are the wanted weekdays by their ordinals."""
    first_weekday = date(year, month, 1).weekday()
    days: set[int] = set()
    for ordinal, weekday in rule.weekdays:
        every = range(1 + (weekday - first_weekday) % 7, length + 1, 7)
        if ordinal == 0:
            days.update(every)
        elif abs(ordinal) <= len(every):
            days.add(every[ordinal - 1 if ordinal > 0 else ordinal])
    return days


def _monday(day: date) -> date:
    return day - timedelta(days=day.weekday())


def _month(day: date, months: int) -> tuple[int, int]:
    year, month = divmod(12 * day.year + day.month - 1 + months, 12)
    return year, month + 1


def _clamped(year: int, month: int, day: int) -> date:
    return date(year, month, min(day, calendar.monthrange(year, month)[1]))
