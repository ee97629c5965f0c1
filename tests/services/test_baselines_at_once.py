"""Baselines that meet: given twice, read several times in one check, or set by two people at once."""

from __future__ import annotations

import json

import pytest
from baseline_ward import WARD, adopt, penetration, phantom, put, surveyed
from django.utils.timezone import now

from qa_tracker.core.errors import Conflict, Invalid
from qa_tracker.records.models import Baseline
from qa_tracker.services import baselines, library
from qa_tracker.services.baselines import Terms
from qa_tracker.services.entries import Entry
from tests import builders

__all__ = ["WARD"]


@pytest.fixture
def ward(shared_ward):
    return shared_ward


def proposed(ward, text, on=None, **more):
    return baselines.propose_values(
        device=ward.probe.uid, values=[penetration(ward, text)], test_object=on and on.uid,
        reason="acceptance", actor=ward.physicist, at=now(), **more,
    )  # fmt: skip


def sign(ward, what):
    return baselines.put_signed(
        proposed=what, password=builders.PASSWORD, shown_sha256=None, actor=ward.physicist, at=now()
    )


def test_series_given_twice_is_refused(ward):
    with pytest.raises(Invalid) as refused:
        put(ward, penetration(ward, "150"), penetration(ward, "151"))
    assert refused.value.code == "baseline.series_twice"


def test_second_of_two_who_set_the_first_epoch_at_once_is_refused(ward):
    late = proposed(ward, "151")
    put(ward, penetration(ward, "150"))
    with pytest.raises(Conflict) as refused:
        sign(ward, late)
    assert refused.value.code == "record.changed_meanwhile"
    assert Baseline.objects.get().entered == "150"


def test_second_of_two_who_replace_one_at_once_is_refused(ward):
    put(ward, penetration(ward, "150"))
    late = proposed(ward, "152")
    put(ward, penetration(ward, "151"))
    with pytest.raises(Conflict):
        sign(ward, late)
    assert Baseline.objects.filter(ended_at=None).get().entered == "151"


def test_second_of_two_on_another_object_at_once_is_refused(ward):
    first, second = phantom(ward, "A-1"), phantom(ward, "B-2")
    put(ward, penetration(ward, "150"), on=first)
    late = proposed(ward, "146", on=second, terms=Terms(no_overlap="lost"))
    put(ward, penetration(ward, "151"), on=first)
    with pytest.raises(Conflict):
        sign(ward, late)


def repeated(ward):
    """The survey, with its depth read three times."""
    document = json.loads((builders.FIXTURES / "procedures" / "annual-survey.json").read_text("utf-8"))
    for measurand in document["measurands"]:
        measurand["repeats"] = 3 if measurand["code"] == "penetration" else 1
    edition = library.publish_procedure(document=document | {"edition": 9}, actor=None, at=now())
    library.adopt_edition(edition=edition, site=None, remark="", actor=ward.physicist, at=now())


@pytest.mark.parametrize(("given", "wanted"), [("150", "150.0"), (Entry("150", qualifier=">"), "150")])
def test_repeats_of_one_check_become_one_baseline_their_mean(ward, given, wanted):
    repeated(ward)
    (row,) = adopt(ward, surveyed(ward, penetration=given))
    assert row.entered == wanted
