"""A baseline passes to another test object by a reading on both, or with the reason why there is none."""

from __future__ import annotations

import json

import pytest
from baseline_ward import WARD, adopt, aperture, penetration, phantom, put, surveyed

from qa_tracker.core.errors import Conflict, DomainError, Invalid
from qa_tracker.records.models import Baseline
from qa_tracker.records.queries.ledger import list_leaves
from qa_tracker.records.queries.scope import EVERYTHING
from qa_tracker.services.baselines import Terms, Value
from qa_tracker.services.entries import Entry

__all__ = ["WARD"]


@pytest.fixture
def ward(shared_ward):
    return shared_ward


@pytest.fixture
def two(ward):
    """Two objects, the first with a baseline of 150 mm."""
    found = phantom(ward, "A-1"), phantom(ward, "B-2")
    put(ward, penetration(ward, "150"), on=found[0])
    return found


def told():
    return json.loads(list_leaves(EVERYTHING, most=1)[0].content)["new"]["baselines"][0]


def test_baseline_on_another_object_is_refused_without_an_overlap(ward, two):
    with pytest.raises(Conflict) as refused:
        put(ward, penetration(ward, "146"), on=two[1])
    assert refused.value.code == "baseline.no_overlap"
    given = refused.value.parameters
    assert (given["was"], given["now"], given["days"]) == ("Phantom A-1", "Phantom B-2", 14)


def test_baseline_without_an_object_is_refused_where_the_one_before_stands_on_one(ward, two):
    with pytest.raises(Conflict) as refused:
        put(ward, penetration(ward, "146"), on=None)
    assert refused.value.code == "baseline.object_not_named"
    assert refused.value.parameters["was"] == f"{two[0].name} {two[0].serial}"


def test_reading_on_the_object_before_is_found_among_the_stored_ones(ward, two):
    surveyed(ward, on=two[0], days_ago=13, penetration="149")
    surveyed(ward, on=two[0], days_ago=5, penetration="148")
    (row,) = put(ward, penetration(ward, "146"), on=two[1])
    assert (row.overlap_of.entered, row.overlap_entered) == ("150", "148")
    assert told()["overlap"] == {
        "of_epoch": 1, "on": "Phantom A-1", "entered": "148", "object_step": "-2",
    }  # fmt: skip


@pytest.mark.parametrize(
    ("days_ago", "reading"), [(15, "149"), (1, Entry("149", qualifier=">")), (1, Entry(qualifier="not_seen"))]
)
def test_reading_that_is_too_old_or_no_number_ties_nothing(ward, two, days_ago, reading):
    surveyed(ward, on=two[0], days_ago=days_ago, penetration=reading)
    with pytest.raises(DomainError) as refused:
        put(ward, penetration(ward, "146"), on=two[1])
    assert refused.value.code in {"baseline.no_overlap", "baseline.last_fails"}


def test_reading_on_a_third_object_ties_nothing(ward, two):
    surveyed(ward, on=phantom(ward, "C-3"), penetration="149")
    with pytest.raises(Conflict):
        put(ward, penetration(ward, "146"), on=two[1])


def test_overlap_that_is_typed_counts_before_one_that_is_stored(ward, two):
    surveyed(ward, on=two[0], penetration="148")
    (row,) = put(ward, penetration(ward, "146"), on=two[1], terms=Terms(overlaps=[penetration(ward, "149")]))
    assert row.overlap_entered == "149"


def test_overlap_that_is_no_number_is_refused(ward, two):
    with pytest.raises(Invalid):
        put(ward, penetration(ward, "146"), on=two[1], terms=Terms(overlaps=[penetration(ward, "deep")]))


def test_reason_why_no_overlap_was_possible_is_told_and_kept(ward, two):
    (row,) = put(ward, penetration(ward, "146"), on=two[1], terms=Terms(no_overlap="A-1 fell and leaked"))
    assert (row.overlap_of.epoch, row.overlap_entered) == (1, "")
    assert row.reason == "acceptance\nA-1 fell and leaked"
    assert told()["overlap"]["none_because"] == "A-1 fell and leaked"
    assert told()["change"]["untold"] is True


def test_step_between_the_objects_is_no_change_of_the_device(ward, two):
    put(ward, penetration(ward, "146"), on=two[1], terms=Terms(overlaps=[penetration(ward, "149")]))
    assert told()["change"]["from_first"] == "-1"
    assert told()["overlap"]["object_step"] == "-3"


def test_each_object_with_a_baseline_needs_no_further_overlap(ward, two):
    put(ward, penetration(ward, "146"), on=two[1], terms=Terms(overlaps=[penetration(ward, "149")]))
    put(ward, penetration(ward, "149"), on=two[0])
    assert Baseline.objects.filter(ended_at=None).count() == 2


def test_quantity_read_in_air_passes_between_objects(ward, two):
    value = Value("reverberation_depth", "8.5", aperture(ward.probe))
    put(ward, value, on=two[0])
    assert put(ward, value, on=two[1])[0].overlap_of is None


def test_submission_on_another_object_needs_an_overlap_within_days_of_its_reading(ward, two):
    surveyed(ward, on=two[0], days_ago=18, penetration="149")
    late = surveyed(ward, on=two[1], days_ago=2, penetration="146")
    with pytest.raises(Conflict):
        adopt(ward, late)
    early = surveyed(ward, on=two[1], days_ago=10, penetration="146")
    assert adopt(ward, early)[0].overlap_entered == "149"
