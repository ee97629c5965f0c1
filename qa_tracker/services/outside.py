"""A check measured before its window: refused, or accepted by a physicist with a reason and the plan re-anchored."""

from __future__ import annotations

import datetime as dt

from qa_tracker.core import schedule
from qa_tracker.core.errors import Conflict, Invalid
from qa_tracker.records import ledger
from qa_tracker.records.models import Check, CheckPlan, Person
from qa_tracker.services import plans
from qa_tracker.services.guards import may
from qa_tracker.services.recording import local_day


def is_outside(check: Check, measured_at: dt.datetime) -> bool:
    """Whether a moment of measuring lies before the check's window; afterwards a check may always be done."""
    return check.opens_at is not None and measured_at < check.opens_at


def may_accept(check: Check, *, actor: Person, at: dt.datetime) -> bool:
    """Whether the actor may accept this check outside its window."""
    site_id = check.site_id or check.device.site_id or actor.duties_site_id
    return may(actor, "check.accept_out_of_window", site_id, at)


def asks_reason(check: Check, measured_at: dt.datetime, *, actor: Person, at: dt.datetime) -> bool:
    """Whether a page asks why: the moment lies before the window, and the actor may accept it there."""
    return is_outside(check, measured_at) and may_accept(check, actor=actor, at=at)


def check_window(
    check: Check, measured_at: dt.datetime, reason: str, *, actor: Person, at: dt.datetime
) -> None:
    """Refuse what was measured before the window, unless someone who may accept it gives the reason.

    Refused: role (``check.not_yet_open``), no reason (``check.outside_reason_missing``), a plan that can't be
    counted from that day.
    """
    if check.opens_at is None or not is_outside(check, measured_at):
        return
    opens_at = check.opens_at.isoformat()
    if not may_accept(check, actor=actor, at=at):
        raise Conflict("check.not_yet_open", field="measured_at", opens_at=opens_at)
    if not reason:
        raise Invalid("check.outside_reason_missing", field="outside_reason", opens_at=opens_at)
    # What was sent back has opened the next occurrence already.
    if check.plan is not None and check.state != "sent_back":
        due_counted_from(check.plan, local_day(check, measured_at))


def due_counted_from(plan: CheckPlan, done_on: dt.date) -> schedule.Due:
    """When a plan is due next, one interval from the day it was done, on either basis.

    Refused: a rule that names its days, which are not counted from any (``check.days_are_named``), and a day on
    which the plan has a check already (``check.due_day_taken``): accepting would leave it due on the same day.
    """
    rule = schedule.parse_rule(plan.rule)
    if not rule.is_plain:
        raise Conflict("check.days_are_named", field="measured_at")
    window, days = plans.window_of(plan), plans.site_days(plan.device.site)
    due = schedule.next_due(rule, "last_actual", done_on, None, window, days)
    if Check.objects.filter(plan=plan, due_on=due.due_on).exists():
        raise Conflict("check.due_day_taken", field="measured_at", due_on=due.due_on)
    return due


def re_anchor(act: ledger.Act, plan: CheckPlan, done_on: dt.date, reason: str) -> Check:
    """Count a plan from the day its check was done, and open the next occurrence from there; the leaf says so."""
    due = due_counted_from(plan, done_on)
    old = plan.anchor_on
    act.change(plan, anchor_on=done_on)
    following = plans.open_on(act, plan, due)
    told = {
        "reason": reason,
        "anchor": done_on.isoformat(),
        "anchor_before": old.isoformat(),
        "next_due": due.due_on.isoformat(),
    }
    act.tell({**act.new, "outside_window": told})
    return following
