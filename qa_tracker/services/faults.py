"""Faults: opened by hand, by a quarantine or by a suspension verdict; acted on; closed by proof."""

from __future__ import annotations

import datetime as dt
import uuid
from collections.abc import Iterable

from qa_tracker.core.errors import Conflict, Invalid
from qa_tracker.core.workflow import FAULT, target
from qa_tracker.records import ledger
from qa_tracker.records.models import Check, Device, Fault, FaultAction, Person, Submission
from qa_tracker.services.finding import device as find_device
from qa_tracker.services.finding import fault as find_fault
from qa_tracker.services.guards import check_may, required

GRADES = ("remedial", "suspension")
ACTION_KINDS = ("told", "repair", "sent out", "returned", "loan", "electrical safety", "cleaned", "note")


def add_fault(
    act: ledger.Act,
    device: Device,
    *,
    grade: str,
    seen: str,
    by: Person,
    place: str = "",
    submission: Submission | None = None,
) -> Fault:
    """The rows of a new fault; for commands and for history."""
    if grade not in GRADES:
        raise Invalid("fault.grade_unknown", field="grade", grade=grade)
    site = device.site
    instruction = ""
    if site is not None:
        instruction = site.suspension_instruction if grade == "suspension" else site.remedial_instruction
    return act.insert(
        Fault(
            device=device,
            site=site,
            grade=grade,
            state="open",
            seen=seen,
            place=place,
            instruction=instruction,
            opened_by=by,
            opened_at=act.at,
            submission=submission,
        )
    )


def open_fault(
    *, device: uuid.UUID, grade: str, seen: str, place: str, actor: Person, at: dt.datetime
) -> Fault:
    """Open a fault by hand. Writes Fault; leaf ``fault.opened``. Refused: role, nothing said, unknown grade."""
    row = find_device(actor, device, at)
    check_may(actor, "fault.open", row.site_id or actor.duties_site_id, at)
    seen = required(seen, "fault.seen_missing", "seen")
    with ledger.command("fault.opened", actor=actor, at=at, reason=seen) as act:
        fault = add_fault(act, row, grade=grade, seen=seen, place=place, by=actor)
        act.about(fault, device=row, site=row.site)
        act.tell({"grade": grade, "seen": seen, "place": place})
    return fault


def act_on(
    *,
    fault: uuid.UUID,
    kind: str,
    text: str,
    job_number: str,
    actor: Person,
    at: dt.datetime,
) -> FaultAction:
    """Record an action. Writes FaultAction; leaf ``fault.acted_on``. Refused: role, closed fault, nothing said."""
    row = find_fault(actor, fault, at)
    check_may(actor, "fault.act", row.site_id or actor.duties_site_id, at)
    target(FAULT, row.state, "act")
    if kind not in ACTION_KINDS:
        raise Invalid("fault.action_unknown", field="kind", kind=kind, known=", ".join(ACTION_KINDS))
    text = required(text, "fault.action_text_missing", "text")
    with ledger.command("fault.acted_on", actor=actor, at=at) as act:
        return add_action(act, row, kind, text, job_number, actor)


def add_action(
    act: ledger.Act, fault: Fault, kind: str, text: str, job_number: str, by: Person
) -> FaultAction:
    """The rows of an action; for commands and for history."""
    action = act.insert(
        FaultAction(fault=fault, kind=kind, text=text, job_number=job_number, by=by, at=act.at)
    )
    act.about(fault, device=fault.device, site=fault.device.site)
    act.tell({"kind": kind, "text": text, "job_number": job_number})
    return action


def look_back(*, fault: uuid.UUID, statement: str, actor: Person, at: dt.datetime) -> None:
    """Keep the physicist's statement whether patients need review; leaf ``fault.looked_back``."""
    row = find_fault(actor, fault, at)
    check_may(actor, "fault.close", row.site_id, at)
    statement = required(statement, "fault.look_back_missing", "look_back")
    with ledger.command("fault.looked_back", actor=actor, at=at) as act:
        act.change(row, look_back=statement)
        act.about(row, device=row.device, site=row.device.site)
        act.tell({"look_back": statement})


def dismiss(*, fault: uuid.UUID, remark: str, actor: Person, at: dt.datetime) -> None:
    """Close a remedial fault that proved to be none; leaf ``fault.dismissed``.

    Refused: role, a suspension fault (its device is restored to use instead), no remark.
    """
    row = find_fault(actor, fault, at)
    check_may(actor, "fault.close", row.site_id, at)
    if row.grade == "suspension":
        raise Conflict("fault.close_by_restoring", field="remark")
    remark = required(remark, "fault.remark_missing", "remark")
    with ledger.command("fault.dismissed", actor=actor, at=at, reason=remark) as act:
        act.change(row, state=target(FAULT, row.state, "dismiss"), closed_at=at, close_remark=remark)
        act.about(row, device=row.device, site=row.device.site)
        act.tell({"state": "closed", "remark": remark})


def close_by_disposal(act: ledger.Act, found: Iterable[Fault], reason: str) -> None:
    """Close the faults of a device that is disposed of: no proof will come. Part of that command."""
    for fault in found:
        state = fault.state
        if state == "awaiting_proof":
            state = target(FAULT, state, "disprove")
        closed = target(FAULT, state, "dismiss")
        act.change(fault, state=closed, closed_at=act.at, close_remark=reason)


def close_by_proof(act: ledger.Act, fault: Fault, proof: Check | None, remark: str) -> None:
    """Close a fault because its device was restored to use; part of that command."""
    verb = "close" if proof is not None else "dismiss"
    state = fault.state
    if proof is not None and state == "open":
        state = target(FAULT, state, "await_proof")
    act.change(
        fault,
        state=target(FAULT, state, verb),
        proving_check=proof,
        closed_at=act.at,
        close_remark=remark,
    )
