"""The demo holds what it promises: the fleet, the people, five stories to the figure, and something due today."""

from __future__ import annotations

import datetime as dt
from collections import Counter
from decimal import Decimal

import pytest
from django.db import transaction

from qa_tracker.core.conformity import judge
from qa_tracker.core.errors import Conflict
from qa_tracker.records.models import (
    Baseline,
    Check,
    Device,
    Fault,
    FaultAction,
    Measurand,
    NotTested,
    Person,
    Placement,
    Reading,
    ScannerFacts,
    Signature,
    Verdict,
    Version,
)
from qa_tracker.records.queries.ledger import every_leaf, holds_demonstration
from qa_tracker.records.queries.library import criteria_by_id
from qa_tracker.records.queries.series import series_of
from qa_tracker.services import demo, rechecking, upkeep
from qa_tracker.services.demo_fleet import PROBE_MODELS
from qa_tracker.services.wording_leaves import SENTENCES

pytestmark = pytest.mark.xdist_group("demo")

AT = dt.datetime(2026, 3, 18, 10, 30, tzinfo=dt.UTC)
CLASSES = {
    "convex": 8, "linear": 8, "linear 18 MHz": 4, "phased": 6, "endovaginal": 5, "3D": 2, "micro-convex": 2,
    "transoesophageal": 2, "biplane": 1, "CW pencil": 1, "wireless": 1,
}  # fmt: skip


@pytest.fixture(scope="module")
def loaded(engine, django_db_setup, django_db_blocker):
    """The demo, loaded once for this file and undone after it."""
    with django_db_blocker.unblock(), transaction.atomic():
        yield demo.load(at=AT)
        transaction.set_rollback(True)


def _points(serial: str, code: str, aperture: str = "") -> list[tuple[str, str]]:
    """Values and verdicts of one series, oldest first."""
    device = Device.objects.get(serial=serial)
    wanted = device.apertures.get(name=aperture).id if aperture else None
    found = series_of(device.id, code)
    key = next(key for key in found if wanted is None or key[1] == wanted)
    return [(point.entered, point.verdict) for point in found[key]]


def test_demo_when_loaded_has_the_fleet_by_class(loaded):
    kept = Device.objects.filter(kind="probe").exclude(state="disposed")
    models = {model: name for name, model in PROBE_MODELS.items()}
    assert Counter(models[device.model] for device in kept) == CLASSES
    assert kept.filter(pool__isnull=False).count() == 1


@pytest.mark.parametrize(
    ("site", "scanners", "probes"), [("AG", 6, 22), ("KB", 3, 8), ("SO", 3, 9)], ids=["AG", "KB", "SO"]
)
def test_demo_when_loaded_has_the_fleet_by_site(loaded, site, scanners, probes):
    kept = Device.objects.filter(site__code=site).exclude(state="disposed")
    assert (kept.filter(kind="scanner").count(), kept.filter(kind="probe").count()) == (scanners, probes)


def test_demo_when_loaded_has_makers_and_models_of_its_own(loaded):
    found = set(Device.objects.filter(kind="scanner").values_list("maker", "model"))
    assert found == {
        ("Ostrigard", "OG-70"), ("Ostrigard", "OG-45"), ("Lunnby & Vale", "Fjellet 9"),
        ("Lunnby & Vale", "Fjellet 5"), ("Pellantis", "PX Tern"),
    }  # fmt: skip
    assert Device.objects.get(handheld=True).maker == "Quorrel"


def test_demo_people_when_loaded_sign_in_with_the_password_shown(loaded):
    for each in demo.people():
        assert Person.objects.get(username=each["username"]).check_password(each["password"])


def test_slow_loss_when_told_reaches_each_level_in_its_month(loaded):
    found = _points("C-4102", "penetration")
    followed = [point for point in found if "." in point[0]]
    assert followed[-8:] == [
        ("146.0", "conforming"), ("145.4", "remedial"), ("144.9", "remedial"), ("144.1", "remedial"),
        ("143.7", "remedial"), ("142.9", "remedial"), ("142.5", "remedial"), ("141.8", "suspension"),
    ]  # fmt: skip
    assert {verdict for _, verdict in followed[:-7]} == {"conforming"}


def test_slow_loss_when_told_has_a_baseline_of_ten_set_ups(loaded):
    set_ups = [Decimal(text) for text, _ in _points("C-4102", "penetration")[1:11]]
    mean = sum(set_ups) / 10
    deviation = (sum((each - mean) ** 2 for each in set_ups) / 9).sqrt()
    in_force = Baseline.objects.get(device__serial="C-4102", measurand__code="penetration", ended_at=None)
    assert (in_force.entered, mean, round(deviation, 1)) == ("152.0", Decimal("152.0"), Decimal("1.8"))


def test_slow_loss_when_told_is_replaced_by_a_probe_of_153(loaded):
    assert Device.objects.get(serial="C-4102").state == "disposed"
    assert _points("C-4109", "penetration")[0][0] == "153"
    assert {text for text, _ in _points("C-4102", "uniformity")} == {"1.6"}


@pytest.mark.parametrize(
    ("code", "values"),
    [
        ("dark_elements", [("2", "remedial"), ("5", "suspension"), ("0", "conforming")]),
        ("uniformity", [("4.4", "remedial"), ("9.8", "suspension"), ("1.4", "conforming")]),
    ],
    ids=["elements", "phantom"],
)
def test_cable_when_told_breaks_and_is_repaired(loaded, code, values):
    found = _points("L-5204", code)
    broken = found[found.index(values[0]) :]
    assert list(dict.fromkeys(broken)) == values


def test_cable_when_told_follows_the_probe_to_port_b(loaded):
    ports = Reading.objects.filter(device__serial="L-5204", measurand__code="uniformity", entered="4.4")
    assert {"A", "B"} <= set(ports.values_list("submission__port", flat=True))
    places = Reading.objects.filter(device__serial="L-5204", measurand__code="dark_elements_place")
    assert set(places.values_list("entered", flat=True)) == {"elements 61-62", "elements 59-63"}


def test_cable_when_told_is_covered_by_the_pool_for_23_days(loaded):
    loan = Placement.objects.get(device__serial="L-5208", scanner__isnull=False)
    assert loan.ended_at - loan.started_at == dt.timedelta(days=23)
    assert Device.objects.get(serial="L-5208").pool is not None


def test_cable_when_back_has_its_leakage_and_a_new_epoch(loaded):
    assert "38" in [text for text, _ in _points("L-5204", "applied_part_leakage_bf")]
    epochs = Baseline.objects.filter(device__serial="L-5204", measurand__code="penetration")
    assert sorted(epochs.values_list("epoch", flat=True)) == [1, 2]
    faults = Fault.objects.filter(device__serial="L-5204")
    assert {fault.state for fault in faults} == {"closed"}
    assert all(fault.proving_check is not None for fault in faults)


def test_drying_object_when_told_takes_4_to_6_mm_from_seven_probes(loaded):
    lost = {}
    for serial in ("C-4105", "C-4106", "L-5205", "L-5206", "P-2505", "V-6502", "M-6002"):
        on_own = Reading.objects.filter(
            device__serial=serial, measurand__code="penetration", submission__test_object__site__code="KB"
        ).order_by("measured_at")
        lost[serial] = Decimal(on_own.first().entered) - Decimal(on_own.last().entered)
    assert all(4 <= loss <= 6 for loss in lost.values()), lost


def test_drying_object_when_told_loses_weight_while_reverberation_stays(loaded):
    weights = [
        int(text)
        for text in Reading.objects.filter(
            measurand__code="test_object_weight", submission__test_object__site__code="KB"
        )
        .order_by("measured_at")
        .values_list("entered", flat=True)
    ]
    assert (weights[0], weights[-1]) == (3412, 3318)
    assert weights == sorted(weights, reverse=True)
    assert len(set(_points("C-4105", "reverberation_depth"))) == 1


@pytest.mark.parametrize(("serial", "change"), [("C-4105", "-0.3"), ("L-5205", "0.8")], ids=str)
def test_drying_object_when_compared_is_the_object(loaded, serial, change):
    series = Reading.objects.filter(
        device=Device.objects.get(serial=serial), measurand=Measurand.objects.get(code="penetration")
    )
    joined = series.select_related("submission__test_object__site").order_by("measured_at")
    first, reading = [each for each in joined if each.submission.test_object.site.code == "AG"]
    base = reading.verdict.baseline
    assert (first.verdict.code, reading.verdict.verdict) == ("other_object", "conforming")
    assert (base.test_object.site.code, base.overlap_of.test_object.site.code) == ("AG", "KB")
    assert Decimal(reading.entered) - Decimal(base.entered) == Decimal(change)
    assert "mismatch_object" not in reading.verdict.parameters


@pytest.mark.parametrize("serial", ["C-4101", "C-4103", "C-4107"], ids=str)
def test_software_when_changed_gains_7_then_2_mm_and_new_baselines(loaded, serial):
    device = Device.objects.get(serial=serial)
    assert ScannerFacts.objects.get(device=device.scanner).software_version == "4.3"
    first, second = Baseline.objects.filter(device=device, measurand__code="penetration").order_by("epoch")
    after = Reading.objects.filter(
        device=device,
        measurand__code="penetration",
        submission__edition__procedure__code="after-repair-or-change",
    ).order_by("measured_at")
    gains = [Decimal(reading.entered) - Decimal(first.entered) for reading in after]
    assert gains == [7, 2]
    assert Decimal(second.entered) - Decimal(first.entered) == 2
    assert "2 mm" in second.reason


@pytest.mark.parametrize("serial", ["C-4101", "V-6503"], ids=["replaced", "kept"])
def test_software_when_changed_puts_baselines_under_review_until_they_are_decided(loaded, serial):
    rows = Baseline.objects.filter(device__serial=serial)
    assert {row.console_software for row in rows.filter(epoch=1)} == {"4.2"}
    assert {row.console_software for row in rows.filter(ended_at=None)} == {"4.3"}
    said = [leaf.said for leaf in every_leaf() if leaf.kind == "device.software_recorded"]
    told = [each for one in said for each in one["new"].get("under_review", ()) if each["device"] == serial]
    assert len(told) == rows.filter(epoch=1).count()
    assert not rows.filter(under_review=True).exists()


def test_software_of_this_week_leaves_baselines_under_review(loaded):
    waiting = Baseline.objects.filter(under_review=True)
    assert {row.device.serial for row in waiting} == {"H-1803", "M-6001"}
    assert not waiting.exclude(ended_at=None).exists()


def test_reverberation_of_one_probe_has_a_baseline_of_twelve_set_ups(loaded):
    row = Baseline.objects.get(device__serial="L-5207", measurand__code="reverberation_depth", ended_at=None)
    assert (row.setups.count(), row.epoch, row.places) == (12, 2, 2)
    assert len({each.measured_on for each in row.setups.all()}) == 12
    mean = sum(Decimal(each.entered) for each in row.setups.all()) / 12
    assert abs(Decimal(row.entered) - mean) <= Decimal("0.005")


def test_software_when_a_preset_has_the_wrong_speed_reads_101_7(loaded):
    assert ("101.7", "remedial") in _points("C-4101", "vertical_distance")
    speeds = Version.objects.filter(noun="condition", columns__contains='"sound_speed_m_s":"1566"')
    assert speeds.count() == 1


def test_bite_when_told_is_out_of_use_for_31_days(loaded):
    found = _points("T-5501", "toe_probe_leakage")
    bitten = found.index(("176", "suspension"))
    assert found[bitten + 1] == ("58", "conforming")
    fault = Fault.objects.get(device__serial="T-5501")
    assert fault.closed_at - fault.opened_at == dt.timedelta(days=31)
    assert fault.look_back
    kinds = set(FaultAction.objects.filter(fault=fault).values_list("kind", flat=True))
    assert {"told", "cleaned"} <= kinds


def test_reader_when_copying_repeats_eleven_of_fourteen(loaded):
    monthly = Reading.objects.filter(
        device__serial="C-4108", measurand__code="reverberation_depth",
        submission__edition__procedure__code="monthly-in-air",
    ).order_by("measured_at")  # fmt: skip
    values = list(monthly.values_list("entered", flat=True))[-14:]
    before = list(monthly.values_list("entered", flat=True))[-15:-1]
    assert sum(now == then for now, then in zip(values, before, strict=True)) >= 11
    assert set(monthly.values_list("submission__performed_by__username", flat=True)) == {"penhallow"}


@pytest.mark.parametrize(
    ("serial", "state"), [("H-1805", "disposed"), ("WH-0042", "lost"), ("B-7501", "in_use")], ids=str
)
def test_background_when_loaded_has_its_states(loaded, serial, state):
    assert Device.objects.get(serial=serial).state == state


def test_rejected_probe_when_new_was_never_accepted(loaded):
    assert ("3", "remedial") in _points("H-1805", "dark_elements")
    device = Device.objects.get(serial="H-1805")
    assert not Signature.objects.filter(subject_uid=device.uid, meaning="accepted").exists()


def test_theatre_probe_when_in_use_is_missed_twice(loaded):
    attempts = NotTested.objects.filter(check_of__device__serial="H-1803", reason="in_theatre")
    assert attempts.count() == 2
    assert Check.objects.filter(device__serial="H-1803", state="missed").count() == 2


def test_biplane_when_worn_is_amber_on_the_linear_face_alone(loaded):
    assert _points("B-7501", "in_air_zone_3", "linear")[-1] == ("amber", "remedial")
    assert {text for text, _ in _points("B-7501", "in_air_zone_3", "convex")} == {"green"}


def test_fleet_when_loaded_is_quiet_but_for_the_stories(loaded):
    raised = Check.objects.filter(verdict__in=("remedial", "suspension", "indeterminate"))
    assert len(set(raised.values_list("device", flat=True))) < 10


def test_verdicts_when_loaded_use_all_five_words(loaded):
    assert set(Verdict.objects.values_list("verdict", flat=True)) == {
        "conforming", "remedial", "suspension", "indeterminate", "not_assessable",
    }  # fmt: skip


def test_due_when_loaded_has_something_due_one_late_and_one_overdue(loaded):
    open_now = Check.objects.filter(state="scheduled", opens_at__lte=AT, device__state="in_use")
    due = open_now.filter(late_at__gt=AT)
    late = open_now.filter(late_at__lte=AT, overdue_at__gt=AT)
    overdue = open_now.filter(overdue_at__lte=AT)
    assert due.count() >= 5
    assert [each.get().device.serial for each in (late, overdue)] == ["P-2504", "M-6001"]


def test_checks_when_loaded_leave_some_to_countersign_and_a_fault_open(loaded):
    assert Check.objects.filter(state="submitted").count() >= 5
    assert Fault.objects.exclude(state="closed").filter(device__state="in_use").exists()


def test_moments_when_loaded_are_never_later_than_now(loaded):
    assert not Version.objects.filter(recorded_at__gt=AT).exists()
    assert not Reading.objects.filter(measured_at__gt=AT).exists()


def test_ledger_when_loaded_verifies_and_says_demo(loaded):
    finding = upkeep.verify_ledger()
    assert finding.problems == ()
    assert finding.size > 3000
    leaves = list(every_leaf())
    assert [leaf.seq for leaf in leaves] == list(range(len(leaves)))
    assert {leaf.kind for leaf in leaves} <= set(SENTENCES)
    assert holds_demonstration()


def test_verdicts_when_judged_again_are_the_same(loaded):
    remedial = Verdict.objects.filter(verdict__in=("remedial", "suspension"), baseline__isnull=False)
    criteria = criteria_by_id(set(remedial.values_list("criterion_id", flat=True)))
    for verdict in remedial.select_related("reading", "baseline"):
        again = judge(
            criteria[verdict.criterion_id].spec.criterion,
            value=verdict.reading.entered,
            kind="number",
            baseline=verdict.baseline.entered,
        )
        assert again.verdict == verdict.verdict
    assert rechecking.recheck_verdicts().problems == ()


def test_demo_when_loaded_twice_is_refused(loaded):
    with pytest.raises(Conflict, match=r"demo\.loaded"):
        demo.load(at=AT)


def test_transoesophageal_leakage_when_bitten_trips_every_limit(loaded):
    verdict = Verdict.objects.get(measurand__code="toe_probe_leakage", verdict="suspension")
    assert [verdict.criterion.code, *(each.criterion.code for each in verdict.further.order_by("position"))] == [
        "TOE-80", "TOE-MAKER", "TOE-STEP",
    ]  # fmt: skip
    assert {each.verdict for each in verdict.further.all()} == {"suspension"}


def test_every_verdict_is_in_the_demo(loaded):
    found = set(Verdict.objects.values_list("verdict", flat=True))
    assert found == {"conforming", "remedial", "suspension", "indeterminate", "not_assessable"}
