"""Moving a due day inside its window: one action with a reason; the rule goes on counting from its own day."""

from __future__ import annotations

import datetime as dt
import uuid
from dataclasses import dataclass

from qa_tracker.core import schedule
from qa_tracker.core.errors import Conflict, DomainError, Forbidden, Invalid
from qa_tracker.records import ledger
from qa_tracker.records.models import Check, Person
from qa_tracker.services import clocks, finding, plans
from qa_tracker.services.guards import check_may, required

MOVABLE = ("scheduled", "started")
MOMENT = dt.timedelta(microseconds=1)


@dataclass(frozen=True)
class Room:
    """The days a due day may be moved to, both included, and the day the rule gave."""

    first_on: dt.date
    last_on: dt.date
    slot_on: dt.date


def move(*, check: uuid.UUID, to_on: dt.date, reason: str, actor: Person, at: dt.datetime) -> None:
    """Move the due day of an awaited check inside its window. Writes Check; leaf ``check.due_moved``.

    The window itself stays: moving buys no grace. Refused: role, no reason, a check without a plan or no longer
    awaited, a day outside the window, one that has passed, one the plan has already, or the day it is due on.
    """
    row = finding.check(actor, check, at)
    check_may(actor, "check.move_due", row.site_id or actor.duties_site_id, at)
    reason = required(reason, "due_day.reason_missing", "reason")
    found = room_of(row)
    check_day(row, found, to_on, at)
    with ledger.command("check.due_moved", actor=actor, at=at, reason=reason) as act:
        before = row.due_on
        move_to(act, row, found, to_on)
        act.about(row, device=row.device, site=row.site)
        act.tell({"due": to_on.isoformat(), "slot": found.slot_on.isoformat()}, {"due": f"{before}"})


def room(*, check: uuid.UUID, actor: Person, at: dt.datetime) -> Room:
    """The days a check's due day may be moved to. Reads only.

    Refused: role, a check without a plan or no longer awaited, a window that is over.
    """
    row = finding.check(actor, check, at)
    check_may(actor, "check.move_due", row.site_id or actor.duties_site_id, at)
    found = room_of(row)
    if found.last_on < schedule.local_day(at, zone_of(row)):
        raise Conflict("due_day.window_over", last_on=found.last_on)
    return found


def may_move(check: uuid.UUID, *, actor: Person, at: dt.datetime) -> DomainError | None:
    """The refusal the actor would meet whatever the day, or None."""
    try:
        room(check=check, actor=actor, at=at)
    except (Forbidden, Conflict) as refusal:
        return refusal
    return None


def room_of(check: Check) -> Room:
    """Where a check's due day may go; ``Conflict`` for one that can't be moved at all."""
    if check.plan_id is None or check.opens_at is None or check.overdue_at is None or check.due_on is None:
        raise Conflict("due_day.unplanned")
    if check.state not in MOVABLE:
        raise Conflict("due_day.not_awaited")
    zone = zone_of(check)
    first_on = schedule.local_day(check.opens_at, zone)
    last_on = schedule.local_day(check.overdue_at - MOMENT, zone)
    return Room(first_on, last_on, check.slot_on or check.due_on)


def zone_of(check: Check) -> str:
    """The zone in which a check's days are days."""
    return check.site.time_zone if check.site else "UTC"


def check_day(check: Check, found: Room, to_on: dt.date, at: dt.datetime) -> None:
    """Refuse a day the check can't be moved to."""
    if not found.first_on <= to_on <= found.last_on:
        raise Invalid("due_day.outside", field="to_on", first_on=found.first_on, last_on=found.last_on)
    if to_on < schedule.local_day(at, zone_of(check)):
        raise Invalid("due_day.past", field="to_on")
    if to_on == check.due_on:
        raise Invalid("due_day.same", field="to_on", due_on=to_on)
    if Check.objects.filter(plan_id=check.plan_id, due_on=to_on).exclude(id=check.id).exists():
        raise Conflict("due_day.taken", field="to_on", due_on=to_on)
    following_on = following_of(check, found)
    if following_on is not None and to_on >= following_on:
        raise Conflict("due_day.following", field="to_on", due_on=following_on)


def following_of(check: Check, found: Room) -> dt.date | None:
    """The due day of the occurrence after this one, where the calendar gives it already."""
    plan = check.plan
    if plan is None or plan.basis != "calendar" or plan.ended_at is not None:
        return None
    return plans.due_after(plan, found.slot_on).due_on


def move_to(act: ledger.Act, check: Check, found: Room, to_on: dt.date) -> None:
    """The columns of a moved due day, with its clock set anew; notices that were told are not told again."""
    due_at, late_at = schedule.local_day_bounds(to_on, zone_of(check))
    slot_on = None if to_on == found.slot_on else found.slot_on
    act.change(check, due_on=to_on, slot_on=slot_on, due_at=due_at, late_at=late_at)
    clocks.start_again(check, act.at)
