"""Faults by grade and age, and how long a device may have been at fault before anyone saw it."""

from __future__ import annotations

import datetime as dt
from collections.abc import Sequence
from dataclasses import dataclass

from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy, ngettext

from qa_tracker.records.queries.checks import CheckRow
from qa_tracker.records.queries.faults import FaultRow

ACTION_WORDS = {
    "told": gettext_lazy("told someone"),
    "repair": gettext_lazy("repair"),
    "sent out": gettext_lazy("sent out"),
    "returned": gettext_lazy("returned"),
    "loan": gettext_lazy("loan in its place"),
    "electrical safety": gettext_lazy("electrical safety"),
    "cleaned": gettext_lazy("cleaned"),
    "note": gettext_lazy("note"),
}


@dataclass(frozen=True)
class FaultLine:
    """A fault with its age in words."""

    fault: FaultRow
    age: str


def age_words(fault: FaultRow, at: dt.datetime) -> str:
    """How long it has been open, or how long it took."""
    days = ((fault.closed_at or at) - fault.opened_at).days
    told = {"days": days}
    if fault.closed_at:
        return ngettext("closed after %(days)d day", "closed after %(days)d days", days) % told
    if days == 0:
        return _("opened today")
    return ngettext("open for %(days)d day", "open for %(days)d days", days) % told


def fault_lines(faults: Sequence[FaultRow], at: dt.datetime) -> tuple[FaultLine, ...]:
    """Faults with their ages, in the order they come."""
    return tuple(FaultLine(each, age_words(each, at)) for each in faults)


@dataclass(frozen=True)
class Exposure:
    """The last check that conformed before a fault was seen, and the days between."""

    last: CheckRow | None
    days: int


def exposure(fault: FaultRow, checks: Sequence[CheckRow]) -> Exposure:
    """How long patients may have been scanned with the fault; without a conforming check nothing is known."""
    before = [
        each
        for each in checks
        if each.verdict == "conforming" and each.submitted_at and each.submitted_at <= fault.opened_at
    ]
    last = max(before, key=lambda each: each.submitted_at or fault.opened_at, default=None)
    days = (fault.opened_at - last.submitted_at).days if last and last.submitted_at else 0
    return Exposure(last, days)
