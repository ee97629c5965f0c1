"""Writing the next edition over the one before: what is typed, and every refusal at its place."""

from __future__ import annotations

import copy
import json
from pathlib import Path

import pytest

from qa_tracker.core.edition_differences import changes
from qa_tracker.core.library import criteria_set
from qa_tracker.core.next_edition import next_document, refusals, typed_places

FOLDER = Path(__file__).parents[2] / "fixtures" / "criteria"
SETS = {
    path.stem: json.loads(path.read_text("utf-8"))
    for path in FOLDER.glob("*.json")
    if path.stem != "cautions"
}
TG1 = SETS["tg1-1998"]
OWN = {"basis": "baseline", "direction": "either", "remedial": {"coverage": "95", "confidence": "95"}}
PEN = "TG1-PEN.criterion"


def typing(texts, before=TG1):
    return next_document(before, typed_places(before) | {"edition": "next"} | texts)


def refused(texts):
    return {(each.code, each.field) for each in refusals(typing(texts), TG1)}


def changed_keys(texts):
    before, after = criteria_set(TG1).criteria, criteria_set(typing(texts)).criteria
    return {
        f"{old.id}.{each.key}": each.new for old, new in zip(before, after, strict=True) for each in changes(old, new)
    }  # fmt: skip


@pytest.mark.parametrize("before", SETS.values(), ids=SETS)
def test_edition_typed_as_it_stands_is_the_edition_before(before):
    document = typing({"edition": before["edition"]}, before)
    assert criteria_set(document) == criteria_set(before)
    assert refusals(document, before) == ()


def test_edition_before_is_left_as_it_is():
    before = copy.deepcopy(TG1)
    typing({f"{PEN}.remedial.absolute": "5", "TG1-VERT.remove": "yes"})
    assert before == TG1


LOCAL = {"TG1-PEN.standing.remedial": "local"}


@pytest.mark.parametrize(
    ("texts", "told"),
    [
        ({f"{PEN}.remedial.absolute": "5"}, {"TG1-PEN.remedial.absolute": "5"} | LOCAL),
        ({f"{PEN}.remedial.absolute": " 5,5 "}, {"TG1-PEN.remedial.absolute": "5.5"} | LOCAL),
        (
            {"TG1-RING.criterion.bands[1].remedial.absolute": "4"},
            {"TG1-RING.bands[1].remedial.absolute": "4", "TG1-RING.standing.remedial": "local"},
        ),
        (
            {"TG1-VERT.criterion.remedial.governs": "either"},
            {"TG1-VERT.remedial.governs": "either", "TG1-VERT.standing.remedial": "local"},
        ),
        ({"TG1-PEN.standing.remedial": "confirmed"}, {"TG1-PEN.standing.remedial": "confirmed"}),
        ({"TG1-PEN.source": "Our own copy"}, {"TG1-PEN.source": "Our own copy"}),
        ({"TG1-PEN.note": ""}, {"TG1-PEN.note": "None"}),
    ],
)
def test_what_is_typed_is_the_only_difference(texts, told):
    assert {name: str(each) for name, each in changed_keys(texts).items()} == told


def test_second_number_is_given_and_the_larger_governs():
    told = changed_keys({f"{PEN}.remedial.percent": "4"})
    assert {name: str(each) for name, each in told.items()} == {
        "TG1-PEN.remedial.percent": "4", "TG1-PEN.remedial.governs": "larger", **LOCAL,
    }  # fmt: skip


def test_changed_number_has_the_standing_that_is_chosen_for_it():
    told = changed_keys({f"{PEN}.remedial.absolute": "5", "TG1-PEN.standing.remedial": "practice"})
    assert told["TG1-PEN.standing.remedial"] == "practice"


def test_number_written_otherwise_keeps_its_standing():
    before = TG1["criteria"][[each["id"] for each in TG1["criteria"]].index("TG1-PEN")]
    was = before["criterion"]["remedial"]["absolute"]
    document = typing({f"{PEN}.remedial.absolute": f"{was},0"})
    after = next(each for each in document["criteria"] if each["id"] == "TG1-PEN")
    assert after["standing"] == before["standing"]
    assert refusals(document, TG1) == ()


def test_changed_number_is_refused_under_the_source_of_the_one_before():
    texts = {f"{PEN}.suspension.absolute": "9"}
    assert refused(texts) == {("library.source_of_another_number", "TG1-PEN.source")}
    assert refused(texts | {"TG1-PEN.source": "Decided by the group, May 2026"}) == set()


def test_level_without_numbers_goes_with_its_standing_and_own_word():
    told = changed_keys({f"{PEN}.suspension.absolute": ""})
    assert told == dict.fromkeys(
        f"TG1-PEN.{key}.suspension" if key != "absolute" else "TG1-PEN.suspension.absolute"
        for key in ("absolute", "standing", "own_words")
    )


def test_criterion_is_removed():
    ids = [each.id for each in criteria_set(typing({"TG1-PEN.remove": "yes"})).criteria]
    assert ids == [each["id"] for each in TG1["criteria"] if each["id"] != "TG1-PEN"]


def test_own_spread_has_its_two_shares():
    content = TG1["criteria"][2] | {"shape": "J", "criterion": OWN, "standing": {"remedial": "practice"}}
    before = TG1 | {"criteria": [content | {"own_words": {}}]}
    typed = {"TG1-PEN.criterion.remedial.coverage": "99", "TG1-PEN.source": "Ours"}
    document = typing(typed, before)
    assert refusals(document, before) == ()
    assert document["criteria"][0]["criterion"]["remedial"] == {"coverage": "99", "confidence": "95"}


def test_every_refusal_is_found_at_its_place():
    assert refused(
        {
            "edition": " ",
            "TG1-VERT.criterion.remedial.absolute": "1.5 cm",
            "TG1-VERT.criterion.suspension.percent": "two",
            "TG1-HORZ.standing.remedial": "",
            "TG1-PEN.source": "",
            f"{PEN}.suspension.absolute": "5",
            "TG1-UNIF.criterion.remedial.absolute": "",
            "TG1-UNIF.criterion.suspension.absolute": "",
            "TG1-RING.criterion.bands[1].suspension.absolute": "3",
            "TG1-RING.standing.suspension": "memory",
        }
    ) == {
        ("library.empty", "edition"),
        ("number.unit", "TG1-VERT.criterion.remedial.absolute"),
        ("number.not_a_number", "TG1-VERT.criterion.suspension.percent"),
        ("library.no_standing", "TG1-HORZ.standing.remedial"),
        ("library.empty", "TG1-PEN.source"),
        ("criterion.not_beyond", "TG1-PEN.criterion"),
        ("criterion.no_level", "TG1-UNIF.criterion"),
        ("criterion.not_beyond", "TG1-RING.criterion.bands[1]"),
        ("library.source_of_another_number", "TG1-VERT.source"),
        ("library.source_of_another_number", "TG1-RING.source"),
    }


def test_refusal_below_a_removed_criterion_keeps_its_id():
    texts = {"TG1-VERT.remove": "yes", f"{PEN}.remedial.absolute": "-1", "TG1-PEN.source": "Ours"}
    assert refused(texts) == {("criterion.negative", f"{PEN}.remedial.absolute")}


def test_edition_without_any_criterion_is_refused():
    assert refused({f"{each['id']}.remove": "yes" for each in TG1["criteria"]}) == {
        ("library.empty", "criteria")
    }
