"""Recurrence rules: the part of RFC 5545's RRULE a plan may use, read from text."""

from __future__ import annotations

import re
from dataclasses import dataclass
from functools import lru_cache
from typing import Final

from qa_tracker.core.errors import Invalid

WEEKDAYS: Final = ("MO", "TU", "WE", "TH", "FR", "SA", "SU")
LARGEST_INTERVAL: Final = 999

# Which parts each frequency takes, besides FREQ and INTERVAL.
_PARTS: Final = {
    "DAILY": frozenset({"BYDAY"}),
    "WEEKLY": frozenset({"BYDAY"}),
    "MONTHLY": frozenset({"BYDAY", "BYMONTHDAY"}),
    "YEARLY": frozenset({"BYDAY", "BYMONTHDAY", "BYMONTH"}),
}
_WEEKDAY: Final = re.compile(r"([+-]?[1-5])?(MO|TU|WE|TH|FR|SA|SU)", re.ASCII)
_NUMBER: Final = re.compile(r"[+-]?\d{1,3}", re.ASCII)


@dataclass(frozen=True)
class Rule:
    """A recurrence rule.

    Parameters
    ----------
    frequency
        ``"DAILY"``, ``"WEEKLY"``, ``"MONTHLY"`` or ``"YEARLY"``.
    interval
        Every how many days, weeks, months or years, from 1.
    weekdays
        Pairs of ordinal and weekday; Monday is 0. Ordinal 1 is the first such day of the month, -1 the last, 0
        every one.
    month_days
        Days of the month; negative ones count from its end.
    months
        Months of the year, 1 to 12.
    """

    frequency: str
    interval: int = 1
    weekdays: tuple[tuple[int, int], ...] = ()
    month_days: tuple[int, ...] = ()
    months: tuple[int, ...] = ()

    @property
    def is_plain(self) -> bool:
        """Whether the rule is a frequency and an interval alone, and so takes its day from the anchor."""
        return not (self.weekdays or self.month_days or self.months)

    @property
    def text(self) -> str:
        """The rule as RRULE text, parts in a fixed order."""
        parts = [f"FREQ={self.frequency}", f"INTERVAL={self.interval}"]
        if self.months:
            parts.append(f"BYMONTH={','.join(map(str, self.months))}")
        if self.month_days:
            parts.append(f"BYMONTHDAY={','.join(map(str, self.month_days))}")
        if self.weekdays:
            named = (f"{ordinal or ''}{WEEKDAYS[weekday]}" for ordinal, weekday in self.weekdays)
            parts.append(f"BYDAY={','.join(named)}")
        return ";".join(parts)


@lru_cache(maxsize=1024)
def parse_rule(text: str) -> Rule:
    """Read a recurrence rule.

    Source: RFC 5545, section 3.3.10. Taken: FREQ of DAILY, WEEKLY, MONTHLY or YEARLY; INTERVAL; BYDAY, with
    ordinals in months; BYMONTHDAY in months; BYMONTH in years. A yearly BYDAY or BYMONTHDAY needs BYMONTH. Any
    other part is refused by its name: a plan's end and its number of checks aren't in its rule.

    Examples
    --------
    >>> parse_rule("FREQ=MONTHLY;BYDAY=-1FR").text
    'FREQ=MONTHLY;INTERVAL=1;BYDAY=-1FR'
    """
    parts = _split(text)
    frequency = parts.pop("FREQ", "")
    if frequency not in _PARTS:
        raise _bad_value("FREQ", frequency)
    interval = _integers("INTERVAL", parts.pop("INTERVAL", "1"), 1, LARGEST_INTERVAL)
    if len(interval) != 1:
        raise _bad_value("INTERVAL", ",".join(map(str, interval)))
    for name in parts:
        if name not in _PARTS[frequency]:
            raise Invalid("schedule.part_not_taken", field="rule", part=name, frequency=frequency)
    if frequency == "YEARLY" and parts and "BYMONTH" not in parts:
        raise Invalid("schedule.part_needs_bymonth", field="rule", part=next(iter(parts)))
    return Rule(
        frequency,
        interval[0],
        weekdays=_weekdays(parts["BYDAY"], frequency) if "BYDAY" in parts else (),
        month_days=_integers("BYMONTHDAY", parts["BYMONTHDAY"], -31, 31) if "BYMONTHDAY" in parts else (),
        months=_integers("BYMONTH", parts["BYMONTH"], 1, 12) if "BYMONTH" in parts else (),
    )


def _split(text: str) -> dict[str, str]:
    parts: dict[str, str] = {}
    for part in text.strip().upper().split(";"):
        name, equals, value = part.partition("=")
        if not (name and equals and value) or name in parts:
            raise Invalid("schedule.rule_malformed", field="rule", text=text, part=part)
        parts[name] = value
    return parts


def _integers(name: str, text: str, lowest: int, highest: int) -> tuple[int, ...]:
    values = text.split(",")
    if not all(_NUMBER.fullmatch(value) for value in values):
        raise _bad_value(name, text)
    numbers = {int(value) for value in values}
    if 0 in numbers or min(numbers) < lowest or max(numbers) > highest:
        raise _bad_value(name, text)
    return tuple(sorted(numbers))


def _weekdays(text: str, frequency: str) -> tuple[tuple[int, int], ...]:
    found = [_WEEKDAY.fullmatch(value) for value in text.split(",")]
    pairs = {(int(each[1] or 0), WEEKDAYS.index(each[2])) for each in found if each}
    by_month = frequency in ("MONTHLY", "YEARLY")
    if None in found or (not by_month and any(ordinal for ordinal, _ in pairs)):
        raise _bad_value("BYDAY", text)
    return tuple(sorted(pairs))


def _bad_value(part: str, value: str) -> Invalid:
    return Invalid("schedule.part_value", field="rule", part=part, value=value)
