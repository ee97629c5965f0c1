"""Two editions side by side: what was added, removed and changed, at the level of the limit."""

from __future__ import annotations

import copy
import json
from decimal import Decimal
from pathlib import Path

import pytest

from qa_tracker.core.edition_differences import changes, differences, keys_of, stand_ins
from qa_tracker.core.library import criteria_set, criterion

FOLDER = Path(__file__).parents[2] / "fixtures" / "criteria"
TG1 = json.loads((FOLDER / "tg1-1998.json").read_text("utf-8"))


def edition(*contents):
    return criteria_set(TG1 | {"criteria": list(contents)}).criteria


def named(code):
    return copy.deepcopy(next(each for each in TG1["criteria"] if each["id"] == code))


def changed(code, change):
    content = named(code)
    change(content)
    return [(each.key, each.old, each.new) for each in changes(criterion(named(code)), criterion(content))]


def test_edition_beside_itself_differs_nowhere():
    laid = differences(edition(*TG1["criteria"]), edition(*TG1["criteria"]))
    assert {each.state for each in laid} == {"same"}
    assert [each.old.id for each in laid] == [each["id"] for each in TG1["criteria"]]


def test_criteria_when_added_and_removed_are_told_apart():
    laid = differences(
        edition(named("TG1-VERT"), named("TG1-PEN")), edition(named("TG1-PEN"), named("TG1-UNIF"))
    )
    assert [(each.state, (each.old or each.new).id) for each in laid] == [
        ("removed", "TG1-VERT"), ("same", "TG1-PEN"), ("added", "TG1-UNIF"),
    ]  # fmt: skip


def set_at(*path, to):
    def change(content):
        *way, last = path
        for step in way:
            content = content[step]
        content[last] = to

    return change


@pytest.mark.parametrize(
    ("code", "change", "told"),
    [
        ("TG1-PEN", set_at("criterion", "remedial", "absolute", to="5"), ("remedial.absolute", Decimal(6), Decimal(5))),
        ("TG1-PEN", set_at("criterion", "direction", to="either"), ("direction", "below", "either")),
        ("TG1-VERT", set_at("criterion", "remedial", "governs", to="either"), ("remedial.governs", "larger", "either")),
        ("TG1-VERT", set_at("criterion", "suspension", "percent", to="3"), ("suspension.percent", Decimal(2), Decimal(3))),
        ("TG1-UNIF", set_at("criterion", "strict", to=True), ("strict", False, True)),
        ("TG1-UNIF", set_at("unit", to="%"), ("unit", "dB", "%")),
        ("TG1-UNIF", set_at("medium", to="any"), ("medium", "phantom", "any")),
        ("TG1-UNIF", set_at("methods", to=["image"]), ("methods", ("eye", "image"), ("image",))),
        ("TG1-UNIF", set_at("standing", "remedial", to="confirmed"), ("standing.remedial", "memory", "confirmed")),
        ("TG1-UNIF", set_at("note", to=""), ("note", named("TG1-UNIF")["note"], None)),
        ("TG1-UNIF", set_at("source", to="Read again"), ("source", named("TG1-UNIF")["source"], "Read again")),
    ],
)  # fmt: skip
def test_changed_key_is_named_with_both_values(code, change, told):
    assert changed(code, change) == [told]


def test_moved_edge_of_a_band_is_named_in_both_bands():
    def move(content):
        content["criterion"]["bands"][0]["below"] = content["criterion"]["bands"][1]["from"] = "4"

    assert changed("TG1-RING", move) == [
        ("bands[0].below", Decimal(3), Decimal(4)), ("bands[1].from", Decimal(3), Decimal(4)),
    ]  # fmt: skip


def test_level_that_is_gone_loses_its_number_and_its_standing():
    def drop(content):
        for part in ("criterion", "standing", "own_words"):
            del content[part]["suspension"]

    keys = [key for key, _, new in changed("TG1-PEN", drop) if new is None]
    assert keys == ["suspension.absolute", "standing.suspension", "own_words.suspension"]


def test_number_written_with_more_places_is_no_difference():
    assert changed("TG1-PEN", set_at("criterion", "remedial", "absolute", to="6.00")) == []


def test_grades_are_keys_of_their_own():
    red = json.loads((FOLDER / "probe-grade-2016.json").read_text("utf-8"))["criteria"][0]
    keys = keys_of(criterion(red))
    assert keys["grades.red"] == "suspension"
    assert "basis" not in keys


def test_other_set_is_compared_by_what_procedures_name_beside():
    other = named("TG1-PEN") | {"id": "OURS-PEN"}
    pairs = stand_ins([("TG1-PEN", "OURS-PEN"), ("TG1-VERT",)], ["TG1-PEN", "TG1-VERT"], ["OURS-PEN"])
    laid = differences(edition(named("TG1-PEN"), named("TG1-VERT")), edition(other), pairs)
    assert [each.state for each in laid] == ["same", "removed"]
    assert laid[0].new.id == "OURS-PEN"
