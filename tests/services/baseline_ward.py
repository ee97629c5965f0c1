"""What tests of baselines stand on: test objects, surveys in the past, and values set on a probe."""

from __future__ import annotations

import datetime as dt

from django.utils.timezone import now

from qa_tracker.records.models import Aperture, TestObject
from qa_tracker.services import baselines, checks, objects
from qa_tracker.services.baselines import Value
from qa_tracker.services.checks import Typed
from qa_tracker.services.entries import Entry
from tests import builders

ANNUAL = "annual-survey"
WARD = ((builders.MONTHLY, ANNUAL),)


def phantom(ward, serial, **nominals):
    """A test object of the site, with true values where it has any."""
    return objects.register_test_object(
        site=ward.site, name="Phantom", serial=serial, material="hydrogel", nominals=nominals,
        actor=ward.physicist, at=now(),
    )  # fmt: skip


def aperture(device):
    return Aperture.objects.get(device=device).uid


def penetration(ward, text, **more):
    return Value("penetration", text, aperture(ward.probe), **more)


def put(ward, *values, on=None, **changed):
    """Set values on the probe, signed by the physicist."""
    given = {"reason": "acceptance", "password": builders.PASSWORD, "actor": ward.physicist, "at": now()}
    return baselines.set_values(
        device=ward.probe.uid, values=list(values), test_object=on and on.uid, **given | changed
    )


def usual_object(ward):
    return TestObject.objects.filter(serial="P-0").first() or phantom(ward, "P-0")


def surveyed(ward, on=None, days_ago=0, procedure=ANNUAL, **given):
    """A check of which only some numbers were read, some days ago; on an object of its own where none is said."""
    on = on or usual_object(ward)
    check = checks.open_unplanned(device=ward.probe.uid, procedure=procedure, actor=ward.physicist, at=now())
    laid = checks.sheet(check=check.uid, test_object=on.uid, actor=ward.physicist, at=now())
    entries = {
        item.key: typed if isinstance(typed, Entry) else Entry(typed, confirmed=True)
        for item in laid.items
        for typed in [given.get(item.spec.code)]
        if typed is not None
    }
    typed = Typed(
        entries,
        measured_at=now() - dt.timedelta(days=days_ago),
        test_object=on.uid,
        cleaned_before="Wipe",
        partial_reason="in_use",
    )
    return builders.submitted(check, ward.physicist, typed)


def adopt(ward, submission, **changed):
    given = {"reason": "first survey", "password": builders.PASSWORD, "actor": ward.physicist, "at": now()}
    return baselines.adopt_submission(submission=submission.uid, **given | changed)
