"""The awaited check of every plan in force, with what its due days are counted from; read as columns."""

from __future__ import annotations

import datetime as dt
import uuid
from typing import NamedTuple

from django.db.models import Q

from qa_tracker.records.models import Check, Pool
from qa_tracker.records.queries.scope import Scope


class PlannedRow(NamedTuple):
    """An awaited check with its plan, device and procedure."""

    check_id: int
    check_uid: uuid.UUID
    due_on: dt.date
    slot_on: dt.date | None
    opens_at: dt.datetime
    overdue_at: dt.datetime
    rule: str
    basis: str
    anchor_on: dt.date
    before_days: int
    grace_days: int
    roll: str
    responsible_id: int | None
    team_id: int | None
    procedure_id: int
    procedure: str
    site_id: int | None
    device_kind: str
    maker: str
    model: str
    serial: str


_COLUMNS = (
    "id", "uid", "due_on", "slot_on", "opens_at", "overdue_at", "plan__rule", "plan__basis", "plan__anchor_on",
    "plan__before_days", "plan__grace_days", "plan__roll", "plan__responsible_id", "plan__team_id", "procedure_id",
    "procedure__title", "site_id", "device__kind", "device__maker", "device__model", "device__serial",
)  # fmt: skip


def planned(scope: Scope, until_on: dt.date, site_id: int | None = None) -> list[PlannedRow]:
    """One row for each plan in force in sight whose awaited check is due by a day; devices gone or lost left out."""
    found = Check.objects.filter(
        _seen(scope), state__in=("scheduled", "started"), due_on__lte=until_on, plan__ended_at=None,
        plan__isnull=False,
    ).exclude(device__state__in=("disposed", "lost"))  # fmt: skip
    if site_id is not None:
        found = found.filter(site_id=site_id)
    return [PlannedRow(*row) for row in found.order_by("id").values_list(*_COLUMNS)]


def _seen(scope: Scope) -> Q:
    if scope.whole_group:
        return Q()
    ids = scope.site_ids()
    pools = list(Pool.objects.filter(members__site_id__in=ids).values_list("id", flat=True))
    return Q(site_id__in=ids) | Q(device__site_id__in=ids) | Q(device__pool_id__in=pools)
