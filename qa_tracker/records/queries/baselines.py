"""Baselines of a device: those in force by series and test object, and all epochs."""

from __future__ import annotations

import datetime as dt
import uuid
from collections.abc import Collection, Sequence
from dataclasses import dataclass
from decimal import Decimal
from typing import NamedTuple, TypeAlias

from django.db.models import QuerySet

from qa_tracker.core.baselines import summary
from qa_tracker.core.decimals import from_scaled, plain
from qa_tracker.records.models import (
    Aperture,
    Baseline,
    BaselineSetup,
    Condition,
    Measurand,
    Person,
    TestObject,
)
from qa_tracker.records.queries.as_of import nouns

SeriesKey: TypeAlias = tuple[str, int | None, int | None]
"""Measurand code, aperture and condition: what a series of one device is told apart by."""

NAMED = ("measurand", "aperture", "condition", "test_object", "set_by")


@dataclass(frozen=True)
class BaselineRow:
    """One epoch of a baseline with the key it was measured under.

    ``count`` and ``standard_deviation`` are of the set-ups it is the mean of: 0 and empty where it has none.
    """

    id: int
    uid: uuid.UUID
    device_id: int
    measurand: str
    aperture_id: int | None
    aperture: str
    condition_id: int | None
    condition: str
    epoch: int
    qualifier: str
    entered: str
    value: Decimal
    unit: str
    console_model: str
    console_software: str
    test_object_id: int | None
    test_object_uid: uuid.UUID | None
    test_object: str
    method: str
    reason: str
    set_by: str
    valid_from: dt.datetime
    ended_at: dt.datetime | None
    under_review: bool
    expires_on: dt.date | None
    overlap_of_id: int | None
    overlap_entered: str
    count: int = 0
    standard_deviation: str = ""

    @property
    def key(self) -> SeriesKey:
        """The series it belongs to."""
        return self.measurand, self.aperture_id, self.condition_id


@dataclass(frozen=True)
class SetupRow:
    """One of the independent set-ups that a baseline is the mean of."""

    entered: str
    value: Decimal
    measured_on: dt.date


class Spread(NamedTuple):
    """How many set-ups a baseline is the mean of, and their standard deviation as text."""

    count: int = 0
    standard_deviation: str = ""


def spread_of(values: Sequence[Decimal]) -> Spread:
    """Number and standard deviation (divisor n - 1) of set-ups; no deviation below two."""
    if not values:
        return Spread()
    found = summary(values)
    deviation = found.standard_deviation
    return Spread(found.count, "" if deviation is None else plain(deviation))


def baselines_of(device_id: int, as_of: dt.datetime | None = None) -> list[BaselineRow]:
    """Every epoch of a device's baselines, by series and epoch."""
    if as_of is None:
        found = list(_joined(device_id))
    else:
        found = _named_then(nouns(Baseline, as_of, device_id=device_id), device_id, as_of)
    return sorted(_rows(found), key=lambda row: (row.measurand, row.aperture, row.condition, row.epoch))


def choices_in_force(
    device_id: int, as_of: dt.datetime | None = None
) -> dict[SeriesKey, tuple[BaselineRow, ...]]:
    """The baselines in force of each series, newest first: there may be one on each test object."""
    if as_of is None:
        rows = _rows(list(_joined(device_id).filter(ended_at=None)))
    else:
        rows = [row for row in baselines_of(device_id, as_of) if row.ended_at is None]
    series: dict[SeriesKey, list[BaselineRow]] = {}
    for row in sorted(rows, key=lambda each: -each.epoch):
        series.setdefault(row.key, []).append(row)
    return {key: tuple(choices) for key, choices in series.items()}


def for_object(choices: Sequence[BaselineRow], test_object_id: int | None) -> BaselineRow | None:
    """The baseline to compare a reading with: the one on its test object, else one on none, else the newest."""
    for wanted in (test_object_id, None):
        found = next((row for row in choices if row.test_object_id == wanted), None)
        if found is not None:
            return found
    return choices[0] if choices else None


def in_force(device_id: int, as_of: dt.datetime | None = None) -> dict[SeriesKey, BaselineRow]:
    """The newest baseline in force of each series, whatever its test object."""
    return {key: choices[0] for key, choices in choices_in_force(device_id, as_of).items()}


def values_by_id(ids: set[int]) -> dict[int, tuple[Decimal, str]]:
    """Value and qualifier by key: a baseline's value never changes, so the present row serves any time."""
    found = Baseline.objects.filter(id__in=ids).values_list("id", "scaled", "places", "qualifier")
    return {key: (from_scaled(scaled, places), qualifier) for key, scaled, places, qualifier in found}


def setups_of(baseline_ids: Collection[int]) -> dict[int, list[SetupRow]]:
    """The set-ups of baselines in the order they were made; facts, so the present rows serve any time."""
    found: dict[int, list[SetupRow]] = {}
    rows = BaselineSetup.objects.filter(baseline_id__in=baseline_ids).order_by("baseline_id", "position")
    for each in rows:
        one = SetupRow(each.entered, from_scaled(each.scaled, each.places), each.measured_on)
        found.setdefault(each.baseline_id, []).append(one)
    return found


def _joined(device_id: int) -> QuerySet[Baseline]:
    return Baseline.objects.filter(device_id=device_id).select_related(*NAMED)


def _named_then(found: list[Baseline], device_id: int, as_of: dt.datetime) -> list[Baseline]:
    """Give rebuilt rows the names that a query of the present joins."""
    if not found:
        return []
    measurands = Measurand.objects.in_bulk({row.measurand_id for row in found})
    people = Person.objects.in_bulk({row.set_by_id for row in found})
    apertures = {row.id: row for row in nouns(Aperture, device_id=device_id)}
    conditions = {row.id: row for row in nouns(Condition, device_id=device_id)}
    objects = {row.id: row for row in nouns(TestObject)}
    for row in found:
        row.measurand, row.set_by = measurands[row.measurand_id], people[row.set_by_id]
        row.aperture = apertures.get(row.aperture_id or 0)
        row.condition = conditions.get(row.condition_id or 0)
        row.test_object = objects.get(row.test_object_id or 0)
    return found


def _rows(found: Sequence[Baseline]) -> list[BaselineRow]:
    setups = setups_of([each.id for each in found]) if found else {}
    return [_row(each, [one.value for one in setups.get(each.id, [])]) for each in found]


def _row(each: Baseline, setups: Sequence[Decimal]) -> BaselineRow:
    aperture, condition, on = each.aperture, each.condition, each.test_object
    spread = spread_of(setups)
    return BaselineRow(
        each.id,
        each.uid,
        each.device_id,
        each.measurand.code,
        each.aperture_id,
        aperture.name if aperture else "",
        each.condition_id,
        condition.name if condition else "",
        each.epoch,
        each.qualifier,
        each.entered,
        from_scaled(each.scaled, each.places),
        each.unit,
        each.console_model,
        each.console_software,
        each.test_object_id,
        on.uid if on else None,
        f"{on.name} {on.serial}" if on else "",
        each.method,
        each.reason,
        each.set_by.name,
        each.valid_from,
        each.ended_at,
        each.under_review,
        each.expires_on,
        each.overlap_of_id,
        each.overlap_entered,
        spread.count,
        spread.standard_deviation,
    )
