"""What the tests of mail stand on: notices owed by hand, and moments of one week in summer."""

from __future__ import annotations

import datetime as dt

from django.utils.timezone import now

from qa_tracker.core.ladder import Owed
from qa_tracker.records import ledger
from qa_tracker.services import digests, owed, site_hours
from tests import builders

WEDNESDAY = dt.date(2026, 6, 3)


def moment(hour: int, day_on: dt.date = WEDNESDAY, minute: int = 0) -> dt.datetime:
    """A moment of London's clock."""
    return dt.datetime.combine(day_on, dt.time(hour, minute), builders.LONDON)


def owe(check, person, level, recipient="responsible", skipped=()):
    """Owe one person the notices of a level."""
    with ledger.command("notices.owed", actor=None, at=now()) as act:
        owed.owe(act, check.pk, check.uid, Owed(person.pk, recipient, level, tuple(skipped)))
        act.about(check.site, site=check.site)


def make(at: dt.datetime) -> int:
    """Make the mails of a moment."""
    return digests.make_digests(at=now(), as_if=at)


def quiet(ward, from_hour=20, until_hour=7):
    """Quiet hours for the ward's site."""
    hours = {"digest_hour": 7, "quiet_from_hour": from_hour, "quiet_until_hour": until_hour}
    site_hours.set_hours(site=ward.site, **hours, actor=ward.admin, at=now())


def round_the_clock(ward):
    """The ward's room works at any hour."""
    site_hours.set_round_the_clock(room=ward.room, round_the_clock=True, actor=ward.admin, at=now())
