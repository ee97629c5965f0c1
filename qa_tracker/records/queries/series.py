"""Earlier readings of a device: the last of each series, and whole series for charts."""

from __future__ import annotations

import datetime as dt
from collections.abc import Iterable
from dataclasses import dataclass
from typing import Any

from django.db.models import Case, JSONField, OuterRef, Subquery, When
from django.db.models.functions import JSONObject

from qa_tracker.records.models import Measurand, Reading
from qa_tracker.records.queries.baselines import SeriesKey


@dataclass(frozen=True)
class PointRow:
    """One reading of a series."""

    measured_at: dt.datetime
    qualifier: str
    entered: str
    scaled: int | None
    places: int | None
    unit: str
    verdict: str
    reference: str = ""


def last_readings(device_id: int, keys: Iterable[SeriesKey]) -> dict[SeriesKey, PointRow]:
    """The newest reading of each series, in one query: one short index probe a series, whatever the history.

    Each measurand is asked only at the apertures and conditions its series have, since a probe for a series that
    has no reading walks through all of its measurand's.
    """
    codes: dict[tuple[int | None, int | None], list[str]] = {}
    for code, *part in keys:
        codes.setdefault((part[0], part[1]), []).append(code)
    if not codes:
        return {}
    probes = {
        f"last_{n}": Case(When(code__in=own, then=_newest(device_id, *part)), output_field=JSONField())
        for n, (part, own) in enumerate(codes.items())
    }
    asked = {code for own in codes.values() for code in own}
    found: dict[SeriesKey, PointRow] = {}
    for row in Measurand.objects.filter(code__in=asked).annotate(**probes).values("code", *probes):
        for part, name in zip(codes, probes, strict=True):
            if row[name] is not None:
                found[row["code"], part[0], part[1]] = _point_from(row[name])
    return found


def _newest(device_id: int, aperture_id: int | None, condition_id: int | None) -> Subquery:
    own = Reading.objects.filter(
        device_id=device_id, measurand=OuterRef("pk"), aperture=aperture_id, condition=condition_id
    )
    columns = JSONObject(
        measured_at="measured_at", qualifier="qualifier", entered="entered", scaled="scaled", places="places",
        unit="unit", verdict="verdict__verdict", reference="verdict__reference",
    )  # fmt: skip
    return Subquery(own.order_by("-measured_at", "-id").values(columns=columns)[:1])


def _point_from(told: dict[str, Any]) -> PointRow:
    """A reading from the columns a database put in one value; SQLite leaves the zone of its moments out."""
    measured_at = dt.datetime.fromisoformat(told["measured_at"])
    if measured_at.tzinfo is None:
        measured_at = measured_at.replace(tzinfo=dt.UTC)
    return PointRow(
        measured_at, told["qualifier"], told["entered"], told["scaled"], told["places"], told["unit"],
        told["verdict"] or "", told["reference"] or "",
    )  # fmt: skip


def series_of(device_id: int, code: str, until: dt.datetime | None = None) -> dict[SeriesKey, list[PointRow]]:
    """All readings of one measurand of a device by series, oldest first."""
    found = Reading.objects.filter(device_id=device_id, measurand__code=code).select_related("verdict")
    if until is not None:
        found = found.filter(measured_at__lte=until)
    rows: dict[SeriesKey, list[PointRow]] = {}
    for reading in found.order_by("measured_at", "id"):
        rows.setdefault((code, reading.aperture_id, reading.condition_id), []).append(_point(reading))
    return rows


def every_series(
    device_id: int, since: dt.datetime, until: dt.datetime | None = None
) -> dict[SeriesKey, list[PointRow]]:
    """The readings of a device that are numbers, by series, oldest first, from a moment on."""
    found = Reading.objects.filter(device_id=device_id, measured_at__gte=since).exclude(scaled=None)
    if until is not None:
        found = found.filter(submission__recorded_at__lte=until)
    rows: dict[SeriesKey, list[PointRow]] = {}
    for reading in found.select_related("verdict", "measurand").order_by("measured_at", "id"):
        key = (reading.measurand.code, reading.aperture_id, reading.condition_id)
        rows.setdefault(key, []).append(_point(reading))
    return rows


def _point(reading: Reading) -> PointRow:
    verdict = getattr(reading, "verdict", None)
    return PointRow(
        reading.measured_at, reading.qualifier, reading.entered, reading.scaled, reading.places,
        reading.unit, verdict.verdict if verdict else "", verdict.reference if verdict else "",
    )  # fmt: skip
