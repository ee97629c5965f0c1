"""Baselines of one series on several test objects: side by side, each for readings on its own."""

from __future__ import annotations

import pytest
from baseline_ward import WARD, penetration, phantom, put

from qa_tracker.records.queries import baselines as rows
from qa_tracker.services.baselines import Terms

__all__ = ["WARD"]
UNTIED = Terms(no_overlap="the object before was lost")


@pytest.fixture
def ward(shared_ward):
    return shared_ward


def choices(ward):
    (found,) = rows.choices_in_force(ward.probe.id).values()
    return found


def set_on(ward, *given):
    for text, on in given:
        put(ward, penetration(ward, text), on=on, terms=UNTIED)


def test_baseline_on_another_object_leaves_the_first_in_force_beside_it(ward):
    first, second = phantom(ward, "A-1"), phantom(ward, "B-2")
    set_on(ward, ("150", first), ("146", second), ("149", first))
    assert [(row.epoch, row.entered, row.test_object_id) for row in choices(ward)] == [
        (3, "149", first.id), (2, "146", second.id),
    ]  # fmt: skip
    assert rows.in_force(ward.probe.id)[choices(ward)[0].key].epoch == 3


def test_baseline_on_no_object_ends_all_of_its_series(ward):
    first, second = phantom(ward, "A-1"), phantom(ward, "B-2")
    set_on(ward, ("150", first), ("146", second), ("148", None))
    assert [(row.epoch, row.test_object_id) for row in choices(ward)] == [(3, None)]


def test_reading_is_compared_with_the_baseline_on_its_own_object_first(ward):
    first, second = phantom(ward, "A-1"), phantom(ward, "B-2")
    set_on(ward, ("150", first), ("146", second))
    found = choices(ward)
    assert rows.for_object(found, first.id).entered == "150"
    assert rows.for_object(found, second.id).entered == "146"
    assert rows.for_object(found, -1).entered == "146"
    assert rows.for_object(found, None).entered == "146"
    assert rows.for_object((), first.id) is None


def test_baselines_of_a_device_are_read_in_two_queries_whatever_their_number(ward, django_assert_num_queries):
    set_on(ward, ("150", None), ("148", None), ("151", None))
    with django_assert_num_queries(2):
        assert len(rows.choices_in_force(ward.probe.id)) == 1
