"""What a dossier says of a device: everything an auditor asks for, and names that do no harm."""

from __future__ import annotations

import copy
import uuid

import pytest
from django.db import transaction
from django.test import override_settings
from django.utils.timezone import now

from qa_tracker.documents.device_dossier import device_dossier_pdf
from qa_tracker.documents.frozen import content_bytes, from_bytes
from qa_tracker.records.models import Aperture
from qa_tracker.services import (
    baselines,
    checkpoints,
    checks,
    devices,
    dossier_content,
    faults,
    plans,
    states,
)
from qa_tracker.services.baselines import Value
from qa_tracker.services.checks import Typed
from qa_tracker.services.devices import Place
from qa_tracker.services.entries import Entry
from tests import builders
from tests.builders import PASSWORD

HOSTILE = "<script>alert(1)</script> ') Tj ET \\(%(name)s {{7*7}} \u202etxt =cmd|'/c'!A1"


@pytest.fixture
def ward(shared_ward):
    return shared_ward


def content(ward, device=None):
    return dossier_content.device_content(
        (device or ward.probe).uid, dossier_uid=uuid.uuid4(), checkpoint=checkpoints.make(at=now()),
        demo_key=True, at=now(),
    )  # fmt: skip


@pytest.fixture(scope="module")
def eventful(ward_of_the_module, tmp_path_factory):
    """The content for a probe with a life, frozen once: nothing in it changes any more."""
    folder = tmp_path_factory.mktemp("eventful")
    with override_settings(DATA_DIR=folder, MEDIA_ROOT=folder), transaction.atomic():
        frozen = live_through(copy.deepcopy(ward_of_the_module))
        transaction.set_rollback(True)
    return frozen


def live_through(ward):
    """A probe is quarantined, mended, proven, restored, given a baseline and moved."""
    fault = states.quarantine(device=ward.probe.uid, seen="Lens cracked", actor=ward.user, at=now())
    faults.act_on(
        fault=fault.uid,
        kind="repair",
        text="Lens replaced",
        job_number="J-77",
        actor=ward.technician,
        at=now(),
    )
    faults.look_back(fault=fault.uid, statement="Nobody scanned since.", actor=ward.physicist, at=now())
    done = builders.submitted(ward.check, ward.technician, lens_grade="amber", reverberation_depth="8.5")
    checks.countersign(
        check=ward.check.uid, shown_sha256=done.shown_sha256, remark="watch it", password=PASSWORD,
        actor=ward.physicist, at=now(),
    )  # fmt: skip
    states.restore(
        device=ward.probe.uid, proving_check=ward.check.uid, remark="new lens", password=PASSWORD,
        actor=ward.physicist, at=now(),
    )  # fmt: skip
    value = Value("reverberation_depth", "8.5", Aperture.objects.get(device=ward.probe).uid)
    baselines.set_values(
        device=ward.probe.uid, values=[value], test_object=None, reason="after the lens", password=PASSWORD,
        actor=ward.physicist, at=now(),
    )  # fmt: skip
    devices.move(
        device=ward.probe.uid, place=Place(site=ward.site), reason="spare", actor=ward.physicist, at=now()
    )
    return content(ward)


def test_identity_says_who_the_device_is_and_who_accepted_it(eventful):
    told = {row.label: row.value for row in eventful.identity}
    assert (told["Maker"], told["Model"], told["Serial number"]) == ("Ostrigard", "C5", "C5-2207")
    assert told["Accepted into use"].endswith("Maren Oduya, physicist")
    assert (eventful.site, eventful.device) == ("AG Aldermoor General", "Ostrigard C5 C5-2207")
    assert [(each.name, each.facts) for each in eventful.apertures] == [("main", "192 elements")]


def test_placements_are_told_with_both_ends(eventful):
    first, second = eventful.placements
    assert (first.place, second.place) == (
        "Aldermoor General, Ultrasound 2, OG-70 70-1188",
        "Aldermoor General",
    )
    assert first.until_on == second.from_on
    assert (second.until_on, second.reason) == ("", "spare")


def test_plan_is_told_with_its_next_due_day(eventful, ward):
    (plan,) = eventful.plans
    following = plans.due_after(ward.check.plan, ward.check.due_on)
    assert (plan.procedure, plan.who) == ("Monthly in-air and visual", "Ifeoma Castellane")
    assert (plan.due_on, bool(plan.due), bool(plan.recurrence)) == (following.due_on.isoformat(), True, True)


def test_check_is_told_with_readings_lines_sentences_and_criteria(eventful):
    (check,) = eventful.checks
    assert (check.verdict, check.performer, check.place) == ("remedial", "Ifeoma Castellane", "AG")
    assert check.sentence == "The verdict is that of: Lens."
    told = {reading.label: reading for reading in check.readings}
    assert (told["Lens"].value, told["Lens"].verdict) == ("amber", "remedial")
    dark = next(
        reading for reading in check.readings if reading.criterion and reading.criterion.identifier == "DROP"
    )
    assert (dark.value, dark.unit, dark.aperture) == ("0", "", "main")
    assert (dark.line.remedial, dark.line.suspension) == ("2", "4")
    assert all((dark.sentence, dark.criterion.words, dark.criterion.source, dark.criterion.standing))
    assert dark.criterion.edition == "dropout 2014"


def test_every_reading_that_was_judged_names_its_criterion_with_source_and_standing(eventful):
    judged = [reading for check in eventful.checks for reading in check.readings if reading.verdict]
    assert len(judged) > 5
    for reading in judged:
        assert reading.sentence
        assert reading.criterion.source
        assert reading.criterion.standing


def test_signatures_are_told_with_names_times_and_meanings(eventful):
    (check,) = eventful.checks
    told = [(each.name, each.role, each.note) for each in check.signatures]
    assert told == [("Ifeoma Castellane", "technician", ""), ("Maren Oduya", "physicist", "watch it")]
    assert len({each.meaning for each in check.signatures}) == 2
    assert all(each.at[-6:] in ("+00:00", "+01:00") for each in check.signatures)


def test_fault_is_told_with_actions_proof_and_who_restored_the_device(eventful):
    (fault,) = eventful.faults
    assert (fault.seen, fault.look_back) == ("Lens cracked", "Nobody scanned since.")
    assert [(each.what, each.who) for each in fault.actions] == [
        ("Lens replaced (J-77)", "Ifeoma Castellane")
    ]
    assert fault.proof.startswith("Monthly in-air and visual of ")
    assert [(each.name, each.note) for each in fault.signatures] == [("Maren Oduya", "new lens")]


def test_baseline_is_told_with_its_key_and_reason(eventful):
    (row,) = eventful.baselines
    assert (row.value, row.epoch, row.reason, row.set_by) == ("8.5", "1", "after the lens", "Maren Oduya")
    assert row.key == "OG-70, 4.2"


def test_everybody_named_is_among_the_people_with_their_roles(eventful):
    told = {person.name: person.role for person in eventful.people}
    assert told == {
        "Maren Oduya": "physicist", "Ifeoma Castellane": "technician", "Jory Penhallow": "user",
    }  # fmt: skip


def test_cautions_of_the_document_and_of_its_procedures_are_told_once(eventful):
    assert len(eventful.cautions) == len(set(eventful.cautions)) >= 5


def test_ledger_state_is_that_of_the_checkpoint(eventful):
    assert int(eventful.ledger.size) > int(eventful.ledger.last_leaf) >= int(eventful.ledger.first_leaf)
    assert len(bytes.fromhex(eventful.ledger.root)) == 32


def test_person_named_only_by_an_action_or_a_baseline_is_among_the_people(ward):
    engineer = builders.person(ward.admin, "wells", "engineer", ward.site, "Tamsin Wells")
    fault = faults.open_fault(
        device=ward.probe.uid, grade="remedial", seen="Cable worn", place="", actor=ward.user, at=now()
    )
    faults.act_on(fault=fault.uid, kind="note", text="Taped", job_number="", actor=engineer, at=now())
    assert ("Tamsin Wells", "clinical engineer") in [(each.name, each.role) for each in content(ward).people]


def test_items_not_tested_are_told_with_the_reason(ward):
    typed = Typed({"lens_grade.0.0.1": Entry("green")}, cleaned_before="Wipe", partial_reason="in_theatre")
    builders.submitted(ward.check, ward.technician, typed)
    (check,) = content(ward).checks
    assert "Case" in {each.item for each in check.untested}
    assert len({each.reason for each in check.untested}) == 1


def test_device_that_was_never_checked_has_a_dossier(ward):
    told = content(ward, ward.scanner)
    assert (told.checks, told.faults, told.baselines) == ((), (), ())
    assert [row.version for row in told.software] == ["4.2"]
    assert device_dossier_pdf(told).startswith(b"%PDF")


def test_hostile_words_are_kept_as_they_are_and_do_nothing(ward):
    device = builders.probe(ward.physicist, Place(site=ward.site), serial=HOSTILE[:78], model=HOSTILE[:78])
    check = builders.plan(device, builders.MONTHLY, ward.technician, ward.physicist)
    typed = Typed(builders.answers(check, ward.technician), cleaned_before=HOSTILE, remark=HOSTILE)
    builders.submitted(check, ward.technician, typed)
    faults.open_fault(device=device.uid, grade="remedial", seen=HOSTILE, place="", actor=ward.user, at=now())
    told = content(ward, device)
    data = content_bytes(told)
    assert from_bytes(data) == told
    assert HOSTILE in [row.value for row in told.checks[0].facts]
    pdf = device_dossier_pdf(told)
    assert pdf == device_dossier_pdf(from_bytes(data))
    assert not [word for word in (b"/JavaScript", b"/JS", b"/URI", b"/Launch", b"/OpenAction") if word in pdf]
