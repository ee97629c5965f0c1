"""Drafts of editions: kept as typed, one a person, compared and set, looked through as a whole, and published."""

from __future__ import annotations

import json

import pytest
from django.utils.timezone import now

from qa_tracker.core.errors import Conflict, Forbidden, Invalid, NotFound, SeveralInvalid
from qa_tracker.records.models import Edition, EditionDraft, Person, Procedure
from qa_tracker.services import edition_drafts as drafts
from tests import builders

pytestmark = pytest.mark.django_db


@pytest.fixture
def physicist(db):
    admin = builders.first_administrator()
    builders.publish()
    return builders.person(admin, "oduya", "physicist", None, "Maren Oduya")


@pytest.fixture
def who(physicist):
    return {"procedure": Procedure.objects.get().uid, "actor": physicist, "at": now()}


@pytest.fixture
def draft(who):
    return drafts.start(**who)


def keep(who, part="head", seen=None, **typed):
    kept = drafts.get(**who)
    before = kept.writing.part(part).typed
    revision = kept.revision if seen is None else seen
    return drafts.keep(**who, part=part, typed={**before, **typed}, seen=revision)


def refused(who):
    return {(each.field, each.code) for each in drafts.looked_through(drafts.get(**who).writing).refusals}


def test_draft_when_started_is_the_newest_edition_with_the_next_number(who, draft):
    assert (draft.writing.follows, draft.writing.number) == (1, 2)
    assert refused(who) == set()


def test_draft_when_started_again_goes_on_where_it_was(who, draft):
    keep(who, title="In air, by two readers")
    assert drafts.start(**who).writing.head.typed["title"] == "In air, by two readers"
    assert EditionDraft.objects.count() == 1


def test_two_people_when_writing_have_a_draft_each(who, draft, physicist):
    other = builders.person(Person.objects.get(username="moss"), "rao", "physicist", None)
    assert drafts.find(**{**who, "actor": other}) is None
    drafts.start(**{**who, "actor": other})
    assert EditionDraft.objects.count() == 2


def test_what_is_not_valid_when_kept_stays_as_typed(who, draft):
    kept = keep(who, minutes_probe="four or so", title="")
    assert kept.writing.head.typed["minutes_probe"] == "four or so"
    assert refused(who) == {("title", "library.empty"), ("minutes.probe", "library.not_whole")}


def test_part_when_kept_in_another_window_is_not_written_over(who, draft):
    keep(who, title="First window")
    with pytest.raises(Conflict) as refusal:
        keep(who, title="Second window", seen=draft.revision)
    assert refusal.value.code == "edition_draft.kept_meanwhile"
    assert drafts.get(**who).writing.head.typed["title"] == "First window"


def test_other_part_when_kept_in_another_window_is_kept_too(who, draft):
    keep(who, title="First window")
    kept = keep(who, part="m1", name="Housing", seen=draft.revision)
    assert (kept.writing.head.typed["title"], kept.writing.part("m1").typed["name"]) == (
        "First window",
        "Housing",
    )


def test_measurands_when_added_moved_and_removed_are_in_that_order(who, draft):
    key = drafts.add_measurand(**who)
    drafts.move_measurand(**who, key=key, by=-1)
    kept = drafts.remove_measurand(**who, key="m1", seen=drafts.get(**who).revision)
    assert [each.key for each in kept.writing.measurands][-2] == key
    assert "m1" not in [each.key for each in kept.writing.measurands]


def test_measurand_when_typed_in_meanwhile_is_not_removed(who, draft):
    keep(who, part="m1", name="Housing")
    with pytest.raises(Conflict):
        drafts.remove_measurand(**who, key="m1", seen=draft.revision)


def test_draft_when_whole_is_published_and_gone(who, draft):
    kept = keep(who, title="In air, by two readers")
    edition = drafts.publish(**who, revision=kept.revision)
    assert (edition.number, json.loads(edition.content)["title"]) == (2, "In air, by two readers")
    assert drafts.find(**who) is None


def test_draft_when_wrong_in_several_places_is_refused_with_all_of_them(who, draft):
    keep(who, part="m1", code="Case Grade")
    kept = keep(who, title="")
    with pytest.raises(SeveralInvalid) as refusal:
        drafts.publish(**who, revision=kept.revision)
    assert [each.field for each in refusal.value.errors] == ["title", "measurands[0].code"]
    assert Edition.objects.count() == 1


def test_draft_when_nothing_differs_is_refused(who, draft):
    with pytest.raises(Invalid) as refusal:
        drafts.publish(**who, revision=draft.revision)
    assert refusal.value.code == "edition_draft.nothing_changed"


def test_draft_when_changed_since_it_was_looked_over_is_refused(who, draft):
    keep(who, title="Another")
    with pytest.raises(Conflict) as refusal:
        drafts.publish(**who, revision=draft.revision)
    assert refusal.value.code == "edition_draft.looked_at_another"


def test_draft_when_overtaken_is_refused_until_it_follows_the_newest(who, draft):
    document = json.loads(Edition.objects.get().content) | {"edition": 2, "title": "Quicker"}
    drafts.publish_document(text=json.dumps(document), actor=who["actor"], at=now())
    kept = keep(who, title="Slower")
    with pytest.raises(Conflict) as refusal:
        drafts.publish(**who, revision=kept.revision)
    assert refusal.value.code == "edition_draft.overtaken"
    kept = drafts.follow_newest(**who)
    assert drafts.publish(**who, revision=kept.revision).number == 3


def test_code_that_stands_for_another_quantity_is_refused(who, draft):
    keep(who, part="m1", code="reverberation_depth", name="Reverberation")
    assert ("measurands[0].kind", "edition_draft.measurand_known") in refused(who)


def test_criterion_of_another_medium_is_refused(who, draft):
    number = [each.typed["code"] for each in draft.writing.measurands].index("reverberation_depth")
    keep(who, part=f"m{number + 1}", criteria="TG1-PEN")
    assert (f"measurands[{number}].criteria", "library.medium_differs") in refused(who)


def test_discarded_draft_is_gone_and_what_was_not_there_is_refused(who, draft):
    drafts.discard(**who)
    with pytest.raises(NotFound):
        drafts.get(**who)


@pytest.mark.parametrize(
    ("text", "code"),
    [
        pytest.param(" ", "edition_draft.no_document", id="nothing"),
        pytest.param('{"title": }', "edition_draft.not_json", id="no JSON"),
        pytest.param(" " * 500_000 + "{}", "edition_draft.too_long", id="longer than any edition"),
        pytest.param("[" * 100000, "edition_draft.not_json", id="nested without end"),
    ],
)
def test_text_that_is_no_document_is_refused(physicist, text, code):
    with pytest.raises(Invalid) as refusal:
        drafts.publish_document(text=text, actor=physicist, at=now())
    assert refusal.value.code == code


def test_person_who_may_not_adopt_may_not_write(who):
    technician = builders.person(Person.objects.get(username="moss"), "castellane", "technician", None)
    with pytest.raises(Forbidden):
        drafts.start(**{**who, "actor": technician})
