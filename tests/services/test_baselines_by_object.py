"""Baselines of one series on several test objects: side by side, each for readings on its own."""

from __future__ import annotations

import pytest
from django.utils.timezone import now

from qa_tracker.records.models import Aperture
from qa_tracker.records.queries import baselines as rows
from qa_tracker.services import baselines, objects
from qa_tracker.services.baselines import Value
from tests import builders

WARD = ((builders.MONTHLY, "annual-survey"),)


@pytest.fixture
def ward(shared_ward):
    return shared_ward


def phantom(ward, serial):
    return objects.register_test_object(
        site=ward.site, name="Phantom", serial=serial, material="hydrogel", nominals={},
        actor=ward.physicist, at=now(),
    )  # fmt: skip


def two_phantoms(ward):
    return phantom(ward, "A-1"), phantom(ward, "B-2")


def aperture(ward):
    return Aperture.objects.get(device=ward.probe).uid


def on_object(ward, text, phantom, reason="acceptance"):
    (row,) = baselines.set_values(
        device=ward.probe.uid, values=[Value("penetration", text, aperture(ward))], test_object=phantom and phantom.uid,
        reason=reason, password=builders.PASSWORD, actor=ward.physicist, at=now(),
    )  # fmt: skip
    return row


def choices(ward):
    (found,) = rows.choices_in_force(ward.probe.id).values()
    return found


def test_baseline_on_another_object_leaves_the_first_in_force_beside_it(ward):
    first, second = two_phantoms(ward)
    for text, phantom in (("150", first), ("146", second), ("149", first)):
        on_object(ward, text, phantom)
    assert [(row.epoch, row.entered, row.test_object_id) for row in choices(ward)] == [
        (3, "149", first.id), (2, "146", second.id),
    ]  # fmt: skip
    assert rows.in_force(ward.probe.id)[choices(ward)[0].key].epoch == 3


def test_baseline_on_no_object_ends_all_of_its_series(ward):
    first, second = two_phantoms(ward)
    for text, phantom in (("150", first), ("146", second), ("148", None)):
        on_object(ward, text, phantom)
    assert [(row.epoch, row.test_object_id) for row in choices(ward)] == [(3, None)]


def test_reading_is_compared_with_the_baseline_on_its_own_object_first(ward):
    first, second = two_phantoms(ward)
    for text, phantom in (("150", first), ("146", second)):
        on_object(ward, text, phantom)
    found = choices(ward)
    assert rows.for_object(found, first.id).entered == "150"
    assert rows.for_object(found, second.id).entered == "146"
    assert rows.for_object(found, -1).entered == "146"
    assert rows.for_object(found, None).entered == "146"
    assert rows.for_object((), first.id) is None


def test_baselines_of_a_device_are_read_in_two_queries_whatever_their_number(ward, django_assert_num_queries):
    for text in ("150", "148", "151"):
        on_object(ward, text, None)
    with django_assert_num_queries(2):
        assert len(rows.choices_in_force(ward.probe.id)) == 1
