"""Who is told at which level, in the browser: the page, setting another ladder, and the way back."""

from __future__ import annotations

import pytest
from django.urls import reverse

from qa_tracker.core.ladder import Rung
from qa_tracker.services import ladders
from tests import builders

pytestmark = pytest.mark.django_db
GIVEN = {"due": ["responsible"], "overdue": ["responsible", "lead"], "t1_days": "3", "t1": ["physicist"]}


@pytest.fixture
def ward():
    return builders.ward()


def page(ward, name, person):
    return builders.signed_in(person).get(reverse(name, args=[ward.site.uid]))


def send(ward, person, name="ladder-set", **given):
    return builders.signed_in(person).post(reverse(name, args=[ward.site.uid]), given)


def test_everyone_at_the_site_sees_who_is_told(ward):
    for person in (ward.user, ward.technician, ward.physicist, ward.admin):
        said = page(ward, "ladder", person).content.decode()
        assert "7 days after overdue" in said
        assert "common practice, no source" in said
        assert ("Set the ladder" in said) == (person == ward.physicist)


def test_physicist_sets_the_ladder_and_goes_back(ward):
    assert send(ward, ward.physicist, **GIVEN, reason="Nights").status_code == 302
    rungs = ladders.in_force().of(ward.site.pk).rungs
    assert set(rungs) == {
        Rung("due", "responsible"), Rung("overdue", "responsible"), Rung("overdue", "lead"), Rung("t1", "physicist", 3),
    }  # fmt: skip
    assert "own" in page(ward, "ladder", ward.user).content.decode()
    assert send(ward, ward.physicist, "ladder-drop", reason="As everywhere").status_code == 302
    assert ladders.in_force().of(ward.site.pk) == ladders.DEFAULT


@pytest.mark.parametrize(
    ("given", "says"),
    [
        ({**GIVEN, "reason": ""}, "Reason"),
        ({"reason": "Quiet"}, "tells nobody"),
        ({**GIVEN, "t1_days": "", "reason": "Nights"}, "days that can't be"),
        ({**GIVEN, "t2_days": "9", "t2": ["lead"], "t1": [], "reason": "Nights"}, "left out"),
    ],
)
def test_what_makes_no_ladder_is_refused_and_kept_in_the_form(ward, given, says):
    answer = send(ward, ward.physicist, **given)
    assert answer.status_code == 422
    assert says in answer.content.decode().replace("&#x27;", "'")


def test_ladder_is_not_set_by_those_who_may_not(ward):
    for person in (ward.user, ward.technician, ward.admin):
        assert send(ward, person, **GIVEN, reason="Nights").status_code == 403
    assert ladders.in_force().of(ward.site.pk) == ladders.DEFAULT
