"""The register as people look things up: by site, scanners with their probes beneath."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from itertools import groupby

from django.utils.translation import gettext as _

from qa_tracker.core.workflow import DEVICE_USABLE
from qa_tracker.records.queries.devices import DeviceRow
from qa_tracker.records.queries.standings import StandingRow
from qa_tracker.services import wording


@dataclass(frozen=True)
class RegisterLine:
    """One device with its state in words and how it stands."""

    device: DeviceRow
    kind: str
    state: str
    in_use: bool
    standing: StandingRow
    beneath: tuple[RegisterLine, ...] = ()


@dataclass(frozen=True)
class RegisterSite:
    """The devices of one site, or of one pool."""

    name: str
    lines: tuple[RegisterLine, ...]


def register_sites(
    top: Sequence[DeviceRow], beneath: Sequence[DeviceRow], standings: Mapping[int, StandingRow]
) -> tuple[RegisterSite, ...]:
    """Group devices by the site or pool that holds them, in walking order."""
    probes: dict[int, list[RegisterLine]] = {}
    for each in beneath:
        probes.setdefault(each.scanner_id or 0, []).append(_line(each, standings))
    ordered = sorted(top, key=_walk)
    return tuple(
        RegisterSite(
            name or _("Without a site"),
            tuple(_line(each, standings, tuple(probes.get(each.id, ()))) for each in group),
        )
        for name, group in groupby(ordered, key=holder)
    )


def holder(device: DeviceRow) -> str:
    """The site or pool that holds a device."""
    return device.site_name or device.pool_name


def _walk(device: DeviceRow) -> tuple[object, ...]:
    return (
        not device.site_name,
        holder(device),
        device.kind != "scanner",
        device.location_position,
        device.location,
        device.label,
    )


def _line(
    device: DeviceRow, standings: Mapping[int, StandingRow], beneath: tuple[RegisterLine, ...] = ()
) -> RegisterLine:
    return RegisterLine(
        device,
        kind_words(device),
        wording.device_state_word(device.state),
        device.state in DEVICE_USABLE,
        standings.get(device.id, StandingRow()),
        beneath,
    )


def kind_words(device: DeviceRow) -> str:
    """Scanner or probe, with the array of a probe."""
    kind = wording.kind_word(device.kind)
    if not device.array_kind:
        return kind
    return _("%(array)s %(kind)s") % {"array": wording.array_word(device.array_kind), "kind": kind}
