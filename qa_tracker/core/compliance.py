"""Compliance with plans: what became of the checks that fell due, counted, and the share done on time.

A check belongs to the period in which it was due. One that another check satisfied was done when that one was.
What was excused, and what was made void, is counted apart and is no part of any share.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterable
from dataclasses import dataclass, fields
from datetime import date, datetime
from typing import Final

from qa_tracker.core.workflow import CHECK_AWAITED, CHECK_DONE, DEVICE

FIGURES: Final = ("on_time", "late", "overdue", "missed", "excused", "awaited", "awaited_late", "void")
"""What is counted of a check. ``overdue`` is a part of ``late``, ``awaited_late`` a part of ``awaited``."""


@dataclass(frozen=True)
class Duty:
    """A check as far as compliance goes.

    Parameters
    ----------
    state
        One of the states of a check.
    due_on
        Its due day, local to its site.
    late_at, overdue_at
        Ends of the due day and of the last day of grace.
    done_at
        When it was first measured, or the check that satisfied it; ``None`` while it was not.
    excuse
        Why it was excused.
    """

    state: str
    due_on: date
    late_at: datetime
    overdue_at: datetime
    done_at: datetime | None = None
    excuse: str = ""


@dataclass(frozen=True)
class Tally:
    """How many checks of a period came out how; see ``FIGURES``."""

    on_time: int = 0
    late: int = 0
    overdue: int = 0
    missed: int = 0
    excused: int = 0
    awaited: int = 0
    awaited_late: int = 0
    void: int = 0

    @property
    def owed(self) -> int:
        """Checks of which it is known by now whether they were done on time: the denominator of every share."""
        return self.on_time + self.late + self.missed + self.awaited_late

    @property
    def done(self) -> int:
        """Checks that were done, on time or late."""
        return self.on_time + self.late

    def percent(self, count: int) -> int | None:
        """A count as a whole percentage of ``owed``, rounded half up; ``None`` where nothing was owed.

        100 is said only where all are meant, and 0 only where none is.

        Examples
        --------
        >>> Tally(on_time=199, missed=1).percent(199), Tally().percent(0)
        (99, None)
        """
        if not self.owed:
            return None
        whole = (200 * count + self.owed) // (2 * self.owed)
        if 0 < count < self.owed:
            return min(max(whole, 1), 99)
        return whole

    def and_also(self, other: Tally) -> Tally:
        """Both counted together."""
        names = [each.name for each in fields(self)]
        return Tally(**{name: getattr(self, name) + getattr(other, name) for name in names})


def figures_of(duty: Duty, moment: datetime) -> tuple[str, ...]:
    """Which figures a check counts to, as it stood at a moment.

    Parameters
    ----------
    duty
        The check, as it was known at the moment.
    moment
        The moment the figures are true at.

    Returns
    -------
    tuple of str
        Of ``FIGURES``. Done before its due day ended: ``on_time``; after it ``late``, and after its grace
        ``overdue`` too. Done at a time that is not known counts as late. Awaited with its due day over:
        ``awaited_late`` too, since it can be on time no more.

    Examples
    --------
    >>> from datetime import UTC
    >>> ends = [datetime(2027, 3, day, tzinfo=UTC) for day in (2, 9)]
    >>> done = Duty("countersigned", date(2027, 3, 1), *ends, done_at=datetime(2027, 3, 12, tzinfo=UTC))
    >>> figures_of(done, datetime(2027, 4, 1, tzinfo=UTC))
    ('late', 'overdue')
    """
    if duty.state in CHECK_DONE:
        if duty.done_at is None:
            return ("late",)
        if duty.done_at < duty.late_at:
            return ("on_time",)
        return ("late",) if duty.done_at < duty.overdue_at else ("late", "overdue")
    if duty.state in CHECK_AWAITED:
        return ("awaited",) if moment < duty.late_at else ("awaited", "awaited_late")
    return (duty.state,)


def tally(duties: Iterable[Duty], moment: datetime) -> Tally:
    """Count checks by figure as they stood at a moment.

    Examples
    --------
    >>> tally([], datetime(2027, 1, 1)).owed
    0
    """
    return Tally(**Counter(name for duty in duties for name in figures_of(duty, moment)))


def reason_of(excuse: str) -> str:
    """Why a check was excused, for counting: the device's state where that was it, else ``"by_hand"``.

    Examples
    --------
    >>> reason_of("at_repair, 2027-03-01 to 2027-03-20"), reason_of("ward closed")
    ('at_repair', 'by_hand')
    """
    state = excuse.partition(",")[0]
    return state if state in DEVICE.states else "by_hand"
