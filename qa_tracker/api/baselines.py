"""Baselines: set by value, or taken from a submission."""

from __future__ import annotations

import uuid
from typing import TYPE_CHECKING

from qa_tracker.api.authentication import ApiRequest
from qa_tracker.api.device_shapes import BaselineOut
from qa_tracker.api.nouns import NounRouter
from qa_tracker.api.schemas import Given, Mark, Secret, Words
from qa_tracker.records.queries import baselines as rows
from qa_tracker.services import baselines
from qa_tracker.services.baselines import Value

if TYPE_CHECKING:
    from qa_tracker.records.models import Baseline

router = NounRouter(tags=["baselines"])


class ValueIn(Given):
    """A value as text in the measurand's unit, at an aperture and condition where it has them."""

    measurand: Mark
    text: Mark
    aperture: uuid.UUID | None = None
    condition: uuid.UUID | None = None
    qualifier: Mark = "="


class BaselinesIn(Given):
    """Values that become baselines, signed."""

    values: list[ValueIn]
    test_object: uuid.UUID | None = None
    reason: Words
    password: Secret


class FromSubmissionIn(Given):
    """The reason for taking a submission's numbers as baselines, signed."""

    reason: Words
    password: Secret


@router.makes("/devices/{uuid:uid}/baselines", list[BaselineOut], "setBaselines")
def set_baselines(request: ApiRequest, uid: uuid.UUID, body: BaselinesIn) -> list[rows.BaselineRow]:
    """Set baselines by value; each begins a new epoch of its series."""
    caller = request.auth
    made = baselines.set_values(
        device=uid,
        values=[Value(**vars(each)) for each in body.values],
        test_object=body.test_object,
        reason=body.reason,
        password=body.password,
        actor=caller.actor,
        at=caller.at,
    )
    return _rows(made)


@router.makes("/submissions/{uuid:uid}/baselines", list[BaselineOut], "takeBaselines")
def take_baselines(request: ApiRequest, uid: uuid.UUID, body: FromSubmissionIn) -> list[rows.BaselineRow]:
    """Make the numbers of a submission the baselines of their series, as at acceptance."""
    caller = request.auth
    made = baselines.adopt_submission(
        submission=uid, reason=body.reason, password=body.password, actor=caller.actor, at=caller.at
    )
    return _rows(made)


def _rows(made: list[Baseline]) -> list[rows.BaselineRow]:
    uids = {each.uid for each in made}
    known = rows.baselines_of(made[0].device_id)
    return [row for row in known if row.uid in uids]
