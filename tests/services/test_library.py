"""The library: publishing gives no force, adopting does, and a site's own adoption goes before the group's."""

from __future__ import annotations

import json

import pytest
from django.utils.timezone import now

from qa_tracker.core.errors import Conflict, DomainError, Forbidden
from qa_tracker.records.models import Adoption, CriteriaSet, Criterion, Edition, Measurand, Verdict
from qa_tracker.records.queries import library as rows
from qa_tracker.services import checks, library, rechecking
from tests import builders


@pytest.fixture
def ward(shared_ward):
    return shared_ward


def document(folder, name, **changed):
    path = builders.FIXTURES / folder / f"{name}.json"
    return json.loads(path.read_text(encoding="utf-8")) | changed


def dropout(edition, remedial="2", suspension="4"):
    given = document("criteria", "dropout-2014", edition=edition)
    given["criteria"][0]["criterion"] |= {
        "remedial": {"absolute": remedial}, "suspension": {"absolute": suspension},
    }  # fmt: skip
    return given


def published(ward, given):
    return library.publish_criteria(document=given, actor=ward.physicist, at=now())


def adopt(ward, criteria_set, site=None, actor=None):
    return library.adopt_criteria(
        criteria_set=criteria_set, site=site, remark="", actor=actor or ward.physicist, at=now()
    )


def limit(site):
    return str(rows.adopted_criteria(site.id)["DROP"].spec.criterion.remedial.absolute)


def test_same_document_again_is_what_was_published(ward):
    before = Criterion.objects.count(), Edition.objects.count()
    known = CriteriaSet.objects.get(code="dropout")
    assert published(ward, document("criteria", "dropout-2014")) == known
    monthly = library.publish_procedure(
        document=document("procedures", builders.MONTHLY), actor=None, at=now()
    )
    assert monthly.number == 1
    assert (Criterion.objects.count(), Edition.objects.count()) == before


@pytest.mark.parametrize(
    "publish",
    [
        lambda: library.publish_criteria(document=dropout("2014", "3"), actor=None, at=now()),
        lambda: library.publish_criteria(
            document=document("criteria", "dropout-2014", title="Ours"), actor=None, at=now()
        ),
        lambda: library.publish_procedure(
            document=document("procedures", builders.MONTHLY, title="Ours"), actor=None, at=now()
        ),
    ],
    ids=["limit", "title", "procedure"],
)
def test_published_edition_is_not_changed_under_its_number(ward, publish):
    with pytest.raises(Conflict) as refused:
        publish()
    assert refused.value.code == "edition.number_taken"


def test_published_limits_have_no_force_until_they_are_adopted(ward):
    strict = published(ward, dropout("2099", "1", "2"))
    assert limit(ward.site) == "2"
    adopt(ward, strict)
    assert limit(ward.site) == "1"


def test_sites_own_adoption_goes_before_the_groups(ward):
    bay = builders.site(ward.admin, "KB", "Kestrel Bay")
    adopt(ward, published(ward, dropout("ours", "3", "5")), ward.site)
    adopt(ward, published(ward, dropout("2099", "1", "2")))
    assert (limit(ward.site), limit(bay)) == ("3", "1")


def test_adoption_before_of_the_same_set_and_place_ends(ward):
    group = Adoption.objects.get(criteria_set__code="dropout", site=None)
    adopt(ward, published(ward, dropout("2098")))
    adopt(ward, published(ward, dropout("2099")), ward.site)
    group.refresh_from_db()
    in_force = Adoption.objects.filter(criteria_set__code="dropout", ended_at=None)
    assert group.ended_at is not None
    assert set(in_force.values_list("criteria_set__edition", "site")) == {
        ("2098", None),
        ("2099", ward.site.pk),
    }


def test_adopting_again_is_refused(ward):
    for attempt in (
        lambda: adopt(ward, CriteriaSet.objects.get(code="dropout")),
        lambda: library.adopt_edition(
            edition=Edition.objects.get(), site=None, remark="", actor=ward.physicist, at=now()
        ),
    ):
        with pytest.raises(Conflict) as refused:
            attempt()
        assert refused.value.code == "adoption.exists"


@pytest.mark.parametrize("who", ["admin", "technician", "user"])
def test_only_a_physicist_publishes_and_adopts(ward, who):
    actor = getattr(ward, who)
    with pytest.raises(Forbidden):
        library.publish_criteria(document=dropout("2099"), actor=actor, at=now())
    with pytest.raises(Forbidden):
        adopt(ward, CriteriaSet.objects.get(code="tg1"), ward.site, actor)


def test_physicist_of_a_site_adopts_for_that_site_alone(ward):
    local = builders.person(ward.admin, "local", "physicist", ward.site)
    strict = published(ward, dropout("2099", "1"))
    with pytest.raises(Forbidden):
        adopt(ward, strict, None, local)
    adopt(ward, strict, ward.site, local)
    assert limit(ward.site) == "1"


@pytest.mark.parametrize(
    ("folder", "name", "changed"),
    [
        ("procedures", "user-check", {"measurands": []}),
        ("procedures", "user-check", {"edition": "first"}),
        ("procedures", "user-check", {"surprise": 1}),
        ("criteria", "tg1-1998", {"criteria": [{"id": "X"}]}),
        ("criteria", "tg1-1998", {"edition": 1998}),
    ],
)
def test_document_that_is_not_whole_is_refused_and_nothing_published(ward, folder, name, changed):
    publish = {"procedures": library.publish_procedure, "criteria": library.publish_criteria}[folder]
    before = Measurand.objects.count(), Criterion.objects.count(), Edition.objects.count()
    with pytest.raises(DomainError):
        publish(document=document(folder, name, **changed), actor=None, at=now())
    assert (Measurand.objects.count(), Criterion.objects.count(), Edition.objects.count()) == before


def test_new_limits_judge_later_checks_and_leave_earlier_verdicts(ward):
    builders.submitted(ward.check, ward.technician, dark_elements="1")
    adopt(ward, published(ward, dropout("2099", "1", "2")))
    again = checks.open_unplanned(
        device=ward.probe.uid, procedure=builders.MONTHLY, actor=ward.technician, at=now()
    )
    builders.submitted(again, ward.technician, dark_elements="1")
    verdicts = Verdict.objects.filter(measurand__code="dark_elements").order_by("id")
    assert [row.verdict for row in verdicts] == ["conforming", "remedial"]
    assert rechecking.recheck_verdicts().problems == ()


def test_reading_gets_no_verdict_when_its_limits_are_published_and_not_adopted(ward):
    given = document("procedures", builders.MONTHLY, edition=2)
    for measurand in given["measurands"]:
        measurand["criteria"] = ["HOUSE"] if measurand["code"] == "dark_elements" else measurand["criteria"]
    house = dropout("1")
    house |= {"set": "house", "criteria": [house["criteria"][0] | {"id": "HOUSE"}]}
    published(ward, house)
    edition = library.publish_procedure(document=given, actor=None, at=now())
    library.adopt_edition(edition=edition, site=ward.site, remark="", actor=ward.physicist, at=now())
    done = builders.submitted(ward.check, ward.technician, dark_elements="40")
    assert not done.verdicts.filter(measurand__code="dark_elements").exists()
    assert (done.edition, done.verdict) == (edition, "conforming")
