"""No baseline hides a fault: refused while the value or the series' last reading fails a limit of its own."""

from __future__ import annotations

import json

import pytest
from baseline_ward import WARD, adopt, aperture, phantom, put, surveyed
from django.utils.timezone import now

from qa_tracker.core.errors import DomainError
from qa_tracker.services import devices, library
from qa_tracker.services.baselines import Value
from qa_tracker.services.entries import Entry
from tests import builders

__all__ = ["WARD"]


@pytest.fixture
def ward(shared_ward):
    return shared_ward


def refused_with(act):
    with pytest.raises(DomainError) as refused:
        act()
    return refused.value


def preset(ward, frequency_mhz):
    return devices.set_condition(
        device=ward.probe.uid, name="abdomen", test_frequency_mhz=frequency_mhz, sound_speed_m_s="",
        settings={}, actor=ward.physicist, at=now(),
    ).uid  # fmt: skip


def ring_down(ward, text, frequency_mhz, **more):
    return Value("ring_down", text, aperture(ward.probe), preset(ward, frequency_mhz), **more)


@pytest.mark.parametrize(("text", "frequency_mhz"), [("7.5", "2.5"), ("5.5", "3.5"), ("3.5", "7")])
def test_value_beyond_the_limit_of_its_frequency_is_refused(ward, text, frequency_mhz):
    error = refused_with(lambda: put(ward, ring_down(ward, text, frequency_mhz)))
    assert (error.code, error.parameters["criterion"]) == ("baseline.beyond_limit", "TG1-RING")


@pytest.mark.parametrize(
    ("text", "frequency_mhz"), [("5.5", "2.5"), ("5.0", "3.5"), ("3.0", "7"), ("9.0", "")]
)
def test_value_within_the_limit_of_its_frequency_or_without_a_band_is_set(ward, text, frequency_mhz):
    assert put(ward, ring_down(ward, text, frequency_mhz))


@pytest.mark.parametrize(("text", "refused"), [("150", True), ("100", True), ("90", False)])
def test_bound_is_judged_for_what_it_proves(ward, text, refused):
    adopt_own_limit(ward, "penetration", direction="above", absolute="100")
    value = Value("penetration", text, aperture(ward.probe), qualifier=">")
    if refused:
        assert refused_with(lambda: put(ward, value)).code == "baseline.beyond_limit"
    else:
        assert put(ward, value)[0].qualifier == ">"


def test_qualifier_that_is_not_allowed_is_refused(ward):
    value = Value("uniformity", "1.5", aperture(ward.probe), qualifier="<")
    assert refused_with(lambda: put(ward, value)).code == "reading.qualifier_not_allowed"


def test_value_is_refused_while_the_last_reading_of_its_series_fails(ward):
    surveyed(ward, days_ago=2, uniformity="4.4")
    error = refused_with(lambda: put(ward, Value("uniformity", "1.6", aperture(ward.probe))))
    assert error.code == "baseline.last_fails"
    assert (error.parameters["value"], error.parameters["level"]) == ("4.4", "remedial")
    surveyed(ward, days_ago=1, uniformity="1.7")
    assert put(ward, Value("uniformity", "1.6", aperture(ward.probe)))


def test_fault_of_another_series_is_no_matter(ward):
    surveyed(ward, uniformity="4.4")
    assert put(ward, Value("reverberation_depth", "8.5", aperture(ward.probe)))


def test_older_submission_is_not_taken_while_a_later_reading_fails(ward):
    adopt_own_limit(ward, "grey_visibility", direction="below", absolute="5")
    good = surveyed(ward, days_ago=3, grey_visibility="7")
    surveyed(ward, days_ago=1, grey_visibility="4")
    assert refused_with(lambda: adopt(ward, good)).code == "baseline.last_fails"


def adopt_own_limit(ward, measurand, **limit):
    """A limit on the value itself that judges a measurand beside its published one."""
    document = json.loads((builders.FIXTURES / "criteria" / "dropout-2014.json").read_text("utf-8"))
    own = document["criteria"][0] | {
        "id": "OWN", "shape": "E", "unit": "1", "medium": "phantom", "measurands": [measurand],
        "not_for_array_kinds": [], "methods": ["eye"],
        "criterion": {"basis": "none", "direction": limit["direction"], "strict": True,
                      "remedial": {"absolute": limit["absolute"]}},
        "standing": {"remedial": "practice"},
    }  # fmt: skip
    row = library.publish_criteria(
        document=document | {"set": "own", "criteria": [own]}, actor=ward.physicist, at=now()
    )
    library.adopt_criteria(criteria_set=row, site=None, remark="", actor=ward.physicist, at=now())


def test_limit_against_a_nominal_value_counts_where_the_object_has_one(ward):
    object_100 = phantom(ward, "A-1", vertical_distance="100.0")
    value = Value("vertical_distance", "102.1", aperture(ward.probe))
    assert refused_with(lambda: put(ward, value, on=object_100)).parameters["level"] == "suspension"
    assert put(ward, value)


def test_not_seen_counts_as_a_last_reading_that_fails_where_less_is_worse(ward):
    adopt_own_limit(ward, "penetration", direction="below", absolute="40")
    surveyed(ward, penetration=Entry(qualifier="not_seen"))
    error = refused_with(lambda: put(ward, Value("penetration", "150", aperture(ward.probe))))
    assert error.code == "baseline.last_fails"
