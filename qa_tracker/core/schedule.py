"""When a check falls due: its day, its window and grace, and its standing on a date. Who is told when is in ``ladder``.

Days are local to the site, instants are in UTC. The recurrence of days is in ``schedule_rule`` and
``schedule_occurrences``, working days and clock changes in ``schedule_days``; their public names are here too.
"""

from __future__ import annotations

from dataclasses import dataclass
from datetime import date, datetime, timedelta
from typing import Final

from qa_tracker.core.errors import Invalid
from qa_tracker.core.schedule_days import (
    FARTHEST_ROLL,
    ROLLS,
    SiteDays,
    local_day,
    local_day_bounds,
    roll,
    starts_at,
    zone_of,
)
from qa_tracker.core.schedule_occurrences import add_months, next_on, occurrences
from qa_tracker.core.schedule_rule import WEEKDAYS, Rule, parse_rule
from qa_tracker.core.workflow import CHECK_AWAITED

__all__ = [
    "BASES",
    "LEVELS",
    "ROLLS",
    "STANDINGS",
    "WEEKDAYS",
    "Due",
    "Rule",
    "SiteDays",
    "Window",
    "add_months",
    "due_for",
    "in_words",
    "local_day",
    "local_day_bounds",
    "missed_at",
    "next_due",
    "next_on",
    "occurrences",
    "parse_rule",
    "roll",
    "standing",
    "starts_at",
    "zone_of",
]

BASES: Final = ("calendar", "last_actual")
STANDINGS: Final = ("not_yet_open", "open", "due", "late", "overdue")
LEVELS: Final = ("upcoming", "due", "late", "overdue")
LONGEST_WINDOW: Final = 366


@dataclass(frozen=True)
class Window:
    """Room around a due day.

    Parameters
    ----------
    before_days
        Days before the due day on which the check may already be done, 0 to 366.
    grace_days
        Days after the due day until the check is overdue, 0 to 366.
    roll
        Where a due day goes that isn't worked, one of ``ROLLS``.
    """

    before_days: int = 0
    grace_days: int = 0
    roll: str = "none"

    def __post_init__(self) -> None:
        for field in ("before_days", "grace_days"):
            days = getattr(self, field)
            if not 0 <= days <= LONGEST_WINDOW:
                raise Invalid("schedule.days_out_of_range", field=field, days=days, most=LONGEST_WINDOW)
        if self.roll not in ROLLS:
            raise Invalid("schedule.unknown_roll", field="roll", roll=self.roll)


@dataclass(frozen=True)
class Due:
    """A due day with its window, as local days and as instants.

    Parameters
    ----------
    slot_on
        Day the rule gave, before it was moved to a working day.
    due_on, opens_on, grace_ends_on
        Due day, first day of the window, last day of grace.
    opens_at, due_at
        Beginnings of the window's first day and of the due day.
    late_at, overdue_at
        Ends of the due day and of the last day of grace; the same instant where there is no grace.
    """

    slot_on: date
    due_on: date
    opens_on: date
    grace_ends_on: date
    opens_at: datetime
    due_at: datetime
    late_at: datetime
    overdue_at: datetime

    def level_at(self, level: str) -> datetime:
        """Instant a notice level is reached."""
        return {
            "upcoming": self.opens_at,
            "due": self.due_at,
            "late": self.late_at,
            "overdue": self.overdue_at,
        }[level]


def due_for(slot_on: date, window: Window, site: SiteDays) -> Due:
    """Due day and window of one slot: the day is moved first, the window is counted from where it landed.

    Examples
    --------
    >>> due = due_for(date(2025, 3, 29), Window(7, 3, "forward"), SiteDays("Europe/London"))
    >>> due.due_on.isoformat(), due.opens_on.isoformat(), due.overdue_at.isoformat()
    ('2025-03-31', '2025-03-24', '2025-04-03T23:00:00+00:00')
    """
    due_on = roll(slot_on, window.roll, site)
    opens_on = due_on - timedelta(days=window.before_days)
    grace_ends_on = due_on + timedelta(days=window.grace_days)
    due_at, late_at = local_day_bounds(due_on, site.zone)
    return Due(
        slot_on=slot_on,
        due_on=due_on,
        opens_on=opens_on,
        grace_ends_on=grace_ends_on,
        opens_at=starts_at(opens_on, site.zone),
        due_at=due_at,
        late_at=late_at,
        overdue_at=local_day_bounds(grace_ends_on, site.zone)[1],
    )


def next_due(
    rule: Rule, basis: str, anchor_on: date, after_on: date | None, window: Window, site: SiteDays
) -> Due:
    """First due day after a day.

    Parameters
    ----------
    rule
        The recurrence.
    basis
        ``"calendar"``: slots are counted from the plan's anchor, whatever was done when. ``"last_actual"``: one
        interval from the day it was last done; only a rule without BY parts can be counted so.
    anchor_on
        Plan's first slot, or the day it was last done.
    after_on
        Due day of the previous check, after it was moved; ``None`` asks for the first of the plan (calendar
        basis: the anchor counts; last-actual basis: one interval on).
    window, site
        Two slots that move to the same working day are one due day.

    Examples
    --------
    >>> site, window = SiteDays("UTC"), Window(roll="backward")
    >>> next_due(Rule("MONTHLY"), "calendar", date(2025, 5, 31), date(2025, 5, 30), window, site).due_on
    datetime.date(2025, 6, 30)
    """
    check_basis(rule, basis)
    if basis == "last_actual":
        after_on = max(anchor_on, after_on or anchor_on)
    nearby = timedelta(days=FARTHEST_ROLL if window.roll != "none" else 0)
    from_on = after_on - nearby if after_on else anchor_on
    if basis == "last_actual":
        from_on = max(from_on, anchor_on + timedelta(days=1))
    for slot_on in occurrences(rule, anchor_on, from_on=from_on):
        due = due_for(slot_on, window, site)
        if after_on is None or due.due_on > after_on:
            return due
    raise Invalid("schedule.never_due", field="rule", rule=rule.text, anchor_on=anchor_on)


def check_basis(rule: Rule, basis: str) -> None:
    """Refuse an unknown basis, and a rule with named days that should be counted from the last actual day."""
    if basis not in BASES:
        raise Invalid("schedule.unknown_basis", field="basis", basis=basis)
    if basis == "last_actual" and not rule.is_plain:
        raise Invalid("schedule.basis_needs_plain_rule", field="basis", rule=rule.text)


def missed_at(basis: str, following: Due) -> datetime | None:
    """Instant at which an undone check counts as missed: when the next occurrence opens; never on last actual."""
    return following.opens_at if basis == "calendar" else None


def standing(due: Due, at: datetime, state: str) -> str | None:
    """How a check stands at an instant, by date; ``None`` once its state awaits nothing more.

    An instant belongs to what it begins: at ``due_at`` the check is due, at ``late_at`` it is late, or overdue
    where there is no grace.
    """
    if state not in CHECK_AWAITED:
        return None
    passed = [level for level in LEVELS if due.level_at(level) <= at]
    if not passed:
        return "not_yet_open"
    return "open" if passed[-1] == "upcoming" else passed[-1]


def in_words(rule: Rule, basis: str) -> tuple[str, dict[str, object]]:
    """Code and values of the sentence that says how often, for wording in any language.

    Returns
    -------
    tuple
        Code ``"every.days"``, ``"every.weeks"``, ``"every.months"`` or ``"every.years"``, and the values
        interval, basis, weekdays (pairs of ordinal and weekday, Monday 0), month_days and months.

    Examples
    --------
    >>> in_words(Rule("MONTHLY", 3), "last_actual")[0]
    'every.months'
    """
    noun = {"DAILY": "days", "WEEKLY": "weeks", "MONTHLY": "months", "YEARLY": "years"}[rule.frequency]
    return f"every.{noun}", {
        "interval": rule.interval,
        "basis": basis,
        "weekdays": rule.weekdays,
        "month_days": rule.month_days,
        "months": rule.months,
    }
