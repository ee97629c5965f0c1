"""Uncertainties from repeats, converted and combined: exact where they can be kept, else never rounded down."""

from __future__ import annotations

import random
from decimal import Decimal
from fractions import Fraction

import pytest
from reference_rows import entries, rows

from qa_tracker.core.decimals import parse, plain
from qa_tracker.core.errors import Invalid
from qa_tracker.core.uncertainty import (
    combined,
    expanded_from_standard,
    from_repeats,
    root_rounded_up,
    rounded_up,
    standard_from_expanded,
)


@pytest.mark.parametrize(("count", "t"), [(2, 12.71), (5, 2.78), (10, 2.26)])
def test_student_factor_of_repeats_is_the_tabled_one(count, t):
    # JCGM 100:2008, Table G.2, for 95 %
    values = [Decimal(number % 2) for number in range(count)]
    assert from_repeats(values).student_t == pytest.approx(t, abs=5e-3)


def test_interval_of_a_mean_is_the_published_one():
    # NIST/SEMATECH e-Handbook, 1.3.5.2 and 1.4.2.8: heat flow meter, 195 readings
    given = entries("statistics.json")["DRIFT-02"]
    expected, near = given["expected"], given["tolerance"]
    found = from_repeats([Decimal(row["calibration_factor"]) for row in rows(given["file"])])
    ends = [float(found.mean - found.expanded_of_mean), float(found.mean + found.expanded_of_mean)]
    assert found.student_t == pytest.approx(expected["t_crit"], abs=near["t_crit"])
    assert ends == pytest.approx(expected["ci95"], abs=near["ci95"])


def test_uncertainty_of_repeats_is_that_of_one_reading_and_of_the_mean():
    found = from_repeats([Decimal(text) for text in ("146.0", "146.5", "145.5", "146.0")])
    assert found.mean == 146
    assert found.standard_of_one == Decimal("0.4083")
    assert found.standard_of_mean == Decimal("0.2042")
    assert found.expanded_of_one == Decimal("1.3")


def test_uncertainty_of_equal_repeats_is_nothing():
    found = from_repeats([Decimal("0.1")] * 3)
    assert (found.standard_of_one, found.expanded_of_mean) == (0, 0)


KEPT = {
    "1.2345": "1.2345",
    "123456": "123456",
    "1/3": "0.3334",
    "200000/3": "66670",
    "123412341234.12345": "123500000000",
    "1/3000000000000": "0.000000000001",
    "0": "0",
}


@pytest.mark.parametrize("value", KEPT)
def test_value_is_exact_where_it_can_be_kept_and_else_rounded_up(value):
    assert plain(rounded_up(Fraction(value))) == KEPT[value]


ROOTS = {
    "25/4": "2.5",
    "1/4000000000000": "0.0000005",
    "2": "1.415",
    "2/1000000": "0.001415",
    "20000000000": "141500",
}


@pytest.mark.parametrize("square", ROOTS)
def test_root_is_exact_where_it_can_be_kept_and_else_rounded_up(square):
    assert plain(root_rounded_up(Fraction(square))) == ROOTS[square]


def test_nothing_is_rounded_down_and_all_can_be_read_again():
    chance = random.Random(3)
    for _ in range(500):
        value = Fraction(chance.randrange(1, 10**9), chance.randrange(1, 10**6))
        kept, root = rounded_up(value), root_rounded_up(value)
        assert value <= Fraction(kept) <= value * Fraction("1.001")
        assert value <= Fraction(root) ** 2 <= value * Fraction("1.0021")
        assert parse(plain(kept)).decimal == kept


def test_components_combine_exactly_when_the_root_ends():
    assert str(combined(Decimal("0.05"), Decimal("0.12"))) == "0.13"
    assert combined() == 0


def test_coverage_factor_leads_there_and_back():
    assert expanded_from_standard(standard_from_expanded(Decimal("3"), Decimal("2"))) == 3
    assert standard_from_expanded(Decimal("1"), Decimal("3")) == Decimal("0.3334")
    assert str(expanded_from_standard(Decimal("1.2340000001"), Decimal(1))) == "1.2340000001"


REFUSED = {
    "one repeat": (lambda: from_repeats([Decimal(1)]), "uncertainty.too_few_repeats"),
    "full confidence": (lambda: from_repeats([Decimal(1)] * 2, Decimal(100)), "uncertainty.confidence"),
    "a repeat that is no number": (lambda: from_repeats([Decimal("NaN")] * 2), "number.not_finite"),
    "a factor of nothing": (
        lambda: standard_from_expanded(Decimal(1), Decimal(0)),
        "uncertainty.not_positive",
    ),
    "a factor below zero": (
        lambda: expanded_from_standard(Decimal(1), Decimal(-2)),
        "uncertainty.not_positive",
    ),
    "an uncertainty below zero": (lambda: expanded_from_standard(Decimal(-1)), "uncertainty.negative"),
    "a component below zero": (lambda: combined(Decimal(3), Decimal(-4)), "uncertainty.negative"),
    "a component without end": (lambda: combined(Decimal("Infinity")), "number.not_finite"),
}


@pytest.mark.parametrize("name", REFUSED)
def test_uncertainty_is_refused(name):
    ask, code = REFUSED[name]
    with pytest.raises(Invalid) as refused:
        ask()
    assert refused.value.code == code
