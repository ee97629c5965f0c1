"""What a judgement hands to its sentence."""

from __future__ import annotations

import pytest

from qa_tracker.core.conformity import judge
from qa_tracker.core.criteria import from_json
from qa_tracker.core.sentence_codes import REQUIRED, SentenceCode

LOSS = from_json(
    {
        "basis": "baseline",
        "direction": "below",
        "remedial": {"absolute": "6"},
        "suspension": {"absolute": "10"},
    }
)
DISTANCE = from_json(
    {"basis": "nominal", "direction": "either", "remedial": {"absolute": "1.5", "percent": "1.5"}}
)
RISE = from_json({"basis": "baseline", "direction": "above", "remedial": {"absolute": "2"}})
SHARE = from_json({"basis": "ratio", "direction": "above", "suspension": {"percent": "80"}})
TARGET = from_json({"basis": "nominal", "direction": "either", "remedial": {"percent": "5"}})
BANDED = from_json(
    {
        "basis": "none",
        "direction": "above",
        "bands": [{"from": "3", "below": "7", "remedial": {"absolute": "5"}}],
        "banded_by": "test_frequency_mhz",
    }
)
OWN = from_json(
    {"basis": "baseline", "direction": "either", "remedial": {"coverage": "95", "confidence": "95"}}
)
GRADES = from_json({"grades": {"green": "conforming", "red": "suspension"}})


def _case(criterion, value, kind="number", **more):
    return criterion, {"value": value, "kind": kind} | more


CASES = {
    SentenceCode.WITHIN: _case(LOSS, "146.0", baseline="152.0"),
    SentenceCode.WITHIN_OPEN: _case(LOSS, "160", qualifier=">", baseline="162"),
    SentenceCode.BETTER_THAN_EXPECTED: _case(LOSS, "158.1", baseline="152"),
    SentenceCode.HIDDEN_LOSS: _case(LOSS, "160", qualifier=">", baseline="160", baseline_qualifier=">"),
    SentenceCode.OPEN_BASELINE: _case(RISE, "4", baseline="3", baseline_qualifier="<"),
    SentenceCode.BEYOND: _case(LOSS, "145.4", baseline="152.0"),
    SentenceCode.GUARD_BAND: _case(LOSS, "147", baseline="152.0", rule="guarded", uncertainty="2"),
    SentenceCode.NOT_SEEN: _case(LOSS, None, qualifier="not_seen"),
    SentenceCode.STRADDLES: _case(LOSS, "150", qualifier="<", baseline="152"),
    SentenceCode.TOO_CLOSE: _case(LOSS, "147", baseline="152.0", rule="zones", uncertainty="2"),
    SentenceCode.GRADED: _case(GRADES, "red", "grade"),
    SentenceCode.NO_READING: _case(LOSS, None, baseline="152"),
    SentenceCode.NOT_FINITE: _case(LOSS, "inf", "derived", baseline="152"),
    SentenceCode.WRONG_UNIT: _case(LOSS, "15.2", baseline="152", unit="cm", criterion_unit="mm"),
    SentenceCode.NO_NOMINAL: _case(DISTANCE, "100"),
    SentenceCode.NO_BASELINE: _case(LOSS, "100", nominal="100"),
    SentenceCode.BASELINE_NOT_SEEN: _case(LOSS, "100", baseline_qualifier="not_seen"),
    SentenceCode.NO_REFERENCE: _case(SHARE, "62"),
    SentenceCode.ZERO_REFERENCE: _case(SHARE, "62", reference="0"),
    SentenceCode.SMALL_REFERENCE: _case(SHARE, "62", reference="9", least_reference="10"),
    SentenceCode.BELOW_ZERO: _case(LOSS, "-3", baseline="152", never_below_zero=True),
    SentenceCode.NO_BAND_QUANTITY: _case(BANDED, "4"),
    SentenceCode.OUTSIDE_BANDS: _case(BANDED, "4", quantity="7"),
    SentenceCode.NOT_SEEN_UNDECIDED: _case(DISTANCE, None, qualifier="not_seen", nominal="100"),
    SentenceCode.UNKNOWN_GRADE: _case(GRADES, "blue", "grade"),
    SentenceCode.KIND_NOT_JUDGED: _case(LOSS, "as usual", "text"),
    SentenceCode.NO_UNCERTAINTY: _case(LOSS, "147", baseline="152", rule="guarded"),
    SentenceCode.TOO_FEW_SETUPS: _case(OWN, "8.5", baseline="8.5"),
}
ELSEWHERE = {
    SentenceCode.EXPIRED_BASELINE,
    SentenceCode.OTHER_OBJECT,
    SentenceCode.OBJECT_NOT_NAMED,
    SentenceCode.ARRAY_KIND,
    SentenceCode.OTHER_MEDIUM,
    SentenceCode.OTHER_METHOD,
    SentenceCode.OTHER_CLASS,
    SentenceCode.NO_INPUT,
    SentenceCode.OPEN_INPUT,
    SentenceCode.LAYOUT_COMPENSATED,
}
"""Codes of readings that a limit may not judge, or that could not be worked out; tried beside those rules."""


def test_every_sentence_code_has_a_case_and_its_parameters():
    assert set(CASES) | ELSEWHERE == set(SentenceCode) == set(REQUIRED)


@pytest.mark.parametrize("code", CASES)
def test_judge_gives_the_code_and_what_its_sentence_needs(code):
    criterion, arguments = CASES[code]
    judgement = judge(criterion, **arguments)
    assert judgement.code == code
    assert REQUIRED[code] - judgement.parameters.keys() == set()
    assert all(isinstance(text, str) for text in judgement.parameters.values())


def test_loss_hands_over_the_figures_of_its_sentence():
    found = judge(
        LOSS, value="145.4", kind="number", baseline="152.0", unit="mm", criterion_unit="mm"
    ).parameters
    assert found == {
        "value": "145.4",
        "value_qualifier": "=",
        "unit": "mm",
        "basis": "baseline",
        "direction": "below",
        "strict": "yes",
        "reference": "152.0",
        "reference_qualifier": "=",
        "difference": "-6.6",
        "size": "6.6",
        "side": "less",
        "departure": "6.6",
        "departure_qualifier": "=",
        "level": "remedial",
        "allowance": "6",
        "absolute": "6",
        "governed_by": "absolute",
        "used": "110.0",
    }


def test_larger_of_two_hands_over_both_parts():
    found = judge(DISTANCE, value="101.7", kind="number", nominal="100").parameters
    parts = {
        "absolute": "1.5",
        "percent": "1.5",
        "percent_of": "100",
        "percent_value": "1.5",
        "governs": "larger",
    }
    assert found.items() >= (parts | {"allowance": "1.5", "size": "1.7", "side": "more"}).items()


def test_share_of_a_reference_is_written_without_needless_zeros():
    judgement = judge(TARGET, value="4,0", kind="number", nominal="4.00")
    assert (judgement.governed_by, judgement.parameters["allowance"]) == ("percent", "0.2")
    assert (judgement.parameters["side"], judgement.parameters["departure"]) == ("equal", "0.00")


def test_ratio_is_given_beside_the_value():
    found = judge(SHARE, value="176", kind="number", reference="210").parameters
    assert (found["ratio"], found["allowance"], found["percent_of"]) == ("83.8", "168", "210")


def test_band_is_named_when_one_held():
    found = judge(BANDED, value="5.5", kind="number", quantity="3.5").parameters
    keys = ("banded_by", "quantity", "band_start", "band_below")
    assert [found[key] for key in keys] == ["test_frequency_mhz", "3.5", "3", "7"]


@pytest.mark.parametrize(
    ("change", "code"),
    [
        ({"kind": "boolean"}, "reading.kind"),
        ({"qualifier": "~"}, "reading.qualifier"),
        ({"baseline_qualifier": ""}, "reading.qualifier"),
        ({"rule": "strict"}, "rule.unknown"),
        ({"uncertainty": "-1"}, "uncertainty.negative"),
        ({"value": "about 150"}, "number.not_a_number"),
        ({"baseline": "1e5"}, "number.exponent"),
    ],
)
def test_judge_refuses_when_asked_in_unknown_words(change, code):
    with pytest.raises(Exception) as refusal:
        judge(LOSS, **({"value": "150", "kind": "number", "baseline": "152"} | change))
    assert refusal.value.code == code
