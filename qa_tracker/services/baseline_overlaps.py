"""Overlap readings: a baseline passes to another test object only by a reading of both in the same days."""

from __future__ import annotations

import datetime as dt
from collections.abc import Sequence

from django.db.models import Q

from qa_tracker.core.decimals import Exact, parse
from qa_tracker.core.errors import Conflict
from qa_tracker.records.models import Baseline, Reading, TestObject
from qa_tracker.services.baseline_limits import Asked
from qa_tracker.services.baseline_rows import Tie, named

WITHIN_DAYS = 14
"""How far apart the readings on the two objects may be. Common practice, no source."""


def needs_overlap(asked: Asked) -> bool:
    """Whether another test object would show the measurand differently, so that its change is judged wrongly."""
    of_change = any(
        row.spec.criterion.basis == "baseline" and row.spec.criterion.direction in ("below", "either")
        for row in asked.adopted.values()
        if row.code in asked.spec.criteria or asked.spec.code in row.spec.measurands
    )
    return asked.spec.medium == "phantom" and of_change


def left_behind(standing: Sequence[Baseline], test_object: TestObject | None) -> list[Baseline]:
    """The baselines in force, newest first, that a new one on this object would leave standing on others."""
    if test_object is None or any(each.test_object_id in (None, test_object.pk) for each in standing):
        return []
    return sorted(standing, key=lambda each: -each.epoch)


def tie_for(
    asked: Asked,
    standing: Sequence[Baseline],
    test_object: TestObject | None,
    *,
    taken_at: dt.datetime,
    typed: str = "",
    why_none: str = "",
) -> Tie | None:
    """What ties a baseline on a test object to those on others; None where nothing has to.

    A reading on the other object that is given counts before one found among the stored ones, and that before a
    reason why there is none.

    Raises
    ------
    Conflict
        ``baseline.no_overlap``; ``baseline.object_not_named`` where those before stand on one, since a baseline on
        no object would be compared with readings on any
    """
    on_an_object = next((each for each in standing if each.test_object_id is not None), None)
    if test_object is None and on_an_object and needs_overlap(asked) and not why_none.strip():
        raise Conflict(
            "baseline.object_not_named",
            field=asked.name,
            measurand=asked.spec.name,
            was=named(on_an_object.test_object),
        )
    others = left_behind(standing, test_object)
    if not others or not needs_overlap(asked):
        return None
    if typed:
        return Tie(others[0], parse(typed, asked.spec.resolution, field=asked.name))
    found = _stored(asked, others, taken_at)
    if found is not None:
        return found
    if why_none.strip():
        return Tie(others[0], None, why_none.strip())
    raise Conflict(
        "baseline.no_overlap",
        field=asked.name,
        measurand=asked.spec.name,
        was=named(others[0].test_object),
        now=named(test_object),
        days=WITHIN_DAYS,
    )


def _stored(asked: Asked, others: Sequence[Baseline], taken_at: dt.datetime) -> Tie | None:
    """The reading on one of the other objects that is nearest in time."""
    within = dt.timedelta(days=WITHIN_DAYS)
    found = Reading.objects.filter(
        device=asked.device,
        measurand__code=asked.spec.code,
        aperture=asked.aperture,
        condition=asked.condition,
        qualifier="=",
        submission__test_object__in=[each.test_object_id for each in others],
        measured_at__range=(taken_at - within, taken_at + within),
    ).exclude(Q(scaled=None) | Q(submission__check_of__state="void"))
    rows = list(found.select_related("submission").order_by("-id"))
    if not rows:
        return None
    nearest = min(rows, key=lambda row: abs(row.measured_at - taken_at))
    to = next(each for each in others if each.test_object_id == nearest.submission.test_object_id)
    return Tie(to, Exact(nearest.entered, nearest.scaled or 0, nearest.places or 0))
