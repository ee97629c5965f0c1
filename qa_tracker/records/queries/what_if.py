"""What was said of stored readings, as columns, for asking what another criterion would have said of them."""

from __future__ import annotations

import datetime as dt
from collections.abc import Collection, Iterator
from dataclasses import dataclass
from typing import Any, NamedTuple

from django.db.models import Exists, OuterRef, Q, QuerySet

from qa_tracker.records.models import Check, FurtherVerdict, Submission, Verdict
from qa_tracker.records.queries.scope import Scope, checks_in

CHUNK = 5000


@dataclass(frozen=True)
class Extent:
    """Over what is asked: checks done at a site, readings of devices, measured from a moment and before another."""

    site_id: int | None = None
    device_ids: frozenset[int] | None = None
    since: dt.datetime | None = None
    until: dt.datetime | None = None


class SaidRow(NamedTuple):
    """What a limit said of one reading, with the reading and all that was kept beside it."""

    id: int
    criterion_id: int
    verdict: str
    level: str
    reference: str
    quantity: str
    uncertainty: str
    rule: str
    measurand_id: int
    baseline_id: int | None
    baseline_scaled: int | None
    baseline_places: int | None
    baseline_qualifier: str | None
    baseline_expires_on: dt.date | None
    baseline_object_id: int | None
    qualifier: str
    entered: str
    scaled: int | None
    places: int | None
    origin: str
    edition_id: int
    measured_at: dt.datetime
    recorded_at: dt.datetime
    test_object_id: int | None
    device_id: int
    site_id: int | None


SAID = ("id", "criterion_id", "verdict", "level", "reference", "quantity", "uncertainty", "rule")
OF_VERDICT = "measurand_id"
BESIDE = ("id", "scaled", "places", "qualifier", "expires_on", "test_object_id")
READING = ("qualifier", "entered", "scaled", "places", "origin")
SUBMISSION = ("edition_id", "measured_at", "recorded_at", "test_object_id")
CHECK = ("device_id", "site_id")


def said_rows(scope: Scope, extent: Extent, criterion_ids: Collection[int]) -> Iterator[SaidRow]:
    """What these limits said of the readings in sight: those that decided, and those beside them.

    A check that was done again counts by its newest submission, and a void one not at all.
    """
    yield from _rows(Verdict.objects.all(), "", scope, extent, criterion_ids)


def further_rows(scope: Scope, extent: Extent, criterion_ids: Collection[int]) -> Iterator[SaidRow]:
    """The same of limits that were judged beside the one that decided."""
    yield from _rows(FurtherVerdict.objects.all(), "verdict_of__", scope, extent, criterion_ids)


def _rows(
    found: QuerySet[Any], way: str, scope: Scope, extent: Extent, criterion_ids: Collection[int]
) -> Iterator[SaidRow]:
    names = [
        *SAID,
        f"{way}{OF_VERDICT}",
        *(f"baseline__{name}" for name in BESIDE),
        *(f"{way}reading__{name}" for name in READING),
        *(f"{way}submission__{name}" for name in SUBMISSION),
        *(f"{way}submission__check_of__{name}" for name in CHECK),
    ]
    chosen = found.filter(
        Exists(_submissions(scope, extent, OuterRef(f"{way}submission_id"))),
        criterion_id__in=criterion_ids,
    ).exclude(**{f"{way}reading": None})
    for row in chosen.values_list(*names).iterator(chunk_size=CHUNK):
        yield SaidRow(*row)


def _submissions(scope: Scope, extent: Extent, key: OuterRef) -> QuerySet[Submission]:
    """The newest submission of each check that is asked about, by key."""
    newer = Submission.objects.filter(check_of=OuterRef("check_of"), number__gt=OuterRef("number"))
    checks = Check.objects.filter(checks_in(scope), *_where(extent)).exclude(state="void")
    found = Submission.objects.filter(~Exists(newer), pk=key, check_of__in=checks.values("id"))
    if extent.since is not None:
        found = found.filter(measured_at__gte=extent.since)
    if extent.until is not None:
        found = found.filter(measured_at__lt=extent.until)
    return found


def _where(extent: Extent) -> list[Q]:
    asked = []
    if extent.site_id is not None:
        asked.append(Q(site_id=extent.site_id))
    if extent.device_ids is not None:
        asked.append(Q(device_id__in=extent.device_ids))
    return asked
