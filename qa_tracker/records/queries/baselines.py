"""Baselines of a device: those in force by series, and all epochs."""

from __future__ import annotations

import datetime as dt
import uuid
from dataclasses import dataclass
from decimal import Decimal
from typing import TypeAlias

from qa_tracker.core.decimals import from_scaled
from qa_tracker.records.models import Aperture, Baseline, Condition, Measurand, TestObject
from qa_tracker.records.queries.as_of import nouns
from qa_tracker.records.queries.people import names

SeriesKey: TypeAlias = tuple[str, int | None, int | None]
"""Measurand code, aperture and condition: what a series of one device is told apart by."""


@dataclass(frozen=True)
class BaselineRow:
    """One epoch of a baseline with the key it was measured under."""

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
    test_object: str
    method: str
    reason: str
    set_by: str
    valid_from: dt.datetime
    ended_at: dt.datetime | None
    under_review: bool

    @property
    def key(self) -> SeriesKey:
        """The series it belongs to."""
        return self.measurand, self.aperture_id, self.condition_id


def baselines_of(device_id: int, as_of: dt.datetime | None = None) -> list[BaselineRow]:
    """Every epoch of a device's baselines, by series and epoch."""
    found = nouns(Baseline, as_of, device_id=device_id)
    codes = dict(Measurand.objects.values_list("id", "code")) if found else {}
    apertures = {each.id: each.name for each in nouns(Aperture, device_id=device_id)} if found else {}
    conditions = {each.id: each.name for each in nouns(Condition, device_id=device_id)} if found else {}
    objects = {each.id: f"{each.name} {each.serial}" for each in nouns(TestObject)} if found else {}
    people = names({each.set_by_id for each in found})
    rows = [
        BaselineRow(
            each.id,
            each.uid,
            each.device_id,
            codes[each.measurand_id],
            each.aperture_id,
            apertures.get(each.aperture_id or 0, ""),
            each.condition_id,
            conditions.get(each.condition_id or 0, ""),
            each.epoch,
            each.qualifier,
            each.entered,
            from_scaled(each.scaled, each.places),
            each.unit,
            each.console_model,
            each.console_software,
            each.test_object_id,
            objects.get(each.test_object_id or 0, ""),
            each.method,
            each.reason,
            people.get(each.set_by_id, ""),
            each.valid_from,
            each.ended_at,
            each.under_review,
        )
        for each in found
    ]
    return sorted(rows, key=lambda row: (row.measurand, row.aperture, row.condition, row.epoch))


def in_force(device_id: int, as_of: dt.datetime | None = None) -> dict[SeriesKey, BaselineRow]:
    """The baseline in force of each series."""
    return {row.key: row for row in baselines_of(device_id, as_of) if row.ended_at is None}


def values_by_id(ids: set[int]) -> dict[int, tuple[Decimal, str]]:
    """Value and qualifier by key: a baseline's value never changes, so the present row serves any time."""
    found = Baseline.objects.filter(id__in=ids).values_list("id", "scaled", "places", "qualifier")
    return {key: (from_scaled(scaled, places), qualifier) for key, scaled, places, qualifier in found}
