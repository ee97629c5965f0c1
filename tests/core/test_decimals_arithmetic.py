"""Rounding, plain text and the two questions asked about an unlikely value."""

from __future__ import annotations

import decimal
from decimal import Decimal as D
from fractions import Fraction

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from qa_tracker.core.decimals import (
    far_outside,
    from_scaled,
    is_multiple,
    near_factor_ten,
    places_of,
    plain,
    round_half_even,
    scaled_at,
)
from qa_tracker.core.errors import Invalid

HALVES = {
    "tie_down": ("0.25", "0.1", "0.2"),
    "tie_up": ("0.35", "0.1", "0.4"),
    "tie_negative": ("-0.25", "0.1", "-0.2"),
    "just_over_a_tie": ("0.2500001", "0.1", "0.3"),
    "step_of_a_half": ("1.74", "0.5", "1.5"),
    "step_of_a_half_tie": ("1.75", "0.5", "2.0"),
    "whole": ("2.5", "1", "2"),
    "step_of_two_and_a_half": ("6.3", "2.5", "7.5"),
    "to_zero": ("-0.04", "0.1", "0.0"),
}


@pytest.mark.parametrize(("value", "step", "expected"), HALVES.values(), ids=HALVES)
def test_round_half_even_goes_to_the_even_multiple_when_tied(value, step, expected):
    assert plain(round_half_even(D(value), D(step))) == expected


@pytest.mark.parametrize("value", ["NaN", "Infinity", "-Infinity"])
def test_round_half_even_refuses_when_not_finite(value):
    with pytest.raises(Invalid, match=r"number\.not_finite"):
        round_half_even(D(value), D("0.1"))


@pytest.mark.parametrize("step", ["0", "-0.1", "NaN", "Infinity"])
def test_steps_are_refused_when_not_above_zero(step):
    for question in (is_multiple, round_half_even):
        with pytest.raises(Invalid, match=r"number\.step"):
            question(D("1"), D(step))


@settings(max_examples=200)
@given(st.integers(-(10**15), 10**15), st.integers(0, 12))
def test_from_scaled_returns_when_scaled_again(scaled, places):
    assert scaled_at(from_scaled(scaled, places), places) == scaled
    assert Fraction(from_scaled(scaled, places)) == Fraction(scaled, 10**places)


def test_exact_helpers_ignore_a_narrow_decimal_context():
    with decimal.localcontext(decimal.Context(prec=3)):
        assert scaled_at(from_scaled(123456789, 4), 6) == 12345678900
        assert plain(round_half_even(D("12345.678"), D("0.01"))) == "12345.68"


@pytest.mark.parametrize(
    ("value", "strip", "text"),
    [
        ("1E+2", False, "100"),
        ("1.500", False, "1.500"),
        ("1.500", True, "1.5"),
        ("-0.00", True, "0"),
        ("100", True, "100"),
    ],
)
def test_plain_writes_no_exponent(value, strip, text):
    assert plain(D(value), strip=strip) == text


@pytest.mark.parametrize(
    ("value", "code"), [("1E+1000000", "number.out_of_range"), ("1E-1000", "number.too_many_places")]
)
def test_scaled_at_refuses_when_the_exponent_is_hostile(value, code):
    with pytest.raises(Invalid) as refusal:
        scaled_at(D(value), 2000)
    assert refusal.value.code == code


def test_places_of_counts_typed_places():
    assert [places_of(D(text)) for text in ("1", "1.50", "1E+3")] == [0, 2, 0]


@pytest.mark.parametrize(
    ("value", "last", "asks"),
    [
        ("15.2", "152", True),
        ("1520", "152", True),
        ("1291", "152", False),
        ("1292", "152", True),
        ("1748", "152", True),
        ("1749", "152", False),
        ("-15.2", "152", False),
        ("146", "152", False),
        ("0", "152", False),
        ("15", "0", False),
    ],
)
def test_near_factor_ten_asks_within_fifteen_percent_of_the_factor(value, last, asks):
    assert near_factor_ten(D(value), D(last)) is asks


@pytest.mark.parametrize(
    ("value", "low", "high", "asks"),
    [
        ("119", "140", "148", False),  # 21 below; 15 % of 148 is 22.2
        ("117.8", "140", "148", False),
        ("117.7", "140", "148", True),
        ("30", "0", "10", True),
        ("20", "0", "10", False),
        ("-0.1", "0", "10", True),
        ("-600", "0", "5000", True),
        ("-0.1", "-1", "10", False),
        ("-12", "-1", "10", False),
        ("-12.1", "-1", "10", True),
        ("0", "0", "0", False),
    ],
)
def test_far_outside_asks_beyond_one_width_of_the_band(value, low, high, asks):
    assert far_outside(D(value), D(low), D(high)) is asks
