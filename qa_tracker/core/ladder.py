"""The ladder: who is told at which level of an awaited check, and when each level is reached.

The first four levels are how a check stands (``schedule.LEVELS``); the steps t1, t2 ... are local days after it
became overdue. Only the highest level that was reached is told, once to each person; what was passed is named.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from datetime import datetime, timedelta
from functools import cached_property, lru_cache
from itertools import pairwise
from typing import Final, NamedTuple

from qa_tracker.core.errors import Invalid
from qa_tracker.core.schedule import LEVELS
from qa_tracker.core.schedule_days import local_day, starts_at

RECIPIENTS: Final = ("responsible", "lead", "physicist", "engineer", "administrator")
RESPONSIBLE: Final = RECIPIENTS[0]
MISSED: Final = "missed"
"""What a clock waits for after the last level: the next occurrence opens."""
MOST_STEPS: Final = 9
LONGEST_AFTER_DAYS: Final = 366


class Rung(NamedTuple):
    """Who is told at a level; ``after_days`` belongs to the steps t1, t2 ... and is 0 at the other levels."""

    level: str
    recipient: str
    after_days: int = 0


class Instants(NamedTuple):
    """Instants at which a check opens, is due, is late and is overdue."""

    opens_at: datetime
    due_at: datetime
    late_at: datetime
    overdue_at: datetime


class Owed(NamedTuple):
    """One person to be told: at which level, as whom, and the levels they were not told of before it."""

    person: int
    recipient: str
    level: str
    skipped: tuple[str, ...]


@dataclass(frozen=True)
class Ladder:
    """The rungs of a site, refused (``ladder.*``) where they make no ladder.

    Parameters
    ----------
    rungs
        Steps are numbered from t1 without gaps, each later than the one before (1 to 366 days after overdue).
        Several recipients at a level are several rungs; a level without a rung is reached and tells nobody.
    """

    rungs: tuple[Rung, ...]

    def __post_init__(self) -> None:
        if not self.rungs:
            raise Invalid("ladder.empty", field="rungs")
        if len({(rung.level, rung.recipient) for rung in self.rungs}) < len(self.rungs):
            raise Invalid("ladder.told_twice", field="rungs")
        for rung in self.rungs:
            _check_rung(rung)
        _check_steps({rung.level: rung.after_days for rung in self.rungs if rung.level not in LEVELS}, self)

    @cached_property
    def levels(self) -> tuple[str, ...]:
        """Every level in the order in which they are reached, those nobody is told of too."""
        return (*LEVELS, *sorted({rung.level for rung in self.rungs} - set(LEVELS)))

    @cached_property
    def after_days(self) -> dict[str, int]:
        """Days after overdue of each step."""
        return {rung.level: rung.after_days for rung in self.rungs if rung.level not in LEVELS}

    @cached_property
    def told(self) -> dict[str, tuple[str, ...]]:
        """Recipients of each level, in the order of ``RECIPIENTS``."""
        named = {(rung.level, rung.recipient) for rung in self.rungs}
        return {level: tuple(each for each in RECIPIENTS if (level, each) in named) for level in self.levels}

    def rank(self, level: str) -> int:
        """Place of a level; one of another ladder takes the place it would have here, ``MISSED`` is above all."""
        if level in self.levels:
            return self.levels.index(level)
        if level == MISSED:
            return len(self.levels)
        return sum(each in LEVELS or each < level for each in self.levels)


def _check_rung(rung: Rung) -> None:
    if rung.recipient not in RECIPIENTS:
        raise Invalid("ladder.unknown_recipient", field="rungs", recipient=rung.recipient)
    steps = [f"t{number}" for number in range(1, MOST_STEPS + 1)]
    if rung.level not in (*LEVELS, *steps):
        raise Invalid("ladder.unknown_level", field="rungs", level=rung.level, most=MOST_STEPS)
    lowest, highest = (1, LONGEST_AFTER_DAYS) if rung.level in steps else (0, 0)
    if not lowest <= rung.after_days <= highest:
        raise Invalid("ladder.days_out_of_range", field="rungs", level=rung.level, most=LONGEST_AFTER_DAYS)


def _check_steps(days: Mapping[str, int], ladder: Ladder) -> None:
    """Refuse steps with a gap, steps of one level on two days, and steps that do not climb."""
    if sorted(days) != [f"t{number}" for number in range(1, len(days) + 1)]:
        raise Invalid("ladder.steps_with_gap", field="rungs")
    if any(rung.after_days != days[rung.level] for rung in ladder.rungs if rung.level in days):
        raise Invalid("ladder.step_on_two_days", field="rungs")
    climbing = [days[level] for level in sorted(days)]
    if any(later <= earlier for earlier, later in pairwise(climbing)):
        raise Invalid("ladder.steps_not_climbing", field="rungs")


def step_at(overdue_at: datetime, after_days: int, zone: str) -> datetime:
    """Instant of a step: the beginning of the local day so many days after the one that began at ``overdue_at``.

    Counted in days of the zone, so that a day of 23 or 25 hours is one day.

    Examples
    --------
    >>> from datetime import UTC
    >>> step_at(datetime(2025, 3, 27, tzinfo=UTC), 7, "Europe/London").isoformat()
    '2025-04-02T23:00:00+00:00'
    """
    return starts_at(local_day(overdue_at, zone) + timedelta(days=after_days), zone)


@lru_cache(maxsize=4096)
def moments(ladder: Ladder, instants: Instants, zone: str) -> tuple[datetime, ...]:
    """Instant of each of a ladder's levels, in their order; later ones are never earlier.

    Examples
    --------
    >>> from datetime import UTC
    >>> days = Instants(*(datetime(2025, 6, day, tzinfo=UTC) for day in (1, 8, 9, 16)))
    >>> [each.day for each in moments(Ladder((Rung("t1", "lead", 7),)), days, "UTC")]
    [1, 8, 9, 16, 23]
    """
    steps = ladder.levels[len(LEVELS) :]
    return (
        *instants,
        *(step_at(instants.overdue_at, ladder.after_days[level], zone) for level in steps),
    )


def reached(ladder: Ladder, at_levels: Sequence[datetime], pending: str, at: datetime) -> tuple[str, ...]:
    """Levels reached at an instant, from the pending one on, in order; empty while it is still to come.

    Parameters
    ----------
    at_levels
        What :func:`moments` gave.
    pending
        First level that was not dealt with yet.
    at
        An instant belongs to the level that begins with it.
    """
    count = sum(moment <= at for moment in at_levels)
    return ladder.levels[ladder.rank(pending) : count]


def following(ladder: Ladder, at_levels: Sequence[datetime], at: datetime) -> tuple[str, datetime] | None:
    """Next level after an instant, and when it is reached; ``None`` after the highest."""
    for level, moment in zip(ladder.levels, at_levels, strict=True):
        if moment > at:
            return level, moment
    return None


@dataclass(frozen=True)
class Held:
    """What is held at a moment: the climb to further people, and who waits themself.

    Parameters
    ----------
    acknowledged
        Whether only the responsible people are told.
    snoozed
        People whose own notices wait.
    """

    acknowledged: bool = False
    snoozed: frozenset[int] = frozenset()


NOTHING_HELD: Final = Held()


def owed(
    ladder: Ladder,
    levels: Sequence[str],
    people: Mapping[str, Sequence[int]],
    told: Mapping[int, int],
    held: Held = NOTHING_HELD,
) -> tuple[tuple[Owed, ...], str | None]:
    """Who is to be told of the levels reached: each person once, at the highest level that names them.

    Parameters
    ----------
    levels
        Levels reached, in order, from :func:`reached`.
    people
        People of each recipient.
    told
        Highest rank each person was told of already; nobody is told of that or a lower one again.
    held
        What is held; it is to be owed later.

    Returns
    -------
    tuple
        What is owed, in order of people, and the lowest level that a hold kept back (``None`` without one).

    Examples
    --------
    >>> ladder = Ladder((Rung("due", "responsible"), Rung("late", "responsible"), Rung("late", "lead")))
    >>> now, _ = owed(ladder, ("due", "late"), {"responsible": [1], "lead": [2]}, {})
    >>> [(each.person, each.level, each.skipped) for each in now]
    [(1, 'late', ('due',)), (2, 'late', ())]
    """
    due_to: dict[int, dict[str, str]] = {}
    kept_back: set[str] = set()
    for level in levels:
        for recipient in ladder.told[level]:
            for person in people.get(recipient, ()):
                if told.get(person, -1) >= ladder.rank(level) or level in due_to.get(person, ()):
                    continue
                if person in held.snoozed or (held.acknowledged and recipient != RESPONSIBLE):
                    kept_back.add(level)
                else:
                    due_to.setdefault(person, {})[level] = recipient
    found = []
    for person, by_level in sorted(due_to.items()):
        *skipped, (level, recipient) = by_level.items()
        found.append(Owed(person, recipient, level, tuple(name for name, _ in skipped)))
    return tuple(found), min(kept_back, key=ladder.rank, default=None)
