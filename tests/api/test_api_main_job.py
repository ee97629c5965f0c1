"""The whole job by the API alone: register, adopt, plan, judge, submit, countersign, quarantine, restore, dossier."""

from __future__ import annotations

import uuid

import pytest
from django.utils.timezone import now

from qa_tracker.records.models import Dossier
from qa_tracker.services import dossiers
from tests import builders
from tests.api.world import Api

pytestmark = pytest.mark.django_db
PASSWORD = builders.PASSWORD


class Job:
    """A hospital group with published procedures and nothing else, and the people who do the job."""

    def __init__(self):
        self.admin = builders.first_administrator()
        site = builders.site(self.admin)
        builders.publish()
        self.site = site.uid
        self.technician = Api(builders.person(self.admin, "castellane", "technician", site))
        self.physicist = Api(builders.person(self.admin, "oduya", "physicist", None))
        self.auditor = Api(builders.person(self.admin, "fairweather", "auditor", site))

    def adopt(self):
        for edition in self.physicist.get("/procedures"):
            self.physicist.post("/procedures/adoptions", {"edition": edition["uid"]})
        for each in self.physicist.get("/criteria-sets"):
            self.physicist.post("/criteria-sets/adoptions", {"criteria_set": each["uid"]})

    def register(self):
        scanner = {"maker": "Ostrigard", "model": "OG-70", "serial": "70-1188", "software_version": "4.2"}
        console = self.physicist.post("/devices/scanners", scanner | {"place": {"site": self.site}})
        probe = {"maker": "Ostrigard", "model": "C5", "serial": "C5-2207", "array_kind": "convex"}
        probe |= {
            "contact_class": "skin",
            "applied_part": "BF",
            "apertures": [{"name": "main", "elements": 192}],
        }
        place = {"place": {"site": self.site, "scanner": console["uid"]}}
        device = self.physicist.post("/devices/probes", probe | place)
        accepted = self.physicist.post(f"/devices/{device['uid']}/accept", {"password": PASSWORD}, 200)
        assert (device["state"], accepted["state"]) == ("awaiting_acceptance", "in_use")
        return device["uid"]

    def plan(self, device):
        when = {"rule": "FREQ=MONTHLY", "anchor_on": now().date(), "before_days": 7, "grace_days": 7}
        who = self.technician.get("/me")["uid"]
        self.physicist.post(
            f"/devices/{device}/plans", when | {"procedure": "monthly-in-air", "responsible": who}
        )
        (due,) = self.technician.get("/due")
        assert due["due_words"] == "due today"
        return due["uid"]

    def typed(self, check, **given):
        items = self.technician.get(f"/checks/{check}/items")["items"]
        entries = {
            item["key"]: {"text": text, "unit": item["unit"]}
            for item in items
            if (text := given.get(item["measurand"], answer(item)))
        }
        return {"entries": entries, "cleaned_before": "Wipe, Ifeoma, 12:10"}

    def submit(self, check, **given):
        typed = self.typed(check, **given)
        judged = self.technician.post(f"/checks/{check}/judge", typed, 200)
        signed = {"shown_sha256": judged["shown_sha256"], "password": PASSWORD, "form_uid": uuid.uuid4()}
        return self.technician.post(f"/checks/{check}/submissions", typed | signed)


def answer(item):
    """What a probe in order gives."""
    if not item["required"]:
        return ""
    if item["kind"] == "grade":
        return item["grades"][0]["value"]
    return {"yes_no": "yes", "count": "0", "number": "12.5"}[item["kind"]]


@pytest.fixture
def job(db):
    return Job()


def test_job_is_done_from_registering_to_the_sealed_dossier(job):
    job.adopt()
    device = job.register()
    check = job.plan(device)
    submission = job.submit(check)
    second = {"shown_sha256": submission["shown_sha256"], "password": PASSWORD}
    done = job.physicist.post(f"/checks/{check}/countersignatures", second)
    assert (done["state"], done["verdict"]) == ("countersigned", "conforming")
    assert [each["meaning"] for each in done["submissions"][0]["signatures"]] == [
        "performed",
        "countersigned",
    ]
    fault = job.technician.post(f"/devices/{device}/quarantine", {"seen": "Lens cracked"})
    job.physicist.post(f"/faults/{fault['uid']}/actions", {"kind": "repair", "text": "Lens replaced"})
    proof = job.technician.post(f"/devices/{device}/checks", {"procedure": "monthly-in-air"})["uid"]
    job.submit(proof)
    restored = {"remark": "Lens replaced", "proving_check": proof, "password": PASSWORD}
    assert job.physicist.post(f"/devices/{device}/restore", restored, 200)["state"] == "in_use"
    assert job.physicist.get(f"/faults/{fault['uid']}")["state"] == "closed"
    dossier = job.auditor.post(f"/devices/{device}/dossiers")["uid"]
    assert dossiers.render(dossier_id=Dossier.objects.get(uid=dossier).pk, at=now())
    assert job.auditor.get(f"/dossiers/{dossier}")["state"] == "issued"
    file = job.auditor.raw("get", f"/dossiers/{dossier}/file")
    assert (file["Content-Type"], file.content[:5]) == ("application/pdf", b"%PDF-")
    kinds = [leaf["kind"] for leaf in job.auditor.get(f"/ledger/leaves?device={device}")["items"]]
    assert {"check.submitted", "device.quarantined", "device.restored", "dossier.issued"} <= set(kinds)


def test_baselines_of_a_submission_judge_the_next_check(job):
    job.adopt()
    device = job.register()
    submission = job.submit(job.plan(device), reverberation_depth="14,5")
    signed = {"reason": "Acceptance", "password": PASSWORD}
    taken = job.physicist.post(f"/submissions/{submission['uid']}/baselines", signed)
    depth = next(each for each in taken if each["measurand"] == "reverberation_depth")
    assert (depth["epoch"], depth["entered"], depth["unit"]) == (1, "14,5", "mm")
    assert job.physicist.get(f"/devices/{device}")["baselines"] == taken
