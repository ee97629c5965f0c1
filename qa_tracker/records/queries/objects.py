"""Test objects and instruments."""

from __future__ import annotations

import datetime as dt
import json
import uuid
from dataclasses import dataclass

from qa_tracker.records.models import Instrument, TestObject
from qa_tracker.records.queries.as_of import nouns
from qa_tracker.records.queries.scope import Scope


@dataclass(frozen=True)
class TestObjectRow:
    """A test object; ``nominals`` gives true values by measurand code."""

    __test__ = False

    id: int
    uid: uuid.UUID
    site_id: int
    name: str
    maker: str
    model: str
    serial: str
    material: str
    sound_speed_m_s: str
    layout_compensated: bool
    depth_mm: str
    nominals: dict[str, str]
    certificate_ends_on: dt.date | None
    in_use: bool


@dataclass(frozen=True)
class InstrumentRow:
    """An instrument with its calibration date."""

    id: int
    uid: uuid.UUID
    site_id: int
    kind: str
    maker: str
    model: str
    serial: str
    calibration_due_on: dt.date | None
    in_use: bool


def list_test_objects(scope: Scope, as_of: dt.datetime | None = None) -> list[TestObjectRow]:
    """Test objects of the sites in sight."""
    return [
        TestObjectRow(
            one.id,
            one.uid,
            one.site_id,
            one.name,
            one.maker,
            one.model,
            one.serial,
            one.material,
            one.sound_speed_m_s,
            one.layout_compensated,
            one.depth_mm,
            json.loads(one.nominals),
            one.certificate_ends_on,
            one.in_use,
        )
        for one in nouns(TestObject, as_of)
        if scope.holds(one.site_id)
    ]


def list_instruments(scope: Scope, as_of: dt.datetime | None = None) -> list[InstrumentRow]:
    """Instruments of the sites in sight."""
    return [
        InstrumentRow(
            one.id,
            one.uid,
            one.site_id,
            one.kind,
            one.maker,
            one.model,
            one.serial,
            one.calibration_due_on,
            one.in_use,
        )
        for one in nouns(Instrument, as_of)
        if scope.holds(one.site_id)
    ]
