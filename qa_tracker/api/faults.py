"""Faults: seen, acted on, looked up."""

from __future__ import annotations

import uuid
from typing import Any

from qa_tracker.api.authentication import ApiRequest, Caller
from qa_tracker.api.fault_shapes import ActionIn, FaultBriefOut, FaultIn, FaultOut
from qa_tracker.api.nouns import NounRouter
from qa_tracker.api.schemas import MOST, Mark
from qa_tracker.core.errors import NotFound
from qa_tracker.records.queries import faults as rows
from qa_tracker.services import faults

router = NounRouter(tags=["faults"])


@router.reads("/faults", list[FaultBriefOut], "listFaults")
def list_faults(
    request: ApiRequest,
    state: Mark | None = None,
    grade: Mark | None = None,
    device: uuid.UUID | None = None,
) -> list[rows.FaultRow]:
    """Faults in sight, suspension first and the oldest first; without `state` those not closed."""
    wanted: dict[str, object] = {"state": state} if state is not None else {"closed_at": None}
    if grade is not None:
        wanted["grade"] = grade
    if device is not None:
        wanted["device__uid"] = device
    return rows.list_faults(request.auth.scope(), **wanted)[:MOST]


@router.makes("/faults", FaultOut, "openFault")
def open_fault(request: ApiRequest, body: FaultIn) -> dict[str, Any]:
    """Open a fault by hand."""
    caller = request.auth
    made = faults.open_fault(**vars(body), actor=caller.actor, at=caller.at)
    return _whole(caller, made.uid)


@router.reads("/faults/{uuid:uid}", FaultOut, "showFault")
def show_fault(request: ApiRequest, uid: uuid.UUID) -> dict[str, Any]:
    """One fault with its actions."""
    return _whole(request.auth, uid)


@router.makes("/faults/{uuid:uid}/actions", FaultOut, "actOnFault")
def act_on(request: ApiRequest, uid: uuid.UUID, body: ActionIn) -> dict[str, Any]:
    """Record something done about a fault; answers the fault with all its actions."""
    caller = request.auth
    faults.act_on(fault=uid, **vars(body), actor=caller.actor, at=caller.at)
    return _whole(caller, uid)


def _whole(caller: Caller, uid: uuid.UUID) -> dict[str, Any]:
    found = rows.find_fault(caller.scope(), uid)
    if found is None:
        raise NotFound("fault.unknown")
    return vars(found) | {"actions": rows.actions_of(found.id)}
