"""Checks as duties: what is due, what was done, what waits for a countersignature."""

from __future__ import annotations

import datetime as dt
import uuid
from dataclasses import dataclass

from django.db.models import Q, QuerySet
from django.db.models.functions import Coalesce

from qa_tracker.core.workflow import CHECK_AWAITED, CHECK_DONE
from qa_tracker.records.models import Check
from qa_tracker.records.queries.as_of import noun
from qa_tracker.records.queries.scope import Scope, checks_in


@dataclass(frozen=True)
class CheckRow:
    """One check with the device and procedure it belongs to."""

    id: int
    uid: uuid.UUID
    version: int
    plan_id: int | None
    device_id: int
    device_uid: uuid.UUID
    device_kind: str
    device_label: str
    device_state: str
    scanner_label: str
    procedure_id: int
    procedure: str
    procedure_code: str
    site_id: int | None
    site_code: str
    location: str
    location_position: int
    responsible_id: int | None
    responsible: str
    state: str
    due_on: dt.date | None
    slot_on: dt.date | None
    opens_at: dt.datetime | None
    due_at: dt.datetime | None
    late_at: dt.datetime | None
    overdue_at: dt.datetime | None
    grace_days: int
    verdict: str
    verdict_level: str
    submitted_at: dt.datetime | None
    excuse: str
    satisfied_by: uuid.UUID | None
    satisfied_by_procedure: str
    satisfied_by_state: str


def _row(check: Check) -> CheckRow:
    device, plan = check.device, check.plan
    scanner, room, other = device.scanner, device.location, check.satisfied_by
    return CheckRow(
        check.id, check.uid, check.version, check.plan_id, device.id, device.uid, device.kind,
        f"{device.maker} {device.model} {device.serial}", device.state,
        f"{scanner.model} {scanner.serial}" if scanner else "",
        check.procedure_id, check.procedure.title, check.procedure.code,
        check.site_id, check.site.code if check.site else "",
        room.name if room else "", room.position if room else 0,
        plan.responsible_id if plan else None, plan.responsible.name if plan else "",
        check.state, check.due_on, check.slot_on, check.opens_at, check.due_at, check.late_at, check.overdue_at,
        plan.grace_days if plan else 0,
        check.verdict, check.verdict_level, check.submitted_at, check.excuse,
        other.uid if other else None, other.procedure.title if other else "", other.state if other else "",
    )  # fmt: skip


def _joined() -> QuerySet[Check]:
    return Check.objects.select_related(
        "device__scanner",
        "device__location",
        "procedure",
        "site",
        "plan__responsible",
        "satisfied_by__procedure",
    )


def find_check(scope: Scope, uid: uuid.UUID, as_of: dt.datetime | None = None) -> CheckRow | None:
    """A check in sight by uid; with ``as_of`` in the state known then."""
    check = _joined().filter(checks_in(scope), uid=uid).first()
    if check is None:
        return None
    if as_of is not None:
        known = noun(Check, as_of, id=check.id)
        if known is None:
            return None
        known.device, known.procedure, known.site, known.plan = (
            check.device, check.procedure, check.site, check.plan,
        )  # fmt: skip
        check = known
    return _row(check)


def due_checks(scope: Scope, at: dt.datetime, *, horizon_days: int = 14) -> list[CheckRow]:
    """Awaited checks that are open, due or overdue, or that open within the horizon; soonest due first."""
    until = at + dt.timedelta(days=horizon_days)
    found = (
        _joined()
        .filter(checks_in(scope), state__in=CHECK_AWAITED)
        .filter(Q(opens_at=None) | Q(opens_at__lte=until))
        .exclude(device__state__in=("disposed", "lost"))
        .distinct()
    )
    rows = [_row(check) for check in found]
    return sorted(
        rows,
        key=lambda row: (
            row.site_code,
            row.location_position,
            row.location,
            row.scanner_label,
            row.due_on or dt.date.min,
            row.device_label,
            row.id,
        ),
    )


def list_checks(
    scope: Scope, *, before: int | None = None, most: int = 50, **wanted: object
) -> list[CheckRow]:
    """Checks in sight, newest first; ``wanted`` names columns, ``before`` pages by key."""
    found = _joined().filter(checks_in(scope), **wanted).distinct().order_by("-id")
    if before is not None:
        found = found.filter(id__lt=before)
    return [_row(check) for check in found[:most]]


def done_checks(scope: Scope, *, before: int | None = None, most: int = 50) -> list[CheckRow]:
    """Checks that were submitted, newest first."""
    return list_checks(scope, before=before, most=most, state__in=CHECK_DONE | {"sent_back"})


def latest_done(
    scope: Scope, *, before: tuple[dt.datetime, int] | None = None, most: int = 50, **wanted: object
) -> list[CheckRow]:
    """Checks that were submitted, the latest first; ``before`` is moment and key of the last one seen."""
    found = _joined().filter(checks_in(scope), state__in=CHECK_DONE | {"sent_back"}, **wanted)
    if before is not None:
        moment, key = before
        found = found.filter(Q(submitted_at__lt=moment) | Q(submitted_at=moment, id__lt=key))
    found = found if scope.whole_group else found.distinct()
    return [_row(check) for check in found.order_by("-submitted_at", "-id")[:most]]


def submitted_checks(scope: Scope, most: int = 200) -> list[CheckRow]:
    """Checks that wait for a countersignature or need none, oldest first.

    One that another check satisfied is not among them: that check's own signatures stand for it.
    """
    found = _joined().filter(checks_in(scope), state="submitted", satisfied_by=None).distinct()
    return [_row(check) for check in found.order_by("submitted_at", "id")[:most]]


def checks_satisfied_by(check_id: int) -> list[CheckRow]:
    """The checks that one check satisfied besides being done itself."""
    return [_row(check) for check in _joined().filter(satisfied_by_id=check_id).order_by("due_on", "id")]


def checks_of_device(
    device_id: int, *, until: dt.datetime | None = None, most: int | None = None
) -> list[CheckRow]:
    """A device's checks, newest first by when they were done or due, up to a moment.

    Not by the due day: a check without a plan has none, and would be the first to fall off the end of a list.
    """
    newest = Coalesce("submitted_at", "due_at").desc(nulls_last=True)
    found = _joined().filter(device_id=device_id).order_by(newest, "-id")
    if until is not None:
        found = found.filter(Q(submitted_at=None, due_at__lte=until) | Q(submitted_at__lte=until))
    return [_row(check) for check in found[:most]]


def next_check_of(plan_id: int) -> CheckRow | None:
    """The awaited occurrence of a plan."""
    check = _joined().filter(plan_id=plan_id, state__in=CHECK_AWAITED).order_by("due_on").first()
    return _row(check) if check else None


def check_opened_after(plan_id: int, check_id: int) -> CheckRow | None:
    """The occurrence a plan opened next after one of its checks."""
    check = _joined().filter(plan_id=plan_id, id__gt=check_id).order_by("id").first()
    return _row(check) if check else None


def check_by_id(check_id: int) -> CheckRow:
    """A check by key, for use inside commands."""
    return _row(_joined().get(pk=check_id))
