"""Small functions that make records as people would: by calling services, since rows without a leaf are refused."""

from __future__ import annotations

import datetime as dt
import json
import uuid
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from pathlib import Path
from zoneinfo import ZoneInfo

from django.test import Client
from django.utils.timezone import now

from qa_tracker.records.models import (
    Check,
    CriteriaSet,
    Device,
    Edition,
    Location,
    Person,
    RoleGrant,
    Site,
    Submission,
    TestObject,
)
from qa_tracker.services import checks, devices, library, objects, people, plans, sites, states
from qa_tracker.services.checks import Typed
from qa_tracker.services.devices import Identity, Place
from qa_tracker.services.entries import Entry
from qa_tracker.services.plans import Recurrence

FIXTURES = Path(__file__).resolve().parent.parent / "fixtures"
PASSWORD = "plumb line and water bath"
BACKEND = "qa_tracker.web.sign_in.CredentialBackend"
MONTHLY = "monthly-in-air"
EVERY_MONTH = "FREQ=MONTHLY"
LONDON = ZoneInfo("Europe/London")


def first_administrator(at: dt.datetime | None = None) -> Person:
    """The first account: an administrator of the whole group."""
    return people.create_first_administrator(
        username="moss",
        name="Benedikta Moss",
        email="moss@tarnwater.invalid",
        password=PASSWORD,
        at=at or now(),
    )


def site(admin: Person, code: str = "AG", name: str = "Aldermoor General", **words: str) -> Site:
    """A hospital in London's time zone with its two instructions."""
    told = {
        "remedial_instruction": "Label the probe and tell the lead sonographer today.",
        "suspension_instruction": "Take it out of the room and phone physics on 4410.",
    } | words
    return sites.create(code=code, name=name, time_zone="Europe/London", actor=admin, at=now(), **told)


def room(admin: Person, at_site: Site, name: str = "Ultrasound 2", position: int = 2) -> Location:
    """A room in walking order."""
    return sites.add_location(site=at_site, name=name, position=position, actor=admin, at=now())


def person(
    admin: Person, username: str, role: str, at_site: Site | None, name: str = "", **grant: dt.date
) -> Person:
    """Somebody with one role, at a site or (None) in the whole group."""
    made = people.create(
        username=username,
        name=name or username.title(),
        email=f"{username}@tarnwater.invalid",
        password=PASSWORD,
        site=at_site,
        actor=admin,
        at=now(),
    )
    give_role(admin, made, role, at_site, **grant)
    return made


def give_role(admin: Person, holder: Person, role: str, at_site: Site | None, **grant: dt.date) -> RoleGrant:
    """A role from a year ago; an auditor's ends in a year."""
    today = now().date()
    until = grant.get("until_on") or (today + dt.timedelta(days=365) if role == "auditor" else None)
    return people.grant_role(
        person=holder.uid,
        role=role,
        site=at_site,
        from_on=grant.get("from_on", today - dt.timedelta(days=365)),
        until_on=until,
        actor=admin,
        at=now(),
    )


def publish(procedures: Iterable[str] = (MONTHLY,), sets: Iterable[str] | None = None) -> None:
    """Publish procedures by code, and criteria sets by file name (all of them without names)."""
    for code in procedures:
        document = json.loads((FIXTURES / "procedures" / f"{code}.json").read_text(encoding="utf-8"))
        library.publish_procedure(document=document, actor=None, at=now())
    folder = FIXTURES / "criteria"
    names = sets or sorted(each.stem for each in folder.glob("*.json") if each.stem != "cautions")
    for name in names:
        document = json.loads((folder / f"{name}.json").read_text(encoding="utf-8"))
        library.publish_criteria(document=document, actor=None, at=now())


def adopt_everything(physicist: Person) -> None:
    """Adopt whatever is published, for the whole group."""
    for edition in Edition.objects.select_related("procedure"):
        library.adopt_edition(edition=edition, site=None, remark="", actor=physicist, at=now())
    for each in CriteriaSet.objects.all():
        library.adopt_criteria(criteria_set=each, site=None, remark="", actor=physicist, at=now())


def scanner(physicist: Person, place: Place, serial: str = "70-1188", model: str = "OG-70") -> Device:
    """A scanner in use."""
    made = devices.register_scanner(
        identity=Identity("Ostrigard", model, serial),
        place=place,
        software_version="4.2",
        actor=physicist,
        at=now(),
    )
    return accepted(made, physicist)


def probe(
    physicist: Person,
    place: Place,
    serial: str = "C5-2207",
    model: str = "C5",
    array_kind: str = "convex",
    **facts: object,
) -> Device:
    """A probe in use, with one aperture of 192 elements."""
    given = {"contact_class": "skin", "applied_part": "BF", "apertures": [("main", 192)]} | facts
    made = devices.register_probe(
        identity=Identity("Ostrigard", model, serial),
        place=place,
        array_kind=array_kind,
        actor=physicist,
        at=now(),
        **given,
    )
    return accepted(made, physicist)


def accepted(device: Device, physicist: Person) -> Device:
    """The device after its signed acceptance."""
    states.accept(device=device.uid, remark="", password=PASSWORD, actor=physicist, at=now())
    device.refresh_from_db()
    return device


def plan(
    device: Device,
    procedure: str,
    responsible: Person,
    actor: Person,
    due_on: dt.date | None = None,
    rule: str = EVERY_MONTH,
) -> Check:
    """A plan by the calendar, and its first occurrence, due today unless said otherwise."""
    recurrence = Recurrence(rule, "calendar", due_on or now().date(), before_days=7, grace_days=7)
    made = plans.make(
        device=device.uid,
        procedure=procedure,
        recurrence=recurrence,
        responsible=responsible,
        actor=actor,
        at=now(),
    )
    return made.checks.get()


def phantom(physicist: Person, at_site: Site, nominals: Mapping[str, str] | None = None) -> TestObject:
    """A test object of the site."""
    return objects.register_test_object(
        site=at_site,
        name="General phantom",
        serial="TM-3412",
        material="hydrogel",
        nominals=nominals or {},
        actor=physicist,
        at=now(),
    )


@dataclass(frozen=True)
class Ward:
    """One hospital with its people, a scanner, a probe on it, and the probe's check due today."""

    admin: Person
    physicist: Person
    technician: Person
    user: Person
    site: Site
    room: Location
    scanner: Device
    probe: Device
    check: Check


def ward(procedures: Iterable[str] = (MONTHLY,), planned: str = MONTHLY) -> Ward:
    """The ground most tests stand on."""
    admin = first_administrator()
    at_site = site(admin)
    at_room = room(admin, at_site)
    physicist = person(admin, "oduya", "physicist", None, "Maren Oduya")
    technician = person(admin, "castellane", "technician", at_site, "Ifeoma Castellane")
    user = person(admin, "penhallow", "user", at_site, "Jory Penhallow")
    publish(procedures)
    adopt_everything(physicist)
    console = scanner(physicist, Place(site=at_site, location=at_room))
    held = probe(physicist, Place(site=at_site, location=at_room, scanner=console))
    planned_on = console if planned_for_scanner(planned) else held
    check = plan(planned_on, planned, technician, physicist)
    return Ward(admin, physicist, technician, user, at_site, at_room, console, held, check)


def planned_for_scanner(procedure: str) -> bool:
    """Whether a procedure is meant for scanners and not for probes."""
    document = json.loads((FIXTURES / "procedures" / f"{procedure}.json").read_text(encoding="utf-8"))
    return "probe" not in document["applies_to"]["kinds"]


def answers(check: Check, actor: Person, **given: str) -> dict[str, Entry]:
    """An entry for every required item: the best grade, "no" to what asks for a fault, a plausible number.

    ``given`` names measurand codes and what to type instead; an empty text leaves the item unread.
    """
    laid = checks.sheet(check=check.uid, actor=actor, at=now())
    entries = {}
    for item in laid.items:
        text = given.get(item.spec.code, good_answer(item) if item.spec.required else "")
        if text:
            entries[item.key] = Entry(text=text, confirmed=True)
    return entries


def good_answer(item: object) -> str:
    """What a device in order gives."""
    spec, criterion = item.spec, item.criterion
    if spec.kind in ("grade", "yes_no"):
        grades = dict(criterion.spec.criterion.grades) if criterion else {}
        best = [value for value, verdict in grades.items() if verdict == "conforming"]
        return best[0] if best else (spec.grades[0].value if spec.grades else "yes")
    if spec.kind == "text":
        return "nothing to note"
    if item.baseline is not None:
        return item.baseline.entered
    return item.nominal or ("0" if spec.kind == "count" else (spec.plausible.low if spec.plausible else "1"))


def submitted(check: Check, actor: Person, typed: Typed | None = None, **given: str) -> Submission:
    """A check signed by the actor; ``given`` as in :func:`answers`."""
    done = typed or Typed(entries=answers(check, actor, **given), cleaned_before="Wipe, Ifeoma, 12:10")
    at = now()
    shown = checks.preview(check=check.uid, typed=done, whole=True, actor=actor, at=at).shown_sha256
    return checks.submit(
        check=check.uid,
        form_uid=uuid.uuid4(),
        typed=done,
        shown_sha256=shown,
        password=PASSWORD,
        actor=actor,
        at=at,
    )


def signed_in(holder: Person) -> Client:
    """A browser in which the person is signed in."""
    client = Client()
    client.force_login(holder, backend=BACKEND)
    return client
