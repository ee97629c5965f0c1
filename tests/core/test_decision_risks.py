"""Risks of deciding: held to a closed form, to their limits, and refused out of them."""

from __future__ import annotations

import math
from itertools import product

import pytest
from scipy.special import ndtr, owens_t

from qa_tracker.core.comparison import probability_within
from qa_tracker.core.decision_risks import acceptance_limits, global_risk, specific_risk, uncertainty_ratio
from qa_tracker.core.errors import Invalid

INF = math.inf


def both_below(h, k, rho):
    """P(X < h, Y < k) of two standard normals of correlation rho: Owen 1956, Ann. Math. Stat. 27, equation 2.1."""
    scale = math.sqrt(1 - rho**2)
    mixed = owens_t(h, (k / h - rho) / scale) + owens_t(k, (h / k - rho) / scale)
    return (ndtr(h) + ndtr(k)) / 2 - mixed - (0.5 if h * k < 0 else 0)


def risks_of(limits, acceptance, process, u):
    """Consumer's and producer's risk by Owen's closed form."""
    (mean, spread), whole = process, math.hypot(process[1], u)
    true, read = [(x - mean) / spread for x in limits], [(x - mean) / whole for x in acceptance]
    signed = [
        (1 if i == j else -1) * both_below(true[i], read[j], spread / whole)
        for i, j in product((0, 1), repeat=2)
    ]
    conforming_and_accepted = sum(signed)
    accepted, conforming = ndtr(read[1]) - ndtr(read[0]), ndtr(true[1]) - ndtr(true[0])
    return accepted - conforming_and_accepted, conforming - conforming_and_accepted


@pytest.mark.parametrize("ratio", [0.1, 1, 4, 100, 10_000])
@pytest.mark.parametrize("guard", [1.1, 1.0, 0.91, 0.5])
@pytest.mark.parametrize("mean", [0.3, 3.0])
def test_global_risk_agrees_with_a_closed_form(ratio, guard, mean):
    given = (-2.0, 2.0), (-2.0 * guard, 2.0 * guard), (mean, 1.0), 1 / ratio
    found = global_risk(*given)
    assert (found.consumer, found.producer) == pytest.approx(risks_of(*given), abs=1e-12)


def test_global_risk_parts_the_population_when_the_limit_is_one_sided():
    found = global_risk((-INF, 2.0), (-INF, 1.8), (0.0, 1.0), 0.25)
    conforming = probability_within(-INF, 2.0, 0.0, 1.0)
    assert found.accepted == pytest.approx(conforming - found.producer + found.consumer, abs=1e-12)


def test_no_share_of_the_accepted_is_given_when_nothing_is_accepted():
    found = global_risk((-1.0, 1.0), (1e6, INF), (0.0, 1.0), 0.1)
    assert (found.consumer, found.accepted, found.consumer_of_accepted) == (0, 0, None)


def test_risk_falls_and_the_other_rises_when_the_guard_band_widens():
    found = [global_risk((-2, 2), acceptance_limits((-2, 2), 0.5, r), (0, 1), 0.25) for r in (0, 0.5, 1)]
    assert found[0].consumer > found[1].consumer > found[2].consumer
    assert found[0].producer < found[1].producer < found[2].producer


def test_tiny_risk_is_the_same_from_either_side():
    lower = global_risk((0.0, INF), (8.0, INF), (0.0, 1.0), 1.0)
    upper = global_risk((-INF, 0.0), (-INF, -8.0), (0.0, 1.0), 1.0)
    assert 0 < lower.consumer < 1e-16
    assert lower.consumer == pytest.approx(upper.consumer, rel=1e-9, abs=0)
    assert lower.accepted == pytest.approx(upper.accepted, rel=1e-9, abs=0)


@pytest.mark.parametrize("estimate", [-1.0, 0.2, 0.9999, 1.0, 7.0])
@pytest.mark.parametrize("u", [0.0, 0.1, 3.0])
def test_specific_risk_is_what_the_probability_of_conformity_leaves(estimate, u):
    within = probability_within(-1.0, 1.0, estimate, u)
    assert specific_risk(-1.0, 1.0, estimate, u) == pytest.approx(1 - within, abs=1e-15)


def test_specific_risk_is_not_lost_when_it_is_tiny():
    # The upper tail of the standard normal at 10: 7.6199e-24 (Abramowitz and Stegun, Table 26.2, from memory)
    assert specific_risk(-INF, 10.0, 0.0, 1.0) == pytest.approx(7.6199e-24, rel=1e-4, abs=0)


def test_limits_are_moved_outwards_by_a_multiple_below_zero():
    assert acceptance_limits((-1.0, 1.0), 0.5, -1) == (-1.5, 1.5)
    assert acceptance_limits((-1.0, INF), 0.5) == (-0.5, INF)


def test_one_value_is_still_accepted_when_the_bands_just_meet():
    assert acceptance_limits((-1.0, 1.0), 1.0) == (0.0, 0.0)


def test_ratio_is_the_span_over_twice_the_expanded_uncertainty():
    assert uncertainty_ratio(-INF, 1.0, 0.1) == INF
    assert uncertainty_ratio(1.0, 1.0, 0.1) == 0


REFUSED = {
    "limits reversed": (lambda: specific_risk(1.0, -1.0, 0.0, 0.1), "risk.limits"),
    "a limit that is no number": (lambda: uncertainty_ratio(math.nan, 1.0, 0.1), "risk.limits"),
    "an estimate that is no number": (lambda: specific_risk(-1.0, 1.0, math.nan, 0.1), "number.not_finite"),
    "an uncertainty below zero": (lambda: specific_risk(-1.0, 1.0, 0.0, -0.1), "uncertainty.negative"),
    "a ratio to nothing": (lambda: uncertainty_ratio(-1.0, 1.0, 0.0), "uncertainty.not_positive"),
    "bands that meet": (lambda: acceptance_limits((-1.0, 1.0), 1.1), "risk.nothing_accepted"),
    "a band of no size": (lambda: acceptance_limits((-1.0, 1.0), math.nan), "uncertainty.negative"),
    "a population of no spread": (lambda: global_risk((-1, 1), (-1, 1), (0, 0), 0.1), "risk.process"),
    "a population nowhere": (lambda: global_risk((-1, 1), (-1, 1), (math.nan, 1), 0.1), "number.not_finite"),
    "a perfect measurement": (lambda: global_risk((-1, 1), (-1, 1), (0, 1), 0.0), "uncertainty.not_positive"),
    "acceptance reversed": (lambda: global_risk((-1, 1), (1, -1), (0, 1), 0.1), "risk.limits"),
}


@pytest.mark.parametrize("name", REFUSED)
def test_risk_is_refused(name):
    ask, code = REFUSED[name]
    with pytest.raises(Invalid) as refused:
        ask()
    assert refused.value.code == code
