"""From an address to the row a command works on; what is out of sight is refused as if it were not there."""

from __future__ import annotations

import datetime as dt
import uuid

from qa_tracker.core.errors import NotFound
from qa_tracker.records.models import (
    Check,
    CriteriaSet,
    Device,
    Dossier,
    Edition,
    Fault,
    Instrument,
    Location,
    Person,
    Pool,
    Site,
    TestObject,
)
from qa_tracker.records.queries.scope import checks_in, devices_in
from qa_tracker.services.guards import Grants, scope


def device(actor: Person, uid: uuid.UUID, at: dt.datetime) -> Device:
    """A device now in the actor's sight."""
    found = Device.objects.filter(devices_in(scope(actor, at)), uid=uid).first()
    if found is None:
        raise NotFound("device.unknown")
    return found


CHECK_JOINS = (
    "device__site", "device__probe_facts", "device__scanner_facts", "device__scanner__scanner_facts",
    "procedure", "plan", "site",
)  # fmt: skip


def check(actor: Person, uid: uuid.UUID, at: dt.datetime, grants: Grants = None) -> Check:
    """A check in the actor's sight, with its device's facts and its console's."""
    seen = checks_in(scope(actor, at, grants=grants))
    found = Check.objects.filter(seen, uid=uid).select_related(*CHECK_JOINS).first()
    if found is None:
        raise NotFound("check.unknown")
    return found


def site(actor: Person, uid: uuid.UUID, at: dt.datetime) -> Site:
    """A site in the actor's sight."""
    found = Site.objects.filter(uid=uid).first()
    if found is None or not scope(actor, at).holds(found.id):
        raise NotFound("site.unknown")
    return found


def location(site_row: Site, uid: uuid.UUID | None) -> Location | None:
    """A room of a site."""
    if uid is None:
        return None
    found = Location.objects.filter(uid=uid, site=site_row).first()
    if found is None:
        raise NotFound("location.unknown")
    return found


def pool(actor: Person, uid: uuid.UUID, at: dt.datetime) -> Pool:
    """A pool with a member site in the actor's sight."""
    found = Pool.objects.filter(uid=uid).first()
    seen = scope(actor, at)
    if found is None or not any(seen.holds(each.site_id) for each in found.members.all()):
        raise NotFound("pool.unknown")
    return found


def person(uid: uuid.UUID) -> Person:
    """A person; who may be named is decided by the command."""
    found = Person.objects.filter(uid=uid).first()
    if found is None:
        raise NotFound("person.unknown")
    return found


def fault(actor: Person, uid: uuid.UUID, at: dt.datetime) -> Fault:
    """A fault on a device now in the actor's sight."""
    in_sight = devices_in(scope(actor, at), "device__")
    found = Fault.objects.filter(in_sight, uid=uid).select_related("device").first()
    if found is None:
        raise NotFound("fault.unknown")
    return found


def dossier(actor: Person, uid: uuid.UUID, at: dt.datetime) -> Dossier:
    """A dossier of a device now in the actor's sight."""
    in_sight = devices_in(scope(actor, at), "device__")
    found = Dossier.objects.filter(in_sight, uid=uid).select_related("device").first()
    if found is None:
        raise NotFound("dossier.unknown")
    return found


def edition(uid: uuid.UUID) -> Edition:
    """A published edition; editions belong to the group and everyone sees them."""
    found = Edition.objects.filter(uid=uid).select_related("procedure").first()
    if found is None:
        raise NotFound("edition.unknown")
    return found


def criteria_set(uid: uuid.UUID) -> CriteriaSet:
    """A published set of criteria."""
    found = CriteriaSet.objects.filter(uid=uid).first()
    if found is None:
        raise NotFound("criteria_set.unknown")
    return found


def test_object(
    actor: Person,
    uid: uuid.UUID | None,
    at: dt.datetime,
    grants: Grants = None,  # noqa: PT028  # no test
) -> TestObject | None:
    """A test object of a site in sight."""
    if uid is None:
        return None
    found = TestObject.objects.filter(uid=uid).first()
    if found is None or not scope(actor, at, grants=grants).holds(found.site_id):
        raise NotFound("test_object.unknown")
    return found


def instrument(
    actor: Person, uid: uuid.UUID | None, at: dt.datetime, grants: Grants = None
) -> Instrument | None:
    """An instrument of a site in sight."""
    if uid is None:
        return None
    found = Instrument.objects.filter(uid=uid).first()
    if found is None or not scope(actor, at, grants=grants).holds(found.site_id):
        raise NotFound("instrument.unknown")
    return found
