"""A very low chassis reading makes the ratio not assessable: said, kept, derived again, and asked of old readings."""

from __future__ import annotations

import json

import pytest
from django.utils.timezone import now

from qa_tracker.records.models import Verdict
from qa_tracker.records.queries.library import list_criteria_sets
from qa_tracker.records.queries.scope import EVERYTHING
from qa_tracker.records.queries.what_if import Extent
from qa_tracker.services import checks, objects, rechecking, what_if
from qa_tracker.services.checks import Typed
from qa_tracker.services.devices import Place
from qa_tracker.services.wording_verdicts import verdict_sentence
from tests import builders

TOE = "toe-leakage-log"
WARD = ((builders.MONTHLY, TOE),)


@pytest.fixture
def ward(shared_ward):
    return shared_ward


def verdict_on(ward, probe, chassis):
    """The stored verdict on a probe's leakage beside a chassis reading."""
    device = builders.probe(
        ward.physicist, Place(site=ward.site), serial="TOE", array_kind="matrix",
        contact_class="mucous_membrane", applied_part="CF",
    )  # fmt: skip
    check = checks.open_unplanned(device=device.uid, procedure=TOE, actor=ward.technician, at=now())
    tester = objects.register_instrument(
        site=ward.site, kind="leakage_tester", maker="Quorrel", model="Safe 3", serial="7", calibration_due_on=None,
        actor=ward.physicist, at=now(),
    )  # fmt: skip
    entries = builders.answers(check, ward.technician, toe_probe_leakage=probe, toe_chassis_leakage=chassis)
    typed = Typed(entries, instrument=tester.uid, cleaned_before="Cycle 812, Ifeoma")
    builders.submitted(check, ward.technician, typed)
    return Verdict.objects.get(submission__check_of=check, measurand__code="toe_probe_leakage")


CHASSIS = [("8", "9", "not_assessable"), ("3", "9", "not_assessable"), ("8", "10", "conforming")]


@pytest.mark.parametrize(("probe", "chassis", "verdict"), CHASSIS)
def test_ratio_to_fewer_than_ten_steps_is_not_assessable(ward, probe, chassis, verdict):
    found = verdict_on(ward, probe, chassis)
    assert found.verdict == verdict
    assert json.loads(found.parameters)["least_reference"] == "10"
    assert rechecking.recheck_verdicts().problems == ()


def test_sentence_says_why_and_what_to_do(ward):
    found = verdict_on(ward, "8", "9")
    told = verdict_sentence(found.code, json.loads(found.parameters), found.verdict)
    assert told.replace("\N{NO-BREAK SPACE}", " ") == (
        "The other reading is 9 µA, below 10 µA, which is ten steps of its resolution; a share of so little says "
        "nothing (common practice, no source): not assessable. Look at how the other reading was taken and read both "
        "again, and go by the limits that stand on no ratio."
    )


def test_verdict_from_before_the_rule_is_derived_again_as_it_was(ward):
    verdict = verdict_on(ward, "8", "9")
    known, spec = rechecking.Known(), rechecking.criterion_spec(verdict.criterion.content)
    measurand = known.measurand(verdict.submission.edition_id, verdict.measurand.code)
    assert known.least_reference(verdict.submission.edition_id, measurand) == "10"
    assert rechecking.judged_by(spec, verdict, verdict, measurand, known, "").verdict == "suspension"


def test_what_if_asks_the_rule_of_readings_that_were_judged_without_it(ward):
    verdict_on(ward, "8", "9")
    ratio = next(each for each in list_criteria_sets() if each.code == "toe-ratio")
    found = what_if.would_have_said(ratio, Extent(), EVERYTHING)
    (answer,) = found.criteria
    assert [(each.now, each.count) for each in answer.outcomes] == [(("not_assessable", ""), 1)]
