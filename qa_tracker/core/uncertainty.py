"""Measurement uncertainty: from repeats, standard and expanded, combined; and the risks of deciding with it."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from decimal import Decimal
from fractions import Fraction

import numpy as np
from scipy.special import ndtr, stdtrit

from qa_tracker.core.baselines import summary
from qa_tracker.core.comparison import probability_within
from qa_tracker.core.decimals import from_scaled
from qa_tracker.core.errors import Invalid

SIGNIFICANT = 4
TWO = Decimal(2)
_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(400)
_FARTHEST = 9.0


@dataclass(frozen=True)
class Repeats:
    """What repeats say of one reading and of their mean; all in the unit of the readings but ``student_t``."""

    count: int
    mean: Decimal
    standard_deviation: Decimal
    student_t: float
    standard_of_one: Decimal
    expanded_of_one: Decimal
    standard_of_mean: Decimal
    expanded_of_mean: Decimal


def from_repeats(values: Sequence[Decimal], confidence: Decimal = Decimal(95)) -> Repeats:
    """Estimate the uncertainty from independent repeats.

    ``u = s`` of one reading and ``s / sqrt(n)`` of the mean; ``U = t u``, t Student's two-sided quantile of n - 1
    degrees of freedom. JCGM 100:2008 (GUM), 4.2 and G.3.

    Parameters
    ----------
    values
        Two or more finite decimals.
    confidence
        In percent, between 0 and 100.

    Raises
    ------
    Invalid
        ``uncertainty.too_few_repeats`` below two.

    Examples
    --------
    >>> from_repeats([Decimal("10.1"), Decimal("10.3"), Decimal("10.2")]).expanded_of_one
    Decimal('0.4303')
    """
    if len(values) < 2:
        raise Invalid("uncertainty.too_few_repeats", field="repeats", count=str(len(values)))
    found = summary(values)
    deviation = found.standard_deviation or Decimal(0)
    t = float(stdtrit(len(values) - 1, (1 + float(confidence) / 100) / 2))
    of_mean = float(deviation) / math.sqrt(len(values))
    return Repeats(
        count=len(values),
        mean=found.mean,
        standard_deviation=deviation,
        student_t=t,
        standard_of_one=rounded_up(Fraction(deviation)),
        expanded_of_one=rounded_up(Fraction(t * float(deviation))),
        standard_of_mean=rounded_up(Fraction(of_mean)),
        expanded_of_mean=rounded_up(Fraction(t * of_mean)),
    )


def rounded_up(value: Fraction) -> Decimal:
    """Return a value >= 0 as it is where four significant digits hold it, else rounded up to them.

    An uncertainty is never rounded down: that would promise more than was measured.

    Examples
    --------
    >>> rounded_up(Fraction(1, 3)), rounded_up(Fraction("2.5"))
    (Decimal('0.3334'), Decimal('2.5'))
    """
    if value <= 0:
        return Decimal(0)
    size = math.floor(math.log10(value))
    places = max(SIGNIFICANT - 1 - size, 0)
    scaled = value * 10**places
    # What a double can't hold exactly is a hair above the digit it stands for.
    whole = round(scaled) if abs(scaled - round(scaled)) < Fraction(1, 10**8) else math.ceil(scaled)
    while places and whole % 10 == 0:
        whole, places = whole // 10, places - 1
    return from_scaled(whole, places)


def expanded_from_standard(standard: Decimal, coverage_factor: Decimal = TWO) -> Decimal:
    """Return U = k u (GUM 6.2.1), exactly where four digits hold it, else rounded up.

    Examples
    --------
    >>> expanded_from_standard(Decimal("1.5"))
    Decimal('3')
    """
    return rounded_up(Fraction(standard) * Fraction(coverage_factor))


def standard_from_expanded(expanded: Decimal, coverage_factor: Decimal) -> Decimal:
    """Return u = U / k; ``uncertainty.not_positive`` unless k > 0.

    Examples
    --------
    >>> standard_from_expanded(Decimal("1"), Decimal("1.96"))
    Decimal('0.5103')
    """
    if coverage_factor <= 0:
        raise Invalid("uncertainty.not_positive", field="coverage_factor", entered=str(coverage_factor))
    return rounded_up(Fraction(expanded) / Fraction(coverage_factor))


def combined(*standard: Decimal) -> Decimal:
    """Return the root sum of squares of uncorrelated standard uncertainties (GUM 5.1.2); 0 of none.

    Examples
    --------
    >>> combined(Decimal(3), Decimal(4))
    Decimal('5')
    """
    return rounded_up(Fraction(math.hypot(*(float(each) for each in standard))))


@dataclass(frozen=True)
class Risk:
    """A consumer's risk (accepted, not conforming) and a producer's (conforming, not accepted)."""

    consumer: float
    producer: float


def specific_risk(low: float, high: float, estimate: float, standard_uncertainty: float) -> float:
    """Return the probability that what was measured does not conform: 1 - p of ``probability_within``.

    JCGM 106:2012, 9.3.2 (specific risk). Limits are infinite where there is none.

    Examples
    --------
    >>> round(specific_risk(-math.inf, 10.0, 9.0, 1.0), 4)
    0.1587
    """
    return 1 - probability_within(low, high, estimate, standard_uncertainty)


def global_risk(
    limits: tuple[float, float],
    acceptance: tuple[float, float],
    process: tuple[float, float],
    standard_uncertainty: float,
) -> Risk:
    """Return the risks of accepting by measurement, over a normal population measured with a normal error.

    ``R_C = int_(outside limits) g(y) P(accepted | y) dy``, ``R_P = int_(inside) g(y) P(rejected | y) dy``.
    JCGM 106:2012, 9.5 (equations 19 and 20, numbers from memory).

    Parameters
    ----------
    limits, acceptance
        Lower and upper, infinite for none.
    process
        Mean and standard deviation (> 0) of the true values.
    standard_uncertainty
        Of one measurement, > 0.

    Examples
    --------
    >>> round(global_risk((-2.0, 2.0), (-2.0, 2.0), (0.0, 1.0), 0.25).consumer, 4)
    0.008
    """
    mean, spread = process
    consumer = producer = 0.0
    for start, end, inside in _pieces(limits, mean, spread):
        true = (_NODES + 1) * (end - start) / 2 + start
        density = np.exp(-(((true - mean) / spread) ** 2) / 2) / (spread * math.sqrt(2 * math.pi))
        low, high = acceptance
        accepted = ndtr((high - true) / standard_uncertainty) - ndtr((low - true) / standard_uncertainty)
        share = _WEIGHTS * (end - start) / 2 * density
        if inside:
            producer += float(np.sum(share * (1 - accepted)))
        else:
            consumer += float(np.sum(share * accepted))
    return Risk(consumer, producer)


def _pieces(limits: tuple[float, float], mean: float, spread: float) -> list[tuple[float, float, bool]]:
    """Cut the population at the limits, so that no step falls inside an interval of integration."""
    first, last = mean - _FARTHEST * spread, mean + _FARTHEST * spread
    low, high = (min(max(limit, first), last) for limit in limits)
    pieces = [(first, low, False), (low, high, True), (high, last, False)]
    return [piece for piece in pieces if piece[1] > piece[0]]


def uncertainty_ratio(low: float, high: float, expanded: float) -> float:
    """Return the test uncertainty ratio TUR = (high - low) / (2 U).

    ANSI/NCSL Z540.3-2006, 3.11 (from memory); U at 95 %. ``uncertainty.not_positive`` unless U > 0.

    Examples
    --------
    >>> uncertainty_ratio(-1.5, 1.5, 0.375)
    4.0
    """
    if expanded <= 0:
        raise Invalid("uncertainty.not_positive", field="expanded", entered=str(expanded))
    return (high - low) / (2 * expanded)
