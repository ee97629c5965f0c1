"""The rows of ``test_leaf_or_nothing`` that are about leave and deputies."""

from __future__ import annotations

import datetime as dt
from collections.abc import Callable
from typing import Any

from django.utils.timezone import now

from qa_tracker.services import away
from tests.builders import Ward

Given = dict[str, Any]


def leave(ward: Ward) -> Given:
    today = now().date()
    return {
        "person": ward.technician,
        "deputy": ward.physicist,
        "from_on": today,
        "until_on": today + dt.timedelta(days=6),
        "note": "Summer",
    }


def taken(ward: Ward) -> Given:
    made = away.take_leave(**leave(ward) | {"person": ward.user}, actor=ward.user, at=now())
    return {"leave": made.uid, "actor": ward.user}


DUTIES: dict[str, Callable[[Ward], Given]] = {
    "away.take_leave": lambda w: {**leave(w), "actor": w.technician},
    "away.cancel_leave": taken,
}
ASKED_OF_DUTIES = {
    "away.may_take_for": "asks",
}
