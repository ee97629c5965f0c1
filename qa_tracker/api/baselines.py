"""Baselines: proposed and set by value, from a submission or from set-ups; under review, and kept."""

from __future__ import annotations

import uuid
from typing import TYPE_CHECKING, Any

from qa_tracker.api.authentication import ApiRequest
from qa_tracker.api.baseline_shapes import (
    BaselineOut,
    BaselinesIn,
    FromSubmissionIn,
    KeepIn,
    ProposedOut,
    ProposedSetUpsIn,
    ProposedSetUpsOut,
    ProposedValuesIn,
    SetUpsIn,
    SoftwareIn,
    UnderReviewOut,
    baselines_out,
    figures_out,
    proposed_out,
)
from qa_tracker.api.nouns import NounRouter
from qa_tracker.core.errors import NotFound
from qa_tracker.records.queries import baselines as rows
from qa_tracker.records.queries import devices as device_rows
from qa_tracker.records.queries.baseline_readings import under_review_at
from qa_tracker.services import baseline_reviews, baseline_setups, baselines, devices
from qa_tracker.services.baselines import Value

if TYPE_CHECKING:
    from qa_tracker.records.models import Baseline

router = NounRouter(tags=["baselines"])


@router.does("/devices/{uuid:uid}/baselines/preview", ProposedOut, "previewBaselines")
def preview_baselines(request: ApiRequest, uid: uuid.UUID, body: ProposedValuesIn) -> dict[str, Any]:
    """What setting these values would change, with the share of the allowance used since acceptance."""
    return proposed_out(baselines.propose_values(**_values(request, uid, body)))


@router.makes("/devices/{uuid:uid}/baselines", list[BaselineOut], "setBaselines")
def set_baselines(request: ApiRequest, uid: uuid.UUID, body: BaselinesIn) -> list[dict[str, Any]]:
    """Set baselines by value; each begins a new epoch of its series."""
    signed = {"password": body.password, "shown_sha256": body.shown_sha256}
    return _rows(baselines.set_values(**_values(request, uid, body), **signed))


def _values(request: ApiRequest, uid: uuid.UUID, body: ProposedValuesIn) -> dict[str, Any]:
    return {
        "device": uid,
        "values": [Value(**vars(each)) for each in body.values],
        "test_object": body.test_object,
        "reason": body.reason,
        "terms": body.terms(),
        "actor": request.auth.actor,
        "at": request.auth.at,
    }


@router.makes("/submissions/{uuid:uid}/baselines", list[BaselineOut], "takeBaselines")
def take_baselines(request: ApiRequest, uid: uuid.UUID, body: FromSubmissionIn) -> list[dict[str, Any]]:
    """Make the numbers of a submission the baselines of their series, as at acceptance."""
    made = baselines.adopt_submission(
        submission=uid,
        reason=body.reason,
        password=body.password,
        terms=body.terms(),
        shown_sha256=body.shown_sha256,
        actor=request.auth.actor,
        at=request.auth.at,
    )
    return _rows(made)


@router.does("/devices/{uuid:uid}/baselines/set-ups/preview", ProposedSetUpsOut, "previewSetUps")
def preview_set_ups(request: ApiRequest, uid: uuid.UUID, body: ProposedSetUpsIn) -> dict[str, Any]:
    """What the mean of set-ups would change: mean, spread, tolerance interval, suspects, and what is missing."""
    proposed = baseline_setups.propose_setups(**_set_ups(request, uid, body))
    figures = baseline_setups.figures_of(proposed.proposals[0])
    return proposed_out(proposed) | {"figures": figures_out(figures)}


@router.makes("/devices/{uuid:uid}/baselines/set-ups", BaselineOut, "setBaselineFromSetUps")
def set_from_set_ups(request: ApiRequest, uid: uuid.UUID, body: SetUpsIn) -> dict[str, Any]:
    """Set a baseline as the mean of independent set-ups, which are kept with it."""
    signed = {"password": body.password, "shown_sha256": body.shown_sha256}
    made = baseline_setups.set_from_setups(**_set_ups(request, uid, body), **signed)
    return _rows([made])[0]


def _set_ups(request: ApiRequest, uid: uuid.UUID, body: ProposedSetUpsIn) -> dict[str, Any]:
    return {
        "device": uid,
        "series": body.where(),
        "setups": body.chosen(),
        "test_object": body.test_object,
        "reason": body.reason,
        "terms": body.terms(),
        "actor": request.auth.actor,
        "at": request.auth.at,
    }


@router.makes("/devices/{uuid:uid}/baselines/keep", list[BaselineOut], "keepBaselines")
def keep_baselines(request: ApiRequest, uid: uuid.UUID, body: KeepIn) -> list[dict[str, Any]]:
    """Keep baselines that are under review: the same value for the software in use now."""
    made = baseline_reviews.keep(device=uid, **vars(body), actor=request.auth.actor, at=request.auth.at)
    return _rows(made)


@router.reads("/devices/{uuid:uid}/baselines/under-review", list[UnderReviewOut], "listUnderReview")
def list_under_review(request: ApiRequest, uid: uuid.UUID) -> list[dict[str, Any]]:
    """Baselines under review of a device; of a scanner, those of the probes on it too."""
    device = device_rows.find_device(request.auth.scope(), uid)
    if device is None or device.seen_until is not None:
        raise NotFound("device.unknown")
    return [
        {"device": each.device_uid, "label": each.label, "baselines": _waiting(each.device_id)}
        for each in under_review_at(device.id)
    ]


def _waiting(device_id: int) -> list[dict[str, Any]]:
    return [each for each in baselines_out(rows.baselines_of(device_id)) if each["under_review"]]


@router.makes("/devices/{uuid:uid}/software", list[BaselineOut], "recordSoftware")
def record_software(request: ApiRequest, uid: uuid.UUID, body: SoftwareIn) -> list[dict[str, Any]]:
    """Record a software version of a scanner; answers the baselines this puts under review."""
    made = devices.record_software(scanner=uid, **vars(body), actor=request.auth.actor, at=request.auth.at)
    return _rows(made)


def _rows(made: list[Baseline]) -> list[dict[str, Any]]:
    uids = {each.uid for each in made}
    known = [
        row
        for device_id in dict.fromkeys(each.device_id for each in made)
        for row in baselines_out(rows.baselines_of(device_id))
    ]
    return [row for row in known if row["uid"] in uids]
