"""The year ahead as rows of weeks: hours of each person, a bar of the whole, and what could be moved."""

from __future__ import annotations

import datetime as dt
from collections import defaultdict
from collections.abc import Mapping
from dataclasses import dataclass

from django.utils import formats
from django.utils.translation import gettext as _

from qa_tracker.services.year_ahead import Proposed, Year

MOST_PEOPLE = 8
BAR_PX = 120


@dataclass(frozen=True)
class Week:
    """One week: hours of each person shown, of all others, of all together, and the length of its bar."""

    monday_on: dt.date
    hours: tuple[str, ...]
    others: str
    total: str
    bar_px: int


@dataclass(frozen=True)
class Shown:
    """The table; ``others`` counts the people gathered in one column."""

    people: tuple[str, ...]
    others: int
    weeks: tuple[Week, ...]


def shown(year: Year, names: Mapping[int, str]) -> Shown:
    """The weeks of the year; the busiest people have a column of their own."""
    sums: dict[int, float] = defaultdict(float)
    by_week: dict[dt.date, float] = defaultdict(float)
    for (week_on, person), minutes in year.loads.items():
        sums[person] += minutes
        by_week[week_on] += minutes
    busiest = sorted(sums, key=lambda person: (-sums[person], person))
    own, others = busiest[:MOST_PEOPLE], busiest[MOST_PEOPLE:]
    own.sort(key=lambda person: names.get(person, ""))
    most = max(by_week.values(), default=0.0) or 1.0
    weeks = tuple(
        Week(
            week_on,
            tuple(hours(year.loads.get((week_on, person), 0.0)) for person in own),
            hours(sum(year.loads.get((week_on, person), 0.0) for person in others)),
            hours(by_week[week_on]),
            round(BAR_PX * by_week[week_on] / most),
        )
        for week_on in year.weeks
    )
    return Shown(tuple(names.get(person, "") for person in own), len(others), weeks)


def hours(minutes: float) -> str:
    """Minutes as hours to a tenth; nothing for none."""
    if not minutes:
        return ""
    return formats.number_format(max(round(minutes / 60, 1), 0.1), 1)


@dataclass(frozen=True)
class Offer:
    """A due day that could be moved, as a line with its choice."""

    value: str
    proposed: Proposed
    device: str
    who: str


def offers(year: Year, names: Mapping[int, str]) -> tuple[Offer, ...]:
    """What could be moved, by the day it is due."""
    found = sorted(year.proposed, key=lambda each: (each.row.due_on, each.row.check_id))
    return tuple(
        Offer(
            f"{each.row.check_uid}_{each.to_on.isoformat()}",
            each,
            f"{each.row.maker} {each.row.model} {each.row.serial}",
            ", ".join(names.get(person, _("someone")) for person in each.who),
        )
        for each in found
    )
