"""Shapes of devices and all that hangs on one."""

from __future__ import annotations

import datetime as dt
import json
import uuid
from typing import Annotated

from ninja import Schema
from pydantic import Field, field_validator, model_validator

from qa_tracker.api.baseline_shapes import BaselineOut
from qa_tracker.api.schemas import Given, Mark, Moment, Name, Secret, Short, Words


class PlaceIn(Given):
    """Where a device belongs: a site (a room of it, the scanner it is plugged to) or a pool."""

    site: uuid.UUID | None = None
    location: uuid.UUID | None = None
    scanner: uuid.UUID | None = None
    pool: uuid.UUID | None = None

    @model_validator(mode="after")
    def is_one_place(self) -> PlaceIn:
        """A site or a pool, and a room only of a site."""
        if (self.site is None) == (self.pool is None):
            raise ValueError("give a site or a pool, and not both")
        if self.location is not None and self.site is None:
            raise ValueError("a room needs its site")
        return self


class ScannerIn(Given):
    """A scanner to be registered."""

    maker: Annotated[Name, Field(max_length=80)]
    model: Annotated[Name, Field(max_length=80)]
    serial: Annotated[Name, Field(max_length=80)]
    inventory_number: Annotated[Name, Field(max_length=40)] = ""
    handheld: bool = False
    software_version: Mark = ""
    protection_class: Mark = "I"
    place: PlaceIn


class ApertureIn(Given):
    """A radiating face with its number of elements, where known."""

    name: Annotated[Name, Field(max_length=40)]
    elements: Annotated[int, Field(ge=1, le=100_000)] | None = None


class ProbeIn(Given):
    """A probe to be registered."""

    maker: Annotated[Name, Field(max_length=80)]
    model: Annotated[Name, Field(max_length=80)]
    serial: Annotated[Name, Field(max_length=80)]
    inventory_number: Annotated[Name, Field(max_length=40)] = ""
    array_kind: Mark
    contact_class: Mark
    applied_part: Mark
    apertures: list[ApertureIn]
    wireless: bool = False
    place: PlaceIn


class QuarantineIn(Given):
    """What was seen, and where."""

    seen: Words
    place: Mark = ""


class AcceptIn(Given):
    """A signed acceptance."""

    remark: Words = ""
    password: Secret


class RestoreIn(Given):
    """A signed restoration to use, with the check that proves the repair."""

    remark: Words
    proving_check: uuid.UUID | None = None
    password: Secret


class MoveIn(Given):
    """A new place and the reason."""

    place: PlaceIn
    reason: Short = ""


class ConditionIn(Given):
    """A named preset with its recorded settings; numbers are text."""

    name: Annotated[Name, Field(max_length=80)]
    test_frequency_mhz: Annotated[Mark, Field(max_length=10)] = ""
    sound_speed_m_s: Annotated[Mark, Field(max_length=10)] = ""
    settings: dict[Name, Name] = {}


class PlanIn(Given):
    """How often (an RFC 5545 rule), counted from what, and the window around each due day."""

    procedure: Mark
    rule: Annotated[Name, Field(max_length=200)]
    basis: Mark = "calendar"
    anchor_on: dt.date
    before_days: Annotated[int, Field(ge=0, le=366)]
    grace_days: Annotated[int, Field(ge=0, le=366)]
    roll: Annotated[Mark, Field(max_length=10)] = "none"
    responsible: uuid.UUID


class DeviceOut(Schema):
    """A scanner or probe. `seen_until` is set where it left one's sites: what came later is out of sight."""

    uid: uuid.UUID
    kind: str
    maker: str
    model: str
    serial: str
    inventory_number: str
    handheld: bool
    state: str
    state_note: str
    state_since: Moment
    site_code: str
    pool_name: str
    scanner_uid: uuid.UUID | None
    location: str
    array_kind: str
    contact_class: str
    applied_part: str
    protection_class: str
    software_version: str
    register_fields: dict[str, str] = Field(validation_alias="register")
    seen_until: Moment | None


class PlacementOut(Schema):
    """Where it was, from when until when."""

    uid: uuid.UUID
    place: str
    started_at: Moment
    ended_at: Moment | None
    reason: str


class ApertureOut(Schema):
    """One radiating face."""

    uid: uuid.UUID
    name: str
    elements: int | None


class ConditionOut(Schema):
    """A named preset with its recorded settings."""

    uid: uuid.UUID
    name: str
    test_frequency_mhz: str
    sound_speed_m_s: str
    settings: dict[str, str]

    @field_validator("settings", mode="before")
    @classmethod
    def read(cls, settings: str | dict[str, str]) -> object:
        """Settings are kept as canonical JSON text."""
        return json.loads(settings) if isinstance(settings, str) else settings


class PlanOut(Schema):
    """A procedure owed by a device."""

    uid: uuid.UUID
    procedure: str
    rule: str
    basis: str
    anchor_on: dt.date
    before_days: int
    grace_days: int
    roll: str
    responsible: str
    ended_at: Moment | None


class WholeDeviceOut(DeviceOut):
    """A device with all that hangs on it."""

    placements: list[PlacementOut]
    apertures: list[ApertureOut]
    conditions: list[ConditionOut]
    plans: list[PlanOut]
    baselines: list[BaselineOut]


class DevicePage(Schema):
    """One page of devices."""

    items: list[DeviceOut]
    next: int | None
