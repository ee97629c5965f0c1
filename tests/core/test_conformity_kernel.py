"""The kernel over many rows: the same answers as one by one, in 64 bits or without bound."""

from __future__ import annotations

import doctest
from decimal import Decimal as D

import numpy as np
import pytest

from qa_tracker.core import verdict_groups
from qa_tracker.core.conformity import judge, severity
from qa_tracker.core.criteria import Criterion, Limit
from qa_tracker.core.decimals import from_scaled
from qa_tracker.core.errors import Invalid
from qa_tracker.core.verdict_groups import BLOCK, verdict_codes_by_criterion
from qa_tracker.core.verdict_kernel import (
    CHUNK,
    LARGEST,
    Columns,
    column,
    fits_in_64_bits,
    verdict_codes,
)

CRITERIA = (
    Criterion("nominal", "either", True, Limit(D("1.5"), D("1.5")), Limit(D("2"), D("2"))),
    Criterion("baseline", "below", True, Limit(D("6")), Limit(D("10"))),
    Criterion("baseline", "either", True, Limit(D("2"), D("10"), "either")),
    Criterion("none", "above", False, Limit(D("2")), Limit(D("4"))),
    Criterion("none", "below", True, Limit(D("10")), Limit(D("2"))),
    Criterion("ratio", "above", True, None, Limit(None, D("80"))),
)
MARKS = {-1: "<", 0: "=", 1: ">"}


def _rows(count, seed=7):
    random = np.random.default_rng(seed)
    return random.integers(0, len(CRITERIA), count), Columns(
        values=random.integers(-300, 300, count),
        references=random.integers(-100, 200, count),
        places=1,
        qualifiers=random.choice(np.array([-1, 0, 0, 0, 1], np.int8), count),
        uncertainties=random.integers(-1, 8, count),
    )


def _one(index, columns, row, rule):
    criterion, uncertainty = CRITERIA[index[row]], int(columns.uncertainties[row])
    reference = from_scaled(int(columns.references[row]), 1)
    return judge(
        criterion,
        value=from_scaled(int(columns.values[row]), 1),
        kind="number",
        qualifier=MARKS[int(columns.qualifiers[row])],
        nominal=reference,
        baseline=reference,
        reference=reference,
        uncertainty=None if uncertainty < 0 else from_scaled(uncertainty, 1),
        rule=rule,
    )


@pytest.mark.parametrize("rule", ["simple", "guarded", "zones"])
def test_kernel_agrees_with_one_by_one(rule):
    index, columns = _rows(400)
    together = verdict_codes_by_criterion(CRITERIA, index, columns, rule)
    alone = [severity(_one(index, columns, row, rule)) for row in range(400)]
    assert together.tolist() == alone
    assert set(alone) == set(range(6))


def test_kernel_agrees_with_itself_without_bound():
    index, columns = _rows(3000)
    unbounded = Columns(
        columns.values.astype(object),
        columns.references.astype(object),
        1,
        columns.qualifiers,
        columns.uncertainties.astype(object),
    )
    narrow, wide = (
        verdict_codes_by_criterion(CRITERIA, index, rows, "zones") for rows in (columns, unbounded)
    )
    assert narrow.dtype == wide.dtype == np.uint8
    assert np.array_equal(narrow, wide)


@pytest.mark.parametrize(
    ("value", "percent", "fits"),
    [(LARGEST, "1", True), (LARGEST + 1, "1", False), (10**15, "1.000", True), (10**15, "1.0001", False)],
)
def test_kernel_leaves_64_bits_when_they_might_not_do(value, percent, fits):
    criterion = Criterion("nominal", "either", True, Limit(None, D(percent)))
    columns = Columns(np.array([value]), np.array([min(value, 10**15)]), 0)
    assert fits_in_64_bits(criterion, columns) is fits


def test_kernel_is_exact_where_64_bits_would_wrap():
    # 10**15 * 100.1 % in units of 1e-4 would be 1.001e20; the limit is met exactly and then passed by one.
    criterion = Criterion("nominal", "above", True, Limit(None, D("100.1000")))
    reference = 10**15
    values = np.array([2 * reference + reference // 1000, 2 * reference + reference // 1000 + 1])
    codes = verdict_codes(criterion, Columns(values, np.full(2, reference), 0))
    assert codes.tolist() == [0, 3]


@pytest.mark.parametrize(("governs", "bound"), [("smaller", 1), ("either", 1), ("larger", 2)])
def test_kernel_keeps_the_part_that_governs_when_the_share_lies_between_two_steps(governs, bound):
    # 1 against 10 % of 15 = 1.5, in whole steps: the limit itself fails at 1, or first at 2.
    criterion = Criterion("nominal", "above", False, Limit(D("1"), D("10"), governs))
    codes = verdict_codes(criterion, Columns(np.arange(15, 19), np.full(4, 15), 0))
    assert codes.tolist() == [3 if step >= bound else 0 for step in range(4)]


@pytest.mark.parametrize(
    ("limit", "value", "reference", "code"),
    [
        (Limit(None, D("0")), 2**58, 1, 3),
        (Limit(D("1"), D("0")), 2**58, 1, 3),
        (Limit(D("1"), D(10**20)), 2, 0, 3),
        (Limit(D("1"), D("0.000000000000000001")), 0, 0, 0),
    ],
    ids=["nothing allowed", "the larger of one and nothing", "a huge share of zero", "a fine share of zero"],
)
def test_kernel_is_exact_when_a_zero_hides_how_large_a_product_grows(limit, value, reference, code):
    criterion = Criterion("baseline", "above", True, limit)
    columns = Columns(np.array([value]), np.array([reference]), 0)
    assert verdict_codes(criterion, columns).tolist() == [code]


def test_kernel_is_exact_beyond_64_bits():
    criterion = Criterion("none", "above", True, Limit(D(10**25)))
    assert verdict_codes(criterion, Columns(column(10**25, 10**25 + 1), column(0, 0), 0)).tolist() == [0, 3]


def test_kernel_marks_rows_that_lack_something_not_assessable():
    loss, ratio = CRITERIA[1], CRITERIA[5]
    kept = Columns(np.array([0, 0]), np.array([1, 1]), 0, assessable=np.array([True, False]))
    assert verdict_codes(loss, kept).tolist() == [0, 2]
    assert verdict_codes(ratio, Columns(np.array([5, 5, 5]), np.array([10, 0, -3]), 0)).tolist() == [0, 2, 2]


@pytest.mark.parametrize("times", [1, 20], ids=["together", "scattered"])
def test_kernel_marks_rows_outside_every_band_not_assessable(times):
    columns = Columns(np.array([0, 90] * times), np.array([100, 100] * times), 0)
    codes = verdict_codes_by_criterion(CRITERIA, np.array([-1, 1] * times), columns)
    assert codes.tolist() == [2, 3] * times


@pytest.mark.parametrize("together", [True, False], ids=["together", "scattered"])
def test_kernel_keeps_the_order_of_rows_across_chunks(together):
    count = BLOCK + 2 * CHUNK + 5
    index = np.arange(count) * 2 // count * 3 if together else np.arange(count) % 2 * 3
    values = np.where(np.arange(count) % 5 == 0, 90, 0)
    columns = Columns(values, np.zeros(count, np.int64), 1)
    codes = verdict_codes_by_criterion(CRITERIA, index, columns)
    assert np.array_equal(codes, np.where(values == 90, 5, 0))


def test_kernel_gives_nothing_when_there_are_no_rows():
    empty = np.array([], np.int64)
    assert verdict_codes(CRITERIA[0], Columns(empty, empty, 1)).tolist() == []
    assert verdict_codes_by_criterion(CRITERIA, empty, Columns(empty, empty, 1)).tolist() == []


@pytest.mark.parametrize("kind", [np.int32, np.float64, np.uint64])
def test_kernel_refuses_numbers_of_another_kind(kind):
    with pytest.raises(Invalid, match=r"kernel\.numbers"):
        verdict_codes(CRITERIA[1], Columns(np.array([1], kind), np.array([1]), 0))


def test_kernel_refuses_a_criterion_without_level():
    one = Columns(np.array([1]), np.array([1]), 0)
    with pytest.raises(Invalid, match=r"kernel\.no_level"):
        verdict_codes(Criterion(grades=(("red", "suspension"),)), one)


@pytest.mark.parametrize("index", [[6], [-2], [0, 6] * 20, [0, -2] * 20])
def test_kernel_refuses_an_index_that_names_no_criterion(index):
    many = Columns(np.ones(len(index), np.int64), np.ones(len(index), np.int64), 1)
    with pytest.raises(Invalid, match=r"kernel\.index"):
        verdict_codes_by_criterion(CRITERIA, np.array(index), many)


def test_kernel_refuses_a_limit_finer_than_its_columns():
    with pytest.raises(Invalid, match=r"number\.loss"):
        verdict_codes(CRITERIA[0], Columns(np.array([1]), np.array([1]), 0))


def test_example_of_many_criteria_gives_what_it_says():
    assert doctest.testmod(verdict_groups) == (0, 6)
