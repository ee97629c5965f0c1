"""What a person may look at or act on; all else is answered as if it were not there."""

from __future__ import annotations

import datetime as dt
import uuid

from django.http import HttpRequest

from qa_tracker.core.errors import NotFound
from qa_tracker.records.queries import devices, sites
from qa_tracker.records.queries.devices import DeviceRow
from qa_tracker.services import guards

# For these a person answers at their own site where a pooled device has none.
BY_DUTIES = ("baseline.set", "check.enter", "check.enter_user", "device.quarantine", "dossier.issue",
             "dossier.read", "fault.act", "fault.open", "plan.make")  # fmt: skip


def device(request: HttpRequest, uid: uuid.UUID, at: dt.datetime) -> DeviceRow:
    """A device that is now in sight; one that was is only to be looked at."""
    row = devices.find_device(guards.scope(request.user, at), uid)
    if row is None or row.seen_until is not None:
        raise NotFound("device.unknown")
    return row


def device_to(request: HttpRequest, uid: uuid.UUID, verb: str, at: dt.datetime) -> DeviceRow:
    """A device in sight with which the person may do this; otherwise ``role.not_allowed``."""
    row = device(request, uid, at)
    guards.check_may(request.user, verb, site_for(request, verb, row.site_id), at)
    return row


def site_for(request: HttpRequest, verb: str, site_id: int | None) -> int | None:
    """The site at which the person does this."""
    return site_id or (request.user.duties_site_id if verb in BY_DUTIES else None)


def zone_of_site(site_id: int | None) -> str:
    """The time zone of a site; what belongs to none goes by UTC."""
    site = sites.site_by_id(site_id) if site_id else None
    return site.time_zone if site else "UTC"
