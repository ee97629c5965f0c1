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
