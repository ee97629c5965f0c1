"""What a verdict's sentence says at the edges: a share that rounds to all, whose probability it is, no share at all."""

from __future__ import annotations

import pytest

from qa_tracker.core.conformity import judge
from qa_tracker.core.criteria import from_json
from qa_tracker.services.wording_verdicts import verdict_sentence

LOSS = from_json(
    {
        "basis": "baseline",
        "direction": "below",
        "remedial": {"absolute": "6"},
        "suspension": {"absolute": "10"},
    }
)


@pytest.mark.parametrize(
    ("value", "share"), [("4.001", "just over 100 %"), ("4.000", "100 %"), ("3.999", "just under 100 %")]
)
def test_share_says_which_side_of_the_limit_it_is_when_it_rounds_to_all_of_it(value, share):
    limit = from_json({"basis": "none", "direction": "above", "remedial": {"absolute": "4"}})
    found = judge(limit, value=value, kind="number")
    said = verdict_sentence(found.code, found.parameters, found.verdict, found.level or "")
    assert f"It uses {share} of the allowance." in said.replace("\N{NO-BREAK SPACE}", " ")


def test_probability_names_the_suspension_level_when_that_decided():
    found = judge(LOSS, value="139", kind="number", baseline="152", uncertainty="2")
    said = verdict_sentence(found.code, found.parameters, found.verdict, found.level or "")
    assert "the probability of conformity with the suspension level is 0.0013." in said


def test_verdict_says_what_was_left_out_when_no_share_can_be_taken():
    limit = from_json(
        {
            "basis": "baseline",
            "direction": "above",
            "remedial": {"percent": "5"},
            "suspension": {"absolute": "9"},
        }
    )
    found = judge(limit, value="10", kind="number", baseline="0", unit="mm")
    said = verdict_sentence(found.code, found.parameters, found.verdict, found.level or "")
    assert found.verdict == "suspension"
    assert "No share can be taken of 0 mm, so only" in said.replace("\N{NO-BREAK SPACE}", " ")
