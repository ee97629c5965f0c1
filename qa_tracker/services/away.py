"""Leave: the days someone is away, and who stands in for them meanwhile."""

from __future__ import annotations

import datetime as dt
import uuid

from qa_tracker.core.errors import Conflict, Invalid, NotFound
from qa_tracker.records import ledger
from qa_tracker.records.models import Leave, Person
from qa_tracker.services.guards import check_may, may, scope

LONGEST_DAYS = 366


def take_leave(
    *,
    person: Person,
    deputy: Person,
    from_on: dt.date,
    until_on: dt.date,
    note: str = "",
    actor: Person,
    at: dt.datetime,
) -> Leave:
    """Say that someone is away, first and last day included, and who stands in. Writes Leave; leaf ``leave.taken``.

    What falls to them on these days falls to the deputy: notices, and the lists of what is theirs. Checks and
    plans stay as they are.

    Refused: another's leave, save to who plans at their site; an end before the beginning, or past already; days
    that overlap another leave of theirs; a deputy who is the person themself, has gone, or may not enter checks
    where the person works.
    """
    _check_may_take(person, actor, at)
    _check_days(person, from_on, until_on, at)
    _check_deputy(person, deputy, at)
    with ledger.command("leave.taken", actor=actor, at=at, reason=note.strip()) as act:
        row = act.insert(
            Leave(person=person, deputy=deputy, from_on=from_on, until_on=until_on, note=note.strip()[:300])
        )
        act.about(row, site=person.duties_site)
        act.tell(
            {
                "person": str(person.uid),
                "deputy": str(deputy.uid),
                "from": from_on.isoformat(),
                "until": until_on.isoformat(),
            }
        )
    return row


def cancel_leave(*, leave: uuid.UUID, actor: Person, at: dt.datetime) -> None:
    """Cancel a leave that has not ended; duties are the person's own again. Writes Leave; leaf ``leave.cancelled``."""
    row = Leave.objects.filter(uid=leave).select_related("person__duties_site", "deputy").first()
    if row is None or not _in_sight(row.person, actor, at):
        raise NotFound("leave.unknown")
    _check_may_take(row.person, actor, at)
    if row.cancelled_at is not None or row.until_on < at.date():
        raise Conflict("leave.over")
    with ledger.command("leave.cancelled", actor=actor, at=at) as act:
        act.change(row, cancelled_at=at)
        act.about(row, site=row.person.duties_site)
        act.tell({"person": str(row.person.uid), "deputy": str(row.deputy.uid)})


def may_take_for(person: Person, *, actor: Person, at: dt.datetime) -> bool:
    """Whether the actor may enter leave of a person: their own, or that of people where they plan."""
    return person.pk == actor.pk or may(actor, "plan.make", person.duties_site_id, at)


def _in_sight(person: Person, actor: Person, at: dt.datetime) -> bool:
    return person.pk == actor.pk or scope(actor, at).holds(person.duties_site_id)


def _check_may_take(person: Person, actor: Person, at: dt.datetime) -> None:
    if person.pk != actor.pk:
        check_may(actor, "plan.make", person.duties_site_id, at)


def _check_days(person: Person, from_on: dt.date, until_on: dt.date, at: dt.datetime) -> None:
    if until_on < from_on:
        raise Invalid("leave.ends_before_start", field="until_on", from_on=from_on)
    if until_on < at.date():
        raise Invalid("leave.past", field="until_on")
    if (until_on - from_on).days >= LONGEST_DAYS:
        raise Invalid("leave.too_long", field="until_on", days=LONGEST_DAYS)
    other = Leave.objects.filter(
        person=person, cancelled_at=None, from_on__lte=until_on, until_on__gte=from_on
    ).first()
    if other is not None:
        raise Conflict("leave.overlaps", field="from_on", from_on=other.from_on, until_on=other.until_on)


def _check_deputy(person: Person, deputy: Person, at: dt.datetime) -> None:
    if deputy.pk == person.pk:
        raise Invalid("leave.own_deputy", field="deputy")
    site_id = person.duties_site_id or deputy.duties_site_id
    if not deputy.is_active or not may(deputy, "check.enter_user", site_id, at):
        raise Invalid("leave.deputy_may_not_enter", field="deputy", deputy=deputy.name)
