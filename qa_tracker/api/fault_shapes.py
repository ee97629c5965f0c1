"""Shapes of faults and their actions."""

from __future__ import annotations

import uuid

from ninja import Schema

from qa_tracker.api.schemas import Given, Mark, Moment, Words


class FaultIn(Given):
    """A fault seen on a device."""

    device: uuid.UUID
    grade: Mark
    seen: Words
    place: Mark = ""


class ActionIn(Given):
    """Something done about a fault."""

    kind: Mark
    text: Words
    job_number: Mark = ""


class ActionOut(Schema):
    """Something done about a fault, by whom and when."""

    kind: str
    text: str
    job_number: str
    name: str
    at: Moment


class FaultBriefOut(Schema):
    """A departure on a device."""

    uid: uuid.UUID
    device_uid: uuid.UUID
    device_label: str
    device_state: str
    site_code: str
    grade: str
    state: str
    seen: str
    place: str
    instruction: str
    opened_by: str
    opened_at: Moment
    look_back: str
    closed_at: Moment | None
    close_remark: str


class FaultOut(FaultBriefOut):
    """A fault with what was done about it."""

    actions: list[ActionOut]
