"""A software event puts baselines under review; a physicist keeps or replaces them, signed."""

from __future__ import annotations

import json
import uuid

import pytest
from baseline_ward import ANNUAL, aperture, penetration, put, surveyed, usual_object
from django.utils.timezone import now

from qa_tracker.core.errors import DomainError, Forbidden
from qa_tracker.records.models import Baseline, Signature
from qa_tracker.records.queries.ledger import list_leaves
from qa_tracker.records.queries.scope import EVERYTHING
from qa_tracker.services import baseline_reviews, baseline_setups, baselines, devices
from qa_tracker.services.baseline_setups import Chosen
from qa_tracker.services.baselines import Terms, Value
from qa_tracker.services.devices import Place
from tests import builders

WARD = ((builders.MONTHLY, ANNUAL, "display-check"),)


@pytest.fixture
def ward(shared_ward):
    put(shared_ward, penetration(shared_ward, "150"))
    return shared_ward


def event(ward, version="4.3", options="", scanner=None):
    return devices.record_software(
        scanner=(scanner or ward.scanner).uid, version=version, options=options, since_on=now().date(),
        actor=ward.physicist, at=now(),
    )  # fmt: skip


def keep(ward, *rows, **changed):
    given = {
        "reason": "within 0.5 mm before and after",
        "password": builders.PASSWORD,
        "actor": ward.physicist,
    }
    return baseline_reviews.keep(
        device=ward.probe.uid, baselines=[row.uid for row in rows], **given | changed, at=now()
    )


def standing(ward):
    return Baseline.objects.get(device=ward.probe, ended_at=None)


def leaf():
    return json.loads(list_leaves(EVERYTHING, most=1)[0].content)


def test_software_event_puts_the_baselines_of_its_probes_under_review_in_its_own_leaf(ward):
    assert event(ward) == [standing(ward)]
    assert standing(ward).under_review
    assert leaf()["kind"] == "device.software_recorded"
    assert leaf()["new"]["under_review"] == [
        {"device": "C5-2207", "measurand": "penetration", "aperture": "main", "condition": None, "epoch": 1}
    ]


def test_scanners_own_baselines_come_under_review_and_no_other_scanners(ward):
    other = builders.scanner(ward.physicist, Place(site=ward.site), serial="70-2")
    own = baselines.set_values(
        device=other.uid, values=[Value("luminance_max", "170.0")], test_object=None, reason="new display",
        password=builders.PASSWORD, actor=ward.physicist, at=now(),
    )  # fmt: skip
    assert event(ward, scanner=other) == own
    assert not standing(ward).under_review


def test_same_version_again_puts_nothing_under_review(ward):
    assert event(ward, version="4.2") == []
    assert "under_review" not in leaf()["new"]


def test_new_options_alone_are_an_event(ward):
    assert event(ward, version="4.2", options="harmonics") == [standing(ward)]


def test_baseline_taken_with_the_new_version_already_stays(ward):
    event(ward)
    put(ward, penetration(ward, "152"), reason="with 4.3")
    assert event(ward, version="4.3") == []


def test_ended_baseline_is_left_alone(ward):
    put(ward, penetration(ward, "151"))
    assert [row.epoch for row in event(ward)] == [2]


def test_baseline_measured_on_the_console_follows_its_probe_elsewhere(ward):
    done = surveyed(ward, reverberation_depth="8.5")
    series = Value("reverberation_depth", "", aperture(ward.probe))
    setups = [Chosen(submission=done.uid), Chosen("8.0", done.measured_at.date().replace(year=2020))]
    made = baseline_setups.set_from_setups(
        device=ward.probe.uid, series=series, setups=setups, test_object=None, reason="two days",
        password=builders.PASSWORD, actor=ward.physicist, at=now(),
    )  # fmt: skip
    devices.move(
        device=ward.probe.uid, place=Place(site=ward.site), reason="spare", actor=ward.physicist, at=now()
    )
    assert event(ward) == [made]


def test_reading_is_still_compared_and_its_verdict_says_under_review(ward):
    put(ward, penetration(ward, "150"), on=usual_object(ward))
    event(ward)
    verdict = surveyed(ward, penetration="143").verdicts.get(measurand__code="penetration")
    assert verdict.verdict == "remedial"
    assert "baseline_under_review" in json.loads(verdict.parameters)


def test_kept_baseline_is_a_new_epoch_of_the_same_value_for_the_new_software(ward):
    event(ward)
    old = standing(ward)
    (row,) = keep(ward, old)
    old.refresh_from_db()
    assert (row.epoch, row.entered, row.console_software, row.under_review) == (2, "150", "4.3", False)
    assert (old.ended_at, old.under_review) == (row.valid_from, False)
    assert leaf()["kind"] == "baseline.kept"
    assert leaf()["new"]["baselines"][0]["change"]["step"] == "0"
    verdict = surveyed(ward, penetration="149").verdicts.get(measurand__code="penetration")
    assert not {"mismatch_software", "baseline_under_review"} & set(json.loads(verdict.parameters))


def test_keeping_is_signed(ward):
    event(ward)
    keep(ward, standing(ward))
    signed = Signature.objects.filter(meaning="baseline set").latest("pk")
    assert (signed.person_id, signed.remark) == (ward.physicist.pk, "within 0.5 mm before and after")


def test_set_ups_and_the_last_day_are_kept_with_the_value(ward):
    series = Value("reverberation_depth", "", aperture(ward.probe))
    today = now().date()
    setups = [Chosen("8.0", today), Chosen("8.5", today.replace(year=2020))]
    until = today.replace(year=today.year + 2, day=1)
    made = baseline_setups.set_from_setups(
        device=ward.probe.uid, series=series, setups=setups, test_object=None, reason="two days",
        password=builders.PASSWORD, actor=ward.physicist, at=now(), terms=Terms(expires_on=until),
    )  # fmt: skip
    event(ward)
    (row,) = keep(ward, made)
    assert [each.entered for each in row.setups.order_by("position")] == ["8.5", "8.0"]
    assert (row.expires_on, row.entered) == (until, "8.25")


def test_replacing_ends_the_review_with_the_step_in_the_leaf(ward):
    event(ward)
    put(ward, penetration(ward, "152"), reason="4.3 reads 2 mm deeper")
    assert not Baseline.objects.filter(under_review=True).exists()
    assert leaf()["new"]["baselines"][0]["change"] == {
        "step": "2", "from_first": "2", "used_percent": "0.0", "of_level": "remedial",
    }  # fmt: skip


REFUSED = {
    "not under review": (lambda w: [standing(w)], {}, "baseline.not_under_review"),
    "none chosen": (lambda w: [], {}, "baseline.none_chosen"),
    "nobody knows": (lambda w: [Baseline(uid=uuid.uuid4())], {}, "baseline.unknown"),
    "no reason": (lambda w: [standing(w)], {"reason": " "}, "baseline.reason_missing"),
    "wrong password": (lambda w: event(w), {"password": "x"}, "signature.password_wrong"),
}


@pytest.mark.parametrize("name", REFUSED)
def test_keeping_is_refused_and_nothing_is_set(ward, name):
    rows, changed, code = REFUSED[name]
    with pytest.raises(DomainError) as refused:
        keep(ward, *rows(ward), **changed)
    assert refused.value.code == code
    assert Baseline.objects.count() == 1


def test_only_a_physicist_keeps_a_baseline(ward):
    event(ward)
    with pytest.raises(Forbidden):
        keep(ward, standing(ward), actor=ward.technician)
