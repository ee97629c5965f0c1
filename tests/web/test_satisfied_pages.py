"""A check that another one satisfied: each page names the other, and it is no longer due."""

from __future__ import annotations

import pytest
from django.utils.timezone import now

import builders
from qa_tracker.records.models import Check
from qa_tracker.services import checks

pytestmark = pytest.mark.django_db

QUARTERLY = "quarterly-mechanical-uniformity"


@pytest.fixture
def ward():
    return builders.ward((builders.MONTHLY, QUARTERLY))


@pytest.fixture
def larger(ward):
    """The quarterly check of the probe, signed: it read all that the monthly one asks."""
    check = checks.open_unplanned(device=ward.probe.uid, procedure=QUARTERLY, actor=ward.technician, at=now())
    typed = checks.Typed(
        builders.answers(check, ward.technician, uniformity_grade="green"),
        test_object=builders.phantom(ward.physicist, ward.site).uid,
        cleaned_before="Wipe",
    )
    builders.submitted(check, ward.technician, typed)
    return check


def page(person, address: str) -> str:
    return builders.signed_in(person).get(address).content.decode()


def test_each_check_links_the_other(ward, larger):
    shown = page(ward.user, f"/checks/{ward.check.uid}/")
    assert "Satisfied by" in shown
    assert f'href="/checks/{larger.uid}/"' in shown
    other = page(ward.user, f"/checks/{larger.uid}/")
    assert "Satisfies also" in other
    assert f'href="/checks/{ward.check.uid}/"' in other


def test_a_satisfied_check_can_neither_be_entered_nor_countersigned(ward, larger):
    shown = page(ward.physicist, f"/checks/{ward.check.uid}/")
    assert "/enter/" not in shown
    assert "Second signature" not in shown


def test_a_satisfied_check_is_no_longer_due(ward, larger):
    shown = page(ward.technician, "/")
    assert f"/checks/{ward.check.uid}/" not in shown


def test_the_devices_page_says_what_satisfied_a_check(ward, larger):
    assert "satisfied by Quarterly" in page(ward.user, f"/devices/{ward.probe.uid}/")


def test_a_satisfied_check_is_not_offered_as_a_proving_check(ward, larger):
    shown = page(ward.physicist, f"/devices/{ward.probe.uid}/restore/")
    assert str(larger.uid) in shown
    assert str(ward.check.uid) not in shown
    assert Check.objects.get(pk=ward.check.pk).state == "submitted"
