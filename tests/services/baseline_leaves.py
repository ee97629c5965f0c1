"""The commands that set baselines, for the table of commands and their leaves."""

from __future__ import annotations

import datetime as dt
import itertools
import json

from django.utils.timezone import now

from qa_tracker.services import baselines, devices, library
from qa_tracker.services.baseline_setups import Chosen
from qa_tracker.services.baselines import Value
from qa_tracker.services.devices import Place
from tests import builders
from tests.builders import PASSWORD

numbers = itertools.count(1)


def signed(ward, **given):
    return {**given, "password": PASSWORD, "actor": ward.physicist}


def measured(ward, scanner=None):
    """A probe of its own, and one value."""
    serial = f"C5-base-{next(numbers)}"
    device = builders.probe(ward.physicist, Place(site=ward.site, scanner=scanner), serial=serial)
    value = Value("reverberation_depth", "8.5", device.apertures.get().uid)
    return {"device": device.uid, "values": [value], "test_object": None, "reason": "acceptance"}


def with_numbers(ward):
    """A submission of a procedure some of whose numbers are compared with a baseline."""
    document = json.loads((builders.FIXTURES / "procedures" / "monthly-in-air.json").read_text("utf-8"))
    for measurand in document["measurands"]:
        measurand["own_baseline"] = measurand["code"] == "reverberation_depth"
    edition = library.publish_procedure(
        document=document | {"edition": 50 + next(numbers)}, actor=None, at=now()
    )
    library.adopt_edition(edition=edition, site=ward.site, remark="", actor=ward.physicist, at=now())
    serial = f"C5-base-{next(numbers)}"
    device = builders.probe(ward.physicist, Place(site=ward.site, location=ward.room), serial=serial)
    planned = builders.plan(device, builders.MONTHLY, ward.technician, ward.physicist)
    return builders.submitted(planned, ward.technician, reverberation_depth="8.5").uid


def two_days(ward):
    given = measured(ward)
    setups = [Chosen("8.5", now().date()), Chosen("8.0", dt.date(2020, 1, 1))]
    return given | {"series": given.pop("values")[0], "setups": setups}


def under_review(ward):
    """A baseline on a scanner of its own that a software event put under review."""
    scanner = builders.scanner(ward.physicist, Place(site=ward.site), serial=f"70-base-{next(numbers)}")
    given = measured(ward, scanner)
    made = baselines.set_values(**signed(ward, **given), at=now())
    event = {"version": "4.3", "options": "", "since_on": now().date(), "actor": ward.physicist}
    devices.record_software(scanner=scanner.uid, **event, at=now())
    return {"device": given["device"], "baselines": [each.uid for each in made], "reason": "no change"}


def proposed(ward):
    return baselines.propose_values(**measured(ward), actor=ward.physicist, at=now())


BASELINES = {
    "baselines.set_values": lambda w: signed(w, **measured(w)),
    "baselines.adopt_submission": lambda w: signed(w, submission=with_numbers(w), reason="acceptance"),
    "baselines.put_signed": lambda w: signed(w, proposed=proposed(w), shown_sha256=None),
    "baseline_setups.set_from_setups": lambda w: signed(w, **two_days(w)),
    "baseline_reviews.keep": lambda w: signed(w, **under_review(w)),
}
PROPOSALS = {
    "baselines.propose_values": "reads",
    "baselines.propose_submission": "reads",
    "baseline_setups.propose_setups": "reads",
}
