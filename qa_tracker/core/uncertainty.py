"""Measurement uncertainty: from repeats, standard and expanded, and combined; kept exact, or rounded up."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from decimal import Context, Decimal
from fractions import Fraction

from scipy.special import stdtrit

from qa_tracker.core.baselines import mean_and_variance, summary
from qa_tracker.core.decimals import MAX_PLACES, MAX_SCALED, from_scaled, places_of, plain, ten_to
from qa_tracker.core.errors import Invalid

SIGNIFICANT = 4
"""Digits kept of an uncertainty that is rounded."""
TWO = Decimal(2)
_SIZES = Context(prec=SIGNIFICANT)


@dataclass(frozen=True)
class Repeats:
    """What repeats say of one reading and of their mean; all in the unit of the readings but ``student_t``.

    ``standard_deviation`` is given to 34 digits, the uncertainties as ``rounded_up`` gives them.
    """

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
        Two or more finite decimals; of equal ones every uncertainty is 0.
    confidence
        In percent, more than 0 and less than 100.

    Raises
    ------
    Invalid
        ``uncertainty.too_few_repeats`` below two, ``number.not_finite``, ``uncertainty.confidence``.

    Examples
    --------
    >>> from_repeats([Decimal("10.1"), Decimal("10.3"), Decimal("10.2")]).expanded_of_one
    Decimal('0.4303')
    """
    if not confidence.is_finite() or not 0 < confidence < 100:
        raise Invalid("uncertainty.confidence", field="confidence", entered=str(confidence))
    if len(values) < 2:
        raise Invalid("uncertainty.too_few_repeats", field="repeats", count=str(len(values)))
    found = summary(values)
    of_one = mean_and_variance(values)[1] or Fraction(0)
    of_mean = of_one / len(values)
    t = -float(stdtrit(len(values) - 1, float(100 - confidence) / 200))
    return Repeats(
        count=len(values),
        mean=found.mean,
        standard_deviation=found.standard_deviation or Decimal(0),
        student_t=t,
        standard_of_one=root_rounded_up(of_one),
        expanded_of_one=root_rounded_up(of_one * Fraction(t) ** 2),
        standard_of_mean=root_rounded_up(of_mean),
        expanded_of_mean=root_rounded_up(of_mean * Fraction(t) ** 2),
    )


def rounded_up(value: Fraction) -> Decimal:
    """Return a value >= 0 exactly where it can be kept as a number that was entered, else rounded up.

    Kept are 12 decimal places and 15 digits; anything else goes up to four significant digits, or to the last of 12
    places. An uncertainty is never rounded down: that would promise more than was measured.

    Examples
    --------
    >>> rounded_up(Fraction(1, 3)), rounded_up(Fraction("2.46912"))
    (Decimal('0.3334'), Decimal('2.46912'))
    """
    scaled = value * ten_to(MAX_PLACES)
    if scaled.denominator == 1:
        whole, places = _shortest(scaled.numerator, MAX_PLACES)
        if whole <= MAX_SCALED:
            return from_scaled(whole, places)
    places = _places(_SIZES.divide(Decimal(value.numerator), Decimal(value.denominator)))
    return from_scaled(*_shortest(math.ceil(value * Fraction(10) ** places), places))


def root_rounded_up(square: Fraction) -> Decimal:
    """Return the root of a value >= 0 as ``rounded_up`` does, worked in whole numbers.

    Examples
    --------
    >>> root_rounded_up(Fraction(25, 4)), root_rounded_up(Fraction(2))
    (Decimal('2.5'), Decimal('1.415'))
    """
    root = Fraction(math.isqrt(square.numerator), math.isqrt(square.denominator))
    if root**2 == square:
        return rounded_up(root)
    size = _SIZES.sqrt(_SIZES.divide(Decimal(square.numerator), Decimal(square.denominator)))
    places = _places(size)
    # The least whole number whose square is not below x is isqrt(ceil(x) - 1) + 1.
    return from_scaled(*_shortest(math.isqrt(math.ceil(square * Fraction(100) ** places) - 1) + 1, places))


def _places(size: Decimal) -> int:
    """Count the places that hold four significant digits; below zero for digits before the point."""
    return min(SIGNIFICANT - 1 - size.adjusted(), MAX_PLACES)


def _shortest(whole: int, places: int) -> tuple[int, int]:
    """Write whole / 10 ** places with no zeros at the end of its places, and none of its places below zero."""
    if places < 0:
        return whole * ten_to(-places), 0
    while places and whole % 10 == 0:
        whole, places = whole // 10, places - 1
    return whole, places


def expanded_from_standard(standard: Decimal, coverage_factor: Decimal = TWO) -> Decimal:
    """Return U = k u (GUM 6.2.1) as ``rounded_up`` does.

    Raises
    ------
    Invalid
        ``uncertainty.negative`` and ``number.not_finite`` for u, ``uncertainty.not_positive`` unless k > 0.

    Examples
    --------
    >>> expanded_from_standard(Decimal("1.23456"))
    Decimal('2.46912')
    """
    return rounded_up(_size(standard) * _factor(coverage_factor))


def standard_from_expanded(expanded: Decimal, coverage_factor: Decimal) -> Decimal:
    """Return u = U / k (GUM 4.3.3) as ``rounded_up`` does; refusals as ``expanded_from_standard``.

    Examples
    --------
    >>> standard_from_expanded(Decimal("1"), Decimal("1.96"))
    Decimal('0.5103')
    """
    return rounded_up(_size(expanded) / _factor(coverage_factor))


def combined(*standard: Decimal) -> Decimal:
    """Return the root sum of squares of uncorrelated standard uncertainties, as ``rounded_up`` does; 0 of none.

    JCGM 100:2008 (GUM), 5.1.2, equation 10 with sensitivity coefficients of 1. Refused: ``uncertainty.negative``,
    ``number.not_finite``.

    Examples
    --------
    >>> combined(Decimal(3), Decimal(4)), combined(Decimal(1), Decimal(1))
    (Decimal('5'), Decimal('1.415'))
    """
    return root_rounded_up(sum((_size(each) ** 2 for each in standard), Fraction(0)))


def _size(uncertainty: Decimal) -> Fraction:
    places_of(uncertainty)
    if uncertainty < 0:
        raise Invalid("uncertainty.negative", field="uncertainty", uncertainty=plain(uncertainty))
    return Fraction(uncertainty)


def _factor(coverage_factor: Decimal) -> Fraction:
    if not coverage_factor.is_finite() or coverage_factor <= 0:
        raise Invalid("uncertainty.not_positive", field="coverage_factor", entered=str(coverage_factor))
    return Fraction(coverage_factor)
