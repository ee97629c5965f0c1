"""Every operation once: how it is called, and which roles of the first hospital may do it."""

from __future__ import annotations

import uuid
from collections.abc import Callable
from dataclasses import dataclass
from datetime import timedelta

from django.utils.timezone import now

from qa_tracker.core.ladder import Rung
from qa_tracker.records.models import CriteriaSet, Edition
from qa_tracker.services import baselines, devices, holds, ladders, uncertainties
from qa_tracker.services.baselines import Value
from tests import builders
from tests.api.world import ROLES, World

PASSWORD = builders.PASSWORD
ALL = frozenset(ROLES)
WARD = frozenset({"technician", "lead", "engineer", "physicist"})
LEADING = frozenset({"lead", "engineer", "physicist"})
ANSWERING = frozenset({"engineer", "physicist"})
PLANNING = frozenset({"lead", "physicist"})
PHYSICIST = frozenset({"physicist"})
RANDOM = uuid.UUID("018f0000-0000-7000-8000-000000000007")


@dataclass(frozen=True)
class Call:
    """``of`` gives the thing in the address, ``query`` what follows it, ``body`` what is sent; ``done`` is the status of success."""

    roles: frozenset[str]
    of: Callable[[World], uuid.UUID] | None = None
    body: Callable[[World], dict] | None = None
    done: int = 201
    query: Callable[[World], str] | None = None


def probe(world: World) -> uuid.UUID:
    return world.ward.probe.uid


def spare(world: World) -> uuid.UUID:
    return world.spare.uid


def check(world: World) -> uuid.UUID:
    return world.ward.check.uid


def waiting(world: World) -> uuid.UUID:
    return world.waiting.uid


def entries(world: World) -> dict:
    typed = builders.answers(world.waiting, world.ward.technician)
    given = {key: {"text": entry.text, "unit": "1", "confirmed": True} for key, entry in typed.items()}
    return {"entries": given, "cleaned_before": "Wipe, Ifeoma, 12:10"}


def signed(world: World) -> dict:
    shown = world.near["technician"].post(f"/checks/{world.waiting.uid}/judge", entries(world), 200)
    told = {"shown_sha256": shown["shown_sha256"], "password": PASSWORD, "form_uid": uuid.uuid4()}
    return entries(world) | told


def second(world: World) -> dict:
    shown = world.submission.shown_sha256
    return {"shown_sha256": shown, "remark": "Zone 3 is missing", "password": PASSWORD}


def device(world: World) -> dict:
    named = {"maker": "Ostrigard", "model": "OG-45", "serial": "45-77"}
    return named | {"place": {"site": world.ward.site.uid, "location": world.ward.room.uid}}


def probe_facts(world: World) -> dict:
    facts = {"array_kind": "linear", "contact_class": "skin", "applied_part": "BF"}
    return device(world) | facts | {"apertures": [{"name": "main", "elements": 192}]}


def plan(world: World) -> dict:
    when = {"rule": "FREQ=MONTHLY", "anchor_on": "2026-01-31", "before_days": 7, "grace_days": 7}
    return when | {"procedure": "monthly-in-air", "responsible": world.ward.technician.uid}


def baseline(world: World) -> dict:
    value = {"measurand": "reverberation_depth", "text": "12.5"}
    value["aperture"] = world.spare.apertures.get().uid
    return {"values": [value], "reason": "Acceptance", "password": PASSWORD}


def unsigned(world: World) -> dict:
    return {name: value for name, value in baseline(world).items() if name != "password"}


def set_ups(world: World) -> dict:
    series = {"measurand": "reverberation_depth", "aperture": world.spare.apertures.get().uid}
    typed = [{"text": "8.5", "measured_on": "2024-01-05"}, {"text": "8.0", "measured_on": "2024-01-07"}]
    return {"series": series, "set_ups": typed, "reason": "Two days"}


def under_review(world: World) -> dict:
    """A baseline of the probe, put under review by its scanner's new software."""
    ward = world.ward
    value = Value("reverberation_depth", "8.5", ward.probe.apertures.get().uid)
    (made,) = baselines.set_values(
        device=ward.probe.uid, values=[value], test_object=None, reason="Acceptance", password=PASSWORD,
        actor=ward.physicist, at=now(),
    )  # fmt: skip
    devices.record_software(scanner=ward.scanner.uid, **software(world), actor=ward.physicist, at=now())
    return {"baselines": [made.uid], "reason": "Same", "password": PASSWORD}


def software(world: World) -> dict:
    return {"version": "9.1", "options": "", "since_on": now().date()}


def edition(world: World) -> dict:
    return {"edition": Edition.objects.first().uid, "site": world.ward.site.uid}


def criteria(world: World) -> dict:
    return {"criteria_set": CriteriaSet.objects.first().uid, "site": world.ward.site.uid}


def fault(world: World) -> dict:
    return {"device": world.ward.probe.uid, "grade": "remedial", "seen": "Scuffed"}


def holding(world: World) -> dict:
    return {"reason": "Away", "until_on": now().date() + timedelta(days=4)}


def due_move(world: World) -> dict:
    return {"to_on": world.waiting.due_on + timedelta(days=2), "reason": "Theatre list is full"}


def held(world: World) -> uuid.UUID:
    return holds.acknowledge(
        check=world.waiting.uid, **holding(world), actor=world.ward.physicist, at=now()
    ).uid


def site(world: World) -> uuid.UUID:
    return world.ward.site.uid


def ladder(world: World) -> dict:
    return {"rungs": [{"level": "t1", "recipient": "lead", "after_days": 3}], "reason": "Nights are covered"}


def with_a_ladder(world: World) -> uuid.UUID:
    """The site with a ladder of its own."""
    rungs = [Rung("due", "lead")]
    given = {"rungs": rungs, "reason": "Nights", "actor": world.ward.physicist}
    ladders.set_ladder(site=world.ward.site, **given, at=now())
    return world.ward.site.uid


def statement(world: World) -> dict:
    stated = {"kind": "standard", "entered": "0.5", "source": "Repeats of ten set-ups"}
    return stated | {"measurand": "reverberation_depth", "site": world.ward.site.uid}


def stated(world: World) -> uuid.UUID:
    given = {name: value for name, value in statement(world).items() if name != "site"}
    return uncertainties.state(
        statement=uncertainties.Statement(**given), site=world.ward.site, actor=world.ward.physicist, at=now()
    ).uid


def some_set(world: World) -> str:
    return f"criteria_set={CriteriaSet.objects.first().uid}"


def two_sets(world: World) -> str:
    old, new = CriteriaSet.objects.order_by("id")[:2]
    return f"old={old.uid}&new={new.uid}"


CALLS = {
    "listSites": Call(ALL, done=200),
    "listPools": Call(ALL, done=200),
    "listPeople": Call(frozenset({"administrator"}), done=200),
    "showMe": Call(ALL, done=200),
    "listTestObjects": Call(ALL, done=200),
    "listInstruments": Call(ALL, done=200),
    "listDevices": Call(ALL, done=200),
    "showDevice": Call(ALL, probe, done=200),
    "registerScanner": Call(LEADING, body=device),
    "registerProbe": Call(LEADING, body=probe_facts),
    "quarantineDevice": Call(WARD, probe, lambda world: {"seen": "Lens cracked"}),
    "acceptDevice": Call(
        ANSWERING, lambda world: world.awaiting.uid, lambda world: {"password": PASSWORD}, 200
    ),
    "restoreDevice": Call(ANSWERING, spare, lambda world: {"remark": "Mended", "password": PASSWORD}, 200),
    "moveDevice": Call(WARD, probe, lambda world: {"place": {"site": world.ward.site.uid}}, 200),
    "setCondition": Call(PLANNING, probe, lambda world: {"name": "Abdomen", "test_frequency_mhz": "3.5"}),
    "makePlan": Call(PLANNING, spare, plan),
    "listProcedures": Call(ALL, done=200),
    "listCriteriaSets": Call(ALL, done=200),
    "adoptProcedure": Call(PHYSICIST, body=edition),
    "adoptCriteria": Call(PHYSICIST, body=criteria),
    "askWhatIf": Call(ALL, done=200, query=some_set),
    "compareCriteriaSets": Call(ALL, done=200, query=two_sets),
    "listUncertainties": Call(ALL, done=200),
    "stateUncertainty": Call(PHYSICIST, body=statement),
    "endUncertainty": Call(PHYSICIST, stated, lambda world: {"reason": "Measured anew"}, 200),
    "setBaselines": Call(PHYSICIST, spare, baseline),
    "previewBaselines": Call(PHYSICIST, spare, unsigned, 200),
    "previewSetUps": Call(PHYSICIST, spare, set_ups, 200),
    "setBaselineFromSetUps": Call(PHYSICIST, spare, lambda world: set_ups(world) | {"password": PASSWORD}),
    "keepBaselines": Call(PHYSICIST, probe, under_review),
    "listUnderReview": Call(ALL, probe, done=200),
    "recordSoftware": Call(LEADING, lambda world: world.ward.scanner.uid, software),
    "takeBaselines": Call(
        PHYSICIST, lambda world: world.submission.uid, lambda world: {"reason": "New", "password": PASSWORD}
    ),
    "listDue": Call(ALL, done=200),
    "listChecks": Call(ALL, done=200),
    "showCheck": Call(ALL, check, done=200),
    "listItems": Call(WARD, waiting, done=200),
    "judgeCheck": Call(WARD, waiting, entries, 200),
    "submitCheck": Call(WARD, waiting, signed),
    "countersignCheck": Call(PHYSICIST, check, second),
    "sendCheckBack": Call(PHYSICIST, check, second),
    "recordNotTested": Call(WARD, waiting, lambda world: {"reason": "in_theatre"}),
    "openCheck": Call(WARD, probe, lambda world: {"procedure": "monthly-in-air"}),
    "listFaults": Call(ALL, done=200),
    "openFault": Call(WARD, body=fault),
    "showFault": Call(ALL, lambda world: world.fault.uid, done=200),
    "actOnFault": Call(
        WARD, lambda world: world.fault.uid, lambda world: {"kind": "note", "text": "Cleaned"}
    ),
    "requestDossier": Call(LEADING | {"auditor"}, probe, lambda world: {}),
    "listDossiers": Call(ALL, done=200),
    "showDossier": Call(ALL, lambda world: world.dossier.uid, done=200),
    "downloadDossier": Call(ALL, lambda world: world.dossier.uid, done=409),
    "listLeaves": Call(ALL, done=200),
    "listCheckpoints": Call(ALL, done=200),
    "showCompliance": Call(ALL, done=200),
    "showYearAhead": Call(ALL, done=200),
    "moveDueDay": Call(PLANNING, waiting, due_move, 200),
    "listNotices": Call(ALL, done=200),
    "listNoticesOfCheck": Call(ALL, check, done=200),
    "listHolds": Call(ALL, check, done=200),
    "acknowledgeCheck": Call(PLANNING, waiting, holding),
    "snoozeCheck": Call(WARD, waiting, holding),
    "endHold": Call(PLANNING, held, lambda world: {"reason": "Back"}, 200),
    "showLadder": Call(ALL, site, done=200),
    "setLadder": Call(PLANNING, site, ladder, 200),
    "dropLadder": Call(PLANNING, with_a_ladder, lambda world: {"reason": "As everywhere"}, 200),
}
