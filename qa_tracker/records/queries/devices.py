"""Scanners and probes with where they are, within a person's sight."""

from __future__ import annotations

import datetime as dt
import json
import uuid
from dataclasses import dataclass

from django.db import models
from django.db.models import Q
from django.db.models.functions import Cast

from qa_tracker.records.models import (
    Aperture,
    Condition,
    Device,
    Location,
    Placement,
    Pool,
    ProbeFacts,
    ScannerFacts,
    Site,
    Version,
)
from qa_tracker.records.queries.as_of import noun, nouns
from qa_tracker.records.queries.scope import Scope, devices_in


@dataclass(frozen=True)
class DeviceRow:
    """A device with its facts. ``seen_until`` is set for a former site: what came later is out of sight."""

    id: int
    uid: uuid.UUID
    version: int
    kind: str
    maker: str
    model: str
    serial: str
    inventory_number: str
    handheld: bool
    state: str
    state_note: str
    state_since: dt.datetime
    site_id: int | None
    site_code: str
    site_name: str
    pool_id: int | None
    pool_name: str
    scanner_id: int | None
    scanner_uid: uuid.UUID | None
    scanner_label: str
    location_id: int | None
    location: str
    location_position: int
    array_kind: str
    contact_class: str
    applied_part: str
    protection_class: str
    software_version: str
    register: dict[str, str]
    seen_until: dt.datetime | None = None

    @property
    def label(self) -> str:
        """Maker, model and serial, as people name a device."""
        return f"{self.maker} {self.model} {self.serial}"


REGISTER = (
    "udi", "owner", "purchased_on", "warranty_ends_on", "contract", "replacement_year", "network_title",
    "clinical_use", "keeper", "spare",
)  # fmt: skip


@dataclass(frozen=True)
class _Beside:
    """The rows beside devices, fetched once for a list."""

    sites: dict[int, Site]
    pools: dict[int, Pool]
    rooms: dict[int, Location]
    scanners: dict[int, Device]
    probe_facts: dict[int, ProbeFacts]
    scanner_facts: dict[int, ScannerFacts]


def _beside(devices: list[Device], as_of: dt.datetime | None) -> _Beside:
    ids = [device.id for device in devices]
    above = [device.scanner_id for device in devices if device.scanner_id]
    wanted = {"device_id": ids} if as_of is None else {}
    return _Beside(
        {site.id: site for site in nouns(Site, as_of)},
        {pool.id: pool for pool in nouns(Pool, as_of)},
        {room.id: room for room in nouns(Location, as_of)},
        {device.id: device for device in nouns(Device, as_of, id=list(set(above)))},
        {facts.device_id: facts for facts in nouns(ProbeFacts, as_of, **wanted)},
        {facts.device_id: facts for facts in nouns(ScannerFacts, as_of, **wanted)},
    )


def _row(device: Device, beside: _Beside, seen_until: dt.datetime | None = None) -> DeviceRow:
    site = beside.sites.get(device.site_id or 0)
    pool = beside.pools.get(device.pool_id or 0)
    room = beside.rooms.get(device.location_id or 0)
    scanner = beside.scanners.get(device.scanner_id or 0)
    probe, console = beside.probe_facts.get(device.id), beside.scanner_facts.get(device.id)
    return DeviceRow(
        device.id, device.uid, device.version, device.kind, device.maker, device.model, device.serial,
        device.inventory_number, device.handheld, device.state, device.state_note, device.state_since,
        device.site_id, site.code if site else "", site.name if site else "",
        device.pool_id, pool.name if pool else "",
        device.scanner_id, scanner.uid if scanner else None,
        f"{scanner.model} {scanner.serial}" if scanner else "",
        device.location_id, room.name if room else "", room.position if room else 0,
        probe.array_kind if probe else "", probe.contact_class if probe else "",
        probe.applied_part if probe else "", console.protection_class if console else "",
        console.software_version if console else "",
        {name: str(value) for name in REGISTER if (value := getattr(device, name)) not in (None, "", False)},
        seen_until,
    )  # fmt: skip


def _fits(device: Device, text: str) -> bool:
    words = f"{device.maker} {device.model} {device.serial} {device.inventory_number}".casefold()
    return all(word in words for word in text.casefold().split())


def list_devices(
    scope: Scope,
    *,
    as_of: dt.datetime | None = None,
    text: str = "",
    after: int = 0,
    most: int | None = None,
    **wanted: object,
) -> list[DeviceRow]:
    """Devices in sight. ``wanted`` names columns such as ``kind``, ``site_id``, ``state``, ``scanner_id``;
    a list means any of its values. ``after`` and ``most`` page by key.
    """
    if as_of is None:
        columns = {
            f"{name}__in" if isinstance(value, list) else name: value for name, value in wanted.items()
        }
        found = Device.objects.filter(devices_in(scope), id__gt=after, **columns).distinct().order_by("id")
        for word in text.split():
            found = found.filter(
                Q(maker__icontains=word)
                | Q(model__icontains=word)
                | Q(serial__icontains=word)
                | Q(inventory_number__icontains=word)
            )
        devices = list(found[:most])
    else:
        devices = [
            device
            for device in nouns(Device, as_of, **wanted)
            if _held_in(scope, device, as_of) and _fits(device, text) and device.id > after
        ][:most]
    beside = _beside(devices, as_of)
    return [_row(device, beside) for device in devices]


def _held_in(scope: Scope, device: Device, as_of: dt.datetime) -> bool:
    if scope.whole_group or scope.holds(device.site_id):
        return True
    members = Pool.objects.filter(id=device.pool_id, members__site_id__in=scope.site_ids())
    return device.pool_id is not None and members.exists()


def find_device(scope: Scope, uid: uuid.UUID, as_of: dt.datetime | None = None) -> DeviceRow | None:
    """A device by uid: in sight now, or held by a site in sight at some time (then up to the move)."""
    present = Device.objects.filter(devices_in(scope), uid=uid).first()
    device, seen_until = present, None
    if present is None:
        device = Device.objects.filter(uid=uid).first()
        seen_until = _last_seen(scope, device) if device else None
        if device is None or seen_until is None:
            return None
        as_of = seen_until if as_of is None else min(as_of, seen_until)
    known = noun(Device, as_of, id=device.id) if device else None
    return _row(known, _beside([known], as_of), seen_until) if known else None


def _last_seen(scope: Scope, device: Device) -> dt.datetime | None:
    ended = Placement.objects.filter(device=device, site_id__in=scope.site_ids()).exclude(ended_at=None)
    moved_at = ended.order_by("-ended_at").values_list("ended_at", flat=True).first()
    # At the moment of the move the device is known at its new place already, which is not theirs to see.
    return moved_at - dt.timedelta(microseconds=1) if moved_at else None


def by_serial(scope: Scope, serial: str) -> list[DeviceRow]:
    """Devices in sight with this serial, of whatever maker."""
    return list_devices(scope, serial=serial)


def device_by_id(device_id: int) -> DeviceRow:
    """A device by key, for use inside commands."""
    device = Device.objects.get(pk=device_id)
    return _row(device, _beside([device], None))


@dataclass(frozen=True)
class ApertureRow:
    """One radiating face."""

    id: int
    uid: uuid.UUID
    name: str
    elements: int | None
    pitch_um: int | None


def apertures_of(device_id: int, as_of: dt.datetime | None = None) -> list[ApertureRow]:
    """A probe's apertures."""
    return [
        ApertureRow(each.id, each.uid, each.name, each.elements, each.pitch_um)
        for each in nouns(Aperture, as_of, device_id=device_id)
    ]


@dataclass(frozen=True)
class ConditionRow:
    """A named preset with its settings as canonical JSON text."""

    id: int
    uid: uuid.UUID
    name: str
    test_frequency_mhz: str
    sound_speed_m_s: str
    settings: str


def parts_of(device_id: int) -> tuple[list[ApertureRow], list[ConditionRow]]:
    """A device's apertures and conditions in one query: both are few, and every check asks for both."""
    nothing, text = models.Value(""), models.CharField()
    apertures = Aperture.objects.filter(device_id=device_id).values_list(
        models.Value("aperture"), "id", "uid", "name",
        Cast("elements", text), Cast("pitch_um", text), nothing,
    )  # fmt: skip
    conditions = Condition.objects.filter(device_id=device_id).values_list(
        models.Value("condition"), "id", "uid", "name", "test_frequency_mhz", "sound_speed_m_s", "settings"
    )
    found = sorted(apertures.union(conditions, all=True), key=lambda row: row[1])
    return (
        [ApertureRow(*row[1:4], _whole(row[4]), _whole(row[5])) for row in found if row[0] == "aperture"],
        [ConditionRow(*row[1:7]) for row in found if row[0] == "condition"],
    )


def _whole(text: str | None) -> int | None:
    return None if text is None else int(text)


def conditions_of(device_id: int, as_of: dt.datetime | None = None) -> list[ConditionRow]:
    """A device's conditions."""
    return [
        ConditionRow(
            each.id, each.uid, each.name, each.test_frequency_mhz, each.sound_speed_m_s, each.settings
        )
        for each in nouns(Condition, as_of, device_id=device_id)
    ]


@dataclass(frozen=True)
class PlacementRow:
    """Where a device was, from when until when."""

    uid: uuid.UUID
    place: str
    site_id: int | None
    started_at: dt.datetime
    ended_at: dt.datetime | None
    reason: str


def placements_of(device_id: int, as_of: dt.datetime | None = None) -> list[PlacementRow]:
    """A device's placements, oldest first."""
    found = nouns(Placement, as_of, device_id=device_id)
    scanners = {each.id: each for each in nouns(Device, id=[p.scanner_id for p in found if p.scanner_id])}
    sites = {site.id: site.name for site in nouns(Site)}
    rooms = {room.id: room.name for room in nouns(Location)}
    pools = {pool.id: pool.name for pool in nouns(Pool)}
    rows = []
    for each in found:
        scanner = scanners.get(each.scanner_id or 0)
        parts = [
            sites.get(each.site_id or 0, "") or pools.get(each.pool_id or 0, ""),
            rooms.get(each.location_id or 0, ""),
            f"{scanner.model} {scanner.serial}" if scanner else "",
        ]
        place = ", ".join(part for part in parts if part)
        rows.append(PlacementRow(each.uid, place, each.site_id, each.started_at, each.ended_at, each.reason))
    return sorted(rows, key=lambda row: row.started_at)


@dataclass(frozen=True)
class SoftwareRow:
    """A software version of a scanner, from a day on."""

    version: str
    options: str
    since_on: dt.date | None
    recorded_at: dt.datetime


def software_of(device_id: int, as_of: dt.datetime | None = None) -> list[SoftwareRow]:
    """A scanner's software versions, oldest first, from the versions of its facts."""
    facts = ScannerFacts.objects.filter(device_id=device_id).first()
    if facts is None:
        return []
    kept = Version.objects.filter(noun="scannerfacts", subject_id=facts.id).order_by("number")
    if as_of is not None:
        kept = kept.filter(recorded_at__lte=as_of)
    rows: list[SoftwareRow] = []
    for each in kept:
        columns = json.loads(each.columns)
        since = columns["software_since_on"]
        row = SoftwareRow(
            columns["software_version"],
            columns["software_options"],
            dt.date.fromisoformat(since) if since else None,
            each.recorded_at,
        )
        if row.version and (not rows or rows[-1].version != row.version):
            rows.append(row)
    return rows
