"""Holding a check over the API, and reading who was told of it."""

from __future__ import annotations

import datetime as dt

from django.utils.timezone import now

from qa_tracker.core.ladder import Owed
from qa_tracker.records import ledger
from qa_tracker.services import owed
from tests.api.world import Api


def until(days: int) -> str:
    return (now().date() + dt.timedelta(days=days)).isoformat()


def test_responsible_person_acknowledges_and_ends_it_again(world):
    mine, address = Api(world.ward.technician), f"/checks/{world.waiting.uid}"
    made = mine.post(f"{address}/acknowledge", {"reason": "Away", "until_on": until(4)})
    assert (made["kind"], made["person"], made["ended_at"]) == ("acknowledged", "Ifeoma Castellane", None)
    mine.post(f"/holds/{made['uid']}/end", {"reason": "Back"}, 200)
    (held,) = [each for each in mine.get(f"{address}/holds") if each["uid"] == made["uid"]]
    assert held["ended_at"]


def test_end_too_far_ahead_is_refused_beside_its_field(world):
    address = f"/checks/{world.waiting.uid}/snooze"
    refused = Api(world.ward.technician).post(address, {"reason": "Away", "until_on": until(40)}, 422)
    assert (refused["code"], refused["field"]) == ("hold.end_too_far", "until_on")


def test_notices_of_a_check_say_to_whom_as_whom_and_what_was_passed(world):
    person, check = world.ward.technician, world.waiting
    with ledger.command("notices.owed", actor=None, at=now()) as act:
        owed.owe(act, check.pk, check.uid, Owed(person.pk, "lead", "t1", ("overdue",)))
    told = world.near["auditor"].get(f"/checks/{check.uid}/notices")
    assert [(each["person"], each["channel"], each["skipped"]) for each in told] == [
        ("Ifeoma Castellane", "in_app", "overdue"),
        ("Ifeoma Castellane", "mail", "overdue"),
    ]
    assert {each["recipient"] for each in told} == {"lead"}
