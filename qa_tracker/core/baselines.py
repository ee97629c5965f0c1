"""The statistics of a baseline made of several set-ups: mean, spread, its exact tolerance interval, outliers.

Everything here describes; nothing is left out of a baseline because a test finds it odd.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from decimal import ROUND_HALF_EVEN, Context, Decimal
from fractions import Fraction

import numpy as np
from scipy.special import stdtrit

from qa_tracker.core.decimals import from_scaled, places_of, round_half_even, ten_to
from qa_tracker.core.errors import Invalid
from qa_tracker.core.interval_factors import tolerance_factor

LEAST_SETUPS = 10
"""Independent set-ups that a limit of the device's own spread needs (common practice, no source)."""
LEAST_FOR_OUTLIERS = 15
"""Values from which the generalised ESD test is fair: Rosner 1983 gives n >= 25 as very, 15 as reasonably accurate."""
OUTLIER_SHARE = Decimal("0.05")
SHOWN_DIGITS = 4
_DIGITS = Context(prec=34, rounding=ROUND_HALF_EVEN)


@dataclass(frozen=True)
class Summary:
    """Count, mean and standard deviation (divisor n - 1; None of a single value)."""

    count: int
    mean: Decimal
    standard_deviation: Decimal | None


def summary(values: Sequence[Decimal]) -> Summary:
    """Return count, mean and standard deviation, worked in fractions and given to 34 digits.

    ``m = sum(x) / n``, ``s = sqrt(sum((x - m)**2) / (n - 1))``; NIST/SEMATECH e-Handbook, 1.3.5.1 and 1.3.5.6. A
    mean that ends within 34 digits is exact.

    Parameters
    ----------
    values
        Finite decimals, at least one; of one value there is no standard deviation.

    Raises
    ------
    Invalid
        As ``mean_and_variance``.

    Examples
    --------
    >>> summary([Decimal("8.5"), Decimal("9.0"), Decimal("8.0")])
    Summary(count=3, mean=Decimal('8.5'), standard_deviation=Decimal('0.5'))
    """
    mean, variance = mean_and_variance(values)
    deviation = None if variance is None else _DIGITS.sqrt(_decimal(variance))
    return Summary(len(values), _decimal(mean), deviation)


def mean_and_variance(values: Sequence[Decimal]) -> tuple[Fraction, Fraction | None]:
    """Return mean and variance (divisor n - 1; None of a single value) exactly.

    Raises
    ------
    Invalid
        ``baseline.no_setups`` of none, ``number.not_finite`` for NaN and infinity.

    Examples
    --------
    >>> mean_and_variance([Decimal("0.1"), Decimal("0.4")])
    (Fraction(1, 4), Fraction(9, 200))
    """
    if not values:
        raise Invalid("baseline.no_setups")
    for value in values:
        places_of(value)
    exact = [Fraction(value) for value in values]
    mean = sum(exact, Fraction(0)) / len(exact)
    if len(exact) == 1:
        return mean, None
    return mean, sum(((value - mean) ** 2 for value in exact), Fraction(0)) / (len(exact) - 1)


def _decimal(value: Fraction) -> Decimal:
    return _DIGITS.divide(Decimal(value.numerator), Decimal(value.denominator))


def spread_floor(resolution: Decimal) -> Decimal:
    """Return resolution / sqrt(12), the standard deviation that a resolution alone gives.

    A rectangular distribution as wide as the resolution: JCGM 100:2008 (GUM), 4.3.7 and F.2.2.1. To 34 digits, in
    the resolution's unit; ``number.step`` unless the resolution is above zero.

    Examples
    --------
    >>> round(spread_floor(Decimal("0.5")), 4)
    Decimal('0.1443')
    """
    if not resolution.is_finite() or resolution <= 0:
        raise Invalid("number.step", field="resolution", step=str(resolution))
    return _DIGITS.divide(resolution, _DIGITS.sqrt(Decimal(12)))


@dataclass(frozen=True)
class OwnAllowance:
    """What a device's own spread allows: ``size = factor * spread``.

    ``floored`` where the resolution gave the spread; ``spread`` is rounded to four digits, for showing only.
    """

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
        In the measurand's unit; zero or more, and above zero.
    coverage, confidence
        In percent.

    Raises
    ------
    Invalid
        ``baseline.too_few_setups``; ``baseline.spread`` for a deviation below zero, NaN or infinite; as
        ``spread_floor`` and ``tolerance_factor``.

    Examples
    --------
    >>> own_allowance(10, Decimal("0.4"), Decimal("0.5"), Decimal(95), Decimal(95)).size
    Decimal('1.357')
    """
    if count < LEAST_SETUPS:
        raise Invalid("baseline.too_few_setups", setups=str(count), least=str(LEAST_SETUPS))
    if not standard_deviation.is_finite() or standard_deviation < 0:
        raise Invalid("baseline.spread", field="standard_deviation", entered=str(standard_deviation))
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

    ``R_i = max |x - m| / s`` of what is left after i - 1 were taken out, the farthest each time;
    ``lambda_i = t (n - i) / sqrt((n - i - 1 + t^2) (n - i + 1))``, t Student's quantile of n - i - 1 degrees of
    freedom at ``1 - significance / (2 (n - i + 1))``. Rosner 1983, Technometrics 25(2):165-172; NIST/SEMATECH
    e-Handbook, 1.3.5.17.3. With ``most`` 1 it is the two-sided Grubbs test.

    Parameters
    ----------
    values
        At least ``most`` + 2 finite decimals. Where nothing varies none is found; of two equally far the first is.
    most
        Outliers looked for, 1 or more.
    significance
        More than 0 and less than 1.

    Raises
    ------
    Invalid
        ``baseline.too_few_setups`` for fewer values, ``number.not_finite``, ``baseline.outlier_terms`` for the rest.

    Examples
    --------
    >>> generalised_esd([Decimal(n) for n in (1, 2, 1, 2, 1, 2, 30)], 1).positions
    (6,)
    """
    if most < 1 or not significance.is_finite() or not 0 < significance < 1:
        raise Invalid("baseline.outlier_terms", most=str(most), significance=str(significance))
    if len(values) < most + 2:
        raise Invalid("baseline.too_few_setups", setups=str(len(values)), least=str(most + 2))
    left = list(range(len(values)))
    numbers = _centred(values)
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


def _centred(values: Sequence[Decimal]) -> np.ndarray:
    """Take the mean away before anything is a double, so that a small spread on a large value is not lost."""
    mean, _ = mean_and_variance(values)
    return np.array([float(Fraction(value) - mean) for value in values])


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
