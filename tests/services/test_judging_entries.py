"""What is typed for a check: read exactly or refused beside its field, asked again where it looks mistyped."""

from __future__ import annotations

from dataclasses import replace

import pytest
from django.utils.timezone import now

from qa_tracker.core.errors import SeveralInvalid
from qa_tracker.records.models import Aperture, NotTested, Reading, Verdict
from qa_tracker.services import baselines, checks, devices, objects, rechecking
from qa_tracker.services.baselines import Value
from qa_tracker.services.checks import Typed
from qa_tracker.services.devices import Place
from qa_tracker.services.entries import Entry
from tests import builders

QUARTERLY, ANNUAL, TOE = "quarterly-mechanical-uniformity", "annual-survey", "toe-leakage-log"
WARD = ((builders.MONTHLY, QUARTERLY, ANNUAL, TOE),)
DEPTH = "reverberation_depth"


@pytest.fixture
def ward(shared_ward):
    return shared_ward


def key(ward, code, check=None, actor=None, test_object=None):
    laid = checks.sheet(
        check=(check or ward.check).uid, test_object=test_object, actor=actor or ward.technician, at=now()
    )
    return next(item.key for item in laid.items if item.spec.code == code)


def judged(ward, code, entry):
    """The whole check with one entry changed, as for signing."""
    entries = builders.answers(ward.check, ward.technician, dark_elements="0") | {key(ward, code): entry}
    typed = Typed(entries, cleaned_before="Wipe")
    return checks.preview(check=ward.check.uid, typed=typed, whole=True, actor=ward.technician, at=now())


def refusals(ward, code, entry):
    with pytest.raises(SeveralInvalid) as refused:
        judged(ward, code, entry)
    assert {error.field for error in refused.value.errors} == {key(ward, code)}
    return [error.code for error in refused.value.errors]


NUMBERS = {
    "exponent": ("1e999", "number.exponent"),
    "not a number": ("NaN", "number.not_finite"),
    "infinity": ("-inf", "number.not_finite"),
    "full-width digits": ("８.５", "number.digits"),
    "two decimal signs": ("1.234,5", "number.separators"),
    "unit typed with it": ("8.5 mm", "number.unit"),
    "qualifier typed with it": ("<8.5", "number.qualifier"),
    "off the resolution": ("8.3", "number.resolution"),
    "blank": (" ", "number.empty"),
    "too long": ("9" * 60, "number.out_of_range"),
    "word": ("eight", "number.not_a_number"),
}


@pytest.mark.parametrize("name", NUMBERS)
def test_number_is_refused_with_the_reason_that_helps(ward, name):
    text, code = NUMBERS[name]
    assert refusals(ward, DEPTH, Entry(text)) == [code]


ENTRIES = {
    "unit of another size": (DEPTH, Entry("8.5", unit="cm"), "reading.unit_wrong"),
    "qualifier it does not take": (DEPTH, Entry("8.5", qualifier=">"), "reading.qualifier_not_allowed"),
    "not seen where it can't be": (
        "dark_elements",
        Entry(qualifier="not_seen"),
        "reading.qualifier_not_allowed",
    ),
    "value and not seen": (DEPTH, Entry("8.5", qualifier="not_seen"), "reading.seen_and_not_seen"),
    "value and a reason": (DEPTH, Entry("8.5", not_tested="in_use"), "reading.both"),
    "reason of one's own": (DEPTH, Entry(not_tested="lunch"), "reading.reason_unknown"),
    "unknown grade": ("lens_grade", Entry("blue"), "reading.grade_unknown"),
    "grade in capitals": ("lens_grade", Entry("Red"), "reading.grade_unknown"),
    "neither yes nor no": ("in_air_photo", Entry("maybe"), "reading.grade_unknown"),
    "novel": ("dark_elements_place", Entry("x" * 301), "reading.text_too_long"),
    "left empty": ("lens_grade", Entry(), "reading.missing"),
}


@pytest.mark.parametrize("name", ENTRIES)
def test_entry_is_refused_beside_its_field(ward, name):
    code, entry, wanted = ENTRIES[name]
    assert refusals(ward, code, entry) == [wanted]


def test_item_that_is_not_asked_is_refused(ward):
    entries = builders.answers(ward.check, ward.technician) | {"penetration.0.0.1": Entry("140")}
    with pytest.raises(SeveralInvalid) as refused:
        checks.preview(
            check=ward.check.uid, typed=Typed(entries, cleaned_before="Wipe"), whole=True,
            actor=ward.technician, at=now(),
        )  # fmt: skip
    assert [error.code for error in refused.value.errors] == ["reading.not_asked"]


@pytest.mark.parametrize(
    ("text", "scaled", "places"),
    [("8,5", 85, 1), ("8.50", 850, 2), ("+8", 8, 0), (" 8.5 ", 85, 1), (",5", 5, 1)],
)
def test_number_is_kept_as_typed_and_exactly(ward, text, scaled, places):
    builders.submitted(ward.check, ward.technician, **{DEPTH: text})
    row = Reading.objects.get(measurand__code=DEPTH)
    assert (row.entered, row.scaled, row.places, row.unit) == (text.strip(), scaled, places, "mm")


def test_not_seen_is_a_reading_without_a_number(ward):
    entries = builders.answers(ward.check, ward.technician) | {key(ward, DEPTH): Entry(qualifier="not_seen")}
    builders.submitted(ward.check, ward.technician, Typed(entries, cleaned_before="Wipe"))
    row = Reading.objects.get(measurand__code=DEPTH)
    assert (row.qualifier, row.entered, row.scaled) == ("not_seen", "", None)


@pytest.mark.parametrize(
    ("text", "code"),
    [
        ("85.0", "reading.confirm_tenfold"),
        ("1.0", "reading.confirm_tenfold"),
        ("601", "reading.confirm_outside"),
        ("-10.0", "reading.confirm_outside"),
        ("9.0", None),
        ("600", None),
    ],
)
def test_value_that_looks_mistyped_is_taken_only_when_confirmed(ward, text, code):
    builders.submitted(ward.check, ward.technician, **{DEPTH: "10.0"})
    again = replace(ward, check=unplanned(ward, builders.MONTHLY))
    if code is not None:
        assert refusals(again, DEPTH, Entry(text)) == [code]
    seen = judged(again, DEPTH, Entry(text, confirmed=code is not None))
    assert seen.judged.verdict == "conforming"


def unplanned(ward, procedure, device=None, actor=None):
    return checks.open_unplanned(
        device=(device or ward.probe).uid, procedure=procedure, actor=actor or ward.physicist, at=now()
    )


def one_of_group(ward, **given):
    """Preview a quarterly check in which only some of a group's items are answered."""
    check, phantom = unplanned(ward, QUARTERLY), builders.phantom(ward.physicist, ward.site)
    laid = checks.sheet(check=check.uid, test_object=phantom.uid, actor=ward.technician, at=now())
    entries = {item.key: Entry(builders.good_answer(item)) for item in laid.items if item.spec.required} | {
        item.key: Entry(given[item.spec.code]) for item in laid.items if item.spec.code in given
    }
    typed = Typed(entries, test_object=phantom.uid, cleaned_before="Wipe")
    return checks.preview(check=check.uid, typed=typed, whole=True, actor=ward.technician, at=now())


@pytest.mark.parametrize(
    ("given", "verdict"),
    [
        ({"uniformity": "2.0"}, "conforming"),
        ({"uniformity": "4.0"}, "remedial"),
        ({"uniformity": "6.0"}, "suspension"),
        ({"uniformity_grade": "amber"}, "remedial"),
        ({"uniformity": "2.0", "uniformity_grade": "red"}, "suspension"),
    ],
)
def test_one_answer_of_a_group_is_enough_and_each_given_is_judged(ward, given, verdict):
    assert one_of_group(ward, **given).judged.verdict == verdict


def test_group_without_any_answer_is_missing(ward):
    with pytest.raises(SeveralInvalid) as refused:
        one_of_group(ward)
    assert {error.code for error in refused.value.errors} == {"reading.missing"}
    assert {error.field.partition(".")[0] for error in refused.value.errors} == {
        "uniformity",
        "uniformity_grade",
    }


def test_partial_check_keeps_the_reason_for_each_item_left_out(ward):
    entries = {key(ward, "lens_grade"): Entry("amber")}
    typed = Typed(entries, cleaned_before="Wipe", partial_reason="in_theatre")
    done = builders.submitted(ward.check, ward.technician, typed)
    assert (done.verdict, done.partial_reason, Reading.objects.count()) == ("remedial", "in_theatre", 1)
    left = NotTested.objects.filter(submission=done)
    assert set(left.values_list("reason", flat=True)) == {"in_theatre"}
    assert "case_grade" in left.values_list("measurand__code", flat=True)


def test_group_is_left_out_with_the_reason_when_none_of_it_is_answered(ward):
    check, phantom = unplanned(ward, QUARTERLY), builders.phantom(ward.physicist, ward.site)
    typed = Typed({}, test_object=phantom.uid, cleaned_before="Wipe", partial_reason="in_use")
    done = builders.submitted(check, ward.technician, typed)
    left = set(NotTested.objects.filter(submission=done).values_list("measurand__code", flat=True))
    assert {"uniformity", "uniformity_grade", "case_grade"} <= left


def test_each_aperture_and_condition_is_a_series_of_its_own(ward):
    device = builders.probe(
        ward.physicist,
        Place(site=ward.site, scanner=ward.scanner),
        serial="BP",
        apertures=[("a", 64), ("b", 64)],
    )
    for name, frequency in (("low", "2.5"), ("high", "7")):
        devices.set_condition(
            device=device.uid, name=name, test_frequency_mhz=frequency, sound_speed_m_s="", settings={},
            actor=ward.physicist, at=now(),
        )  # fmt: skip
    check, phantom = unplanned(ward, ANNUAL, device), builders.phantom(ward.physicist, ward.site)
    laid = checks.sheet(check=check.uid, test_object=phantom.uid, actor=ward.physicist, at=now())
    rings = [item for item in laid.items if item.spec.code == "ring_down"]
    assert [(item.aperture.name, item.condition.name) for item in rings] == [
        ("a", "low"), ("a", "high"), ("b", "low"), ("b", "high"),
    ]  # fmt: skip
    assert len({item.key for item in laid.items}) == len(laid.items)
    entries = {item.key: Entry("6.0") for item in rings}
    typed = Typed(entries, test_object=phantom.uid)
    seen = checks.preview(check=check.uid, typed=typed, whole=False, actor=ward.physicist, at=now())
    # More than 7 mm is too much below 3 MHz, more than 3 mm from 7 MHz on (TG1-RING).
    assert [one.judgement.verdict for one in seen.judged.items] == ["conforming", "remedial"] * 2


def test_aperture_of_another_device_is_not_asked(ward):
    other = builders.probe(ward.physicist, Place(site=ward.site), serial="other")
    foreign = f"dark_elements.{Aperture.objects.get(device=other).pk}.0.1"
    typed = Typed({foreign: Entry("1")})
    with pytest.raises(SeveralInvalid) as refused:
        checks.preview(check=ward.check.uid, typed=typed, whole=False, actor=ward.technician, at=now())
    assert [error.code for error in refused.value.errors] == ["reading.not_asked"]


def penetration(ward, text, qualifier="=", *, test_object=None):
    check = unplanned(ward, ANNUAL)
    used = test_object or builders.phantom(ward.physicist, ward.site)
    item = key(ward, "penetration", check, ward.physicist, used.uid)
    typed = Typed({item: Entry(text, qualifier)}, test_object=used.uid)
    seen = checks.preview(check=check.uid, typed=typed, whole=False, actor=ward.physicist, at=now())
    return seen.judged.items[0].judgement


def baseline(ward, text="150", test_object=None):
    part = Aperture.objects.get(device=ward.probe).uid
    return baselines.set_values(
        device=ward.probe.uid, values=[Value("penetration", text, part)],
        test_object=test_object.uid if test_object else None, reason="acceptance",
        password=builders.PASSWORD, actor=ward.physicist, at=now(),
    )  # fmt: skip


@pytest.mark.parametrize(
    ("text", "qualifier", "verdict"),
    [
        ("144", "=", "conforming"),
        ("143", "=", "remedial"),
        ("139", "=", "suspension"),
        ("145", ">", "conforming"),
        ("142", ">", "indeterminate"),
        ("", "not_seen", "suspension"),
    ],
)
def test_penetration_is_judged_against_its_baseline(ward, text, qualifier, verdict):
    phantom = builders.phantom(ward.physicist, ward.site)
    baseline(ward, test_object=phantom)
    judgement = penetration(ward, text, qualifier, test_object=phantom)
    assert judgement.verdict == verdict
    assert not [name for name in judgement.parameters if name.startswith("mismatch")]


def test_penetration_is_not_assessable_without_a_baseline(ward):
    assert penetration(ward, "144").verdict == "not_assessable"


def test_verdict_says_that_the_software_changed_since_its_baseline(ward):
    baseline(ward)
    devices.record_software(
        scanner=ward.scanner.uid, version="5.0", options="", since_on=now().date(), actor=ward.physicist,
        at=now(),
    )  # fmt: skip
    told = penetration(ward, "150").parameters
    assert {name: told[name] for name in told if "mismatch" in name} == {"mismatch_software": "4.2 / 5.0"}


def test_verdict_says_that_console_and_test_object_are_others_than_its_baselines(ward):
    baseline(ward, test_object=builders.phantom(ward.physicist, ward.site))
    console = builders.scanner(ward.physicist, Place(site=ward.site), serial="70-2", model="OG-90")
    place = Place(site=ward.site, scanner=console)
    devices.move(device=ward.probe.uid, place=place, reason="", actor=ward.physicist, at=now())
    other = objects.register_test_object(
        site=ward.site, name="Other phantom", serial="TM-9", material="urethane", nominals={},
        actor=ward.physicist, at=now(),
    )  # fmt: skip
    found = penetration(ward, "150", test_object=other)
    told = found.parameters
    assert (found.verdict, found.code) == ("not_assessable", "other_object")
    assert {name: told[name] for name in told if "mismatch" in name} == {
        "mismatch_console": "OG-70 / OG-90",
        "mismatch_object": "General phantom TM-3412 / Other phantom TM-9",
    }


@pytest.mark.parametrize(
    ("probe", "chassis", "verdict"),
    [("80", "100", "conforming"), ("81", "100", "suspension"), ("40", "0", "not_assessable")],
)
def test_ratio_is_judged_against_the_other_reading(ward, probe, chassis, verdict):
    device = builders.probe(
        ward.physicist, Place(site=ward.site), serial="TOE", array_kind="matrix",
        contact_class="mucous_membrane", applied_part="CF",
    )  # fmt: skip
    check = unplanned(ward, TOE, device, ward.technician)
    given = {"toe_probe_leakage": probe, "toe_chassis_leakage": chassis}
    entries = {f"{code}.0.0.1": Entry(text) for code, text in given.items()}
    seen = checks.preview(check=check.uid, typed=Typed(entries), whole=False, actor=ward.technician, at=now())
    assert seen.judged.verdict == verdict


def test_stored_verdicts_agree_with_their_parts_when_they_came_from_baselines_and_bands(ward):
    phantom = builders.phantom(ward.physicist, ward.site, {"vertical_distance": "80.0"})
    baseline(ward, test_object=phantom)
    devices.set_condition(
        device=ward.probe.uid, name="abdomen", test_frequency_mhz="3.5", sound_speed_m_s="1540", settings={},
        actor=ward.physicist, at=now(),
    )  # fmt: skip
    check = unplanned(ward, ANNUAL)
    item = key(ward, "vertical_distance", check, ward.physicist, phantom.uid)
    entries = {
        item: Entry("82.1", confirmed=True),
        item.replace("vertical_distance", "ring_down"): Entry("6"),
    }
    typed = Typed(entries, test_object=phantom.uid, cleaned_before="Wipe", partial_reason="in_use")
    builders.submitted(check, ward.physicist, typed)
    said = dict(
        Verdict.objects.filter(reading__entered__in=("82.1", "6")).values_list("reading__entered", "verdict")
    )
    assert said == {"82.1": "suspension", "6": "remedial"}
    assert rechecking.recheck_verdicts().problems == ()
