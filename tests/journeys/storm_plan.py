"""What falls due in the storm: many checks, each crossing one level at a known moment, and who is to be told of it.

The expectation is worked out from the plan alone, with the default ladder written down once more.
"""

from __future__ import annotations

import datetime as dt
import random
from dataclasses import dataclass

from qa_tracker.records import ledger
from qa_tracker.records.ids import uuid7
from qa_tracker.records.models import (
    Check,
    CheckClock,
    CheckPlan,
    Device,
    LadderRung,
    Person,
    RoleGrant,
    Site,
)
from qa_tracker.records.writers import insert_rows
from tests import builders

DAY = dt.timedelta(days=1)
STARTING_S = 15
LEVELS = ("upcoming", "due", "late", "overdue")
SITES, PEOPLE_OF_A_SITE = 5, 12
# At these sites overdue is the highest level, which is mailed at once and not with the day's digest.
SHORT_LADDERS = 2


@dataclass(frozen=True)
class Crossing:
    """One check that crosses one level at a moment."""

    check_id: int
    level: str
    at: dt.datetime
    responsible: int
    lead: int

    def notices(self) -> set[tuple[int, str, int, str]]:
        """Check, level, person and channel of every notice it owes."""
        told = {self.responsible, self.lead} if self.level == "overdue" else {self.responsible}
        channels = ("in_app",) if self.level == "upcoming" else ("in_app", "mail")
        return {(self.check_id, self.level, person, channel) for person in told for channel in channels}


@dataclass(frozen=True)
class Ground:
    """Sites with their people and devices, before anything is planned."""

    procedure: int
    places: tuple[tuple[Site, Device, Person, tuple[Person, ...]], ...]


def lay_ground() -> Ground:
    """Sites that mail at any hour of any day, so that the storm passes whenever it is started."""
    ward = builders.ward()
    CheckClock.objects.filter(check_of=ward.check).delete()
    at = dt.datetime.now(dt.UTC) - 30 * DAY
    with ledger.history("demo") as batch:
        act = batch.act("plan.made", actor=None, at=at)
        places = []
        for number in range(SITES):
            site = act.insert(
                Site(code=f"S{number}", name=f"Site {number}", time_zone="UTC", weekend="", digest_hour=0)
            )
            lead, *staff = (_person(act, site, each) for each in range(PEOPLE_OF_A_SITE + 1))
            act.insert(RoleGrant(person=lead, role="lead", site=site, from_on=at.date()))
            places.append((site, act.insert(_device(site, at)), lead, tuple(staff)))
            if number < SHORT_LADDERS:
                told = [(level, "responsible") for level in LEVELS] + [("overdue", "lead")]
                for level, recipient in told:
                    act.insert(LadderRung(site=site, level=level, recipient=recipient))
    return Ground(ward.check.procedure_id, tuple(places))


def _person(act: ledger.Act, site: Site, number: int) -> Person:
    name = f"person-{site.code.lower()}-{number}"
    mail = f"{name}@tarnwater.invalid"
    return act.insert(Person(username=name, name=name, email=mail, name_salt="", duties_site=site))


def _device(site: Site, at: dt.datetime) -> Device:
    return Device(
        kind="probe", maker="Ostrigard", model="C5", serial=f"storm-{site.code}", state="in_use", site=site, state_since=at
    )  # fmt: skip


def plan_crossings(ground: Ground, count: int, seconds: float, chance: random.Random) -> list[Crossing]:
    """So many checks, each crossing one level at a moment of its own once the parts are about to be up."""
    found, clocks = [], []
    began = dt.datetime.now(dt.UTC) + dt.timedelta(seconds=STARTING_S)
    with ledger.history("demo") as batch:
        act = batch.act("plan.made", actor=None, at=began - 20 * DAY)
        for number in range(count):
            site, device, lead, staff = ground.places[number % SITES]
            who, level = chance.choice(staff), LEVELS[chance.randrange(len(LEVELS))]
            moment = began + dt.timedelta(seconds=chance.uniform(0, seconds))
            check = _awaited(act, ground.procedure, site, device, who, level, moment)
            clocks.append(CheckClock(check_of=check, at=moment, level=level))
            found.append(Crossing(check.pk, level, moment, who.pk, lead.pk))
    insert_rows(CheckClock, clocks)
    return found


def _awaited(act, procedure, site, device, who, level, moment) -> Check:
    """A check whose earlier levels lie days behind and whose later ones are weeks ahead."""
    here = LEVELS.index(level)
    names = ("opens_at", "due_at", "late_at", "overdue_at")
    instants = {
        name: moment + (place - here) * DAY * (2 if place < here else 30) for place, name in enumerate(names)
    }
    due_on = instants["due_at"].date()
    plan = act.insert(
        CheckPlan(
            uid=uuid7(), device=device, procedure_id=procedure, rule="FREQ=YEARLY", basis="calendar", anchor_on=due_on,
            before_days=2, grace_days=2, responsible=who,
        )
    )  # fmt: skip
    return act.insert(
        Check(
            uid=uuid7(), plan=plan, device=device, procedure_id=procedure, site=site, state="scheduled", due_on=due_on,
            **instants,
        )
    )  # fmt: skip
