"""What a reading is compared with is measured too: its uncertainty counts, is said, kept, and derived again."""

from __future__ import annotations

import json

import pytest
from django.utils.timezone import now

from qa_tracker.records.models import FurtherVerdict, Verdict
from qa_tracker.services import baselines, checks, library, objects, rechecking, uncertainties
from qa_tracker.services.baselines import Value
from qa_tracker.services.checks import Typed
from qa_tracker.services.devices import Place
from qa_tracker.services.entries import Entry
from qa_tracker.services.uncertainties import Statement
from qa_tracker.services.wording_verdicts import verdict_sentence
from tests import builders

TOE = "toe-leakage-log"
WARD = ((builders.MONTHLY, TOE),)
STEP = {
    "id": "TOE-STEP", "name": "Probe leakage, step", "shape": "B", "unit": "uA", "medium": "electrical",
    "methods": ["soak"], "source": "The group's own", "standing": {"suspension": "practice"}, "own_words": {},
    "not_for_array_kinds": [], "electrical": True, "note": "", "measurands": ["toe_probe_leakage"],
    "criterion": {"basis": "baseline", "direction": "above", "suspension": {"absolute": "60"}},
}  # fmt: skip
LOCAL = {
    "set": "local-toe", "edition": "1", "title": "Local limits", "source": "The group's own", "note": "",
    "cautions": [], "criteria": [STEP],
}  # fmt: skip


@pytest.fixture
def ward(shared_ward):
    """A ward that judges a step beside the ratio, and states U = 3 uA of the probe's leakage."""
    row = library.publish_criteria(document=LOCAL, actor=shared_ward.physicist, at=now())
    library.adopt_criteria(criteria_set=row, site=None, remark="", actor=shared_ward.physicist, at=now())
    state(shared_ward, "toe_probe_leakage", "3")
    return shared_ward


def state(ward, measurand, expanded):
    given = Statement(measurand, "expanded", expanded, "2", source="Tester certificate 7")
    uncertainties.state(statement=given, site=None, actor=ward.physicist, at=now())


def opened(ward, baseline="58"):
    """A check of a new transoesophageal probe that has a baseline."""
    device = builders.probe(
        ward.physicist, Place(site=ward.site), serial="TOE", array_kind="matrix",
        contact_class="mucous_membrane", applied_part="CF",
    )  # fmt: skip
    baselines.set_values(
        device=device.uid, values=[Value("toe_probe_leakage", baseline)], test_object=None, reason="Acceptance",
        password=builders.PASSWORD, actor=ward.physicist, at=now(),
    )  # fmt: skip
    return checks.open_unplanned(device=device.uid, procedure=TOE, actor=ward.technician, at=now())


def said(ward, probe, chassis, baseline="58"):
    """What each limit says of a probe's leakage beside a chassis reading, by code."""
    given = {"toe_probe_leakage": probe, "toe_chassis_leakage": chassis}
    typed = Typed({f"{code}.0.0.1": Entry(text) for code, text in given.items()})
    seen = checks.preview(
        check=opened(ward, baseline).uid, typed=typed, whole=False, actor=ward.technician, at=now()
    )
    found = next(one for one in seen.judged.items if one.item.spec.code == "toe_probe_leakage")
    return {each.criterion.code: each for each in (found.weighed, *found.further)}


def sentence(weighed):
    found = weighed.judgement
    told = verdict_sentence(found.code, found.parameters, found.verdict, found.level or "")
    return told.replace("\N{NO-BREAK SPACE}", " ")


def test_uncertainty_of_chassis_and_baseline_is_combined_with_the_readings(ward):
    found = said(ward, "62", "210")
    # By hand, U = 3 of each: sqrt(9 + 0.64 * 9) = 3.8418... and sqrt(9 + 9) = 4.2426..., rounded up.
    assert found["TOE-80"].uncertainty == "3.842"
    assert found["TOE-STEP"].uncertainty == "4.243"


def test_sentence_names_what_was_combined(ward):
    found = said(ward, "62", "210")
    assert (
        "The uncertainty combines that of the reading, 3 µA, and 0.8 times that of the other reading, 3 µA (none is "
        "stated for it, so the reading's is taken), as uncorrelated."
    ) in sentence(found["TOE-80"])
    assert (
        "The uncertainty combines that of the reading, 3 µA, and that of the baseline, 3 µA (a reading of the same "
        "kind), as uncorrelated."
    ) in sentence(found["TOE-STEP"])


def test_statement_of_the_chassis_reading_goes_before_the_probes(ward):
    state(ward, "toe_chassis_leakage", "10")
    found = said(ward, "62", "210")["TOE-80"]
    # By hand: sqrt(9 + 0.64 * 100) = 8.5440...
    assert found.uncertainty == "8.545"
    assert found.judgement.parameters["uncertainty_whose"] == "own"
    assert "0.8 times that of the other reading, 10 µA, as uncorrelated." in sentence(found)


@pytest.mark.parametrize(("probe", "verdict"), [("76", "conforming"), ("77", "suspension")])
def test_guard_band_is_as_wide_as_the_combined_uncertainty(ward, probe, verdict):
    # 80 % of 100 uA is 80 uA, and 80 - 3.842 = 76.158: U = 3 alone would have let 77 uA conform.
    assert said(ward, probe, "100")["TOE-80"].judgement.verdict == verdict


def test_step_is_guarded_by_the_combined_uncertainty(ward):
    # 58 + 60 - 4.243 = 113.757.
    assert said(ward, "114", "400")["TOE-STEP"].judgement.verdict == "suspension"


def test_nothing_is_combined_where_nothing_is_stated(shared_ward):
    found = said(shared_ward, "62", "210")["TOE-80"]
    assert (found.uncertainty, found.judgement.parameters.get("uncertainty_reading")) == ("", None)


TWO = STEP | {
    "id": "TOE-TWO",
    "standing": {"remedial": "practice", "suspension": "practice"},
    "criterion": {
        "basis": "ratio", "direction": "above", "remedial": {"percent": "60"}, "suspension": {"percent": "80"},
    },
}  # fmt: skip
# By hand, U = 3 of each: sqrt(9 + 0.36 * 9) = 3.4985... at 60 %, sqrt(9 + 0.64 * 9) = 3.8418... at 80 %.
OF_100 = [("56", "conforming", "3.499"), ("57", "remedial", "3.499"), ("77", "suspension", "3.842")]


def adopted(ward, limit):
    document = LOCAL | {"set": "two", "criteria": [limit]}
    row = library.publish_criteria(document=document, actor=ward.physicist, at=now())
    library.adopt_criteria(criteria_set=row, site=None, remark="", actor=ward.physicist, at=now())


@pytest.mark.parametrize(("probe", "verdict", "combined"), OF_100)
def test_each_level_of_a_ratio_has_its_own_uncertainty(ward, probe, verdict, combined):
    adopted(ward, TWO)
    found = said(ward, probe, "100")["TOE-TWO"]
    assert (found.judgement.verdict, found.uncertainty) == (verdict, combined)


LOSS = TWO | {
    "criterion": {
        "basis": "baseline", "direction": "below", "remedial": {"percent": "10"}, "suspension": {"percent": "20"},
    },
}  # fmt: skip


@pytest.mark.parametrize(("probe", "verdict"), [("164", "remedial"), ("163", "suspension")])
def test_lower_level_of_a_loss_never_judges_the_higher_by_its_own_uncertainty(ward, probe, verdict):
    # By hand, baseline 200: U is 3 * sqrt(1.64) = 3.8419 at 20 % and 3 * sqrt(1.81) = 4.0361 at 10 %. A loss of 36 is
    # below 40 - 3.842 = 36.158, so not of the suspension level, though it is above 40 - 4.037 = 35.963.
    adopted(ward, LOSS)
    assert said(ward, probe, "400", "200")["TOE-TWO"].judgement.verdict == verdict


def submitted(ward):
    check = opened(ward)
    tester = objects.register_instrument(
        site=ward.site, kind="leakage_tester", maker="Quorrel", model="Safe 3", serial="7", calibration_due_on=None,
        actor=ward.physicist, at=now(),
    )  # fmt: skip
    entries = builders.answers(check, ward.technician, toe_probe_leakage="62", toe_chassis_leakage="210")
    typed = Typed(entries, instrument=tester.uid, cleaned_before="Cycle 812, Ifeoma")
    builders.submitted(check, ward.technician, typed)
    return Verdict.objects.get(submission__check_of=check, measurand__code="toe_probe_leakage")


def test_what_was_combined_is_kept_and_derived_again(ward):
    verdict = submitted(ward)
    (further,) = FurtherVerdict.objects.filter(verdict_of=verdict)
    assert {verdict.uncertainty, further.uncertainty} == {"3.842", "4.243"}
    for each in (verdict, further):
        kept = json.loads(each.parameters)
        assert (kept["uncertainty_reading"], kept["uncertainty_reference"]) == ("3", "3")
    assert rechecking.recheck_verdicts().problems == ()


def test_verdict_from_before_is_derived_again_by_the_uncertainty_it_kept(ward):
    verdict = submitted(ward)
    # As it was judged before: with the reading's own uncertainty alone, and nothing said of the other.
    kept = json.loads(verdict.parameters)
    verdict.uncertainty = kept["uncertainty"] = "3"
    old = {name: text for name, text in kept.items() if not name.startswith("uncertainty_")}
    known, spec = rechecking.Known(), library_spec(verdict)
    measurand = known.measurand(verdict.submission.edition_id, verdict.measurand.code)
    verdict.parameters = json.dumps(old)
    found = rechecking.judged_by(spec, verdict, verdict, measurand, known, kept["least_reference"])
    assert (found.verdict, found.parameters["uncertainty"]) == ("conforming", "3")


def library_spec(verdict):
    return rechecking.criterion_spec(verdict.criterion.content)
