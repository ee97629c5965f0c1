"""Holds: "I know, until Friday". Someone acknowledges an awaited check, or snoozes their own notices of it.

A hold has a reason and an end, and never changes how the check stands. What it keeps back is owed by the sweep
when it ends. Suspension and electrical notices are never held.
"""

from __future__ import annotations

import datetime as dt
import uuid
from collections.abc import Callable

from django.db.models import Q

from qa_tracker.core.errors import Conflict, DomainError, Invalid, NotFound
from qa_tracker.core.schedule import local_day, starts_at
from qa_tracker.core.workflow import CHECK_AWAITED
from qa_tracker.records import ledger
from qa_tracker.records.models import Check, Notice, NoticeHold, Person, TeamMember
from qa_tracker.records.queries.holds import HoldRow, holds_of
from qa_tracker.records.queries.library import adopted_edition, electrical_procedures
from qa_tracker.services import clocks, finding
from qa_tracker.services.guards import check_may, required

__all__ = [
    "LONGEST_DAYS",
    "HoldRow",
    "acknowledge",
    "end_hold",
    "holds_of",
    "may_acknowledge",
    "may_snooze",
    "snooze",
]

LONGEST_DAYS = 31
"""Common practice, no source: longer than the grace of a monthly check, shorter than two of them."""


def acknowledge(
    *, check: uuid.UUID, reason: str, until_on: dt.date | None, actor: Person, at: dt.datetime
) -> NoticeHold:
    """Say that it is known: until that day begins, no further people are told. Leaf ``notices.acknowledged``.

    Writes NoticeHold; one of the actor's still in force is ended by it. Refused: who is neither responsible, lead
    nor physicist, a check that is no longer awaited, electrical or suspended, no reason, an end that is none.
    """
    row = finding.check(actor, check, at)
    _check_may_acknowledge(row, actor, at)
    return _hold(row, "acknowledged", reason, until_on, actor, at)


def snooze(
    *, check: uuid.UUID, reason: str, until_on: dt.date | None, actor: Person, at: dt.datetime
) -> NoticeHold:
    """Let the actor's own notices of a check wait until a day begins. Leaf ``notices.snoozed``.

    Writes and refuses as :func:`acknowledge`, save that whoever may enter the check may snooze it.
    """
    row = finding.check(actor, check, at)
    _check_may_snooze(row, actor, at)
    return _hold(row, "snoozed", reason, until_on, actor, at)


def end_hold(*, hold: uuid.UUID, reason: str, actor: Person, at: dt.datetime) -> None:
    """End a hold before its time; the next sweep owes what it kept back. Leaf ``notices.hold_ended``.

    Refused: another's hold, save to leads and physicists, and one that has ended already.
    """
    held = NoticeHold.objects.filter(uid=hold).select_related("check_of").first()
    if held is None:
        raise NotFound("hold.unknown")
    try:
        row = finding.check(actor, held.check_of.uid, at)
    except NotFound as error:
        raise NotFound("hold.unknown") from error
    if held.person_id != actor.pk:
        check_may(actor, "check.acknowledge", _site_id(row, actor), at)
    if held.ended_at is not None or held.until_at <= at:
        raise Conflict("hold.ended_already")
    reason = required(reason, "hold.reason_missing", "reason")
    with ledger.command("notices.hold_ended", actor=actor, at=at, reason=reason) as act:
        act.change(held, ended_at=at)
        clocks.look_at(row, at)
        act.about(row, device=row.device, site=row.site)
        act.tell({"hold": str(held.uid), "held": held.kind})


def may_acknowledge(check: uuid.UUID, *, actor: Person, at: dt.datetime) -> DomainError | None:
    """Why the actor may not acknowledge a check now; ``None`` where they may."""
    return _asked(check, _check_may_acknowledge, actor, at)


def may_snooze(check: uuid.UUID, *, actor: Person, at: dt.datetime) -> DomainError | None:
    """Why the actor may not snooze their notices of a check now; ``None`` where they may."""
    return _asked(check, _check_may_snooze, actor, at)


Asks = Callable[[Check, Person, dt.datetime], None]


def _asked(check: uuid.UUID, asks: Asks, actor: Person, at: dt.datetime) -> DomainError | None:
    try:
        row = finding.check(actor, check, at)
        asks(row, actor, at)
        _check_holdable(row)
    except DomainError as error:
        return error
    return None


def _check_may_acknowledge(row: Check, actor: Person, at: dt.datetime) -> None:
    if not _answers_for(row, actor, at):
        check_may(actor, "check.acknowledge", _site_id(row, actor), at)


def _check_may_snooze(row: Check, actor: Person, at: dt.datetime) -> None:
    edition = adopted_edition(row.procedure_id, row.site_id)
    by_user = edition is not None and "user" in edition.spec.performed_by
    check_may(actor, "check.enter_user" if by_user else "check.enter", _site_id(row, actor), at)


def _answers_for(row: Check, actor: Person, at: dt.datetime) -> bool:
    """Whether the plan names the actor, or their team, or they were told in the place of someone it names."""
    plan = row.plan
    if plan is None:
        return False
    today = local_day(at, _zone(row))
    in_team = TeamMember.objects.filter(
        Q(until_on=None) | Q(until_on__gte=today), team=plan.team, person=actor, from_on__lte=today
    )
    told = Notice.objects.filter(check_of=row, person=actor, recipient="responsible")
    return plan.responsible_id == actor.pk or in_team.exists() or told.exists()


def _check_holdable(row: Check) -> None:
    """Refuse what is never held: what is no longer awaited, a suspension verdict, electrical safety."""
    if row.state not in CHECK_AWAITED:
        raise Conflict("hold.not_awaited")
    if row.verdict == "suspension" or Notice.objects.filter(check_of=row, level="suspension").exists():
        raise Conflict("hold.suspension")
    if row.procedure_id in electrical_procedures():
        raise Conflict("hold.electrical")


def _end_of(row: Check, until_on: dt.date | None, at: dt.datetime) -> dt.datetime:
    """When a hold ends: as that day begins at the check's site."""
    zone = _zone(row)
    today = local_day(at, zone)
    if until_on is None:
        raise Invalid("hold.end_missing", field="until_on")
    if until_on <= today:
        raise Invalid("hold.end_past", field="until_on")
    latest_on = today + dt.timedelta(days=LONGEST_DAYS)
    if until_on > latest_on:
        raise Invalid("hold.end_too_far", field="until_on", days=LONGEST_DAYS, latest_on=latest_on)
    return starts_at(until_on, zone)


def _hold(
    row: Check, kind: str, reason: str, until_on: dt.date | None, actor: Person, at: dt.datetime
) -> NoticeHold:
    _check_holdable(row)
    reason, until_at = required(reason, "hold.reason_missing", "reason"), _end_of(row, until_on, at)
    before = NoticeHold.objects.filter(check_of=row, person=actor, kind=kind, ended_at=None, until_at__gt=at)
    with ledger.command(f"notices.{kind}", actor=actor, at=at, reason=reason) as act:
        for each in before:
            act.change(each, ended_at=at)
        hold = act.insert(
            NoticeHold(
                check_of=row, person=actor, kind=kind, reason=reason[:300], held_at=at, until_at=until_at
            )
        )
        clocks.look_at(row, at)
        act.about(row, device=row.device, site=row.site)
        act.tell({"until_at": until_at.isoformat(), "hold": str(hold.uid)})
    return hold


def _site_id(row: Check, actor: Person) -> int | None:
    return row.site_id or row.device.site_id or actor.duties_site_id


def _zone(row: Check) -> str:
    return row.site.time_zone if row.site else "UTC"
