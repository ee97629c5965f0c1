"""Faults and what was done about them."""

from __future__ import annotations

import datetime as dt
import uuid
from dataclasses import dataclass

from django.db.models import Q

from qa_tracker.records.models import Fault, FaultAction
from qa_tracker.records.queries.as_of import nouns
from qa_tracker.records.queries.people import names
from qa_tracker.records.queries.scope import Scope, devices_in


@dataclass(frozen=True)
class ActionRow:
    """Something done about a fault."""

    kind: str
    text: str
    job_number: str
    name: str
    at: dt.datetime


@dataclass(frozen=True)
class FaultRow:
    """A departure on a device."""

    id: int
    uid: uuid.UUID
    version: int
    device_id: int
    device_uid: uuid.UUID
    device_label: str
    device_state: str
    site_id: int | None
    site_code: str
    grade: str
    state: str
    seen: str
    place: str
    told: str
    instruction: str
    opened_by: str
    opened_at: dt.datetime
    submission_id: int | None
    proving_check_id: int | None
    look_back: str
    closed_at: dt.datetime | None
    close_remark: str


def _row(fault: Fault, people: dict[int, str]) -> FaultRow:
    device = fault.device
    return FaultRow(
        fault.id, fault.uid, fault.version, device.id, device.uid,
        f"{device.maker} {device.model} {device.serial}", device.state,
        fault.site_id, fault.site.code if fault.site else "", fault.grade, fault.state, fault.seen,
        fault.place, fault.told, fault.instruction, people.get(fault.opened_by_id, ""), fault.opened_at,
        fault.submission_id, fault.proving_check_id, fault.look_back, fault.closed_at, fault.close_remark,
    )  # fmt: skip


def list_faults(scope: Scope, **wanted: object) -> list[FaultRow]:
    """Faults in sight: suspension first, then the oldest."""
    in_sight = Q() if scope.whole_group else Q(site_id__in=scope.site_ids()) | devices_in(scope, "device__")
    found = list(Fault.objects.filter(in_sight, **wanted).select_related("device", "site").distinct())
    people = names({fault.opened_by_id for fault in found})
    rows = [_row(fault, people) for fault in found]
    return sorted(rows, key=lambda row: (row.closed_at is not None, row.grade != "suspension", row.opened_at))


def find_fault(scope: Scope, uid: uuid.UUID) -> FaultRow | None:
    """A fault in sight by uid."""
    found = list_faults(scope, uid=uid)
    return found[0] if found else None


def faults_of_device(device_id: int, as_of: dt.datetime | None = None) -> list[FaultRow]:
    """A device's faults, oldest first."""
    found = nouns(Fault, as_of, device_id=device_id)
    people = names({fault.opened_by_id for fault in found})
    return sorted((_row(fault, people) for fault in found), key=lambda row: row.opened_at)


def actions_of(fault_id: int, until: dt.datetime | None = None) -> list[ActionRow]:
    """What was done about a fault, oldest first."""
    found = FaultAction.objects.filter(fault_id=fault_id).select_related("by").order_by("at", "id")
    if until is not None:
        found = found.filter(at__lte=until)
    return [ActionRow(each.kind, each.text, each.job_number, each.by.name, each.at) for each in found]
