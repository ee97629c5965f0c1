"""Plans of devices."""

from __future__ import annotations

import datetime as dt
import uuid
from dataclasses import dataclass

from qa_tracker.records.models import CheckPlan, Procedure
from qa_tracker.records.queries.as_of import nouns
from qa_tracker.records.queries.people import names


@dataclass(frozen=True)
class PlanRow:
    """A procedure owed by a device: how often, in which window, by whom."""

    id: int
    uid: uuid.UUID
    device_id: int
    procedure_id: int
    procedure: str
    rule: str
    basis: str
    anchor_on: dt.date
    before_days: int
    grace_days: int
    roll: str
    responsible_id: int
    responsible: str
    ended_at: dt.datetime | None


def _rows(plans: list[CheckPlan]) -> list[PlanRow]:
    titles = dict(Procedure.objects.values_list("id", "title"))
    people = names({plan.responsible_id for plan in plans})
    return [
        PlanRow(
            plan.id,
            plan.uid,
            plan.device_id,
            plan.procedure_id,
            titles[plan.procedure_id],
            plan.rule,
            plan.basis,
            plan.anchor_on,
            plan.before_days,
            plan.grace_days,
            plan.roll,
            plan.responsible_id,
            people.get(plan.responsible_id, ""),
            plan.ended_at,
        )
        for plan in plans
    ]


def plans_of(device_id: int, as_of: dt.datetime | None = None) -> list[PlanRow]:
    """A device's plans, those that ended included."""
    return _rows(nouns(CheckPlan, as_of, device_id=device_id))


def devices_without_plan(device_ids: list[int]) -> set[int]:
    """Which of these devices no plan in force covers."""
    planned = CheckPlan.objects.filter(device_id__in=device_ids, ended_at=None)
    return set(device_ids) - set(planned.values_list("device_id", flat=True))
