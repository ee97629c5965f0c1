"""Decision rules with an uncertainty, and the probability of conformity."""

from __future__ import annotations

import math
from decimal import Decimal as D

import pytest

from qa_tracker.core.comparison import probability_within
from qa_tracker.core.conformity import judge
from qa_tracker.core.criteria import from_json

UPPER = {"basis": "none", "direction": "above", "remedial": {"absolute": "0.003"}}
AROUND = {"basis": "none", "direction": "either", "remedial": {"absolute": "0.003"}}
LOWER = {
    "basis": "none",
    "direction": "below",
    "remedial": {"absolute": "100"},
    "suspension": {"absolute": "50"},
}
TWO = {"basis": "none", "direction": "above", "remedial": {"absolute": "4"}, "suspension": {"absolute": "6"}}
C_, R_, S_, I_ = "conforming", "remedial", "suspension", "indeterminate"

# Deviations, limits and U of ILAC-G8:09/2019, 4.2, in the worked case +/- 0.003 with U = 0.001; values on a
# limit are accepted there. Our "zones" calls both grey zones indeterminate.
DEVIATIONS = {
    "0.0017": (C_, C_, C_),
    "0.0020": (C_, C_, C_),
    "0.0021": (C_, R_, I_),
    "0.0025": (C_, R_, I_),
    "0.0030": (C_, R_, I_),
    "0.0032": (R_, R_, I_),
    "0.0040": (R_, R_, I_),
    "0.0041": (R_, R_, R_),
    "0.0045": (R_, R_, R_),
}


@pytest.mark.parametrize("sign", ["", "-"])
@pytest.mark.parametrize(("value", "verdicts"), DEVIATIONS.items(), ids=DEVIATIONS)
def test_rules_agree_with_the_table_when_two_sided(value, verdicts, sign):
    criterion = from_json(AROUND)
    found = [
        judge(criterion, value=sign + value, kind="number", uncertainty="0.001", rule=rule).verdict
        for rule in ("simple", "guarded", "zones")
    ]
    assert tuple(found) == verdicts


@pytest.mark.parametrize(
    ("value", "verdict", "level"),
    [
        ("3", C_, None),
        ("3.1", I_, "remedial"),
        ("5", I_, "remedial"),
        ("5.1", I_, "suspension"),
        ("7", I_, "suspension"),
        ("7.1", S_, "suspension"),
    ],
)
def test_zones_give_the_worst_of_both_levels(value, verdict, level):
    judgement = judge(from_json(TWO), value=value, kind="number", uncertainty="1", rule="zones")
    assert (judgement.verdict, judgement.level) == (verdict, level)


def test_zones_say_that_remedial_is_proven_while_suspension_is_in_doubt():
    found = [
        judge(from_json(TWO), value=v, kind="number", uncertainty="1", rule="zones") for v in ("5.0", "5.1")
    ]
    narrow = judge(from_json(TWO), value="5.8", kind="number", uncertainty="0.5", rule="zones")
    assert [one.parameters["proven"] for one in (*found, narrow)] == ["none", "remedial", "remedial"]


@pytest.mark.parametrize(("value", "verdict"), [("101", C_), ("100.9", R_), ("51", R_), ("50.9", S_)])
def test_guarded_moves_a_lower_limit_upwards(value, verdict):
    judgement = judge(from_json(LOWER), value=value, kind="number", uncertainty="1", rule="guarded")
    assert judgement.verdict == verdict


@pytest.mark.parametrize(("value", "code"), [("3.5", "guard_band"), ("4.1", "beyond"), ("5.5", "guard_band")])
def test_guard_band_is_named_when_it_alone_decides(value, code):
    judgement = judge(from_json(TWO), value=value, kind="number", uncertainty="1", rule="guarded")
    assert judgement.code == code


def test_acceptance_is_the_allowance_less_the_uncertainty():
    upper, lower = (
        judge(from_json(given), value="1", kind="number", uncertainty="0.5", rule="guarded").parameters
        for given in (TWO, LOWER)
    )
    assert (upper["acceptance"], lower["acceptance"]) == ("3.5", "50.5")


@pytest.mark.parametrize("rule", ["guarded", "zones"])
@pytest.mark.parametrize(
    ("value", "verdict", "code"),
    [("1", "not_assessable", "no_uncertainty"), ("4.1", R_, "beyond"), ("6.1", S_, "beyond")],
)
def test_rules_clear_nothing_when_the_uncertainty_is_unknown(rule, value, verdict, code):
    judgement = judge(from_json(TWO), value=value, kind="number", rule=rule)
    assert (judgement.verdict, judgement.code) == (verdict, code)


PROBABILITIES = {
    # JCGM 106:2012, 7.2.2, from memory, recomputed: Phi(1.40)
    "one_limit": ((-math.inf, -5.4, -5.47, 0.05), 0.919243),
    # JCGM 106:2012, 7.4, from memory, recomputed
    "two_limits": ((12.5, 16.3, 13.6, 1.8), 0.66263),
    # w = U, one limit: 1 - Phi(-2); ILAC-G8:09/2019, Table 1 (< 2.5 %)
    "guarded_edge": ((-math.inf, 4.0, 3.0, 0.5), 0.97725),
    "on_the_limit": ((-math.inf, 4.0, 4.0, 0.5), 0.5),
    "no_uncertainty_inside": ((-1.0, 1.0, 1.0, 0.0), 1.0),
    "no_uncertainty_outside": ((-1.0, 1.0, 1.1, 0.0), 0.0),
}


@pytest.mark.parametrize(("arguments", "expected"), PROBABILITIES.values(), ids=PROBABILITIES)
def test_probability_within_agrees_with_published_examples(arguments, expected):
    assert probability_within(*arguments) == pytest.approx(expected, abs=1e-6)


@pytest.mark.parametrize(
    ("given", "arguments", "expected"),
    [
        (
            {"basis": "none", "direction": "above", "remedial": {"absolute": "-5.4"}},
            {"value": "-5.47", "uncertainty": "0.1"},
            "0.9192",
        ),
        (
            {"basis": "nominal", "direction": "either", "remedial": {"absolute": "1.9"}},
            {"value": "13.6", "nominal": "14.4", "uncertainty": "3.6"},
            "0.6626",
        ),
        (
            {"basis": "baseline", "direction": "below", "remedial": {"absolute": "6"}},
            {"value": "146", "baseline": "152", "uncertainty": "2"},
            "0.5000",
        ),
        (LOWER, {"value": "101", "uncertainty": "1"}, "0.9772"),
    ],
)
def test_judge_gives_the_probability_whenever_the_uncertainty_is_known(given, arguments, expected):
    assert f"{judge(from_json(given), kind='number', **arguments).probability:.4f}" == expected


@pytest.mark.parametrize(("strict", "expected"), [(True, 1.0), (False, 0.0)])
def test_probability_at_the_limit_is_that_of_the_verdict_when_nothing_is_uncertain(strict, expected):
    given = {"basis": "none", "direction": "above", "strict": strict, "remedial": {"absolute": "2"}}
    found = judge(from_json(given), value="2", kind="number", uncertainty="0")
    assert (found.verdict, found.probability) == (C_ if strict else R_, expected)


def test_probability_is_of_the_suspension_level_when_that_decided():
    tighter = {
        "basis": "nominal", "direction": "either", "remedial": {"absolute": "3"}, "suspension": {"percent": "1"},
    }  # fmt: skip
    found = judge(from_json(tighter), value="102", kind="number", nominal="100", uncertainty="1")
    assert (found.verdict, found.level) == ("suspension", "suspension")
    assert found.probability == pytest.approx(0.02275, abs=1e-5)


def test_probability_is_left_out_when_unknown_or_qualified():
    assert judge(from_json(TWO), value="1", kind="number").probability is None
    assert judge(from_json(TWO), value="1", kind="number", qualifier=">", uncertainty="1").probability is None


def test_uncertainty_of_a_finer_place_is_not_rounded():
    verdicts = [
        judge(from_json(UPPER), value="0.002", kind="number", uncertainty=D(u), rule="guarded").verdict
        for u in ("0.001", "0.0010000001")
    ]
    assert verdicts == [C_, R_]
