"""Choosing where a device is: a room, a site, a pool, or the scanner a probe is plugged to."""

from __future__ import annotations

import datetime as dt
import uuid

from django.http import HttpRequest
from django.utils.translation import gettext as _

from qa_tracker.core.errors import Invalid, NotFound
from qa_tracker.records.queries import devices, sites
from qa_tracker.records.queries.devices import DeviceRow
from qa_tracker.records.queries.scope import Scope
from qa_tracker.services import finding, guards
from qa_tracker.services.devices import Place
from qa_tracker.web.forms.fields import Field, Option
from qa_tracker.web.forms.typed import Typed


def place_field(scope: Scope, kind: str) -> Field:
    """Where a device of this kind can be."""
    return Field(
        "place",
        _("Where it is"),
        "select",
        _("A probe goes with the scanner it is plugged to.") if kind == "probe" else "",
        place_options(scope, kind),
    )


def place_options(scope: Scope, kind: str) -> tuple[Option, ...]:
    """Every place in sight; scanners first for a probe."""
    held = {site.id: site for site in sites.list_sites(scope)}
    found: list[Option] = [("", _("choose a place"))]
    if kind == "probe":
        scanners = devices.list_devices(scope, kind="scanner")
        found += [(f"scanner {each.uid}", _on_scanner(each)) for each in sorted(scanners, key=_by_place)]
    for room in sites.list_locations(scope):
        found.append((f"room {room.uid}", f"{held[room.site_id].name}, {room.name}"))
    found += [
        (f"site {site.uid}", _("%(site)s, no room named") % {"site": site.name}) for site in held.values()
    ]
    found += [
        (f"pool {pool.uid}", _("%(pool)s (a pool)") % {"pool": pool.name}) for pool in sites.list_pools(scope)
    ]
    return tuple(found)


def _by_place(scanner: DeviceRow) -> tuple[object, ...]:
    return scanner.site_name, scanner.location_position, scanner.label


def _on_scanner(scanner: DeviceRow) -> str:
    where = ", ".join(part for part in (scanner.location, scanner.site_name or scanner.pool_name) if part)
    return _("on %(scanner)s, %(where)s") % {
        "scanner": f"{scanner.model} {scanner.serial}",
        "where": where,
    }


def chosen_place(request: HttpRequest, typed: Typed, at: dt.datetime) -> Place:
    """The place that was chosen; refused beside the field when there is none (``form.choice_missing``)."""
    kind, _blank, uid = typed.text("place").partition(" ")
    try:
        return _place(request, kind, uuid.UUID(uid), at)
    except (ValueError, NotFound) as error:
        raise Invalid("form.choice_missing", field="place") from error


def _place(request: HttpRequest, kind: str, uid: uuid.UUID, at: dt.datetime) -> Place:
    actor = request.user
    if kind == "scanner":
        scanner = finding.device(actor, uid, at)
        return Place(scanner.site, scanner.location, scanner, scanner.pool)
    if kind == "room":
        room = next((each for each in sites.list_locations(guards.scope(actor, at)) if each.uid == uid), None)
        site = sites.site_by_id(room.site_id) if room else None
        if room is None or site is None:
            raise NotFound("location.unknown")
        held = finding.site(actor, site.uid, at)
        return Place(held, finding.location(held, uid))
    if kind == "pool":
        return Place(pool=finding.pool(actor, uid, at))
    return Place(finding.site(actor, uid, at))
