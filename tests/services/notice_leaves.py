"""The rows of ``test_leaf_or_nothing`` that are about notices, holds and mail."""

from __future__ import annotations

import datetime as dt
from collections.abc import Callable
from typing import Any

from django.utils.timezone import now

from qa_tracker.services import holds
from tests.builders import Ward

Given = dict[str, Any]


def holding(ward: Ward) -> Given:
    """What a hold of the ward's check is made with."""
    until_on = now().date() + dt.timedelta(days=4)
    return {"check": ward.check.uid, "reason": "Room is being painted", "until_on": until_on}


def held(ward: Ward) -> Given:
    made = holds.acknowledge(**holding(ward), actor=ward.physicist, at=now())
    return {"hold": made.uid, "reason": "Room is free again", "actor": ward.technician}


HOLDS: dict[str, Callable[[Ward], Given]] = {
    "holds.acknowledge": lambda w: {**holding(w), "actor": w.physicist},
    "holds.snooze": lambda w: {**holding(w), "actor": w.technician},
    "holds.end_hold": lambda w: {**held(w), "actor": w.physicist},
}
ASKED_OF_HOLDS = {"holds.may_acknowledge": "asks", "holds.may_snooze": "asks"}
