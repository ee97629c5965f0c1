"""Two hospitals for the API's tests, with a bearer token for each role, and one thing of each kind at the first."""

from __future__ import annotations

import json
from dataclasses import dataclass, field

from django.test import Client
from django.utils.timezone import now

from qa_tracker.records.models import Check, Device, Dossier, Fault, Person, Site, Submission, TestObject
from qa_tracker.services import devices, dossiers, faults, people, states
from qa_tracker.services.devices import Identity, Place
from tests import builders

ROOT = "/api/v1"
ROLES = ("technician", "lead", "engineer", "physicist", "auditor", "administrator")


@dataclass
class Api:
    """A client that carries one person's token."""

    holder: Person
    token: str = ""
    client: Client = field(default_factory=Client)

    def __post_init__(self):
        self.token = self.token or people.issue_token(label="tests", actor=self.holder, at=now())

    def raw(self, method, path, body=None):
        sent = {} if method == "get" else {"data": json.dumps(body or {}, default=str)}
        return self.client.generic(
            method.upper(),
            f"{ROOT}{path}",
            content_type="application/json",
            headers={"authorization": f"Bearer {self.token}"},
            **sent,
        )

    def get(self, path, status=200):
        return self._read(self.raw("get", path), status)

    def post(self, path, body=None, status=201):
        return self._read(self.raw("post", path, body), status)

    def _read(self, answer, status):
        assert answer.status_code == status, answer.content.decode()
        return answer.json()


@dataclass
class World:
    """The first hospital with one thing of each kind; ``near`` are its people by role, ``far`` the second's."""

    ward: builders.Ward
    near: dict[str, Api]
    far: dict[str, Api]
    far_site: Site
    submission: Submission
    waiting: Check
    fault: Fault
    dossier: Dossier
    spare: Device
    awaiting: Device
    phantom: TestObject


def build() -> World:
    """The ground of the table: a submitted check, one waiting, a fault, a dossier, a restricted probe, a new one."""
    ward = builders.ward(procedures=("monthly-in-air", "user-check"))
    far_site = builders.site(ward.admin, "KB", "Kestrel Bay")
    spare = builders.probe(ward.physicist, Place(site=ward.site), serial="C5-3")
    states.move_on(device=spare.uid, verb="restrict", note="Not in theatre", actor=ward.physicist, at=now())
    return World(
        ward,
        {role: Api(builders.person(ward.admin, f"near-{role}", role, ward.site)) for role in ROLES},
        {role: Api(builders.person(ward.admin, f"far-{role}", role, far_site)) for role in ROLES},
        far_site,
        builders.submitted(ward.check, ward.technician),
        builders.plan(ward.probe, "user-check", ward.technician, ward.physicist),
        _fault(ward),
        dossiers.request(device=ward.probe.uid, actor=ward.physicist, at=now()),
        spare,
        _awaiting(ward),
        builders.phantom(ward.physicist, ward.site),
    )


def _fault(ward: builders.Ward) -> Fault:
    return faults.open_fault(
        device=ward.probe.uid, grade="remedial", seen="Scuffed", place="", actor=ward.physicist, at=now()
    )


def _awaiting(ward: builders.Ward) -> Device:
    return devices.register_probe(
        identity=Identity("Ostrigard", "C5", "C5-9000"),
        place=Place(site=ward.site),
        array_kind="convex",
        contact_class="skin",
        applied_part="BF",
        apertures=[("main", 192)],
        actor=ward.physicist,
        at=now(),
    )
