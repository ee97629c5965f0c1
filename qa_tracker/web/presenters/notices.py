"""Notices and holds of a check as its page shows them: who was told what, and who knows until when."""

from __future__ import annotations

import datetime as dt
from collections.abc import Iterable
from dataclasses import dataclass
from typing import Any

from django.utils.translation import gettext as _

from qa_tracker.core.errors import DomainError, Forbidden
from qa_tracker.core.workflow import CHECK_AWAITED
from qa_tracker.records.queries import holds as rows
from qa_tracker.records.queries.checks import CheckRow
from qa_tracker.records.queries.holds import HoldRow
from qa_tracker.records.queries.notices import NoticeRow
from qa_tracker.services import guards, holds, wording


@dataclass(frozen=True)
class Told:
    """One person told of one level: ``here`` in the program, and by the mail that carries the notice."""

    row: NoticeRow
    here: bool
    mail: NoticeRow | None


def who_was_told(notices: Iterable[NoticeRow]) -> list[Told]:
    """Notices of a check by person and level, in the order in which they were owed."""
    found: dict[tuple[str, str, dt.datetime], dict[str, NoticeRow]] = {}
    for each in notices:
        found.setdefault((each.person, each.level, each.at), {})[each.channel] = each
    return [
        Told(next(iter(channels.values())), "in_app" in channels, channels.get("mail"))
        for channels in found.values()
    ]


@dataclass(frozen=True)
class ShownHold:
    """One hold, and whether the person may end it now."""

    row: HoldRow
    in_force: bool
    may_end: bool


@dataclass(frozen=True)
class Holding:
    """What is held of a check, and what the person may do about it; ``refusal`` says why nothing may be held."""

    holds: tuple[ShownHold, ...]
    may_acknowledge: bool
    may_snooze: bool
    refusal: str
    earliest_on: dt.date
    latest_on: dt.date

    @property
    def asks(self) -> bool:
        """Whether there is anything to ask the person."""
        return self.may_acknowledge or self.may_snooze


def holding(actor: Any, check: CheckRow, at: dt.datetime, today: dt.date) -> Holding:
    """The holds of a check as this person sees them."""
    acknowledging, snoozing = _asked(actor, check, at)
    leads = guards.may(actor, "check.acknowledge", check.site_id or actor.duties_site_id, at)
    shown = tuple(
        ShownHold(each, each.in_force(at), each.in_force(at) and (leads or each.person_id == actor.pk))
        for each in rows.holds_of_check(check.id)
    )
    return Holding(
        shown,
        acknowledging is None,
        snoozing is None,
        _why_not(acknowledging, snoozing),
        today + dt.timedelta(days=1),
        today + dt.timedelta(days=holds.LONGEST_DAYS),
    )


def _asked(actor: Any, check: CheckRow, at: dt.datetime) -> tuple[DomainError | None, DomainError | None]:
    """Why the person may not acknowledge and not snooze; a check nobody awaits is not asked about."""
    if check.state not in CHECK_AWAITED:
        gone = Forbidden("hold.not_awaited")
        return gone, gone
    given = {"check": check.uid, "actor": actor, "at": at}
    return holds.may_acknowledge(**given), holds.may_snooze(**given)


def _why_not(*errors: DomainError | None) -> str:
    """The sentence where the check itself is never held; none where it is only a matter of the person's role."""
    if None in errors:
        return ""
    found = [error for error in errors if error is not None and not isinstance(error, Forbidden)]
    return wording.refusal(found[0]) if found else ""


def told_of_other(notice: NoticeRow) -> str:
    """What a notice that is about no check says."""
    if notice.level == "mail_failed":
        return _(
            "A mail to %(person)s was given up. Read the server's answer, mend the cause and send it again."
        ) % {"person": notice.addressee or _("someone")}
    return wording.level_of_notice_word(notice.level)
