"""How much a limit allows, exactly."""

from __future__ import annotations

from decimal import Decimal as D
from fractions import Fraction

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from qa_tracker.core.allowances import allowance, share_of
from qa_tracker.core.criteria import Limit
from qa_tracker.core.decimals import from_scaled

NUMBERS = st.builds(from_scaled, st.integers(0, 10**15), st.integers(0, 12))

TABLE = {
    "absolute_only": (Limit(D("6")), "152", "6", "absolute"),
    "percent_only": (Limit(None, D("5")), "152", "7.6", "percent"),
    "percent_of_40": (Limit(None, D("1.5")), "40", "0.6", "percent"),
    "larger_absolute": (Limit(D("1.5"), D("1.5")), "80", "1.5", "absolute"),
    "larger_percent": (Limit(D("1.5"), D("1.5")), "120", "1.8", "percent"),
    "larger_equal": (Limit(D("1.5"), D("1.5")), "100", "1.5", "absolute"),
    "smaller_percent": (Limit(D("2"), D("10"), "smaller"), "12", "1.2", "percent"),
    "smaller_absolute": (Limit(D("2"), D("10"), "smaller"), "30", "2", "absolute"),
    "either_trips_first": (Limit(D("2"), D("10"), "either"), "12", "1.2", "percent"),
    "of_a_negative": (Limit(None, D("10")), "-60", "6", "percent"),
}


@pytest.mark.parametrize(("limit", "reference", "size", "governed_by"), TABLE.values(), ids=TABLE)
def test_allowance_takes_the_part_that_governs(limit, reference, size, governed_by):
    allowed = allowance(limit, D(reference))
    assert (allowed.size, allowed.governed_by) == (D(size), governed_by)


def test_allowance_is_the_limit_itself_when_nothing_is_referred_to():
    assert allowance(Limit(D("-5.4")), None).size == D("-5.4")


@settings(max_examples=200)
@given(NUMBERS, NUMBERS)
def test_share_of_is_exact_for_long_numbers(percent, reference):
    assert Fraction(share_of(percent, -reference)) == Fraction(percent) * Fraction(reference) / 100
