"""The bulk door for what happens to devices and faults between checks."""

from __future__ import annotations

import datetime as dt
from collections.abc import Sequence

from qa_tracker.core.workflow import CHECK_AWAITED
from qa_tracker.records.models import Baseline, Check, CheckPlan, Fault, Person, Placement
from qa_tracker.services import devices, faults, software, states
from qa_tracker.services.devices import Place
from qa_tracker.services.history import Kept, Past


def move_state(
    past: Past,
    kept: Kept,
    verb: str,
    note: str,
    *,
    by: Person,
    at: dt.datetime,
    kind: str = "device.moved_on",
) -> None:
    """Move a device by a verb of its table; disposing of it closes its faults."""
    act = past.act(kind, by, at, note)
    if verb == "dispose":
        faults.close_by_disposal(act, past.open_faults(kept.device), note)
    states.set_state(act, kept.device, verb, note)


def restore(
    past: Past, kept: Kept, *, proof: Check | None, remark: str, by: Person, role: str, at: dt.datetime
) -> None:
    """Restore a device to use, signed; its open faults are closed by the proof."""
    act = past.act("device.restored", by, at, remark)
    states.restore_device(act, kept.device, by, role, remark, proof, past.open_faults(kept.device))


def act_on_fault(
    past: Past, fault: Fault, kind: str, text: str, *, by: Person, at: dt.datetime, job_number: str = ""
) -> None:
    """Record something done about a fault."""
    faults.add_action(past.act("fault.acted_on", by, at), fault, kind, text, job_number, by)


def open_fault(
    past: Past, kept: Kept, *, grade: str, seen: str, place: str, by: Person, at: dt.datetime
) -> Fault:
    """Open a fault by hand."""
    act = past.act("fault.opened", by, at, seen)
    fault = faults.add_fault(act, kept.device, grade=grade, seen=seen, place=place, by=by)
    act.about(fault, device=kept.device, site=kept.device.site)
    act.tell({"grade": grade, "seen": seen, "place": place})
    return fault


def look_back(past: Past, fault: Fault, statement: str, *, by: Person, at: dt.datetime) -> None:
    """Keep the statement whether patients need review."""
    act = past.act("fault.looked_back", by, at)
    act.change(fault, look_back=statement)
    act.about(fault, device=fault.device, site=fault.device.site)
    act.tell({"look_back": statement})


def place(past: Past, kept: Kept, where: Place, reason: str, *, by: Person, at: dt.datetime) -> Placement:
    """End a device's placement and begin the next."""
    act = past.act("device.placed", by, at, reason)
    kept.placement = devices.place_device(act, kept.device, kept.placement, where, reason)
    return kept.placement


def end_plan(
    past: Past, plan: CheckPlan, awaited: Check, reason: str, *, by: Person, at: dt.datetime
) -> None:
    """End a plan; its awaited occurrence is excused with the reason."""
    act = past.act("plan.ended", by, at, reason)
    act.change(plan, ended_at=at)
    if awaited.state in CHECK_AWAITED:
        act.change(awaited, state="excused", excuse=reason)
    act.about(plan, device=plan.device, site=plan.device.site)
    act.tell({"ended": True})


def record_software(
    past: Past, kept: Kept, version: str, *, by: Person, at: dt.datetime, fleet: Sequence[Kept] = ()
) -> list[Baseline]:
    """Record a software version of a scanner; the baselines of the fleet that were measured on it are under review."""
    if kept.scanner_facts is None:
        return []
    concerned = [each for each in (kept, *fleet) if kept.device in (each.device, each.device.scanner)]
    standing = [
        row
        for each in concerned
        for epochs in each.baselines.values()
        for row in epochs
        if row.ended_at is None
    ]
    act = past.act("device.software_recorded", by, at)
    marked = software.record(act, kept.scanner_facts, version, "", at.date(), standing)
    for each in concerned:
        each.items.clear()
    return marked
