"""The statistics of a baseline made of several set-ups: mean, spread, its exact tolerance interval, outliers.

Everything here describes; nothing is left out of a baseline because a test finds it odd.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from decimal import ROUND_HALF_EVEN, Context, Decimal
from fractions import Fraction
from functools import lru_cache

import numpy as np
from scipy.special import chdtrc, chdtri, ndtr, ndtri, stdtrit

from qa_tracker.core.decimals import from_scaled, places_of, round_half_even, ten_to
from qa_tracker.core.errors import Invalid

LEAST_SETUPS = 10
"""Independent set-ups that a limit of the device's own spread needs (common practice, no source)."""
LEAST_FOR_OUTLIERS = 15
"""Values from which the generalised ESD test is fair: Rosner 1983 gives n >= 25 as very, 15 as reasonably accurate."""
OUTLIER_SHARE = Decimal("0.05")
SHOWN_DIGITS = 4
_DIGITS = Context(prec=34, rounding=ROUND_HALF_EVEN)
_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(160)
_FARTHEST = 9.0


@dataclass(frozen=True)
class Summary:
    """Count, mean and standard deviation (divisor n - 1; None of a single value)."""

    count: int
    mean: Decimal
    standard_deviation: Decimal | None


def summary(values: Sequence[Decimal]) -> Summary:
    """Return count, mean and standard deviation, worked in fractions and given to 34 digits.

    ``m = sum(x) / n``, ``s = sqrt(sum((x - m)**2) / (n - 1))``; NIST/SEMATECH e-Handbook, 1.3.5.1 and 1.3.5.6.

    Parameters
    ----------
    values
        Finite decimals, at least one; of one value there is no standard deviation.

    Raises
    ------
    Invalid
        ``baseline.no_setups`` of none, ``number.not_finite`` for NaN and infinity.

    Examples
    --------
    >>> summary([Decimal("8.5"), Decimal("9.0"), Decimal("8.0")])
    Summary(count=3, mean=Decimal('8.5'), standard_deviation=Decimal('0.5'))
    """
    if not values:
        raise Invalid("baseline.no_setups")
    for value in values:
        places_of(value)
    exact = [Fraction(value) for value in values]
    mean = sum(exact, Fraction(0)) / len(exact)
    if len(exact) == 1:
        return Summary(1, _decimal(mean), None)
    variance = sum(((value - mean) ** 2 for value in exact), Fraction(0)) / (len(exact) - 1)
    return Summary(len(exact), _decimal(mean), _DIGITS.sqrt(_decimal(variance)))


def _decimal(value: Fraction) -> Decimal:
    return _DIGITS.divide(Decimal(value.numerator), Decimal(value.denominator))


@lru_cache(maxsize=4096)
def tolerance_factor(count: int, coverage: Decimal, confidence: Decimal) -> float:
    """Return the exact two-sided factor k of a normal tolerance interval, mean and spread both unknown.

    ``mean +- k s`` holds at least the coverage of the population with the confidence. k solves

    ``sqrt(2 n / pi) * int_0^inf P(X > f r(x)^2 / k^2) exp(-n x^2 / 2) dx = confidence``

    with X chi-square of f = n - 1 degrees of freedom, and ``r(x)`` the half width around x that holds the coverage
    of a standard normal. Odeh and Owen 1980, Tables for Normal Tolerance Limits, Table 3.4.1; ISO 16269-6:2014.

    Parameters
    ----------
    count
        Set-ups, 2 or more.
    coverage, confidence
        In percent, between 0 and 100.

    Returns
    -------
    float
        To 1e-6 relative or better.

    Raises
    ------
    Invalid
        ``baseline.too_few_setups`` below 2, ``criterion.own_spread_share`` outside 0 to 100.

    Examples
    --------
    >>> round(tolerance_factor(20, Decimal(95), Decimal(95)), 6)
    2.760346
    """
    if count < 2:
        raise Invalid("baseline.too_few_setups", setups=str(count), least="2")
    for share in (coverage, confidence):
        if not 0 < share < 100:
            raise Invalid("criterion.own_spread_share", field="", value=str(share))
    held, sure, freedom = float(coverage) / 100, float(confidence) / 100, count - 1
    offsets = (_NODES + 1) * _FARTHEST / 2
    weights = _WEIGHTS * _FARTHEST / 2 * 2 * np.exp(-(offsets**2) / 2) / math.sqrt(2 * math.pi)
    widths = _half_widths(offsets / math.sqrt(count), held)

    def surely(k: float) -> float:
        return float(np.sum(weights * chdtrc(freedom, freedom * widths**2 / k**2)))

    # Never smaller than with a known mean and spread at the mean; doubled until it is enough.
    low = float(ndtri((1 + held) / 2)) * math.sqrt(freedom / float(chdtri(freedom, sure))) / 2
    high = 2 * low
    while surely(high) < sure:
        high *= 2
    while high - low > 1e-12 * high:
        middle = (low + high) / 2
        low, high = (middle, high) if surely(middle) < sure else (low, middle)
    return (low + high) / 2


def _half_widths(offsets: np.ndarray, held: float) -> np.ndarray:
    """Solve Phi(x + r) - Phi(x - r) = held for r, by Newton from above: the left side is concave in r."""
    widths = offsets + float(ndtri((1 + held) / 2))
    for _ in range(60):
        short = ndtr(offsets + widths) - ndtr(offsets - widths) - held
        slope = (np.exp(-((offsets + widths) ** 2) / 2) + np.exp(-((offsets - widths) ** 2) / 2)) / math.sqrt(
            2 * math.pi
        )
        step = short / slope
        widths = widths - step
        if float(np.max(np.abs(step))) < 1e-14:
            break
    return widths


def spread_floor(resolution: Decimal) -> Decimal:
    """Return resolution / sqrt(12), the standard deviation that a resolution alone gives.

    JCGM 100:2008 (GUM), F.2.2.1: a rectangular distribution as wide as the resolution.

    Examples
    --------
    >>> round(spread_floor(Decimal("0.5")), 4)
    Decimal('0.1443')
    """
    return _DIGITS.divide(resolution, _DIGITS.sqrt(Decimal(12)))


@dataclass(frozen=True)
class OwnAllowance:
    """What a device's own spread allows: ``size = factor * spread``; ``floored`` where the resolution gave the spread."""

    factor: float
    spread: Decimal
    floored: bool
    size: Decimal


def own_allowance(
    count: int,
    standard_deviation: Decimal,
    resolution: Decimal,
    coverage: Decimal,
    confidence: Decimal,
) -> OwnAllowance:
    """Return the half width of the device's own tolerance interval as one definite decimal.

    ``k * max(s, resolution / sqrt(12))``, rounded once, half-even, to a hundredth of the resolution's last place, so
    that what is stored, shown and compared is the same number.

    Parameters
    ----------
    count
        Independent set-ups, ``LEAST_SETUPS`` or more.
    standard_deviation, resolution
        In the measurand's unit.
    coverage, confidence
        In percent.

    Raises
    ------
    Invalid
        ``baseline.too_few_setups``; as ``tolerance_factor``.

    Examples
    --------
    >>> own_allowance(10, Decimal("0.4"), Decimal("0.5"), Decimal(95), Decimal(95)).size
    Decimal('1.357')
    """
    if count < LEAST_SETUPS:
        raise Invalid("baseline.too_few_setups", setups=str(count), least=str(LEAST_SETUPS))
    floor = spread_floor(resolution)
    spread = max(standard_deviation, floor)
    factor = tolerance_factor(count, coverage, confidence)
    step = from_scaled(1, places_of(resolution) + 2)
    size = round_half_even(Fraction(factor) * Fraction(spread), step)
    return OwnAllowance(factor, _shown(spread), standard_deviation < floor, size)


def _shown(spread: Decimal) -> Decimal:
    """Round to four significant digits for showing."""
    if not spread:
        return Decimal(0)
    places = SHOWN_DIGITS - 1 - spread.adjusted()
    return round_half_even(spread, from_scaled(1, places) if places >= 0 else Decimal(ten_to(-places)))


@dataclass(frozen=True)
class Outliers:
    """The generalised ESD test: statistics R, critical values lambda, and positions found, most extreme first."""

    statistics: tuple[float, ...]
    critical: tuple[float, ...]
    positions: tuple[int, ...]


def generalised_esd(values: Sequence[Decimal], most: int, significance: Decimal = OUTLIER_SHARE) -> Outliers:
    """Test for up to ``most`` outliers; the number found is the largest i with ``R_i > lambda_i``.

    Rosner 1983, Technometrics 25(2):165-172; NIST/SEMATECH e-Handbook, 1.3.5.17.3. With ``most`` 1 it is the
    two-sided Grubbs test.

    Parameters
    ----------
    values
        At least ``most`` + 2 finite decimals.
    most
        Outliers looked for, 1 or more.
    significance
        Between 0 and 1.

    Raises
    ------
    Invalid
        ``baseline.too_few_setups`` for fewer values.

    Examples
    --------
    >>> generalised_esd([Decimal(n) for n in (1, 2, 1, 2, 1, 2, 30)], 1).positions
    (6,)
    """
    if len(values) < most + 2:
        raise Invalid("baseline.too_few_setups", setups=str(len(values)), least=str(most + 2))
    left = list(range(len(values)))
    numbers = np.array([float(value) for value in values])
    statistics, critical, taken = [], [], []
    for number in range(1, most + 1):
        rest = numbers[left]
        far, deviation = np.abs(rest - rest.mean()), float(rest.std(ddof=1))
        at = int(far.argmax())
        statistics.append(float(far[at]) / deviation if deviation else 0.0)
        critical.append(_esd_critical(len(values), number, float(significance)))
        taken.append(left.pop(at))
    found = [i for i in range(most) if statistics[i] > critical[i]]
    return Outliers(tuple(statistics), tuple(critical), tuple(taken[: found[-1] + 1] if found else ()))


def _esd_critical(count: int, number: int, significance: float) -> float:
    remain = count - number + 1
    t = float(stdtrit(remain - 2, 1 - significance / (2 * remain)))
    return t * (remain - 1) / math.sqrt((remain - 2 + t * t) * remain)


def outliers(values: Sequence[Decimal]) -> tuple[int, ...]:
    """Return the positions that the generalised ESD test suspects; none below ``LEAST_FOR_OUTLIERS`` values.

    Looks for at most a fifth of the values. To be shown, never applied.

    Examples
    --------
    >>> outliers([Decimal(1), Decimal(100)])
    ()
    """
    if len(values) < LEAST_FOR_OUTLIERS:
        return ()
    return generalised_esd(values, len(values) // 5).positions
