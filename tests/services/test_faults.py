"""Faults: opened by anyone, acted on, and closed with a word or a proof."""

from __future__ import annotations

import pytest
from django.utils.timezone import now

from qa_tracker.core.errors import Conflict, DomainError, Forbidden
from qa_tracker.records.models import Fault, FaultAction
from qa_tracker.services import faults, states
from tests import builders


@pytest.fixture
def ward(shared_ward):
    return shared_ward


def opened(ward, grade="remedial", seen="Cable worn"):
    return faults.open_fault(
        device=ward.probe.uid, grade=grade, seen=seen, place="strain relief", actor=ward.user, at=now()
    )


def act(ward, fault, actor=None, **changed):
    given = {"kind": "told", "text": "Phoned the maker", "job_number": "J-7"} | changed
    return faults.act_on(fault=fault.uid, **given, actor=actor or ward.technician, at=now())


@pytest.mark.parametrize(
    ("grade", "seen", "code"),
    [("remedial", " ", "fault.seen_missing"), ("awful", "Cable worn", "fault.grade_unknown")],
)
def test_fault_is_refused_when_nothing_was_seen_or_its_grade_is_none(ward, grade, seen, code):
    with pytest.raises(DomainError) as refused:
        opened(ward, grade, seen)
    assert refused.value.code == code
    assert not Fault.objects.exists()


def test_actions_are_kept_in_their_order_with_who_did_them(ward):
    fault = opened(ward)
    for kind in ("told", "sent out", "electrical safety"):
        act(ward, fault, kind=kind)
    kept = FaultAction.objects.order_by("id").values_list("kind", "by", "job_number")
    assert list(kept) == [
        (kind, ward.technician.pk, "J-7") for kind in ("told", "sent out", "electrical safety")
    ]


@pytest.mark.parametrize(
    ("changed", "code"),
    [({"kind": "sang"}, "fault.action_unknown"), ({"text": " "}, "fault.action_text_missing")],
)
def test_action_is_refused_when_it_is_of_no_kind_or_says_nothing(ward, changed, code):
    fault = opened(ward)
    with pytest.raises(DomainError) as refused:
        act(ward, fault, **changed)
    assert refused.value.code == code


def test_user_opens_faults_and_does_nothing_more(ward):
    fault = opened(ward)
    with pytest.raises(Forbidden):
        act(ward, fault, actor=ward.user)
    with pytest.raises(Forbidden):
        faults.dismiss(fault=fault.uid, remark="dirt", actor=ward.user, at=now())
    with pytest.raises(Forbidden):
        faults.look_back(fault=fault.uid, statement="none", actor=ward.technician, at=now())


def test_dismissed_fault_is_closed_and_takes_no_action(ward):
    fault = opened(ward)
    faults.dismiss(fault=fault.uid, remark="Only dirt.", actor=ward.physicist, at=now())
    fault.refresh_from_db()
    assert (fault.state, fault.close_remark, fault.proving_check) == ("closed", "Only dirt.", None)
    for attempt in (
        lambda: act(ward, fault),
        lambda: faults.dismiss(fault=fault.uid, remark="again", actor=ward.physicist, at=now()),
    ):
        with pytest.raises(Conflict) as refused:
            attempt()
        assert refused.value.code == "fault.wrong_state"


def test_suspension_fault_is_not_dismissed(ward):
    fault = states.quarantine(device=ward.probe.uid, seen="Lens cracked", actor=ward.user, at=now())
    with pytest.raises(Conflict) as refused:
        faults.dismiss(fault=fault.uid, remark="fine", actor=ward.physicist, at=now())
    assert refused.value.code == "fault.close_by_restoring"


def test_look_back_is_kept_on_the_fault(ward):
    fault = opened(ward)
    faults.look_back(fault=fault.uid, statement="Nobody scanned since.", actor=ward.physicist, at=now())
    fault.refresh_from_db()
    assert (fault.look_back, fault.state, fault.version) == ("Nobody scanned since.", "open", 2)


def test_fault_of_another_site_is_not_there(ward):
    fault = opened(ward)
    bay = builders.site(ward.admin, "KB", "Kestrel Bay")
    stranger = builders.person(ward.admin, "stranger", "technician", bay)
    with pytest.raises(DomainError) as refused:
        act(ward, fault, actor=stranger)
    assert refused.value.code == "fault.unknown"
