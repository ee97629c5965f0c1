"""What is risked by deciding with an uncertain measurement: guard bands, risks, the test uncertainty ratio."""

from __future__ import annotations

import math
from dataclasses import dataclass
from itertools import pairwise

import numpy as np
from scipy.special import ndtr

from qa_tracker.core.comparison import probability_within
from qa_tracker.core.errors import Invalid

Limits = tuple[float, float]
"""Lower and upper, in one unit; infinite where there is none."""
_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(48)
# Beyond nine standard deviations lies 2e-19 of a normal distribution.
_FARTHEST = 9.0


@dataclass(frozen=True)
class Risk:
    """Shares of all items: consumer's (accepted, not conforming), producer's (conforming, not accepted), accepted."""

    consumer: float
    producer: float
    accepted: float

    @property
    def consumer_of_accepted(self) -> float | None:
        """The share of the accepted items that do not conform; None where nothing is accepted."""
        return self.consumer / self.accepted if self.accepted else None


def specific_risk(low: float, high: float, estimate: float, standard_uncertainty: float) -> float:
    """Return the probability that what was measured does not conform: 1 - p of ``probability_within``.

    ``Phi((low - y) / u) + Phi((y - high) / u)``, the two tails themselves, so that a risk of one in a million million
    is not lost. JCGM 106:2012, 9.3.2 (specific risk; clause from memory).

    Parameters
    ----------
    low, high
        Tolerance limits, in the unit of the estimate; infinite for none.
    estimate, standard_uncertainty
        The measured value y and u, >= 0; at u = 0 the risk is 0 inside and on the limits, else 1.

    Raises
    ------
    Invalid
        ``risk.limits`` unless low <= high, ``uncertainty.negative``, ``number.not_finite`` for y.

    Examples
    --------
    >>> round(specific_risk(-math.inf, 10.0, 9.0, 1.0), 4)
    0.1587
    """
    _check_limits((low, high))
    _check_finite(estimate)
    if not standard_uncertainty >= 0:
        raise Invalid("uncertainty.negative", field="uncertainty", uncertainty=str(standard_uncertainty))
    if standard_uncertainty == 0:
        return 1 - probability_within(low, high, estimate, 0.0)
    below, above = (low - estimate) / standard_uncertainty, (estimate - high) / standard_uncertainty
    return float(ndtr(below) + ndtr(above))


def acceptance_limits(limits: Limits, expanded: float, multiple: float = 1.0) -> Limits:
    """Return the tolerance limits moved inwards by a guard band ``w = r U`` at each side that has one.

    JCGM 106:2012, 8.3.2 (guarded acceptance; clause from memory); ILAC-G8:09/2019, Table 1 for multiples in use. A
    multiple below zero moves them outwards (guarded rejection).

    Parameters
    ----------
    limits
        Tolerance limits.
    expanded
        U of one measurement, k = 2, >= 0, in the unit of the limits.
    multiple
        r; 1 is the rule "guarded", 0 simple acceptance.

    Raises
    ------
    Invalid
        ``risk.limits``, ``uncertainty.negative``; ``risk.nothing_accepted`` where the bands meet.

    Examples
    --------
    >>> acceptance_limits((-math.inf, 10.0), 0.5, 1.5)
    (-inf, 9.25)
    """
    _check_limits(limits)
    _check_finite(multiple)
    if not 0 <= expanded < math.inf:
        raise Invalid("uncertainty.negative", field="uncertainty", uncertainty=str(expanded))
    width = multiple * expanded
    low, high = limits[0] + width, limits[1] - width
    if low > high:
        raise Invalid("risk.nothing_accepted", width=str(width), low=str(limits[0]), high=str(limits[1]))
    return low, high


def global_risk(
    limits: Limits, acceptance: Limits, process: tuple[float, float], standard_uncertainty: float
) -> Risk:
    """Return the risks of accepting by measurement, over a normal population measured with a normal error.

    ``R_C = int_(outside limits) g(y) P(accepted | y) dy``, ``R_P = int_(inside) g(y) P(rejected | y) dy``.
    JCGM 106:2012, 9.5 (equations 19 and 20, numbers from memory). By Gauss-Legendre, cut where something steps.

    Parameters
    ----------
    limits, acceptance
        Of tolerance and of acceptance.
    process
        Mean and standard deviation (> 0) of the true values.
    standard_uncertainty
        Of one measurement, > 0.

    Returns
    -------
    Risk
        To 1e-12.

    Raises
    ------
    Invalid
        ``risk.limits`` unless lower <= upper, ``risk.process`` and ``uncertainty.not_positive`` for what is not above
        zero, ``number.not_finite`` for the mean.

    Examples
    --------
    >>> round(global_risk((-2.0, 2.0), (-2.0, 2.0), (0.0, 1.0), 0.25).consumer, 4)
    0.008
    """
    mean, spread = process
    _check_limits(limits)
    _check_limits(acceptance)
    _check_finite(mean)
    if not 0 < spread < math.inf:
        raise Invalid("risk.process", field="process", entered=str(spread))
    if not 0 < standard_uncertainty < math.inf:
        raise Invalid("uncertainty.not_positive", field="uncertainty", entered=str(standard_uncertainty))
    consumer = producer = 0.0
    for start, end in _pieces(limits, acceptance, process, standard_uncertainty):
        true = (_NODES + 1) * (end - start) / 2 + start
        density = np.exp(-(((true - mean) / spread) ** 2) / 2) / (spread * math.sqrt(2 * math.pi))
        shares = _WEIGHTS * (end - start) / 2 * density
        below, above = ((limit - true) / standard_uncertainty for limit in acceptance)
        if limits[0] <= (start + end) / 2 <= limits[1]:
            producer += float(shares @ (ndtr(below) + ndtr(-above)))
        else:
            consumer += float(shares @ _between(below, above))
    ends = np.array([acceptance]) - mean
    below, above = (ends / math.hypot(spread, standard_uncertainty)).T
    return Risk(consumer, producer, float(_between(below, above)[0]))


def _between(below: np.ndarray, above: np.ndarray) -> np.ndarray:
    """Return the share of a standard normal between two ends, from the tail in which it is not lost."""
    swap = below > 0
    first, last = np.where(swap, -above, below), np.where(swap, -below, above)
    return np.asarray(ndtr(last) - ndtr(first))


def _pieces(
    limits: Limits, acceptance: Limits, process: tuple[float, float], standard_uncertainty: float
) -> list[tuple[float, float]]:
    """Cut the population at the limits and around the ends of acceptance, where a small u turns all to none."""
    mean, spread = process
    reach = _FARTHEST * spread
    steps = [end + far * standard_uncertainty for end in acceptance for far in (-_FARTHEST, 0.0, _FARTHEST)]
    cuts = sorted(
        {min(max(cut, mean - reach), mean + reach) for cut in (-math.inf, *limits, *steps, math.inf)}
    )
    return list(pairwise(cuts))


def uncertainty_ratio(low: float, high: float, expanded: float) -> float:
    """Return the test uncertainty ratio TUR = (high - low) / (2 U).

    ANSI/NCSL Z540.3-2006, 3.11 (from memory); U at 95 %. With U = 2 u it is the measurement capability index
    ``C_m = T / (4 u)`` of JCGM 106:2012, 7.6.3. Infinite where there is only one limit.

    Raises
    ------
    Invalid
        ``risk.limits`` unless low <= high, ``uncertainty.not_positive`` unless U > 0.

    Examples
    --------
    >>> uncertainty_ratio(-1.5, 1.5, 0.375)
    4.0
    """
    _check_limits((low, high))
    if not 0 < expanded < math.inf:
        raise Invalid("uncertainty.not_positive", field="expanded", entered=str(expanded))
    return (high - low) / (2 * expanded)


def _check_limits(limits: Limits) -> None:
    if not limits[0] <= limits[1]:
        raise Invalid("risk.limits", field="limits", low=str(limits[0]), high=str(limits[1]))


def _check_finite(number: float) -> None:
    if not math.isfinite(number):
        raise Invalid("number.not_finite", entered=str(number))
