"""The rows of ``test_leaf_or_nothing`` that are about the life of a check: its due day, its year."""

from __future__ import annotations

import datetime as dt
import itertools
from collections.abc import Callable
from typing import Any

from qa_tracker.records.models import Check
from qa_tracker.services.devices import Place
from tests import builders
from tests.builders import Ward

numbers = itertools.count(1)
Given = dict[str, Any]


def awaited(ward: Ward) -> Check:
    """A check due today that nothing else touches."""
    device = builders.probe(ward.physicist, Place(site=ward.site), serial=f"LF-{next(numbers)}")
    return builders.plan(device, builders.MONTHLY, ward.technician, ward.physicist)


def another_day(ward: Ward) -> Given:
    check = awaited(ward)
    return {
        "check": check.uid,
        "to_on": check.due_on + dt.timedelta(days=2),
        "reason": "Theatre list is full",
    }


def several(ward: Ward) -> Given:
    given = another_day(ward)
    return {"moves": [(given["check"], given["to_on"])], "reason": "To even the weeks out"}


LIFE: dict[str, Callable[[Ward], Given]] = {
    "due_days.move": lambda w: {**another_day(w), "actor": w.physicist},
    "year_ahead.spread": lambda w: {**several(w), "actor": w.physicist},
}

ASKED_OF_LIFE = {
    "due_days.may_move": "asks",
    "due_days.room": "reads",
}
