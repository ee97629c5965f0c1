"""Readings and baselines that are only known to be more or less than something, or were not seen."""

from __future__ import annotations

from decimal import Decimal as D

import pytest

from qa_tracker.core.conformity import judge
from qa_tracker.core.criteria import from_json

LOSS = {
    "basis": "baseline",
    "direction": "below",
    "remedial": {"absolute": "6"},
    "suspension": {"absolute": "10"},
}
EITHER = {
    "basis": "baseline",
    "direction": "either",
    "remedial": {"absolute": "6"},
    "suspension": {"absolute": "10"},
}
UPPER = {
    "basis": "none",
    "direction": "above",
    "remedial": {"absolute": "4"},
    "suspension": {"absolute": "6"},
}
LOWER = {
    "basis": "none",
    "direction": "below",
    "remedial": {"absolute": "10"},
    "suspension": {"absolute": "2"},
}
RATIO = {"basis": "ratio", "direction": "above", "suspension": {"percent": "80"}}
C_, R_, S_, I_ = "conforming", "remedial", "suspension", "indeterminate"

ROWS = {
    "more_than_the_baseline": (LOSS, ">160", "152", C_, None),
    "at_most_two_less": (LOSS, ">150", "152", C_, None),
    "at_most_the_allowance_less": (LOSS, ">146", "152", C_, None),
    "a_little_more_may_be_lost": (LOSS, ">145.9", "152", I_, "remedial"),
    "just_short_of_suspension": (LOSS, ">142", "152", I_, "remedial"),
    "both_levels_in_doubt": (LOSS, ">141.9", "152", I_, "suspension"),
    "surely_lost": (LOSS, "<142", "152", S_, "suspension"),
    "remedial_proven": (LOSS, "<145", "152", I_, "suspension"),
    "less_than_the_baseline": (LOSS, "<152", "152", I_, "suspension"),
    "either_below": (EITHER, "<142", "152", S_, "suspension"),
    "either_proven_remedial": (EITHER, ">158", "152", I_, "suspension"),
    "either_across": (EITHER, ">140", "152", I_, "suspension"),
    "upper_less": (UPPER, "<4", None, C_, None),
    "upper_less_above": (UPPER, "<4.1", None, I_, "remedial"),
    "upper_more": (UPPER, ">6", None, S_, "suspension"),
    "upper_more_than_little": (UPPER, ">1", None, I_, "suspension"),
    "lower_more": (LOWER, ">10", None, C_, None),
    "lower_more_than_less": (LOWER, ">9.9", None, I_, "remedial"),
    "lower_less": (LOWER, "<2", None, S_, "suspension"),
    "ratio_less": (RATIO, "<168", "210", C_, None),
    "ratio_more": (RATIO, ">168", "210", S_, "suspension"),
    "ratio_in_doubt": (RATIO, "<169", "210", I_, "suspension"),
}


def _judge(given, typed, reference, **more):
    qualifier, value = (typed[0], typed[1:]) if typed[0] in "<>" else ("=", typed)
    word = {"baseline": "baseline", "ratio": "reference"}.get(given["basis"])
    references = {word: reference} if word else {}
    return judge(from_json(given), value=value, kind="number", qualifier=qualifier, **references, **more)


@pytest.mark.parametrize(("given", "typed", "reference", "verdict", "level"), ROWS.values(), ids=ROWS)
def test_judge_takes_a_qualified_reading_as_a_half_line(given, typed, reference, verdict, level):
    judgement = _judge(given, typed, reference)
    assert (judgement.verdict, judgement.level) == (verdict, level)


@pytest.mark.parametrize("strict", [True, False])
@pytest.mark.parametrize(("typed", "verdict"), [(">146", C_), (">145.9", I_), ("<142", S_), ("<142.1", I_)])
def test_an_end_that_is_not_reached_is_judged_alike_when_strict_or_not(strict, typed, verdict):
    assert _judge(LOSS | {"strict": strict}, typed, "152").verdict == verdict


def test_doubt_at_suspension_says_that_the_remedial_level_is_proven():
    assert _judge(LOSS, "<145", "152").parameters["proven"] == "remedial"
    assert _judge(LOSS, "<152", "152").parameters["proven"] == "none"


def test_loss_that_may_hide_is_named_when_both_are_more_than():
    judgement = _judge(LOSS, ">160", "160", baseline_qualifier=">")
    assert (judgement.verdict, judgement.level, judgement.code) == (I_, "suspension", "hidden_loss")
    assert (judgement.parameters["value"], judgement.parameters["hidden"]) == ("160", "both")


def test_loss_against_a_bound_is_judged_only_when_it_is_proven():
    within, beyond = (_judge(LOSS, value, "160", baseline_qualifier=">") for value in ("158", "150"))
    assert (within.verdict, within.code, within.parameters["hidden"]) == (I_, "hidden_loss", "baseline")
    assert (beyond.verdict, beyond.parameters["reference_qualifier"]) == (S_, ">")


def test_gain_is_not_claimed_when_the_baseline_is_open():
    assert _judge(LOSS, "175", "160", baseline_qualifier=">").code == "hidden_loss"


@pytest.mark.parametrize(
    ("typed", "code"),
    [
        ("158", "within"),
        ("158.1", "better_than_expected"),
        (">158", "better_than_expected"),
        (">157.9", "within_open"),
        ("<200", "straddles"),
    ],
)
def test_gain_asks_for_the_settings_when_certainly_beyond_the_allowance(typed, code):
    assert _judge(LOSS, typed, "152").code == code


def test_no_change_at_all_is_within_reach_when_the_half_line_crosses_the_baseline():
    nothing = EITHER | {"remedial": {"absolute": "0"}, "suspension": None}
    assert _judge(nothing, ">150", "152").verdict == I_
    assert _judge(nothing | {"strict": False}, ">150", "152").verdict == R_


def test_gain_is_no_gain_when_either_direction_is_judged():
    assert _judge(EITHER, "159", "152").verdict == R_


@pytest.mark.parametrize(
    ("given", "verdict"),
    [
        (LOSS, S_),
        (LOWER, S_),
        (UPPER, S_),
        (LOSS | {"suspension": None}, R_),
        (EITHER, "not_assessable"),
    ],
)
def test_not_seen_is_worse_than_any_value_when_one_way_is_worse(given, verdict):
    judgement = judge(from_json(given), value=None, kind="number", qualifier="not_seen", baseline="152")
    assert judgement.verdict == verdict


def test_not_seen_needs_no_unit():
    judgement = judge(
        from_json(LOSS), value=None, kind="number", qualifier="not_seen", unit=None, criterion_unit="mm"
    )
    assert (judgement.verdict, judgement.code) == (S_, "not_seen")


def test_not_seen_stands_when_there_is_no_baseline():
    assert judge(from_json(LOSS), value=None, kind="number", qualifier="not_seen").verdict == S_


@pytest.mark.parametrize(
    ("given", "typed", "departure", "qualifier"),
    [
        (LOSS, ">150", "2", "<"),
        (LOSS, "<150", "2", ">"),
        (EITHER, "<150", "2", ">"),
        (EITHER, ">150", "0", ">"),
        (UPPER, "<3", "3", "<"),
    ],
)
def test_departure_says_which_way_it_is_open(given, typed, departure, qualifier):
    judgement = _judge(given, typed, "152")
    assert judgement.departure == D(departure)
    assert judgement.parameters["departure_qualifier"] == qualifier
