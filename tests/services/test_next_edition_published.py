"""Publishing the next edition over the one before, and ending an adoption."""

from __future__ import annotations

import pytest
from django.utils.timezone import now

from qa_tracker.core.errors import DomainError, Forbidden, NotFound, SeveralInvalid
from qa_tracker.core.next_edition import typed_places
from qa_tracker.records.models import Adoption, CriteriaSet
from qa_tracker.records.queries import library as rows
from qa_tracker.services import library, next_edition
from tests import builders


@pytest.fixture
def ward(shared_ward):
    return shared_ward


def publish(ward, actor=None, **texts):
    texts |= {"DROP.source": "Decided by the group"} if "remedial" in texts else {}
    before = CriteriaSet.objects.get(code="dropout", edition="2014")
    level = {"remedial": "DROP.criterion.remedial.absolute"}
    typed = typed_places(rows.set_document(before.pk)) | {
        level.get(key, key): text for key, text in texts.items()
    }
    return next_edition.publish_next(before=before, typed=typed, actor=actor or ward.physicist, at=now())


def codes(refused):
    return [(each.code, each.field) for each in refused.value.errors]


def adoption(site=None):
    return Adoption.objects.get(criteria_set__code="dropout", site=site, ended_at=None)


def end(ward, which, reason="From memory", actor=None):
    return library.end_criteria(adoption=which.uid, reason=reason, actor=actor or ward.physicist, at=now())


def test_next_edition_is_published_and_has_no_force(ward):
    made = publish(ward, edition="2027", remedial="1")
    assert (made.code, made.edition) == ("dropout", "2027")
    assert rows.find_criteria_set(made.uid).criteria[0].spec.criterion.remedial.absolute == 1
    assert rows.adopted_criteria(ward.site.pk)["DROP"].set_edition == "2014"


def test_changed_number_is_a_local_decision_with_a_source_of_its_own(ward):
    spec = rows.find_criteria_set(publish(ward, edition="2027", remedial="1").uid).criteria[0].spec
    assert (spec.standing.remedial, spec.source) == ("local", "Decided by the group")


def test_edition_that_is_there_is_refused_beside_what_else_is_wrong(ward):
    with pytest.raises(SeveralInvalid) as refused:
        publish(ward, edition="2014", remedial="x")
    assert codes(refused) == [
        ("criteria_set.edition_taken", "edition"), ("number.not_a_number", "DROP.criterion.remedial.absolute"),
    ]  # fmt: skip


def test_edition_that_differs_in_nothing_is_refused(ward):
    with pytest.raises(SeveralInvalid) as refused:
        publish(ward, edition="2027")
    assert codes(refused) == [("criteria_set.nothing_changed", "")]


def test_only_a_physicist_of_the_group_publishes(ward):
    local = builders.person(ward.admin, "local", "physicist", ward.site)
    for actor in (local, ward.technician, ward.admin):
        with pytest.raises(Forbidden):
            publish(ward, actor, edition="2027", remedial="1")


def test_set_judges_no_more_when_its_adoption_has_ended(ward):
    ended = end(ward, adoption())
    assert ended.ended_at is not None
    assert "DROP" not in rows.adopted_criteria(ward.site.pk)


def test_groups_edition_is_in_force_again_when_the_sites_own_has_ended(ward):
    ours = publish(ward, edition="ours", remedial="3")
    own = library.adopt_criteria(criteria_set=ours, site=ward.site, remark="", actor=ward.physicist, at=now())
    assert rows.adopted_criteria(ward.site.pk)["DROP"].set_edition == "ours"
    end(ward, own)
    assert rows.adopted_criteria(ward.site.pk)["DROP"].set_edition == "2014"


def test_adoption_is_ended_once_and_with_a_reason(ward):
    group = adoption()
    with pytest.raises(DomainError) as refused:
        end(ward, group, reason=" ")
    assert (refused.value.code, refused.value.field) == ("adoption.reason_missing", "reason")
    end(ward, group)
    with pytest.raises(NotFound):
        end(ward, group)


def test_adoption_is_ended_only_by_who_may_adopt_there(ward):
    local = builders.person(ward.admin, "local", "physicist", ward.site)
    bay = builders.person(ward.admin, "bay", "physicist", builders.site(ward.admin, "KB", "Kestrel Bay"))
    own = library.adopt_criteria(
        criteria_set=publish(ward, edition="ours", remedial="3"),
        site=ward.site,
        remark="",
        actor=local,
        at=now(),
    )
    with pytest.raises(Forbidden):
        end(ward, adoption(), actor=local)
    with pytest.raises(NotFound):
        end(ward, own, actor=bay)
    assert end(ward, own, actor=local).ended_at is not None
