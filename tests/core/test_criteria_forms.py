"""The value a criterion is read to: its defaults, its one form for one meaning, and that nothing alters it."""

from __future__ import annotations

from dataclasses import FrozenInstanceError
from decimal import Decimal as D

import pytest

from qa_tracker.core.criteria import Band, Criterion, Limit, from_json
from qa_tracker.core.errors import Invalid

SPREAD = {"coverage": "95", "confidence": "95"}
ON_BASELINE = {"basis": "baseline", "direction": "either"}


def test_criterion_judges_the_value_itself_either_way_when_nothing_else_is_said():
    assert (Criterion().basis, Criterion().direction, Criterion().strict) == ("none", "either", True)


@pytest.mark.parametrize(
    ("value", "name"),
    [(Limit(D(1)), "absolute"), (Band(None, None, None, None), "start"), (Criterion(), "strict")],
    ids=["limit", "band", "criterion"],
)
def test_limits_are_never_altered_once_read(value, name):
    with pytest.raises(FrozenInstanceError):
        setattr(value, name, None)


@pytest.mark.parametrize("part", [{"absolute": "2"}, {"percent": "10"}], ids=["absolute", "percent"])
@pytest.mark.parametrize("governs", ["smaller", "either"])
def test_limit_of_one_part_has_one_form_whatever_is_said_to_govern(part, governs):
    plain = from_json(ON_BASELINE | {"remedial": part})
    assert from_json(ON_BASELINE | {"remedial": part | {"governs": governs}}) == plain


@pytest.mark.parametrize("percent", ["0", "0.5", "1"])
def test_small_percentages_are_taken_down_to_none(percent):
    limit = from_json(ON_BASELINE | {"remedial": {"percent": percent}}).remedial
    assert limit == Limit(percent=D(percent))


@pytest.mark.parametrize("key", ["coverage", "confidence"])
@pytest.mark.parametrize("share", ["0", "100", "-1"])
def test_share_outside_its_range_is_refused_under_its_own_key(key, share):
    with pytest.raises(Invalid) as refused:
        from_json(ON_BASELINE | {"remedial": SPREAD | {key: share}})
    assert (refused.value.code, refused.value.field) == (
        "criterion.own_spread_share",
        f"criterion.remedial.{key}",
    )


def test_shares_of_an_own_spread_limit_are_kept_apart():
    limit = from_json(ON_BASELINE | {"remedial": {"coverage": "90", "confidence": "99"}}).remedial
    assert limit == Limit(coverage=D(90), confidence=D(99))


TOLD = {
    "unknown key": (
        {"basis": "none", "direction": "above", "beyond": "1"},
        {
            "key": "beyond",
            "known": "banded_by, bands, basis, direction, grades, remedial, strict, suspension",
        },
    ),
    "unknown word": (
        {"basis": "none", "direction": "sideways"},
        {"word": "sideways", "known": "either, above, below"},
    ),
    "strict as text": (
        {"basis": "none", "direction": "above", "strict": "no"},
        {"word": "no", "known": "true, false"},
    ),
    "spread beside others": (
        ON_BASELINE | {"remedial": SPREAD | {"percent": "2", "absolute": "1"}},
        {"keys": "absolute, percent"},
    ),
    "grades beside limits": (
        {"grades": {"red": "suspension"}, "strict": True, "basis": "none"},
        {"keys": "basis, strict"},
    ),
    "overlapping bands": (
        {
            "basis": "none",
            "direction": "above",
            "banded_by": "test_frequency_mhz",
            "bands": [
                {"from": "5", "remedial": {"absolute": "3"}},
                {"from": "1", "below": "6", "remedial": {"absolute": "7"}},
            ],
        },
        {"start": "1", "below": "6", "other_start": "5", "other_below": ""},
    ),
}


@pytest.mark.parametrize(("given", "told"), TOLD.values(), ids=TOLD)
def test_refusal_tells_what_was_met_and_what_is_known(given, told):
    with pytest.raises(Invalid) as refused:
        from_json(given)
    assert refused.value.parameters == told


def test_band_open_below_comes_before_one_that_starts_below_zero():
    bands = [{"from": "-3", "remedial": {"absolute": "1"}}, {"below": "-3", "remedial": {"absolute": "2"}}]
    given = {"basis": "none", "direction": "above", "banded_by": "offset", "bands": bands}
    assert [band.start for band in from_json(given).bands] == [None, D(-3)]
