"""The main job by commands alone: enter, sign, countersign, quarantine, restore, dossier, verify."""

from __future__ import annotations

import uuid

import pytest
from django.utils.timezone import now

from qa_tracker.core.errors import Conflict, Forbidden, Invalid, NotFound, SeveralInvalid
from qa_tracker.records.models import Check, Device, Fault, Signature
from qa_tracker.services import checks, dossiers, rechecking, states, upkeep
from qa_tracker.services.checks import Typed
from qa_tracker.services.entries import Entry
from tests import builders

pytestmark = pytest.mark.django_db

CLEANED = "Wipe, Ifeoma, 12:10"


@pytest.fixture
def ward(db):
    return builders.ward()


def typed(ward, **given):
    return Typed(entries=builders.answers(ward.check, ward.technician, **given), cleaned_before=CLEANED)


def sign(ward, done, form_uid=None, shown=None, password=builders.PASSWORD, **more):
    at = now()
    if shown is None:
        shown = checks.preview(check=ward.check.uid, typed=done, whole=True, actor=ward.technician, at=at)
        shown = shown.shown_sha256
    return checks.submit(
        check=ward.check.uid, form_uid=form_uid or uuid.uuid4(), typed=done, shown_sha256=shown,
        password=password, actor=ward.technician, at=at, **more,
    )  # fmt: skip


def test_conforming_check_opens_the_next_occurrence_when_signed(ward):
    submission = sign(ward, typed(ward))
    ward.check.refresh_from_db()
    assert (ward.check.state, ward.check.verdict, submission.verdict) == (
        "submitted",
        "conforming",
        "conforming",
    )
    following = Check.objects.get(plan=ward.check.plan, state="scheduled")
    assert following.due_on > ward.check.due_on


def test_same_form_twice_is_one_submission(ward):
    form, done = uuid.uuid4(), typed(ward)
    first, second = sign(ward, done, form), sign(ward, done, form, shown="anything")
    assert first.pk == second.pk


def test_red_lens_suspends_and_opens_a_fault_when_signed(ward):
    sign(ward, typed(ward, lens_grade="red"), quarantine=True)
    ward.check.refresh_from_db()
    fault = Fault.objects.get(device=ward.probe)
    assert (ward.check.verdict, fault.grade, fault.state) == ("suspension", "suspension", "open")
    assert fault.instruction.startswith("Take it out of the room")
    assert Device.objects.get(pk=ward.probe.pk).state == "quarantined"


def test_one_dangerous_finding_alone_is_taken_when_the_rest_has_a_reason(ward):
    preview = checks.preview(
        check=ward.check.uid,
        typed=Typed(
            entries={"lens_grade.0.0.1": Entry(text="red")},
            cleaned_before=CLEANED,
            partial_reason="in_theatre",
        ),
        whole=True,
        actor=ward.technician,
        at=now(),
    )
    assert preview.judged.verdict == "suspension"
    assert preview.judged.worst.item.spec.code == "lens_grade"


def test_unread_items_are_refused_one_by_one_when_no_reason_is_given(ward):
    with pytest.raises(SeveralInvalid) as refused:
        sign(ward, Typed(entries={"lens_grade.0.0.1": Entry(text="green")}, cleaned_before=CLEANED))
    codes = {error.code for error in refused.value.errors}
    assert codes == {"reading.missing"}
    assert "case_grade.0.0.1" in {error.field for error in refused.value.errors}


@pytest.mark.parametrize(
    ("change", "code"),
    [
        ({"password": "wrong"}, "signature.password_wrong"),
        ({"password": ""}, "signature.password_missing"),
        ({"shown": "0" * 64}, "signature.shown_differs"),
    ],
)
def test_signature_is_refused_when_it_is_not_the_persons_own_or_not_on_what_was_shown(ward, change, code):
    with pytest.raises(Invalid) as refused:
        sign(ward, typed(ward), **change)
    assert refused.value.code == code
    assert not Signature.objects.filter(meaning="performed").exists()


def test_second_submission_is_refused_when_the_check_was_submitted_meanwhile(ward):
    done = typed(ward)
    sign(ward, done)
    with pytest.raises(Conflict) as refused:
        sign(ward, done, shown="0" * 64)
    assert refused.value.code == "check.wrong_state"


def test_nobody_countersigns_their_own_work(ward):
    builders.give_role(ward.admin, ward.technician, "physicist", ward.site)
    submission = sign(ward, typed(ward))
    with pytest.raises(Forbidden) as refused:
        checks.countersign(
            check=ward.check.uid, shown_sha256=submission.shown_sha256, remark="",
            password=builders.PASSWORD, actor=ward.technician, at=now(),
        )  # fmt: skip
    assert refused.value.code == "check.own_work"


def test_countersigned_check_names_both_people_when_a_physicist_signs(ward):
    submission = sign(ward, typed(ward))
    checks.countersign(
        check=ward.check.uid, shown_sha256=submission.shown_sha256, remark="seen",
        password=builders.PASSWORD, actor=ward.physicist, at=now(),
    )  # fmt: skip
    signed = list(Signature.objects.filter(submission=submission).order_by("id"))
    assert [(each.person_id, each.meaning) for each in signed] == [
        (ward.technician.pk, "performed"),
        (ward.physicist.pk, "countersigned"),
    ]


def test_restoring_needs_a_later_proving_check_when_a_suspension_fault_is_open(ward):
    states.quarantine(device=ward.probe.uid, seen="Lens cracked", actor=ward.user, at=now())
    give = {"device": ward.probe.uid, "remark": "new lens", "password": builders.PASSWORD}
    with pytest.raises(Invalid) as refused:
        states.restore(**give, proving_check=None, actor=ward.physicist, at=now())
    assert refused.value.code == "restore.proof_missing"
    sign(ward, typed(ward))
    states.restore(**give, proving_check=ward.check.uid, actor=ward.physicist, at=now())
    assert Device.objects.get(pk=ward.probe.pk).state == "in_use"
    assert Fault.objects.get(device=ward.probe).state == "closed"


def test_technician_may_not_restore(ward):
    states.quarantine(device=ward.probe.uid, seen="Lens cracked", actor=ward.technician, at=now())
    with pytest.raises(Forbidden):
        states.restore(
            device=ward.probe.uid, remark="fine", password=builders.PASSWORD, proving_check=None,
            actor=ward.technician, at=now(),
        )  # fmt: skip


def test_device_of_another_site_is_not_there_for_a_technician(ward):
    other = builders.site(ward.admin, "KB", "Kestrel Bay")
    stranger = builders.person(ward.admin, "stranger", "technician", other)
    for uid in (ward.probe.uid, uuid.uuid4()):
        with pytest.raises(NotFound) as refused:
            states.quarantine(device=uid, seen="x", actor=stranger, at=now())
        assert (refused.value.code, refused.value.parameters) == ("device.unknown", {})


def test_dossier_verifies_and_no_changed_byte_does(ward, settings):
    sign(ward, typed(ward, lens_grade="amber"))
    asked = dossiers.request(device=ward.probe.uid, actor=ward.physicist, at=now())
    assert dossiers.render(dossier_id=asked.pk, at=now())
    data = dossiers.file_bytes(dossier=asked.uid, actor=ward.physicist, at=now())
    assert dossiers.verify(data, at=now()).holds
    for place in range(0, len(data), len(data) // 200):
        flipped = bytearray(data)
        flipped[place] ^= 1
        assert not dossiers.verify(bytes(flipped), at=now()).holds


def test_ledger_and_verdicts_agree_after_the_whole_job(ward):
    sign(ward, typed(ward, lens_grade="red"), quarantine=True)
    assert upkeep.verify_ledger().problems == ()
    found = rechecking.recheck_verdicts()
    assert found.verdicts > 5
    assert found.problems == ()
