"""The rows of ``test_leaf_or_nothing`` that are about notices, holds and mail."""

from __future__ import annotations

import datetime as dt
import itertools
from collections.abc import Callable
from typing import Any

from django.utils.timezone import now

from qa_tracker.core.ladder import Owed, Rung
from qa_tracker.records import ledger
from qa_tracker.records.models import Digest
from qa_tracker.services import digests, holds, ladders, owed
from qa_tracker.services.devices import Place
from tests import builders
from tests.builders import Ward

numbers = itertools.count(1)
Given = dict[str, Any]


def holding(ward: Ward) -> Given:
    """What a hold of the ward's check is made with."""
    until_on = now().date() + dt.timedelta(days=4)
    return {"check": ward.check.uid, "reason": "Room is being painted", "until_on": until_on}


def held(ward: Ward) -> Given:
    made = holds.acknowledge(**holding(ward), actor=ward.physicist, at=now())
    return {"hold": made.uid, "reason": "Room is free again", "actor": ward.technician}


def given_up(ward: Ward) -> int:
    """A mail to the technician that the server refused for good."""
    place = Place(site=ward.site, location=ward.room)
    device = builders.probe(ward.physicist, place, serial=f"GU-{next(numbers)}")
    check = builders.plan(device, builders.MONTHLY, ward.technician, ward.physicist)
    with ledger.command("notices.owed", actor=None, at=now()) as act:
        owed.owe(act, check.pk, check.uid, Owed(ward.technician.pk, "physicist", "suspension", ()))
    digests.make_digests(at=now(), as_if=dt.datetime(2026, 6, 3, 9, tzinfo=dt.UTC))
    made = Digest.objects.latest("pk")
    Digest.objects.filter(pk=made.pk).update(state="failed")
    return made.pk


def with_a_ladder(ward: Ward) -> Given:
    """The group with a ladder of its own, and why it goes back."""
    ladders.set_ladder(site=None, rungs=RUNGS, reason="Nights", actor=ward.physicist, at=now())
    return {"site": None, "reason": "As it was", "actor": ward.physicist}


RUNGS = (Rung("due", "lead"), Rung("t1", "physicist", 3))
HOURS = {"digest_hour": 8, "quiet_from_hour": 20, "quiet_until_hour": 7}

HOLDS: dict[str, Callable[[Ward], Given]] = {
    "ladders.set_ladder": lambda w: {
        "site": w.site, "rungs": RUNGS, "reason": "Nights are covered", "actor": w.physicist,
    },
    "ladders.drop_ladder": with_a_ladder,
    "holds.acknowledge": lambda w: {**holding(w), "actor": w.physicist},
    "holds.snooze": lambda w: {**holding(w), "actor": w.technician},
    "holds.end_hold": lambda w: {**held(w), "actor": w.physicist},
    "mail.send_again": lambda w: {"digest_id": given_up(w), "actor": w.admin},
    "mail.send_all_again": lambda w: {"actor": w.admin} if given_up(w) else {},
    "mail.leave_unsent": lambda w: {"digest_id": given_up(w), "reason": "Has left", "actor": w.admin},
    "people.set_address": lambda w: {
        "person": w.user.uid, "email": "jory@tarnwater.invalid", "actor": w.admin,
    },
    "site_hours.set_hours": lambda w: {"site": w.site, **HOURS, "actor": w.admin},
    "site_hours.set_round_the_clock": lambda w: {
        "room": w.room, "round_the_clock": True, "actor": w.admin,
    },
}  # fmt: skip
ASKED_OF_HOLDS = {
    "ladders.may_set": "asks",
    "holds.may_acknowledge": "asks",
    "holds.may_snooze": "asks",
    "digests.make_digests": "the state of a mail is no record; its notices are",
    "mail.deliver": "the state of a mail is no record; giving one up tells by a leaf of its own",
    "mail.deliver_waiting": "the state of a mail is no record",
    "start.note_start": "a heartbeat is no record",
    "start.begin": "a heartbeat is no record",
    "beats.first_to_hint": "a heartbeat is no record",
}
