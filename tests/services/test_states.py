"""States of a device: the table, and that no way leads back into use around a signature and its proof."""

from __future__ import annotations

import datetime as dt

import pytest
from django.utils.timezone import now

from qa_tracker.core.errors import Conflict, DomainError, Forbidden, Invalid
from qa_tracker.core.workflow import DEVICE, may_move, target
from qa_tracker.records.models import Device, Fault, Signature
from qa_tracker.services import devices, faults, states
from qa_tracker.services.checks import Typed
from qa_tracker.services.devices import Identity, Place
from tests import builders
from tests.builders import PASSWORD


@pytest.fixture
def ward(shared_ward):
    return shared_ward


def move_on(ward, verb, note="as agreed", actor=None):
    states.move_on(device=ward.probe.uid, verb=verb, note=note, actor=actor or ward.physicist, at=now())
    return state(ward)


def state(ward):
    return Device.objects.get(pk=ward.probe.pk).state


def quarantine(ward):
    return states.quarantine(device=ward.probe.uid, seen="Lens cracked", actor=ward.user, at=now())


def restore(ward, proof=None, **changed):
    given = {"remark": "new lens", "password": PASSWORD, "actor": ward.physicist} | changed
    states.restore(device=ward.probe.uid, proving_check=proof, **given, at=now())


def proof(ward, typed=None, **given):
    builders.submitted(ward.check, ward.technician, typed, **given)
    return ward.check.uid


WAYS = {
    "sent out and back": (["send_to_repair", "return_from_repair"], "quarantined"),
    "lost and found": (["lose", "find"], "quarantined"),
    "stored and received": (["store", "receive"], "awaiting_acceptance"),
    "lent and returned": (["lend_out", "return_from_loan"], "awaiting_acceptance"),
    "disposed and received": (["dispose", "receive"], "awaiting_acceptance"),
    "restricted": (["restrict"], "restricted"),
}


@pytest.mark.parametrize("name", WAYS)
def test_no_verb_leads_back_into_use_without_a_signature(ward, name):
    verbs, ends_in = WAYS[name]
    for verb in verbs:
        move_on(ward, verb)
    assert state(ward) == ends_in
    onward = [target(DEVICE, ends_in, verb) for verb in states.VERBS if may_move(DEVICE, ends_in, verb)]
    assert not {"in_use", "on_loan_in"} & set(onward)


@pytest.mark.parametrize("verb", sorted(states.VERBS))
def test_verb_does_what_the_table_says_and_nothing_else(ward, verb):
    if may_move(DEVICE, "in_use", verb):
        assert move_on(ward, verb) != "in_use"
        return
    with pytest.raises(Conflict) as refused:
        move_on(ward, verb)
    assert (refused.value.code, state(ward)) == ("device.wrong_state", "in_use")


@pytest.mark.parametrize(
    ("verb", "note", "code"),
    [
        ("accept", "x", "device.unknown_word"),
        ("fly", "x", "device.unknown_word"),
        ("lose", " ", "device.note_missing"),
    ],
)
def test_move_is_refused_when_the_verb_is_not_one_of_these_or_nothing_is_said(ward, verb, note, code):
    with pytest.raises(Invalid) as refused:
        move_on(ward, verb, note)
    assert refused.value.code == code


@pytest.mark.parametrize("who", ["user", "technician", "admin"])
def test_moving_on_accepting_and_restoring_are_refused_when_the_role_may_not(ward, who):
    actor = getattr(ward, who)
    with pytest.raises(Forbidden):
        move_on(ward, "store", actor=actor)
    quarantine(ward)
    with pytest.raises(Forbidden):
        restore(ward, actor=actor)


def test_acceptance_is_signed_and_done_once(ward):
    signed = Signature.objects.get(subject_uid=ward.probe.uid)
    assert (signed.meaning, signed.role, signed.person_id) == ("accepted", "physicist", ward.physicist.pk)
    with pytest.raises(Conflict) as refused:
        states.accept(device=ward.probe.uid, remark="", password=PASSWORD, actor=ward.physicist, at=now())
    assert refused.value.code == "device.wrong_state"


def test_device_never_accepted_is_not_restored(ward):
    device = devices.register_scanner(
        identity=Identity("Ostrigard", "OG-70", "new"), place=Place(site=ward.site), software_version="1",
        actor=ward.physicist, at=now(),
    )  # fmt: skip
    states.quarantine(device=device.uid, seen="Dented in transit", actor=ward.user, at=now())
    with pytest.raises(Conflict) as refused:
        states.restore(
            device=device.uid, proving_check=None, remark="fine", password=PASSWORD, actor=ward.physicist,
            at=now(),
        )  # fmt: skip
    assert refused.value.code == "restore.not_accepted"


def other_probes_check(ward):
    device = builders.probe(ward.physicist, Place(site=ward.site), serial="C5-2")
    check = builders.plan(device, builders.MONTHLY, ward.technician, ward.physicist)
    builders.submitted(check, ward.technician)
    return check.uid


def measured_before(ward):
    entries = builders.answers(ward.check, ward.technician)
    opened_at = Fault.objects.get().opened_at
    return proof(ward, Typed(entries, measured_at=opened_at - dt.timedelta(hours=1), cleaned_before="Wipe"))


def nothing_read(ward):
    return proof(ward, Typed({}, partial_reason="in_theatre", cleaned_before="Wipe"))


PROOFS = {
    "none": (lambda w: None, "restore.proof_missing"),
    "of another device": (other_probes_check, "restore.proof_unknown"),
    "not yet done": (lambda w: w.check.uid, "restore.proof_unknown"),
    "itself suspends": (lambda w: proof(w, lens_grade="red"), "restore.proof_suspends"),
    "measured before the fault": (measured_before, "restore.proof_too_old"),
    "nothing read in it": (nothing_read, "restore.proof_unread"),
}


@pytest.mark.parametrize("name", PROOFS)
def test_restoring_is_refused_when_the_check_proves_nothing(ward, name):
    quarantine(ward)
    make, code = PROOFS[name]
    proving = make(ward)
    with pytest.raises(DomainError) as refused:
        restore(ward, proving)
    assert (refused.value.code, refused.value.field, state(ward)) == (code, "proving_check", "quarantined")


def test_restoring_is_refused_when_the_check_was_signed_before_the_fault(ward):
    proving = proof(ward)
    quarantine(ward)
    with pytest.raises(Conflict) as refused:
        restore(ward, proving)
    assert refused.value.code == "restore.proof_too_old"


@pytest.mark.parametrize(
    ("changed", "code"),
    [
        ({"password": "wrong"}, "signature.password_wrong"),
        ({"password": ""}, "signature.password_missing"),
        ({"remark": "  "}, "restore.remark_missing"),
    ],
)
def test_restoring_is_refused_when_it_is_not_signed_or_says_nothing(ward, changed, code):
    quarantine(ward)
    proving = proof(ward)
    with pytest.raises(Invalid) as refused:
        restore(ward, proving, **changed)
    assert (refused.value.code, state(ward)) == (code, "quarantined")


def test_restored_device_names_its_proof_and_closes_its_faults(ward):
    quarantine(ward)
    faults.open_fault(
        device=ward.probe.uid, grade="remedial", seen="Cable worn", place="", actor=ward.user, at=now()
    )
    restore(ward, proof(ward))
    assert state(ward) == "in_use"
    closed = set(Fault.objects.values_list("state", "proving_check", "close_remark"))
    assert closed == {("closed", ward.check.pk, "new lens")}
    assert Signature.objects.filter(subject_uid=ward.probe.uid, meaning="restored to use").count() == 1


def test_quarantine_opens_a_suspension_fault_with_the_sites_instruction(ward):
    fault = quarantine(ward)
    assert (fault.grade, fault.state, fault.opened_by_id) == ("suspension", "open", ward.user.pk)
    assert fault.instruction == ward.site.suspension_instruction
    with pytest.raises(Conflict):
        quarantine(ward)
    assert Fault.objects.count() == 1
