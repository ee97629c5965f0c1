"""Readings judged in bulk from what was kept have the verdicts that judging each of them gives."""

from __future__ import annotations

from decimal import Decimal

import pytest
from hypothesis import given, settings
from hypothesis import strategies as some

from qa_tracker.core import conformity
from qa_tracker.core.criteria import from_json
from qa_tracker.core.decimals import from_scaled
from qa_tracker.core.judged_again import Kept, verdict_ranks, whole
from qa_tracker.core.own_spread import OwnSpread

BOTH = {"remedial": {"absolute": "1.5", "percent": "1.5"}, "suspension": {"absolute": "2", "percent": "2"}}
CRITERIA = [
    {"basis": "nominal", "direction": "either", **BOTH},
    {"basis": "baseline", "direction": "below", "remedial": {"absolute": "6"}, "suspension": {"absolute": "10"}},
    {"basis": "baseline", "direction": "either", "remedial": {"absolute": "2", "percent": "10", "governs": "either"}},
    {"basis": "baseline", "direction": "either", "remedial": {"coverage": "95", "confidence": "95"}},
    {"basis": "none", "direction": "above", "strict": False, "remedial": {"absolute": "4.25"}},
    {"basis": "none", "direction": "below", "suspension": {"absolute": "3"}},
    {"basis": "ratio", "direction": "above", "suspension": {"percent": "80"}},
    {
        "basis": "none", "direction": "above", "banded_by": "test_frequency_mhz",
        "bands": [{"below": "3", "remedial": {"absolute": "7"}}, {"from": "4", "remedial": {"absolute": "3"}}],
    },
    {"grades": {"green": "conforming", "amber": "remedial", "red": "suspension"}},
]  # fmt: skip
numbers = some.tuples(some.integers(-30, 200), some.integers(0, 2))
spreads = some.builds(
    OwnSpread,
    some.sampled_from([0, 9, 10, 20]),
    some.sampled_from([None, Decimal("0.4")]),
    some.just(Decimal("0.5")),
)
readings = some.builds(
    Kept,
    kind=some.sampled_from(["number", "count", "grade", "text"]),
    qualifier=some.sampled_from(["=", "=", ">", "<", "not_seen"]),
    word=some.sampled_from(["green", "amber", "red", "blue", ""]),
    value=some.none() | numbers,
    baseline=some.none() | numbers,
    baseline_qualifier=some.sampled_from(["=", ">", "<", "not_seen"]),
    reference=some.none() | numbers,
    quantity=some.none() | some.decimals(0, 9, places=1),
    uncertainty=some.none() | some.tuples(some.integers(0, 20), some.integers(0, 1)),
    rule=some.sampled_from(["simple", "guarded", "zones"]),
    spread=some.none() | spreads,
    never_below_zero=some.booleans(),
    least_reference=some.none() | numbers,
)


def decimal(number):
    return None if number is None else from_scaled(*number)


def one_by_one(criterion, row):
    numeric = row.kind in conformity.NUMBER_KINDS
    return conformity.judge(
        criterion,
        value=decimal(row.value) if numeric else (row.word or None),
        kind=row.kind,
        qualifier=row.qualifier,
        nominal=decimal(row.reference),
        reference=decimal(row.reference),
        baseline=decimal(row.baseline),
        baseline_qualifier=row.baseline_qualifier,
        quantity=row.quantity,
        uncertainty=decimal(row.uncertainty),
        rule=row.rule,
        spread=row.spread,
        never_below_zero=row.never_below_zero,
        least_reference=decimal(row.least_reference),
    )


@pytest.mark.parametrize("written", CRITERIA, ids=lambda each: each.get("basis", "grades"))
@settings(max_examples=40)
@given(rows=some.lists(readings, max_size=12))
def test_verdicts_in_bulk_are_those_of_judging_each(written, rows):
    criterion = from_json(written)
    wanted = [conformity.severity(one_by_one(criterion, row)) for row in rows]
    assert verdict_ranks(criterion, rows).tolist() == wanted


def test_numbers_too_large_for_the_processor_are_still_exact():
    criterion = from_json(CRITERIA[1])
    row = Kept("number", value=(10**15 - 7, 0), baseline=(10**15, 0), uncertainty=(1, 12))
    assert verdict_ranks(criterion, [row]).tolist() == [3]


@pytest.mark.parametrize(("text", "number"), [("", None), ("-0.30", (-30, 2)), ("145", (145, 0))])
def test_kept_number_is_read_exactly(text, number):
    assert whole(text) == number
