"""Stored readings that can become set-ups of a baseline, and baselines that wait for a decision."""

from __future__ import annotations

import datetime as dt
import uuid
from dataclasses import dataclass

from django.db.models import Count, Exists, OuterRef, Q

from qa_tracker.core.workflow import CHECK_DONE
from qa_tracker.records.models import Baseline, Reading, Submission
from qa_tracker.records.queries.baselines import SeriesKey


@dataclass(frozen=True)
class StoredReading:
    """One reading of a series with what it was measured with."""

    submission_uid: uuid.UUID
    procedure: str
    measured_at: dt.datetime
    qualifier: str
    entered: str
    unit: str
    verdict: str
    test_object: str
    console: str


def readings_of(device_id: int, key: SeriesKey, most: int = 60) -> list[StoredReading]:
    """The newest readings of a series that are numbers, of checks that stand; of amended ones the last."""
    code, aperture_id, condition_id = key
    later = Submission.objects.filter(
        check_of=OuterRef("submission__check_of"), number__gt=OuterRef("submission__number")
    )
    found = (
        Reading.objects.filter(
            device_id=device_id,
            measurand__code=code,
            aperture_id=aperture_id,
            condition_id=condition_id,
            repeat=1,
            submission__check_of__state__in=CHECK_DONE,
        )
        .exclude(scaled=None)
        .exclude(Exists(later))
        .select_related(
            "verdict",
            "submission__check_of__procedure",
            "submission__test_object",
            "submission__console",
        )
        .order_by("-measured_at", "-id")[:most]
    )
    return [_row(each) for each in found]


def _row(each: Reading) -> StoredReading:
    done = each.submission
    verdict = getattr(each, "verdict", None)
    on, console = done.test_object, done.console
    return StoredReading(
        done.uid,
        done.check_of.procedure.title,
        each.measured_at,
        each.qualifier,
        each.entered,
        each.unit,
        verdict.verdict if verdict else "",
        f"{on.name} {on.serial}" if on else "",
        " ".join(part for part in (console.model if console else "", done.console_software) if part),
    )


@dataclass(frozen=True)
class Waiting:
    """A device with baselines under review."""

    device_id: int
    device_uid: uuid.UUID
    label: str
    count: int


def under_review_at(device_id: int) -> list[Waiting]:
    """A device, and the probes placed on it where it is a scanner, as far as baselines of theirs are under review."""
    here = Q(device_id=device_id) | Q(device__scanner_id=device_id)
    found = Baseline.objects.filter(here, under_review=True, ended_at=None)
    named = found.values_list("device_id", "device__uid", "device__maker", "device__model", "device__serial")
    return [
        Waiting(key, uid, " ".join(words), count)
        for key, uid, *words, count in named.annotate(count=Count("id")).order_by("device__serial")
    ]
