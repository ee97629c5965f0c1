"""Two editions of a procedure side by side."""

from __future__ import annotations

import copy
import json
from pathlib import Path

import pytest

from qa_tracker.core.library import procedure
from qa_tracker.core.procedure_differences import procedure_differences, steps_beside

FOLDER = Path(__file__).parents[2] / "fixtures" / "procedures"
MONTHLY = json.loads((FOLDER / "monthly-in-air.json").read_text("utf-8"))


@pytest.fixture
def document():
    return copy.deepcopy(MONTHLY) | {"edition": 2}


def beside(document):
    return procedure_differences(procedure(MONTHLY), procedure(document))


def test_edition_beside_itself_differs_nowhere(document):
    assert beside(document).none


def test_key_of_the_head_when_changed_is_named_with_both_values(document):
    document["minutes"]["probe"] = 5
    document["recurrence"]["grace_days"] = 9
    head = {each.key: (each.old, each.new) for each in beside(document).head}
    assert head == {"minutes_probe": ("4", "5"), "grace_days": ("7", "9")}


def test_lists_whose_order_says_nothing_when_in_another_order_differ_nowhere(document):
    document["cautions"].reverse()
    document["performed_by"].reverse()
    assert beside(document).none


def test_measurand_when_added_removed_and_changed_is_told_apart(document):
    first = document["measurands"].pop(0)
    document["measurands"][0]["name"] = "Face"
    document["measurands"].append(first | {"code": "housing_grade"})
    found = {each.spec.code: each.state for each in beside(document).measurands if each.state != "same"}
    assert found == {first["code"]: "removed", "lens_grade": "changed", "housing_grade": "added"}


def test_measurand_when_changed_names_its_keys(document):
    document["measurands"][0] |= {"name": "Housing", "repeats": 2}
    changed = beside(document).measurands[0]
    assert [(each.key, each.new) for each in changed.changes] == [("name", "Housing"), ("repeats", "2")]


def test_measurands_when_in_another_order_differ_in_that_alone(document):
    document["measurands"].reverse()
    found = beside(document)
    assert found.reordered
    assert not found.none
    assert {each.state for each in found.measurands} == {"same"}


@pytest.mark.parametrize(
    ("old", "new", "states"),
    [
        (["a", "b"], ["a", "b"], ["same", "same"]),
        (["a", "b"], ["b"], ["removed", "same"]),
        (["a", "b", "c"], ["a", "x", "y", "c"], ["same", "changed", "added", "same"]),
        ([], ["a"], ["added"]),
    ],
)
def test_steps_are_laid_beside_those_they_are(old, new, states):
    assert [each.state for each in steps_beside(old, new)] == states
