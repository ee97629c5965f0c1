"""A draft of an edition: it stands for the document it was begun from, keeps what is typed, and loses nothing."""

from __future__ import annotations

import json
from pathlib import Path

import pytest

from qa_tracker.core import edition_draft as drafts
from qa_tracker.core.edition_draft import HEAD, STEPS
from qa_tracker.core.errors import Conflict, NotFound
from qa_tracker.core.measurand_draft import NEW, measurand_document, measurand_typed
from qa_tracker.core.typed_text import YES

PUBLISHED = sorted((Path(__file__).parents[2] / "fixtures" / "procedures").glob("*.json"))
MONTHLY = json.loads(next(each for each in PUBLISHED if each.stem == "monthly-in-air").read_text("utf-8"))


@pytest.fixture
def draft():
    return drafts.begin(MONTHLY, 2)


@pytest.mark.parametrize("path", PUBLISHED, ids=lambda path: path.stem)
def test_draft_when_nothing_is_typed_is_the_document_it_was_begun_from(path):
    document = json.loads(path.read_text("utf-8"))
    assert drafts.document_of(drafts.begin(document, 2)) == document | {"edition": 2}


def test_draft_when_kept_and_read_again_is_the_same(draft):
    assert drafts.from_json(json.loads(json.dumps(drafts.to_json(draft)))) == draft


def test_head_when_typed_is_in_the_document(draft):
    typed = {**draft.head.typed, "title": " In air, fortnightly ", "every": "2", "period": "WEEKLY"}
    document = drafts.document_of(drafts.kept(draft, HEAD, typed, seen=0, revision=1))
    assert document["title"] == "In air, fortnightly"
    assert document["recurrence"]["rule"] == "FREQ=WEEKLY;INTERVAL=2"


@pytest.mark.parametrize(
    ("typed", "rule"),
    [
        pytest.param({"period": ""}, None, id="an event makes it due"),
        pytest.param({"every": "1"}, "FREQ=MONTHLY", id="an interval of one is not written"),
        pytest.param({"rule": "freq=monthly; byday=1mo"}, "FREQ=MONTHLY;BYDAY=1MO", id="a rule of its own"),
    ],
)
def test_recurrence_when_typed_is_a_rule(draft, typed, rule):
    document = drafts.document_of(drafts.kept(draft, HEAD, draft.head.typed | typed, seen=0, revision=1))
    assert (document["recurrence"] or {}).get("rule") == rule


def test_rule_with_named_days_when_begun_from_is_typed_as_a_rule():
    every = {"rule": "FREQ=MONTHLY;BYDAY=1MO", "before_days": 3, "grace_days": 4}
    typed = drafts.begin(MONTHLY | {"recurrence": every}, 2).head.typed
    assert (typed["rule"], typed["before_days"]) == ("FREQ=MONTHLY;BYDAY=1MO", "3")


def test_what_can_not_be_read_when_typed_stays_the_text_it_is(draft):
    typed = draft.head.typed | {"minutes_probe": "four", "grace_days": "-1"}
    document = drafts.document_of(drafts.kept(draft, HEAD, typed, seen=0, revision=1))
    assert (document["minutes"]["probe"], document["recurrence"]["grace_days"]) == ("four", "-1")


def test_step_when_left_empty_is_none(draft):
    typed = {"step-1": "Clean.", "step-2": "  ", "step-3": "Look."}
    document = drafts.document_of(drafts.kept(draft, STEPS, typed, seen=0, revision=1))
    assert [each["text"] for each in document["steps"]] == ["Clean.", "Look."]


def test_part_when_kept_elsewhere_meanwhile_is_not_written_over(draft):
    first = drafts.kept(draft, "m1", draft.part("m1").typed | {"name": "Housing"}, seen=0, revision=1)
    with pytest.raises(Conflict) as refusal:
        drafts.kept(first, "m1", {"name": "Shell"}, seen=0, revision=2)
    assert refusal.value.code == "edition_draft.kept_meanwhile"


def test_other_part_when_kept_meanwhile_is_no_hindrance(draft):
    first = drafts.kept(draft, "m1", {"name": "Housing"}, seen=0, revision=1)
    second = drafts.kept(first, "m2", {"name": "Face"}, seen=0, revision=2)
    assert [second.part(key).typed["name"] for key in ("m1", "m2")] == ["Housing", "Face"]


def test_part_when_the_same_was_kept_meanwhile_is_no_conflict(draft):
    first = drafts.kept(draft, "m1", {"name": "Housing"}, seen=0, revision=1)
    assert drafts.kept(first, "m1", {"name": "Housing"}, seen=0, revision=2).part("m1").revision == 2


def test_measurand_when_moved_changes_its_place_and_stops_at_the_ends(draft):
    keys = [each.key for each in draft.measurands]
    once = drafts.moved(draft, "m2", -1)
    assert [each.key for each in once.measurands[:2]] == ["m2", "m1"]
    assert [each.key for each in drafts.moved(once, "m2", -1).measurands] == [*keys[1::-1], *keys[2:]]
    assert drafts.moved(draft, keys[-1], 1) == draft


def test_measurand_when_added_after_one_was_taken_out_has_a_key_of_its_own(draft):
    last = draft.measurands[-1].key
    fresh = drafts.with_new_measurand(drafts.without_measurand(draft, last), revision=1)
    assert fresh.measurands[-1].key not in [each.key for each in draft.measurands]


@pytest.mark.parametrize("do", [drafts.without_measurand, lambda draft, key: drafts.moved(draft, key, 1)])
def test_part_that_is_not_there_is_refused(draft, do):
    with pytest.raises(NotFound):
        do(draft, "m99")


def test_inputs_of_another_kind_when_typed_wait_in_the_draft():
    typed = NEW | {"kind": "grade", "grades": "good: Good\nbad: Bad", "formula": "a + b", "low": "1"}
    document = measurand_document(typed)
    assert document["grades"] == [{"value": "good", "name": "Good"}, {"value": "bad", "name": "Bad"}]
    assert (document["plausible"], "formula" in document, document["unit"]) == (None, False, "1")
    assert measurand_document(typed | {"kind": "derived"})["formula"] == "a + b"


def test_typed_measurand_when_made_from_a_document_makes_it_again():
    for measurand in MONTHLY["measurands"]:
        assert measurand_document(measurand_typed(measurand)) == measurand


def test_mark_when_typed_is_true():
    assert measurand_document(NEW | {"hide_last": YES})["hide_last"] is True
