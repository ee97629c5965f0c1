"""The bulk door writes what live commands would have written, marked as what it is, all of it or nothing."""

from __future__ import annotations

import datetime as dt
import json

import pytest

from qa_tracker.core.errors import SeveralInvalid
from qa_tracker.records import ledger
from qa_tracker.records.models import Baseline, Check, Device, Fault, Submission, Verdict
from qa_tracker.records.queries.ledger import every_leaf
from qa_tracker.services import history, history_baselines, history_devices, upkeep
from qa_tracker.services.entries import Entry
from qa_tracker.services.recording import Facts
from tests import builders

COMPARED = (
    "measurand__code",
    "verdict",
    "level",
    "criterion__code",
    "code",
    "parameters",
    "departure",
    "used",
)
GATE = Facts(cleaned_before="Wiped")
DAY = dt.timedelta(days=1)


@pytest.fixture
def ward(db):
    return builders.ward()


def _answer(**given: str) -> history.Answer:
    def answer(item):
        text = given.get(item.spec.code, builders.good_answer(item) if item.spec.required else "")
        return Entry(text, confirmed=True)

    return answer


def _perform(past, ward, kept, at, **given: str) -> history.Done:
    check = history.open_unplanned(past, kept, builders.MONTHLY, actor=ward.technician, at=at)
    return history.perform(
        past, kept, check, _answer(**given), by=ward.technician, role="technician", at=at, facts=GATE
    )


def _first_moment(ward) -> dt.datetime:
    return Device.objects.get(pk=ward.probe.pk).state_since + DAY


@pytest.mark.parametrize("dark", ["0", "2", "5"], ids=["conforming", "remedial", "suspension"])
def test_history_when_judging_writes_the_verdicts_of_a_live_check(ward, dark):
    live = builders.submitted(ward.check, ward.technician, dark_elements=dark)
    with history.past("imported") as past:
        done = _perform(past, ward, history.keep(ward.probe), _first_moment(ward), dark_elements=dark)
    found = [
        list(Verdict.objects.filter(submission=each).order_by("id").values_list(*COMPARED))
        for each in (live, done.submission)
    ]
    assert found[0] == found[1] != []


def test_history_when_done_leaves_a_ledger_that_verifies_and_says_imported(ward):
    before = ledger.state()[0]
    with history.past("imported") as past:
        kept = history.keep(ward.probe)
        for day in range(3):
            _perform(past, ward, kept, _first_moment(ward) + day * DAY)
    written = list(every_leaf(before))
    assert [json.loads(leaf.content)["origin"] for leaf in written] == ["imported"] * 6
    assert upkeep.verify_ledger().problems == ()


def _perform_one_good_and_one_refused(ward) -> None:
    with history.past("imported") as past:
        kept = history.keep(ward.probe)
        _perform(past, ward, kept, _first_moment(ward))
        _perform(past, ward, kept, _first_moment(ward), case_grade="purple")


def test_history_when_an_entry_is_refused_writes_nothing(ward):
    before = ledger.state()
    with pytest.raises(SeveralInvalid):
        _perform_one_good_and_one_refused(ward)
    assert ledger.state() == before
    assert not Submission.objects.exists()


def test_history_when_numbers_are_equal_keeps_each_as_it_was_typed(ward):
    with history.past("imported") as past:
        kept = history.keep(ward.probe)
        done = [_perform(past, ward, kept, _first_moment(ward), dark_elements=text) for text in ("1", "1.0")]
    said = [
        json.loads(
            Verdict.objects.get(submission=each.submission, measurand__code="dark_elements").parameters
        )
        for each in done
    ]
    assert [each["value"] for each in said] == ["1", "1.0"]


def test_history_when_a_check_suspends_opens_a_fault_that_a_proof_closes(ward):
    at = _first_moment(ward)
    with history.past("imported") as past:
        kept = history.keep(ward.probe)
        _perform(past, ward, kept, at, lens_grade="red")
        proof = _perform(past, ward, kept, at + DAY)
        history_devices.restore(
            past,
            kept,
            proof=proof.check,
            remark="Lens renewed",
            by=ward.physicist,
            role="physicist",
            at=at + 2 * DAY,
        )
    fault = Fault.objects.get(device=ward.probe)
    assert (fault.state, fault.proving_check_id) == ("closed", proof.check.pk)
    assert Device.objects.get(pk=ward.probe.pk).state == "in_use"


def test_history_when_baselines_are_set_ends_the_epoch_before(ward):
    at = _first_moment(ward)
    with history.past("imported") as past:
        kept = history.keep(ward.probe)
        for day in range(2):
            done = _perform(past, ward, kept, at + day * DAY)
            history_baselines.set_from_check(
                past,
                kept,
                done,
                ("reverberation_depth",),
                by=ward.physicist,
                reason="Acceptance",
                at=at + day * DAY,
            )
    found = Baseline.objects.filter(device=ward.probe).order_by("epoch")
    assert [(each.epoch, each.ended_at is None) for each in found] == [(1, False), (2, True)]


def test_history_when_a_planned_check_is_done_opens_the_next(ward):
    with history.past("imported") as past:
        check = Check.objects.select_related("plan__device__site", "device__site", "procedure", "site").get(
            pk=ward.check.pk
        )
        kept = history.keep(check.device)
        done = history.perform(
            past,
            kept,
            check,
            _answer(),
            by=ward.technician,
            role="technician",
            at=_first_moment(ward),
            facts=GATE,
        )
    assert done.following is not None
    assert Check.objects.filter(plan=check.plan, state="scheduled").get().due_on > check.due_on
