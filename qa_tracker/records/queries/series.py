"""Earlier readings of a device: the last of each series, and whole series for charts."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass

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


def last_readings(device_id: int, codes: list[str]) -> dict[SeriesKey, PointRow]:
    """The newest reading of each series of these measurands: one short index probe a measurand."""
    found: dict[SeriesKey, PointRow] = {}
    for key, code in Measurand.objects.filter(code__in=codes).values_list("id", "code"):
        newest = (
            Reading.objects.filter(device_id=device_id, measurand_id=key)
            .select_related("verdict")
            .order_by("-measured_at")[:12]
        )
        for reading in newest:
            found.setdefault((code, reading.aperture_id, reading.condition_id), _point(reading))
    return found


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
