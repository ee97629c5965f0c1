"""What became of the checks that fell due in a period: counted in the database, or from what was known at a moment.

Only checks due in the period are read: by the index of state and due day, and their first submissions by key.
"""

from __future__ import annotations

import datetime as dt
import json
import uuid
from collections import Counter, defaultdict
from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

from django.db.models import Count, F, OuterRef, Q, QuerySet, Subquery
from django.db.models.functions import Coalesce

from qa_tracker.core import compliance
from qa_tracker.core.compliance import FIGURES, Duty, Tally
from qa_tracker.core.workflow import CHECK, CHECK_AWAITED, CHECK_DONE
from qa_tracker.records.models import Check, Device, Pool, Procedure, Site, Submission, Version
from qa_tracker.records.queries.scope import Scope
from qa_tracker.records.rows import noun_from

GROUPS = ("site", "procedure", "device")
FARTHEST_MOVE = dt.timedelta(days=400)
"""How far a due day may have been moved since the moment that is asked about: further than any window reaches."""
KEYS_AT_ONCE = 900


@dataclass(frozen=True)
class Extent:
    """Over what is asked: checks due from a day until a day, both included; at a site, by a procedure, of a device."""

    from_on: dt.date
    until_on: dt.date
    site_id: int | None = None
    procedure_id: int | None = None
    device_id: int | None = None

    @property
    def columns(self) -> dict[str, int]:
        """What is asked besides the period."""
        wanted = {"site_id": self.site_id, "procedure_id": self.procedure_id, "device_id": self.device_id}
        return {name: value for name, value in wanted.items() if value is not None}


@dataclass(frozen=True)
class Group:
    """The figures of one site, procedure or device; the key and label are empty for all together."""

    key: int | None
    label: str
    tally: Tally


@dataclass(frozen=True)
class DutyRow:
    """A check behind a figure."""

    id: int
    uid: uuid.UUID
    device_label: str
    procedure: str
    site_code: str
    state: str
    due_on: dt.date
    done_at: dt.datetime | None
    excuse: str


def groups(
    scope: Scope, extent: Extent, by: str, at: dt.datetime, as_of: dt.datetime | None = None
) -> list[Group]:
    """The figures by site, procedure or device, in the order of their labels."""
    column = f"{by}_id"
    found = _known(scope, extent, column, as_of) if as_of else _counted(scope, extent, column, at)
    labels = _labels(by, {key for key in found if key is not None})
    rows = [Group(key, labels.get(key or 0, ""), tally) for key, tally in found.items()]
    return sorted(rows, key=lambda row: (row.label, row.key or 0))


def excuses(scope: Scope, extent: Extent, as_of: dt.datetime | None = None) -> dict[str, int]:
    """How many were excused for which reason: a state of the device, or by hand."""
    if as_of:
        known = [check.excuse for check in _as_known(scope, extent, as_of) if check.state == "excused"]
        return dict(Counter(map(compliance.reason_of, known)))
    found = _due(scope, extent).filter(state="excused").values("excuse").annotate(n=Count("id"))
    told: Counter[str] = Counter()
    for row in found.values_list("excuse", "n").order_by():
        told[compliance.reason_of(row[0])] += row[1]
    return dict(told)


def behind(
    scope: Scope, extent: Extent, figure: str, at: dt.datetime, *, after: int = 0, most: int = 200
) -> list[DutyRow]:
    """The checks behind a figure as it stands now, by key; ``after`` pages."""
    found = _with_done(_due(scope, extent)).filter(_filters(at)[figure], id__gt=after)
    joined = found.select_related("device", "procedure", "site").order_by("id")
    return [_row(check) for check in joined[:most]]


def _row(check: Check) -> DutyRow:
    device = check.device
    return DutyRow(
        check.id, check.uid, f"{device.maker} {device.model} {device.serial}", check.procedure.title,
        check.site.code if check.site else "", check.state, check.due_on or dt.date.min,
        getattr(check, "done_at", None) if check.state in CHECK_DONE else None, check.excuse,
    )  # fmt: skip


def _due(scope: Scope, extent: Extent) -> QuerySet[Check]:
    """The checks of the period that are in sight, each once."""
    period = {"due_on__gte": extent.from_on, "due_on__lte": extent.until_on}
    return Check.objects.filter(_seen(scope), state__in=CHECK.states, **period, **extent.columns)


def _seen(scope: Scope) -> Q:
    """As ``scope.checks_in``, without a join that would count a check twice."""
    if scope.whole_group:
        return Q()
    ids = scope.site_ids()
    pools = list(Pool.objects.filter(members__site_id__in=ids).values_list("id", flat=True))
    return Q(site_id__in=ids) | Q(device__site_id__in=ids) | Q(device__pool_id__in=pools)


def _with_done(found: QuerySet[Check]) -> QuerySet[Check]:
    """With the moment at which each was first measured, or the check that satisfied it."""
    owner = Coalesce(OuterRef("satisfied_by_id"), OuterRef("id"))
    first = Submission.objects.filter(check_of_id=owner, number=1).values("measured_at")[:1]
    return found.annotate(done_at=Coalesce(Subquery(first), F("submitted_at")))


def _filters(at: dt.datetime) -> dict[str, Q]:
    """What ``core.compliance.figures_of`` says, for the database."""
    done, awaited = Q(state__in=CHECK_DONE), Q(state__in=CHECK_AWAITED)
    return {
        "on_time": done & Q(done_at__lt=F("late_at")),
        "late": done & (Q(done_at__gte=F("late_at")) | Q(done_at=None)),
        "overdue": done & Q(done_at__gte=F("overdue_at")),
        "missed": Q(state="missed"),
        "excused": Q(state="excused"),
        "awaited": awaited,
        "awaited_late": awaited & Q(late_at__lte=at),
        "void": Q(state="void"),
    }


def _counted(scope: Scope, extent: Extent, column: str, at: dt.datetime) -> dict[int | None, Tally]:
    counts: dict[str, Any] = {f"n_{name}": Count("id", filter=_filters(at)[name]) for name in FIGURES}
    found = _with_done(_due(scope, extent)).order_by().values(column).annotate(**counts)
    return {row[column]: Tally(**{name: row[f"n_{name}"] for name in FIGURES}) for row in found}


def _known(scope: Scope, extent: Extent, column: str, as_of: dt.datetime) -> dict[int | None, Tally]:
    """The same as it was known at a moment."""
    checks = list(_as_known(scope, extent, as_of))
    done = _first_measured({check.satisfied_by_id or check.id for check in checks}, as_of)
    duties: dict[int | None, list[Duty]] = defaultdict(list)
    for check in checks:
        if check.due_on and check.late_at and check.overdue_at:
            done_at = done.get(check.satisfied_by_id or check.id, check.submitted_at)
            duty = Duty(check.state, check.due_on, check.late_at, check.overdue_at, done_at, check.excuse)
            duties[getattr(check, column)].append(duty)
    return {key: compliance.tally(found, as_of) for key, found in duties.items()}


def _as_known(scope: Scope, extent: Extent, as_of: dt.datetime) -> Iterator[Check]:
    """The checks of the period by their newest versions known at a moment; of those in sight now."""
    near = Extent(extent.from_on - FARTHEST_MOVE, extent.until_on + FARTHEST_MOVE, device_id=extent.device_id)
    keys = list(_due(scope, near).order_by("id").values_list("id", flat=True))
    for first in range(0, len(keys), KEYS_AT_ONCE):
        yield from (
            check
            for check in _versions(keys[first : first + KEYS_AT_ONCE], as_of)
            if check.due_on is not None
            and extent.from_on <= check.due_on <= extent.until_on
            and all(getattr(check, name) == value for name, value in extent.columns.items())
        )


def _versions(keys: list[int], as_of: dt.datetime) -> Iterator[Check]:
    found = Version.objects.filter(noun="check", subject_id__in=keys, recorded_at__lte=as_of)
    newest: dict[int, str] = {}
    for subject_id, columns in found.order_by("subject_id", "number").values_list("subject_id", "columns"):
        newest[subject_id] = columns
    for columns in newest.values():
        known = noun_from(Check, json.loads(columns))
        if isinstance(known, Check):
            yield known


def _first_measured(check_ids: set[int], as_of: dt.datetime) -> dict[int, dt.datetime]:
    keys, found = sorted(check_ids), {}
    for first in range(0, len(keys), KEYS_AT_ONCE):
        made = Submission.objects.filter(
            check_of_id__in=keys[first : first + KEYS_AT_ONCE], number=1, recorded_at__lte=as_of
        )
        found.update(dict(made.values_list("check_of_id", "measured_at")))
    return found


def _labels(by: str, keys: set[int]) -> dict[int, str]:
    """What each key is called."""
    if by == "site":
        return dict(Site.objects.filter(id__in=keys).values_list("id", "name"))
    if by == "procedure":
        return dict(Procedure.objects.filter(id__in=keys).values_list("id", "title"))
    ordered, labels = sorted(keys), {}
    for first in range(0, len(ordered), KEYS_AT_ONCE):
        found = Device.objects.filter(id__in=ordered[first : first + KEYS_AT_ONCE])
        for key, maker, model, serial in found.values_list("id", "maker", "model", "serial"):
            labels[key] = f"{maker} {model} {serial}"
    return labels
