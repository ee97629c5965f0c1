"""The exact two-sided tolerance factor against tables, and against its own equation worked in another way."""

from __future__ import annotations

import math
from decimal import Decimal

import numpy as np
import pytest
from reference_rows import entries, rows
from scipy.special import chdtr, chdtrc, ndtr, ndtri

from qa_tracker.core.errors import Invalid
from qa_tracker.core.interval_factors import tolerance_factor

PUBLISHED = entries("statistics.json")
P95 = Decimal(95)


def factor(given):
    return tolerance_factor(given["n"], Decimal(given["coverage"]), Decimal(given["confidence"]))


def test_factor_agrees_with_odeh_and_owen():
    # Odeh and Owen 1980, Tables for Normal Tolerance Limits, Table 3.4.1
    given = PUBLISHED["TOL-02"]
    table = rows(given["file"])
    assert [float(row["k_published"]) for row in table] == given["expected"]["k"]
    for row in table:
        found = tolerance_factor(int(row["n"]), P95, P95)
        assert found == pytest.approx(float(row["k_published"]), abs=given["tolerance"]["k"])


# NIST/SEMATECH e-Handbook, 7.2.6.3: the exact factor, and what its script prints for having swapped two arguments.
@pytest.mark.parametrize("key", ["k2_exact", "k2_arguments_swapped"])
def test_factor_agrees_with_the_handbook(key):
    given = PUBLISHED["TOL-01"]
    found = factor(given["inputs"][key])
    assert found == pytest.approx(given["expected"][key], abs=given["tolerance"][key])


def test_factor_agrees_with_a_published_program():
    # R package EnvStats 3.1.0, man/tolIntNormK.Rd
    given, key = PUBLISHED["TOL-03"], "two_sided_exact_n20_95_95"
    assert factor(given["inputs"]) == pytest.approx(given["expected"][key], abs=given["tolerance"][key])


# Common practice, rounded, no source.
@pytest.mark.parametrize(("count", "expected"), [(3, 9.79), (5, 5.08), (10, 3.39), (20, 2.76)])
def test_factor_is_the_one_physicists_know(count, expected):
    assert tolerance_factor(count, P95, P95) == pytest.approx(expected, abs=5e-3)


def confidence_of(k, count, coverage, share=chdtrc):
    """The equation's left side, or with ``chdtr`` what it leaves: trapezia over the mean, widths by bisection."""
    means = np.linspace(0, 9, 1001)
    offsets = means / math.sqrt(count)
    low, high = np.zeros_like(offsets), offsets + 10
    for _ in range(60):
        middle = (low + high) / 2
        short = ndtr(offsets + middle) - ndtr(offsets - middle) < coverage
        low, high = np.where(short, middle, low), np.where(short, high, middle)
    inner = share(count - 1, (count - 1) * (low / k) ** 2) * np.exp(-(means**2) / 2)
    return float(np.trapezoid(inner, means)) * 2 / math.sqrt(2 * math.pi)


@pytest.mark.parametrize("count", [2, 10, 43, 1000])
@pytest.mark.parametrize("coverage", ["5", "50", "99.9"])
@pytest.mark.parametrize("confidence", ["5", "50", "99.9"])
def test_factor_solves_its_equation(count, coverage, confidence):
    k, held = tolerance_factor(count, Decimal(coverage), Decimal(confidence)), float(coverage) / 100
    assert confidence_of(k * (1 - 1e-6), count, held) < float(confidence) / 100
    assert confidence_of(k * (1 + 1e-6), count, held) > float(confidence) / 100


@pytest.mark.parametrize(("confidence", "share"), [("0.000000000001", chdtrc), ("99.999999999999", chdtr)])
def test_factor_solves_its_equation_when_hardly_anything_is_left(confidence, share):
    k = tolerance_factor(10, P95, Decimal(confidence))
    assert confidence_of(k, 10, 0.95, share) == pytest.approx(1e-14, rel=1e-6, abs=0)


@pytest.mark.parametrize("coverage", ["50", "95", "99.999999999999"])
def test_factor_nears_the_normal_quantile_when_set_ups_are_many(coverage):
    quantile = -float(ndtri(float(100 - Decimal(coverage)) / 200))
    found = tolerance_factor(10**12, Decimal(coverage), Decimal(50))
    assert found == pytest.approx(quantile, rel=1e-9, abs=0)


@pytest.mark.parametrize("count", [2, 10, 1000])
def test_factor_is_found_for_every_share_that_can_be_given(count):
    shares = [Decimal(text) for text in ("0.000000000001", "50", "99.999999999999")]
    grid = [[tolerance_factor(count, coverage, sure) for sure in shares] for coverage in shares]
    assert all(row[0] < row[1] < row[2] < math.inf for row in grid)
    assert all(0 < grid[0][at] < grid[1][at] < grid[2][at] for at in range(3))


REFUSED = {
    "one set-up": (1, "95", "baseline.too_few_setups"),
    "none of the population": (10, "0", "criterion.own_spread_share"),
    "all of the population": (10, "100", "criterion.own_spread_share"),
    "no number": (10, "NaN", "criterion.own_spread_share"),
    "what only seems less than all": (10, "99.99999999999999999", "number.too_many_places"),
}


@pytest.mark.parametrize("name", REFUSED)
def test_factor_is_refused(name):
    count, share, code = REFUSED[name]
    for shares in ((Decimal(share), P95), (P95, Decimal(share))):
        with pytest.raises(Invalid) as refused:
            tolerance_factor(count, *shares)
        assert refused.value.code == code
