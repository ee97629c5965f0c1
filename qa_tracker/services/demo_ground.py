"""The ground of the demo: people with one password, sites, rooms, days off, the pool, what is measured with."""

from __future__ import annotations

import datetime as dt
import secrets

from django.contrib.auth.hashers import make_password

from qa_tracker.core.canonical import canonical
from qa_tracker.core.roles import Grant, check_grant
from qa_tracker.records.models import (
    Adoption,
    Credential,
    CriteriaSet,
    Edition,
    Holiday,
    Instrument,
    Location,
    Person,
    Pool,
    PoolMember,
    RoleGrant,
    Site,
    TestObject,
)
from qa_tracker.services.demo_fleet import EVERYWHERE_HOLIDAYS, KESTREL_BAY_HOLIDAYS, SITES
from qa_tracker.services.demo_limits import state_uncertainties
from qa_tracker.services.demo_people import CAST, PASSWORD, Invented
from qa_tracker.services.demo_values import TESTER
from qa_tracker.services.demo_world import World

REMEDIAL = "Label the probe, keep using it, and tell the lead sonographer today."
SUSPENSION = "Take it out of the room now, hang the red label on it, and phone medical physics on 4410."
NOMINALS = {"vertical_distance": "100.0", "horizontal_distance": "80.0"}
ZONE = "Europe/London"
ROUND_THE_CLOCK = ("Intensive care", "Theatre 3")


def lay_ground(world: World) -> None:
    """Write everything that stands before the first device."""
    _sites(world)
    _people(world)
    moss, _ = world.person("moss")
    _rooms(world, moss)
    _holidays(world, moss)
    _pool(world, moss)
    _adoptions(world)
    state_uncertainties(world)
    _measured_with(world)


def _sites(world: World) -> None:
    """Sites come first, made by the program: an administrator belongs to a place."""
    for each in SITES:
        act = world.past.act("site.created", None, world.begun_at)
        site = act.insert(
            Site(
                code=each.code, name=each.name, time_zone=ZONE, quiet_from_hour=20, quiet_until_hour=6,
                remedial_instruction=REMEDIAL, suspension_instruction=SUSPENSION,
            )
        )  # fmt: skip
        world.sites[each.code] = site
        act.about(site, site=site)
        act.tell({"code": each.code, "name": each.name, "time_zone": ZONE})


def _people(world: World) -> None:
    """The administrator first, who makes the others. One hash serves all: hashing is slow by design."""
    hashed = make_password(PASSWORD)
    for each in sorted(CAST, key=lambda one: one.role != "administrator"):
        moss = world.people.get("moss")
        site = world.sites.get(each.site or "")
        act = world.past.act("person.created" if moss else "person.first", moss, world.begun_at)
        person = act.insert(
            Person(
                username=each.username,
                name=each.name,
                email=f"{each.username}@tarnwater.invalid",
                name_salt=secrets.token_urlsafe(24),
                duties_site=site,
            )
        )
        act.writer.insert(Credential(person=person, password=hashed))
        act.about(person, site=site)
        first = {} if moss else {"role": each.role}
        act.tell({"person": str(person.uid), "username": each.username} | first)
        world.people[each.username] = person
        _grant(world, each, person, site)


def _grant(world: World, each: Invented, person: Person, site: Site | None) -> None:
    from_on, until_on = world.begun_at.date(), None
    if each.role == "auditor":
        until_on = (world.at + dt.timedelta(days=365)).date()
    check_grant(Grant(each.role, site.id if site else None, from_on, until_on))
    act = world.past.act("role.granted", world.people["moss"], world.begun_at)
    row = RoleGrant(person=person, role=each.role, site=site, from_on=from_on, until_on=until_on)
    act.about(act.insert(row), site=site)
    act.tell(
        {
            "person": str(person.uid),
            "role": each.role,
            "site": each.site,
            "from": from_on.isoformat(),
            "until": until_on.isoformat() if until_on else None,
        }
    )


def _rooms(world: World, moss: Person) -> None:
    for each in SITES:
        for position, name in enumerate(each.rooms, start=1):
            site = world.sites[each.code]
            act = world.past.act("location.added", moss, world.begun_at)
            always = name in ROUND_THE_CLOCK
            room = act.insert(Location(site=site, name=name, position=position, round_the_clock=always))
            world.rooms[each.code, name] = room
            act.about(room, site=site)
            act.tell({"name": name, "position": position})


def _holidays(world: World, moss: Person) -> None:
    years = range(world.begun_at.year, world.at.year + 2)
    for code, site in world.sites.items():
        own = KESTREL_BAY_HOLIDAYS if code == "KB" else {}
        named = {
            dt.date(year, month, day): name
            for year in years
            for (month, day), name in (EVERYWHERE_HOLIDAYS | own).items()
        }
        act = world.past.act("holidays.added", moss, world.begun_at)
        for day_on, name in sorted(named.items()):
            act.insert(Holiday(site=site, day_on=day_on, name=name))
        act.about(site, site=site)
        act.tell({"days": {day.isoformat(): name for day, name in sorted(named.items())}})


def _pool(world: World, moss: Person) -> None:
    act = world.past.act("pool.created", moss, world.begun_at)
    pool = act.insert(Pool(name="Loan probes"))
    for site in world.sites.values():
        act.insert(PoolMember(pool=pool, site=site))
    world.pools.append(pool)
    act.about(pool)
    act.tell({"name": pool.name, "sites": list(world.sites)})


def _adoptions(world: World) -> None:
    """The lead physicist adopts every shipped procedure and set for the group."""
    oduya, _ = world.person("oduya")
    for edition in Edition.objects.select_related("procedure").order_by("id"):
        act = world.past.act(
            "procedure.adopted", oduya, world.begun_at, "Read and compared with our own practice"
        )
        row = Adoption(edition=edition, adopted_by=oduya, adopted_at=world.begun_at, remark="Group procedure")
        act.about(act.insert(row))
        told = {
            "procedure": edition.procedure.code,
            "edition": edition.number,
            "sha256": edition.content_sha256,
        }
        act.tell({**told, "site": None})
    for criteria in CriteriaSet.objects.order_by("id"):
        remark = "Compared with our own copy of the source"
        act = world.past.act("criteria.adopted", oduya, world.begun_at, remark)
        row = Adoption(criteria_set=criteria, adopted_by=oduya, adopted_at=world.begun_at, remark=remark)
        act.about(act.insert(row))
        act.tell({"set": criteria.code, "edition": criteria.edition, "site": None})


def _measured_with(world: World) -> None:
    """A hydrogel object and a leakage tester for each site."""
    oduya, _ = world.person("oduya")
    for number, (code, site) in enumerate(world.sites.items(), start=1):
        act = world.past.act("test_object.registered", oduya, world.begun_at)
        row = act.insert(
            TestObject(
                site=site, name=f"{code} hydrogel", maker="Pellantis", model="Gelblock 160",
                serial=f"GB-{3000 + number}", material="Hydrogel", sound_speed_m_s="1540", depth_mm="160",
                nominals=canonical(NOMINALS).decode(),
                certificate_ends_on=(world.at + dt.timedelta(days=200 * number)).date(),
            )
        )  # fmt: skip
        world.objects[code] = row
        act.about(row, site=site)
        act.tell({"name": row.name, "serial": row.serial, "material": row.material, "nominals": NOMINALS})
        for kind, serial in (("leakage_tester", f"{TESTER}-{code}"), ("scale", f"SC-{code}-1")):
            _instrument(world, code, kind, serial)


def _instrument(world: World, code: str, kind: str, serial: str) -> None:
    oduya, _ = world.person("oduya")
    act = world.past.act("instrument.registered", oduya, world.begun_at)
    row = act.insert(
        Instrument(
            site=world.sites[code],
            kind=kind,
            maker="Quorrel",
            model="Safe 3" if kind == "leakage_tester" else "Balance 6",
            serial=serial,
            calibration_due_on=(world.at + dt.timedelta(days=120)).date(),
        )
    )
    if kind == "leakage_tester":
        world.testers[code] = row
    act.about(row, site=row.site)
    act.tell({"kind": kind, "maker": row.maker, "model": row.model, "serial": serial})
