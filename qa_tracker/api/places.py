"""Sites, rooms, pools, people, test objects and instruments."""

from __future__ import annotations

import datetime as dt
import uuid

from ninja import Schema

from qa_tracker.api.authentication import ApiRequest
from qa_tracker.api.nouns import NounRouter
from qa_tracker.records.queries import objects, people, sites

router = NounRouter(tags=["places and people"])


class LocationOut(Schema):
    """A room."""

    uid: uuid.UUID
    name: str


class SiteOut(Schema):
    """A hospital with its rooms in the order they are walked."""

    uid: uuid.UUID
    code: str
    name: str
    time_zone: str
    remedial_instruction: str
    suspension_instruction: str
    locations: list[LocationOut]


class PoolOut(Schema):
    """Devices shared by sites."""

    uid: uuid.UUID
    name: str
    site_codes: list[str]


class GrantOut(Schema):
    """A role at a site, or in the whole group (an empty site), from the first to the last day."""

    uid: uuid.UUID
    role: str
    site_code: str
    from_on: dt.date
    until_on: dt.date | None


class PersonOut(Schema):
    """Someone who signs in."""

    uid: uuid.UUID
    username: str
    name: str
    email: str
    active: bool
    grants: list[GrantOut]


class TestObjectOut(Schema):
    """A test object; `nominals` are true values by measurand."""

    uid: uuid.UUID
    site_code: str
    name: str
    maker: str
    model: str
    serial: str
    material: str
    sound_speed_m_s: str
    layout_compensated: bool
    nominals: dict[str, str]
    certificate_ends_on: dt.date | None
    in_use: bool


class InstrumentOut(Schema):
    """An instrument with its calibration date."""

    uid: uuid.UUID
    site_code: str
    kind: str
    maker: str
    model: str
    serial: str
    calibration_due_on: dt.date | None
    in_use: bool


@router.reads("/sites", list[SiteOut], "listSites")
def list_sites(request: ApiRequest) -> list[object]:
    """Sites in sight."""
    scope = request.auth.scope()
    rooms = sites.list_locations(scope)
    return [
        vars(site) | {"locations": [room for room in rooms if room.site_id == site.id]}
        for site in sites.list_sites(scope)
    ]


@router.reads("/pools", list[PoolOut], "listPools")
def list_pools(request: ApiRequest) -> list[object]:
    """Pools with a member site in sight."""
    scope = request.auth.scope()
    codes = {site.id: site.code for site in sites.list_sites(scope)}
    return [
        vars(pool) | {"site_codes": sorted(codes[key] for key in pool.site_ids if key in codes)}
        for pool in sites.list_pools(scope)
    ]


@router.reads("/people", list[PersonOut], "listPeople")
def list_people(request: ApiRequest) -> list[people.PersonRow]:
    """Accounts of the sites one administers."""
    request.auth.check_may_somewhere("person.manage")
    return people.list_people(request.auth.scope("person.manage"))


@router.reads("/me", PersonOut, "showMe")
def show_me(request: ApiRequest) -> people.PersonRow | None:
    """The person the token acts for, with their roles."""
    return people.find_person(request.auth.scope(), request.auth.actor.uid)


@router.reads("/test-objects", list[TestObjectOut], "listTestObjects")
def list_test_objects(request: ApiRequest) -> list[object]:
    """Test objects of the sites in sight."""
    scope = request.auth.scope()
    codes = {site.id: site.code for site in sites.list_sites(scope)}
    return [vars(row) | {"site_code": codes[row.site_id]} for row in objects.list_test_objects(scope)]


@router.reads("/instruments", list[InstrumentOut], "listInstruments")
def list_instruments(request: ApiRequest) -> list[object]:
    """Instruments of the sites in sight."""
    scope = request.auth.scope()
    codes = {site.id: site.code for site in sites.list_sites(scope)}
    return [vars(row) | {"site_code": codes[row.site_id]} for row in objects.list_instruments(scope)]
