"""Registering devices, placing them, and the presets they are tested with."""

from __future__ import annotations

import datetime as dt
import json
import uuid
from collections.abc import Mapping
from dataclasses import dataclass, field

from qa_tracker.core import decimals
from qa_tracker.core.canonical import canonical
from qa_tracker.core.errors import Conflict, Invalid
from qa_tracker.core.library_shapes import ARRAY_KINDS, CONTACT_CLASSES
from qa_tracker.core.workflow import CHECK_AWAITED
from qa_tracker.records import ledger
from qa_tracker.records.models import (
    Aperture,
    Baseline,
    Check,
    Condition,
    Device,
    Location,
    Person,
    Placement,
    Pool,
    ProbeFacts,
    ScannerFacts,
    Site,
)
from qa_tracker.services import clocks, plans, software
from qa_tracker.services.finding import device as find_device
from qa_tracker.services.guards import check_may, required

APPLIED_PARTS = ("B", "BF", "CF")
PROTECTION_CLASSES = ("I", "II")


@dataclass(frozen=True)
class Place:
    """Where a device belongs: a site (with a room, or the scanner it is plugged to), or a pool."""

    site: Site | None = None
    location: Location | None = None
    scanner: Device | None = None
    pool: Pool | None = None


@dataclass(frozen=True)
class Identity:
    """Who a device is. ``register`` holds further fields by their column names."""

    maker: str
    model: str
    serial: str
    inventory_number: str = ""
    handheld: bool = False
    register: Mapping[str, object] = field(default_factory=dict)


def register_scanner(
    *,
    identity: Identity,
    place: Place,
    software_version: str,
    protection_class: str = "I",
    actor: Person,
    at: dt.datetime,
) -> Device:
    """Enter a scanner, awaiting acceptance. Writes Device, ScannerFacts, Placement; leaf ``device.registered``.

    Refused: role, a serial already there, an unknown protection class, a room of another site.
    """
    _one_of(protection_class, PROTECTION_CLASSES, "protection_class")
    check_may(actor, "device.register", _site_id(place), at)
    _check_place(place)
    with ledger.command("device.registered", actor=actor, at=at) as act:
        return add_scanner(act, identity, place, software_version, protection_class)


def add_scanner(
    act: ledger.Act,
    identity: Identity,
    place: Place,
    software_version: str,
    protection_class: str,
    state: str = "awaiting_acceptance",
) -> Device:
    """The rows of a new scanner; for commands and for history."""
    device = _add(act, "scanner", identity, place, state)
    act.insert(
        ScannerFacts(
            device=device,
            protection_class=protection_class,
            software_version=software_version,
            software_since_on=act.at.date(),
        )
    )
    act.tell(_told(identity, place) | {"kind": "scanner", "software": software_version})
    return device


def register_probe(
    *,
    identity: Identity,
    place: Place,
    array_kind: str,
    contact_class: str,
    applied_part: str,
    apertures: list[tuple[str, int | None]],
    wireless: bool = False,
    actor: Person,
    at: dt.datetime,
) -> Device:
    """Enter a probe, awaiting acceptance. Writes Device, ProbeFacts, Aperture, Placement.

    Leaf ``device.registered``. ``apertures`` are names with numbers of elements. Refused: role, a serial
    already there, an unknown class, no aperture or two of one name, a room or scanner of another site.
    """
    _one_of(array_kind, ARRAY_KINDS, "array_kind")
    _one_of(contact_class, CONTACT_CLASSES, "contact_class")
    _one_of(applied_part, APPLIED_PARTS, "applied_part")
    if not apertures:
        raise Invalid("probe.aperture_missing", field="apertures")
    _check_apertures([name for name, _elements in apertures])
    check_may(actor, "device.register", _site_id(place), at)
    _check_place(place)
    facts = ProbeFacts(
        array_kind=array_kind, contact_class=contact_class, applied_part=applied_part, wireless=wireless
    )
    with ledger.command("device.registered", actor=actor, at=at) as act:
        return add_probe(act, identity, place, facts, apertures)


def add_probe(
    act: ledger.Act,
    identity: Identity,
    place: Place,
    facts: ProbeFacts,
    apertures: list[tuple[str, int | None]],
    state: str = "awaiting_acceptance",
) -> Device:
    """The rows of a new probe; for commands and for history."""
    device = _add(act, "probe", identity, place, state)
    facts.device = device
    act.insert(facts)
    for name, elements in apertures:
        act.insert(Aperture(device=device, name=name, elements=elements))
    act.tell(
        _told(identity, place)
        | {"kind": "probe", "array_kind": facts.array_kind, "apertures": [name for name, _ in apertures]}
    )
    return device


def _add(act: ledger.Act, kind: str, identity: Identity, place: Place, state: str) -> Device:
    maker = required(identity.maker, "device.maker_missing", "maker")
    model = required(identity.model, "device.model_missing", "model")
    serial = required(identity.serial, "device.serial_missing", "serial")
    if Device.objects.filter(maker=maker, model=model, serial=serial).exists():
        raise Invalid("device.serial_taken", field="serial", maker=maker, model=model, serial=serial)
    device = act.insert(
        Device(
            kind=kind,
            maker=maker,
            model=model,
            serial=serial,
            inventory_number=identity.inventory_number,
            handheld=identity.handheld,
            state=state,
            state_since=act.at,
            **_where(place),
            **identity.register,
        )
    )
    act.insert(Placement(device=device, started_at=act.at, **_where(place)))
    act.about(device, device=device, site=place.site)
    return device


def _where(place: Place) -> dict[str, object]:
    return {"site": place.site, "location": place.location, "scanner": place.scanner, "pool": place.pool}


def _site_id(place: Place) -> int | None:
    return place.site.id if place.site else None


def _check_place(place: Place) -> None:
    """Refuse a room or a scanner of another site, and a probe plugged to what is no scanner."""
    room, scanner, site_id = place.location, place.scanner, _site_id(place)
    if room is not None and site_id not in (None, room.site_id):
        raise Invalid("device.place_mixed", field="location")
    if scanner is not None and (scanner.kind != "scanner" or site_id not in (None, scanner.site_id)):
        raise Invalid("device.place_mixed", field="scanner")


def _check_apertures(names: list[str]) -> None:
    for name in names:
        required(name, "probe.aperture_missing", "apertures")
        if names.count(name) > 1:
            raise Invalid("probe.aperture_twice", field="apertures", name=name)


def _one_of(value: str, known: tuple[str, ...], name: str) -> None:
    if value not in known:
        raise Invalid("device.unknown_word", field=name, value=value, known=", ".join(known))


def _told(identity: Identity, place: Place) -> dict[str, object]:
    return {
        "maker": identity.maker,
        "model": identity.model,
        "serial": identity.serial,
        "site": place.site.code if place.site else None,
        "pool": place.pool.name if place.pool else None,
        "location": place.location.name if place.location else None,
        "scanner": place.scanner.serial if place.scanner else None,
    }


def move(
    *,
    device: uuid.UUID,
    place: Place,
    reason: str,
    responsible: Person | None = None,
    actor: Person,
    at: dt.datetime,
) -> None:
    """End a device's placement and begin the next. Writes Placement twice and Device; leaf ``device.placed``.

    What is still to be done on the device is from then on the new site's to do, on the same days by its clocks. Refused: role at either end, the
    place it already has, a room or scanner of another site.
    """
    row = find_device(actor, device, at)
    check_may(actor, "device.place", row.site_id, at)
    check_may(actor, "device.place", _site_id(place), at)
    _check_place(place)
    open_placement = Placement.objects.get(device=row, ended_at=None)
    now_at = (row.site_id, row.location_id, row.scanner_id, row.pool_id)
    if now_at == tuple(getattr(each, "id", None) for each in _where(place).values()):
        raise Conflict("device.already_there", field="site")
    with ledger.command("device.placed", actor=actor, at=at, reason=reason) as act:
        place_device(act, row, open_placement, place, reason)
        plans.hand_over(act, row, place.site, responsible, actor)
        awaited = Check.objects.filter(device=row, state__in=CHECK_AWAITED).exclude(site=place.site)
        for check in awaited.select_related("site"):
            act.change(check, site=place.site, **clocks.same_days_at(check, place.site))
            clocks.look_at(check, at)


def place_device(
    act: ledger.Act, device: Device, open_placement: Placement, place: Place, reason: str
) -> Placement:
    """The rows of a move; for commands and for history."""
    old = {"site_id": device.site_id, "scanner_id": device.scanner_id, "location_id": device.location_id}
    act.change(open_placement, ended_at=act.at)
    begun = act.insert(Placement(device=device, started_at=act.at, reason=reason, **_where(place)))
    act.change(device, **_where(place))
    act.about(device, device=device, site=place.site)
    new = {
        "site_id": _site_id(place),
        "scanner_id": place.scanner.id if place.scanner else None,
        "location_id": place.location.id if place.location else None,
    }
    act.tell(new, old)
    return begun


def edit(*, device: uuid.UUID, changes: Mapping[str, object], actor: Person, at: dt.datetime) -> None:
    """Change register fields of a device; leaf ``device.edited``. Identity and state have their own commands."""
    row = find_device(actor, device, at)
    check_may(actor, "device.edit", row.site_id, at)
    allowed = {
        "inventory_number", "udi", "owner", "purchased_on", "warranty_ends_on", "contract",
        "replacement_year", "network_title", "clinical_use", "keeper", "spare",
    }  # fmt: skip
    unknown = sorted(set(changes) - allowed)
    if unknown:
        raise Invalid("device.field_fixed", field=unknown[0], name=unknown[0])
    old = {name: str(getattr(row, name) or "") for name in changes}
    with ledger.command("device.edited", actor=actor, at=at) as act:
        act.change(row, **changes)
        act.about(row, device=row, site=row.site)
        act.tell({name: str(value or "") for name, value in changes.items()}, old)


def record_software(
    *, scanner: uuid.UUID, version: str, options: str, since_on: dt.date, actor: Person, at: dt.datetime
) -> list[Baseline]:
    """Record a software version of a scanner; baselines measured on it are under review from then on.

    Writes ScannerFacts, Baseline; leaf ``device.software_recorded``. Returns the baselines put under review.
    """
    row = find_device(actor, scanner, at)
    check_may(actor, "device.edit", row.site_id, at)
    facts = ScannerFacts.objects.filter(device=row).first()
    if facts is None:
        raise Invalid("device.not_a_scanner", field="device")
    with ledger.command("device.software_recorded", actor=actor, at=at) as act:
        return software.record(act, facts, version, options, since_on, software.standing_on(row))


def set_condition(
    *,
    device: uuid.UUID,
    name: str,
    test_frequency_mhz: str,
    sound_speed_m_s: str,
    settings: Mapping[str, str],
    actor: Person,
    at: dt.datetime,
) -> Condition:
    """Set a named preset of a device, new or changed. Writes Condition; leaf ``condition.set``.

    Refused: role, a frequency or speed that is no number.
    """
    row = find_device(actor, device, at)
    check_may(actor, "condition.set", row.site_id, at)
    for field_name, text in (
        ("test_frequency_mhz", test_frequency_mhz),
        ("sound_speed_m_s", sound_speed_m_s),
    ):
        if text:
            decimals.parse(text, field=field_name)
    with ledger.command("condition.set", actor=actor, at=at) as act:
        known = Condition.objects.filter(device=row, name=name.strip()).first()
        return put_condition(act, row, name, test_frequency_mhz, sound_speed_m_s, settings, known)


def put_condition(
    act: ledger.Act,
    device: Device,
    name: str,
    test_frequency_mhz: str,
    sound_speed_m_s: str,
    settings: Mapping[str, str],
    known: Condition | None,
) -> Condition:
    """The rows of a condition, new or ``known``; for commands and for history."""
    name = required(name, "condition.name_missing", "name")
    told = {"name": name, "test_frequency_mhz": test_frequency_mhz, "sound_speed_m_s": sound_speed_m_s,
            "settings": dict(settings)}  # fmt: skip
    columns = {
        "test_frequency_mhz": test_frequency_mhz,
        "sound_speed_m_s": sound_speed_m_s,
        "settings": canonical(dict(settings)).decode(),
    }
    old: dict[str, object] = {}
    if known is None:
        condition = act.insert(Condition(device=device, name=name, **columns))
    else:
        condition, old = known, {"settings": json.loads(known.settings)}
        act.change(condition, **columns)
    act.about(condition, device=device, site=device.site)
    act.tell(told, old)
    return condition
