"""The first occurrence after a device was out of use: it buys no untested month, and makes no storm.

What came due meanwhile is excused with the state and the days. A proving check that is or covers a plan's procedure
is its first occurrence; without one, a plan of which something came due meanwhile owes one check on the day of
restoring. A plan of which nothing came due goes on as it was: nothing was bought, and a survey due in half a year is
not owed today because a probe was quarantined for an hour.
"""

from __future__ import annotations

import datetime as dt
from collections import Counter
from dataclasses import dataclass, replace

from qa_tracker.core import schedule
from qa_tracker.core.errors import Invalid
from qa_tracker.core.library import satisfied
from qa_tracker.core.schedule import Due
from qa_tracker.records import ledger
from qa_tracker.records.models import Check, CheckPlan, Device, Reading
from qa_tracker.records.queries.library import adopted_edition, edition_by_id
from qa_tracker.records.queries.out_of_use import OutOfUse
from qa_tracker.services import clocks, plans
from qa_tracker.services.items import measured

UNDONE = ("scheduled", "started")


@dataclass(frozen=True)
class Return:
    """A device's return to use: when it went, the day it is back, and what proved it."""

    out: OutOfUse
    today: dt.date
    days: schedule.SiteDays
    proof: Check | None = None
    proved_on: dt.date | None = None

    @property
    def went_on(self) -> dt.date:
        """The local day on which it went out of use."""
        return schedule.local_day(self.out.since_at, self.days.zone)

    @property
    def excuse(self) -> str:
        """The last state it was out of use by, and the days."""
        state = next((each for each in reversed(self.out.states) if each != "awaiting_acceptance"), "stored")
        return f"{state}, {self.went_on.isoformat()} to {self.today.isoformat()}"


@dataclass(frozen=True)
class First:
    """The first occurrence of a plan: when it is due, and what the following are counted from."""

    due: Due
    anchor_on: dt.date
    slot_on: dt.date | None
    excuses_awaited: bool


def begin_again(act: ledger.Act, device: Device, out: OutOfUse | None, proof: Check | None) -> None:
    """Set every plan in force of a device that is back in use on its first occurrence; told in the leaf."""
    found = CheckPlan.objects.filter(device=device, ended_at=None)
    if out is None or not found.exists():
        return
    days = plans.site_days(device.site)
    today = schedule.local_day(act.at, days.zone)
    back = Return(out, today, days, proof, _measured_on(proof, days.zone))
    told = []
    for plan in found.select_related("device__site", "procedure").order_by("id"):
        first = _begin(act, plan, back)
        if first is not None:
            told.append(first)
    if told:
        act.tell({**act.new, "plans": told}, act.old)


def _measured_on(proof: Check | None, zone: str) -> dt.date | None:
    made = proof.submissions.order_by("-number").first() if proof else None
    return schedule.local_day(made.measured_at, zone) if made else None


def _begin(act: ledger.Act, plan: CheckPlan, back: Return) -> dict[str, object] | None:
    """What was done to one plan; None where nothing was."""
    awaited = Check.objects.filter(plan=plan, state__in=UNDONE).order_by("due_on").first()
    proved = _is_proved(plan, back)
    if awaited is not None and _was_late(awaited, back) and not proved:
        # Late before the device went out: that check is still owed, and is the one occurrence.
        return None
    came_due = awaited is not None and awaited.due_on is not None and awaited.due_on <= back.today
    if not (proved or came_due or _was_excused(plan, back)):
        return None
    try:
        due = _after_proof(plan, back) if proved else _owed_now(plan, back)
    except Invalid:
        return None
    anchor_on = back.proved_on if proved else due.due_on
    slot_on = None if proved else _brought_forward(act, plan, due, back)
    return _set_on(act, plan, awaited, First(due, anchor_on or due.due_on, slot_on, came_due), back)


def _was_late(awaited: Check, back: Return) -> bool:
    return awaited.late_at is not None and awaited.late_at <= back.out.since_at


def _is_proved(plan: CheckPlan, back: Return) -> bool:
    """Whether the proving check is of the plan's procedure, satisfied it, or read all that it asks for."""
    proof = back.proof
    if proof is None or back.proved_on is None:
        return False
    if proof.procedure_id == plan.procedure_id or proof.satisfies.filter(plan=plan).exists():
        return True
    made = proof.submissions.order_by("-number").first()
    edition = adopted_edition(plan.procedure_id, plan.device.site_id)
    if made is None or edition is None:
        return False
    if edition.spec.needs_test_object and made.test_object_id is None:
        return False
    if edition.spec.needs_instrument and made.instrument_id is None:
        return False
    part = measured(plan.device)
    return satisfied(
        edition.spec, edition_by_id(made.edition_id).spec, _times_read(made.pk), device_kind=part.kind,
        array_kind=part.array_kind or None,
    )  # fmt: skip


def _times_read(submission_id: int) -> dict[str, int]:
    """How often each measurand was read at the part where it was read least."""
    at_part: Counter[tuple[str, int | None, int | None]] = Counter(
        Reading.objects.filter(submission_id=submission_id).values_list(
            "measurand__code", "aperture_id", "condition_id"
        )
    )
    found: dict[str, int] = {}
    for (code, _aperture, _condition), count in at_part.items():
        found[code] = min(found.get(code, count), count)
    return found


def _was_excused(plan: CheckPlan, back: Return) -> bool:
    """Whether an occurrence that came due while the device was out of use was excused by date."""
    return Check.objects.filter(
        plan=plan, state="excused", due_on__gte=back.went_on, excuse__in=back.out.states
    ).exists()


def _after_proof(plan: CheckPlan, back: Return) -> Due:
    """One interval after the proof; a rule that names its days gives its next one after it."""
    rule, window = schedule.parse_rule(plan.rule), plans.window_of(plan)
    if not rule.is_plain:
        return schedule.next_due(rule, "calendar", plan.anchor_on, back.proved_on, window, back.days)
    return schedule.next_due(rule, "last_actual", back.proved_on or back.today, None, window, back.days)


def _owed_now(plan: CheckPlan, back: Return) -> Due:
    """Due on the day of restoring, with the plan's own grace; open from that day on."""
    window = plans.window_of(plan)
    due = schedule.due_for(back.today, window, back.days)
    if due.due_on < back.today:
        due = schedule.due_for(back.today, replace(window, roll="none"), back.days)
    opens_at = schedule.starts_at(back.today, back.days.zone)
    return replace(due, opens_on=back.today, opens_at=opens_at)


def _set_on(
    act: ledger.Act, plan: CheckPlan, awaited: Check | None, first: First, back: Return
) -> dict[str, object] | None:
    """Leave the plan with the one occurrence that is owed, and let a plan by the calendar count from it."""
    due_on = first.due.due_on
    others = Check.objects.filter(plan=plan, due_on=due_on).exclude(id=awaited.id if awaited else 0)
    if others.exists():
        return None
    told = {"procedure": plan.procedure.code, "first_due": due_on.isoformat()}
    if awaited is None or (first.excuses_awaited and awaited.due_on != due_on):
        if awaited is not None:
            act.change(awaited, state="excused", excuse=back.excuse)
            clocks.stop(awaited)
            told["excused"] = f"{awaited.uid}"
        told["opened"] = f"{plans.open_on(act, plan, first.due, first.slot_on).uid}"
    elif (awaited.due_on, awaited.slot_on) != (due_on, first.slot_on):
        act.change(awaited, **_columns(first))
        clocks.start_again(awaited, act.at)
        told["moved"] = f"{awaited.uid}"
    # A rule that names its days keeps them.
    if plan.basis == "calendar" and schedule.parse_rule(plan.rule).is_plain:
        act.change(plan, anchor_on=first.anchor_on)
    return dict(told)


def _brought_forward(act: ledger.Act, plan: CheckPlan, due: Due, back: Return) -> dt.date | None:
    """Where the window of the next named day is open already, that occurrence is the one due now.

    Its day is the slot that the following is counted from; otherwise it follows in its turn.
    """
    if plan.basis != "calendar" or schedule.parse_rule(plan.rule).is_plain:
        return None
    following = plans.due_after(plan, due.due_on, days=back.days)
    return following.due_on if following.opens_at <= act.at else None


def _columns(first: First) -> dict[str, object]:
    due = first.due
    return {
        "due_on": due.due_on, "slot_on": first.slot_on, "opens_at": due.opens_at, "due_at": due.due_at,
        "late_at": due.late_at, "overdue_at": due.overdue_at,
    }  # fmt: skip
