"""Scanners and probes: found, registered, and moved between places and states."""

from __future__ import annotations

import uuid
from typing import Any

from qa_tracker.api.authentication import ApiRequest, Caller
from qa_tracker.api.baseline_shapes import baselines_out
from qa_tracker.api.device_shapes import (
    AcceptIn,
    ConditionIn,
    ConditionOut,
    DeviceOut,
    DevicePage,
    MoveIn,
    PlaceIn,
    PlanIn,
    PlanOut,
    ProbeIn,
    QuarantineIn,
    RestoreIn,
    ScannerIn,
    WholeDeviceOut,
)
from qa_tracker.api.fault_shapes import FaultOut
from qa_tracker.api.nouns import NounRouter
from qa_tracker.api.schemas import Cursor, Limit, Mark, Name, page
from qa_tracker.core.errors import NotFound
from qa_tracker.records.queries import baselines, faults, plans
from qa_tracker.records.queries import devices as rows
from qa_tracker.records.queries.devices import DeviceRow
from qa_tracker.services import devices, finding, states
from qa_tracker.services import plans as planning
from qa_tracker.services.devices import Identity, Place
from qa_tracker.services.plans import Recurrence

router = NounRouter(tags=["devices"])


@router.reads("/devices", DevicePage, "listDevices")
def list_devices(
    request: ApiRequest,
    kind: Mark | None = None,
    site: uuid.UUID | None = None,
    state: Mark | None = None,
    serial: Name | None = None,
    text: Name = "",
    after: Cursor = 0,
    limit: Limit = 50,
) -> dict[str, Any]:
    """Devices in sight, oldest first; `text` looks in maker, model, serial and inventory number."""
    wanted = {"kind": kind, "site__uid": site, "state": state, "serial": serial}
    given = {name: value for name, value in wanted.items() if value is not None}
    found = rows.list_devices(request.auth.scope(), text=text, after=after, most=limit + 1, **given)
    return page(found, limit)


@router.reads("/devices/{uuid:uid}", WholeDeviceOut, "showDevice")
def show_device(request: ApiRequest, uid: uuid.UUID) -> dict[str, Any]:
    """One device with placements, apertures, conditions, plans and baselines."""
    device = device_row(request.auth, uid)
    until = device.seen_until
    return vars(device) | {
        "placements": rows.placements_of(device.id, until),
        "apertures": rows.apertures_of(device.id, until),
        "conditions": rows.conditions_of(device.id, until),
        "plans": plans.plans_of(device.id, until),
        "baselines": baselines_out(baselines.baselines_of(device.id, until)),
    }


def device_row(caller: Caller, uid: uuid.UUID) -> DeviceRow:
    """A device in sight, or that was."""
    found = rows.find_device(caller.scope(), uid)
    if found is None:
        raise NotFound("device.unknown")
    return found


@router.makes("/devices/scanners", DeviceOut, "registerScanner")
def register_scanner(request: ApiRequest, body: ScannerIn) -> DeviceRow:
    """Register a scanner; it awaits acceptance."""
    caller = request.auth
    made = devices.register_scanner(
        identity=_identity(body),
        place=_place(caller, body.place),
        software_version=body.software_version,
        protection_class=body.protection_class,
        actor=caller.actor,
        at=caller.at,
    )
    return device_row(caller, made.uid)


@router.makes("/devices/probes", DeviceOut, "registerProbe")
def register_probe(request: ApiRequest, body: ProbeIn) -> DeviceRow:
    """Register a probe; it awaits acceptance."""
    caller = request.auth
    made = devices.register_probe(
        identity=_identity(body),
        place=_place(caller, body.place),
        array_kind=body.array_kind,
        contact_class=body.contact_class,
        applied_part=body.applied_part,
        apertures=[(each.name, each.elements) for each in body.apertures],
        wireless=body.wireless,
        actor=caller.actor,
        at=caller.at,
    )
    return device_row(caller, made.uid)


def _identity(body: ScannerIn | ProbeIn) -> Identity:
    handheld = body.handheld if isinstance(body, ScannerIn) else False
    return Identity(body.maker, body.model, body.serial, body.inventory_number, handheld)


def _place(caller: Caller, given: PlaceIn) -> Place:
    actor, at = caller.actor, caller.at
    site = finding.site(actor, given.site, at) if given.site else None
    return Place(
        site=site,
        location=finding.location(site, given.location) if site else None,
        scanner=finding.device(actor, given.scanner, at) if given.scanner else None,
        pool=finding.pool(actor, given.pool, at) if given.pool else None,
    )


@router.makes("/devices/{uuid:uid}/quarantine", FaultOut, "quarantineDevice")
def quarantine(request: ApiRequest, uid: uuid.UUID, body: QuarantineIn) -> object:
    """Take a device out of use at once; answers the fault this opens."""
    caller = request.auth
    fault = states.quarantine(device=uid, seen=body.seen, place=body.place, actor=caller.actor, at=caller.at)
    return vars(faults.find_fault(caller.scope(), fault.uid)) | {"actions": []}


@router.does("/devices/{uuid:uid}/accept", DeviceOut, "acceptDevice")
def accept(request: ApiRequest, uid: uuid.UUID, body: AcceptIn) -> DeviceRow:
    """Sign a device's acceptance into use."""
    caller = request.auth
    states.accept(device=uid, remark=body.remark, password=body.password, actor=caller.actor, at=caller.at)
    return device_row(caller, uid)


@router.does("/devices/{uuid:uid}/restore", DeviceOut, "restoreDevice")
def restore(request: ApiRequest, uid: uuid.UUID, body: RestoreIn) -> DeviceRow:
    """Sign a device's restoration to use."""
    caller = request.auth
    states.restore(
        device=uid,
        proving_check=body.proving_check,
        remark=body.remark,
        password=body.password,
        actor=caller.actor,
        at=caller.at,
    )
    return device_row(caller, uid)


@router.does("/devices/{uuid:uid}/move", DeviceOut, "moveDevice")
def move(request: ApiRequest, uid: uuid.UUID, body: MoveIn) -> DeviceRow:
    """End the device's placement and begin the next."""
    caller = request.auth
    place = _place(caller, body.place)
    devices.move(device=uid, place=place, reason=body.reason, actor=caller.actor, at=caller.at)
    return device_row(caller, uid)


@router.makes("/devices/{uuid:uid}/conditions", ConditionOut, "setCondition")
def set_condition(request: ApiRequest, uid: uuid.UUID, body: ConditionIn) -> object:
    """Set a named preset, new or changed."""
    caller = request.auth
    made = devices.set_condition(device=uid, **vars(body), actor=caller.actor, at=caller.at)
    known = rows.conditions_of(device_row(caller, uid).id)
    return next(each for each in known if each.uid == made.uid)


@router.makes("/devices/{uuid:uid}/plans", PlanOut, "makePlan")
def make_plan(request: ApiRequest, uid: uuid.UUID, body: PlanIn) -> object:
    """Plan a procedure for a device; its first occurrence opens at once."""
    caller = request.auth
    made = planning.make(
        device=uid,
        procedure=body.procedure,
        recurrence=Recurrence(
            body.rule, body.basis, body.anchor_on, body.before_days, body.grace_days, body.roll
        ),
        responsible=finding.person(body.responsible),
        actor=caller.actor,
        at=caller.at,
    )
    return next(each for each in plans.plans_of(made.device_id) if each.uid == made.uid)
