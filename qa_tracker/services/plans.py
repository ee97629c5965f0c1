"""Plans and the occurrences they open."""

from __future__ import annotations

import datetime as dt
import uuid
from dataclasses import dataclass

from qa_tracker.core import schedule
from qa_tracker.core.errors import Conflict, Invalid, NotFound
from qa_tracker.core.workflow import CHECK_AWAITED
from qa_tracker.records import ledger
from qa_tracker.records.models import Check, CheckPlan, Device, Person, Procedure, Site
from qa_tracker.records.queries.library import adopted_edition
from qa_tracker.records.queries.sites import holidays_of
from qa_tracker.services import clocks
from qa_tracker.services.finding import device as find_device
from qa_tracker.services.guards import check_may, may


@dataclass(frozen=True)
class Recurrence:
    """How often, counted from what, and the window around each due day."""

    rule: str
    basis: str
    anchor_on: dt.date
    before_days: int
    grace_days: int
    roll: str = "none"


def make(
    *,
    device: uuid.UUID,
    procedure: str,
    recurrence: Recurrence,
    responsible: Person,
    actor: Person,
    at: dt.datetime,
) -> CheckPlan:
    """Plan a procedure for a device and open its first occurrence. Writes CheckPlan, Check; leaf ``plan.made``.

    Refused: role, a procedure not adopted there, a rule outside the subset, a second plan of the procedure,
    someone responsible who may not enter checks there.
    """
    row = find_device(actor, device, at)
    check_may(actor, "plan.make", row.site_id or actor.duties_site_id, at)
    wanted = Procedure.objects.filter(code=procedure).first()
    if wanted is None or adopted_edition(wanted.id, row.site_id) is None:
        raise Conflict("plan.procedure_not_adopted", field="procedure", procedure=procedure)
    if CheckPlan.objects.filter(device=row, procedure=wanted, ended_at=None).exists():
        raise Conflict("plan.exists", field="procedure")
    site_id = row.site_id or responsible.duties_site_id
    if not may(responsible, "check.enter_user", site_id, at):
        raise Invalid("plan.responsible_may_not_enter", field="responsible")
    with ledger.command("plan.made", actor=actor, at=at) as act:
        plan, _ = add_plan(act, row, wanted, recurrence, responsible)
    return plan


def add_plan(
    act: ledger.Act,
    device: Device,
    procedure: Procedure,
    recurrence: Recurrence,
    responsible: Person,
    days: schedule.SiteDays | None = None,
) -> tuple[CheckPlan, Check]:
    """The rows of a plan and its first occurrence; for commands and for history."""
    schedule.check_basis(schedule.parse_rule(recurrence.rule), recurrence.basis)
    plan = act.insert(
        CheckPlan(
            device=device,
            procedure=procedure,
            rule=recurrence.rule,
            basis=recurrence.basis,
            anchor_on=recurrence.anchor_on,
            before_days=recurrence.before_days,
            grace_days=recurrence.grace_days,
            roll=recurrence.roll,
            responsible=responsible,
        )
    )
    check = open_next(act, plan, after_on=None, days=days)
    act.about(plan, device=device, site=device.site)
    act.tell(
        {
            "procedure": procedure.code,
            "rule": plan.rule,
            "basis": plan.basis,
            "anchor": plan.anchor_on.isoformat(),
            "before_days": plan.before_days,
            "grace_days": plan.grace_days,
            "responsible": str(responsible.uid),
            "first_due": check.due_on.isoformat() if check.due_on else None,
        }
    )
    return plan, check


def end(*, plan: uuid.UUID, reason: str, actor: Person, at: dt.datetime) -> None:
    """End a plan; what it awaits is excused with the reason, also the doing again of what was sent back.

    Leaf ``plan.ended``.
    """
    row = CheckPlan.objects.filter(uid=plan, ended_at=None).select_related("device").first()
    if row is None:
        raise NotFound("plan.unknown")
    device = find_device(actor, row.device.uid, at)
    check_may(actor, "plan.make", device.site_id or actor.duties_site_id, at)
    with ledger.command("plan.ended", actor=actor, at=at, reason=reason) as act:
        _end(act, row, reason)
        act.about(row, device=device, site=device.site)
        act.tell({"ended": True})


def end_with_device(act: ledger.Act, device: Device, reason: str) -> None:
    """End every plan of a device that leaves the group's hands, with the command that disposes of it."""
    for row in CheckPlan.objects.filter(device=device, ended_at=None).order_by("id"):
        _end(act, row, reason)


def _end(act: ledger.Act, row: CheckPlan, reason: str) -> None:
    act.change(row, ended_at=act.at)
    for check in Check.objects.filter(plan=row, state__in=CHECK_AWAITED):
        act.change(check, state="excused", excuse=reason[:300])
        clocks.stop(check)


def hand_over(
    act: ledger.Act, device: Device, site: Site | None, instead: Person | None, actor: Person
) -> None:
    """Give a moved device's plans to someone who may enter checks at its new site, where those responsible may not.

    Left open, it is the one who moves the device. Refused: whoever is named may not enter there either
    (``plan.responsible_may_not_enter``), or nobody is named and the actor may not (``plan.responsible_stays``).
    """
    found = CheckPlan.objects.filter(device=device, ended_at=None, responsible__isnull=False)
    for plan in found.select_related("responsible").order_by("id"):
        if plan.responsible is None or _may_enter_at(plan.responsible, site, act.at):
            continue
        if not _may_enter_at(instead or actor, site, act.at):
            if instead is not None:
                raise Invalid("plan.responsible_may_not_enter", field="responsible")
            raise Invalid("plan.responsible_stays", field="responsible", name=plan.responsible.name)
        act.change(plan, responsible=instead or actor)


def _may_enter_at(person: Person, site: Site | None, at: dt.datetime) -> bool:
    return may(person, "check.enter_user", site.id if site else person.duties_site_id, at)


def site_days(site: Site | None) -> schedule.SiteDays:
    """When a site works; a pooled device goes by UTC with the usual weekend."""
    if site is None:
        return schedule.SiteDays("UTC")
    weekend = frozenset(int(day) - 1 for day in site.weekend.split(",") if day)
    return schedule.SiteDays(site.time_zone, weekend, holidays_of(site.id))


def due_after(
    plan: CheckPlan,
    after_on: dt.date | None,
    done_on: dt.date | None = None,
    days: schedule.SiteDays | None = None,
) -> schedule.Due:
    """When a plan is due next, after an occurrence and (last-actual basis) the day it was done."""
    anchor = done_on if plan.basis == "last_actual" and done_on is not None else plan.anchor_on
    if plan.basis == "last_actual" and done_on is None and after_on is None:
        return schedule.due_for(plan.anchor_on, window_of(plan), days or site_days(plan.device.site))
    return schedule.next_due(
        schedule.parse_rule(plan.rule),
        plan.basis,
        anchor,
        after_on if plan.basis == "calendar" else None,
        window_of(plan),
        days or site_days(plan.device.site),
    )


def window_of(plan: CheckPlan) -> schedule.Window:
    """A plan's window as a pure value."""
    return schedule.Window(plan.before_days, plan.grace_days, plan.roll)


def open_next(
    act: ledger.Act,
    plan: CheckPlan,
    *,
    after_on: dt.date | None,
    done_on: dt.date | None = None,
    days: schedule.SiteDays | None = None,
) -> Check:
    """Insert the row of a plan's next occurrence, after the one before or the day that was done."""
    return open_on(act, plan, due_after(plan, after_on, done_on, days))


def open_on(act: ledger.Act, plan: CheckPlan, due: schedule.Due, slot_on: dt.date | None = None) -> Check:
    """Insert the row of an occurrence; its clock is set, in a history at the end."""
    check = act.insert(
        Check(
            plan=plan,
            device=plan.device,
            procedure=plan.procedure,
            site=plan.device.site,
            state="scheduled",
            due_on=due.due_on,
            slot_on=slot_on,
            opens_at=due.opens_at,
            due_at=due.due_at,
            late_at=due.late_at,
            overdue_at=due.overdue_at,
        )
    )
    if act.origin == "live":
        clocks.start(check)
    return check
