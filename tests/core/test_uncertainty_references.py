"""Uncertainty, decision rules and risks against published examples."""

from __future__ import annotations

import csv
import math
from decimal import Decimal
from fractions import Fraction
from pathlib import Path

import pytest
from scipy.special import ndtri

from qa_tracker.core.conformity import judge
from qa_tracker.core.criteria import from_json
from qa_tracker.core.errors import Invalid
from qa_tracker.core.stated_uncertainty import expanded
from qa_tracker.core.uncertainty import (
    combined,
    expanded_from_standard,
    from_repeats,
    global_risk,
    rounded_up,
    specific_risk,
    standard_from_expanded,
    uncertainty_ratio,
)

FOLDER = Path(__file__).parents[2] / "fixtures" / "reference"


def rows(name):
    lines = (FOLDER / name).read_text("utf-8").splitlines()
    return list(csv.DictReader(line for line in lines if not line.startswith("#")))


def test_components_combine_as_in_the_gum():
    # JCGM 100:2008, H.1.3.2: u(d) from 5.8, 3.9 and 6.7 nm is 9.7 nm
    assert float(combined(Decimal("5.8"), Decimal("3.9"), Decimal("6.7"))) == pytest.approx(9.7, abs=0.05)


def test_specific_risk_at_the_acceptance_limit_is_that_of_the_guard_band():
    # ILAC-G8:09/2019, Table 1: w = r U; exact tails recomputed
    for row in rows("guard_band_multiples.csv"):
        found = specific_risk(-math.inf, 1.0, 1.0 - float(row["r"]) * 0.2, 0.1)
        assert found == pytest.approx(float(row["exact_tail"]), rel=1e-6)


def test_specific_risk_agrees_with_jcgm_106():
    # JCGM 106:2012, 7.4, from memory: p = 0.66 for a kinematic viscosity of 13.6 +- 1.8 mm2/s
    assert 1 - specific_risk(12.5, 16.3, 13.6, 1.8) == pytest.approx(0.66263, abs=5e-7)


RESISTORS = {
    # JCGM 106:2012, 9.5, setting from memory; risks by quadrature
    (1499.8, 1500.2): (0.0189422, 0.0372078),
    (1499.82, 1500.18): (0.0098783, 0.0690265),
    (1499.72, 1500.28): (0.0694046, 0.0006806),
}


@pytest.mark.parametrize("acceptance", RESISTORS)
def test_global_risk_agrees_with_the_resistors(acceptance):
    found = global_risk((1499.8, 1500.2), acceptance, (1500.0, 0.12), 0.04)
    assert (found.consumer, found.producer) == pytest.approx(RESISTORS[acceptance], abs=1e-6)


def test_global_risk_agrees_with_rp_19():
    # NCSLI RP-19 (draft), table: TUR 4, tolerance +-1, prior spread from the in-tolerance probability
    for row in rows("ncsli_rp19_risk.csv"):
        spread = 1 / float(ndtri((1 + float(row["in_tolerance_probability"])) / 2))
        found = global_risk((-1.0, 1.0), (-1.0, 1.0), (0.0, spread), spread / 4)
        assert 100 * found.consumer == pytest.approx(float(row["UFAR_percent"]), abs=3e-5)


@pytest.mark.parametrize(
    ("ratio", "factor", "consumer", "producer"), [(4, 1.0, 0.008, 0.015), (2, 0.91, 0.008, 0.066)]
)
def test_global_risk_agrees_with_deaver(ratio, factor, consumer, producer):
    # D. Deaver, How to maintain confidence in a world of declining test uncertainty ratios, pp. 7 and 10
    found = global_risk((-2.0, 2.0), (-2.0 * factor, 2.0 * factor), (0.0, 1.0), 1 / ratio)
    assert found.consumer == pytest.approx(consumer, abs=5e-4)
    assert found.producer == pytest.approx(producer, abs=1e-3)


# ILAC-G8:09/2019, 4.2: limits +-0.003, U = 0.001; the source's words beside our verdicts.
DEVIATIONS = ("0.0017", "0.0025", "0.0032", "0.0045", "0.002", "0.003")
DECISIONS = {
    "simple": ("conforming", "conforming", "remedial", "remedial", "conforming", "conforming"),
    "guarded": ("conforming", "remedial", "remedial", "remedial", "conforming", "remedial"),
    "zones": ("conforming", "indeterminate", "indeterminate", "remedial", "conforming", "indeterminate"),
}


@pytest.mark.parametrize("rule", DECISIONS)
def test_decisions_agree_with_ilac_g8(rule):
    limit = from_json({"basis": "nominal", "direction": "either", "remedial": {"absolute": "0.003"}})
    found = [
        judge(limit, value=text, kind="number", nominal="0", uncertainty="0.001", rule=rule).verdict
        for text in DEVIATIONS
    ]
    assert tuple(found) == DECISIONS[rule]


def test_ratio_is_the_span_over_twice_the_expanded_uncertainty():
    assert uncertainty_ratio(12.5, 16.3, 3.6) == pytest.approx(0.52778, abs=5e-6)
    with pytest.raises(Invalid):
        uncertainty_ratio(0.0, 1.0, 0.0)


def test_student_factor_of_repeats_is_the_tabled_one():
    # JCGM 100:2008, Table G.2: t for 95 % is 12.71 (1 degree of freedom), 2.78 (4), 2.26 (9)
    for count, t in ((2, 12.71), (5, 2.78), (10, 2.26)):
        values = [Decimal(number % 2) for number in range(count)]
        assert from_repeats(values).student_t == pytest.approx(t, abs=5e-3)


def test_uncertainty_of_repeats_is_that_of_one_reading_and_of_the_mean():
    found = from_repeats([Decimal(text) for text in ("146.0", "146.5", "145.5", "146.0")])
    assert found.mean == 146
    assert found.standard_of_one == Decimal("0.4083")
    assert found.standard_of_mean == Decimal("0.2042")
    assert found.expanded_of_one == Decimal("1.3")
    with pytest.raises(Invalid):
        from_repeats([Decimal(1)])


@pytest.mark.parametrize(
    ("value", "text"), [("1.2345", "1.235"), ("0.00012341", "0.0001235"), ("123456", "123456"), ("0", "0")]
)
def test_uncertainty_is_never_rounded_down(value, text):
    assert str(rounded_up(Fraction(value))) == text


def test_coverage_factor_leads_there_and_back():
    assert expanded_from_standard(standard_from_expanded(Decimal("3"), Decimal("2"))) == 3
    assert standard_from_expanded(Decimal("1"), Decimal("3")) == Decimal("0.3334")
    with pytest.raises(Invalid):
        standard_from_expanded(Decimal("1"), Decimal("0"))


STATED = {
    "standard": (("standard", "1.5", "", ()), "3"),
    "expanded, k = 2": (("expanded", "3.00", "2", ()), "3.00"),
    "expanded, k = 3": (("expanded", "3", "3", ()), "2"),
    "expanded, k = 1.96": (("expanded", "1", "1.96", ()), "1.021"),
    "kept from repeats": (("repeats", "1.3", "", ()), "1.3"),
    "of the check's own repeats": (("repeats_of_check", "", "", (Decimal(1), Decimal(2))), "8.985"),
    "of one reading only": (("repeats_of_check", "", "", (Decimal(1),)), ""),
}


@pytest.mark.parametrize("name", STATED)
def test_expanded_uncertainty_is_brought_to_two_standard_ones(name):
    arguments, text = STATED[name]
    assert expanded(*arguments) == text
