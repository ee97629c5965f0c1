"""Since when a device is out of use, from its versions."""

from __future__ import annotations

import datetime as dt
import json
from dataclasses import dataclass

from qa_tracker.core.workflow import DEVICE_USABLE
from qa_tracker.records.models import Version


@dataclass(frozen=True)
class OutOfUse:
    """When a device went out of use, and the states it was in since, in their order."""

    since_at: dt.datetime
    states: tuple[str, ...]


def out_of_use(device_id: int) -> OutOfUse | None:
    """Since when a device is out of use; None while it is in use, and for one that never was.

    It reads the versions back to the last use and no further.
    """
    versions = Version.objects.filter(noun="device", subject_id=device_id).order_by("-number")
    since_at, states = None, list[str]()
    for recorded_at, columns in versions.values_list("recorded_at", "columns").iterator(chunk_size=50):
        state = json.loads(columns)["state"]
        if state in DEVICE_USABLE:
            return OutOfUse(since_at, tuple(reversed(states))) if since_at else None
        since_at = recorded_at
        if state not in states[-1:]:
            states.append(state)
    return None
