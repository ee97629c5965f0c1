"""How devices stand, for lists: the last verdict, the next due day, and those no plan covers."""

from __future__ import annotations

import datetime as dt
import uuid
from collections.abc import Collection
from dataclasses import dataclass

from django.db.models import Min, OuterRef, Subquery

from qa_tracker.core.workflow import CHECK_AWAITED
from qa_tracker.records.models import Check, CheckPlan, Device
from qa_tracker.records.queries.scope import Scope, devices_in

NEVER_CHECKED = ("disposed", "lost", "ordered")


@dataclass(frozen=True)
class StandingRow:
    """The newest submitted check of a device and its next due day, where there are any."""

    check_uid: uuid.UUID | None = None
    verdict: str = ""
    level: str = ""
    submitted_at: dt.datetime | None = None
    due_on: dt.date | None = None


def standings_of(device_ids: Collection[int], until: dt.datetime | None = None) -> dict[int, StandingRow]:
    """How each of these devices stands, with as many queries for many as for one."""
    done = Check.objects.filter(device=OuterRef("pk")).exclude(submitted_at=None)
    if until is not None:
        done = done.filter(submitted_at__lte=until)
    newest = Device.objects.filter(pk__in=device_ids).values_list(
        "pk", Subquery(done.order_by("-submitted_at", "-id").values("id")[:1])
    )
    keys = {check: device for device, check in newest if check is not None}
    found = {check.device_id: check for check in Check.objects.filter(pk__in=keys)}
    due = {} if until is not None else _next_due(device_ids)
    return {pk: _row(found.get(pk), due.get(pk)) for pk in device_ids}


def _next_due(device_ids: Collection[int]) -> dict[int, dt.date]:
    awaited = Check.objects.filter(device_id__in=device_ids, state__in=CHECK_AWAITED, plan__ended_at=None)
    return dict(awaited.exclude(due_on=None).values_list("device_id").annotate(Min("due_on")))


def _row(check: Check | None, due_on: dt.date | None) -> StandingRow:
    if check is None:
        return StandingRow(due_on=due_on)
    return StandingRow(check.uid, check.verdict, check.verdict_level, check.submitted_at, due_on)


@dataclass(frozen=True)
class UnplannedRow:
    """A device no plan covers."""

    uid: uuid.UUID
    label: str
    site_code: str


def unplanned_devices(scope: Scope, most: int | None = None) -> list[UnplannedRow]:
    """Devices in sight that are at hand and that no plan in force covers."""
    planned = CheckPlan.objects.filter(ended_at=None).values("device_id")
    found = Device.objects.filter(devices_in(scope)).exclude(pk__in=planned).exclude(state__in=NEVER_CHECKED)
    return [
        UnplannedRow(
            each.uid, f"{each.maker} {each.model} {each.serial}", each.site.code if each.site else ""
        )
        for each in found.select_related("site").distinct().order_by("id")[:most]
    ]
