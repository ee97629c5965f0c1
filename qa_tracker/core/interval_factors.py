"""The exact factor of a two-sided normal tolerance interval whose mean and spread are both estimated."""

from __future__ import annotations

import math
from decimal import Decimal
from functools import lru_cache

import numpy as np
from scipy.special import chdtr, chdtrc, ndtr, ndtri

from qa_tracker.core.decimals import MAX_PLACES, places_of, plain
from qa_tracker.core.errors import Invalid

_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(80)
# Beyond nine standard deviations lies 2e-19 of a normal distribution: less than the smallest share that can be given.
_FARTHEST = 9.0
_NEAR = 1e-13


@lru_cache(maxsize=4096)
def tolerance_factor(count: int, coverage: Decimal, confidence: Decimal) -> float:
    """Return the exact two-sided factor k of a normal tolerance interval, mean and spread both unknown.

    ``mean +- k s`` holds at least the coverage of the population with the confidence. k solves

    ``sqrt(2 n / pi) * int_0^inf P(X > f r(x)^2 / k^2) exp(-n x^2 / 2) dx = confidence``

    with X chi-square of f = n - 1 degrees of freedom, and ``r(x)`` the half width around x that holds the coverage
    of a standard normal. Odeh and Owen 1980, Tables for Normal Tolerance Limits, Table 3.4.1; ISO 16269-6:2014;
    Eberhardt, Mee and Reeve 1989, Commun. Stat. Simul. Comput. 18:397-413 (this one from memory). By
    Gauss-Legendre, each share worked in its smaller tail, so that 99.999999 % loses nothing.

    Parameters
    ----------
    count
        Independent readings n, 2 or more.
    coverage, confidence
        In percent, more than 0 and less than 100, of 12 places at most.

    Returns
    -------
    float
        To 1e-8 relative or better for shares from 0.0001 to 99.9999 %.

    Raises
    ------
    Invalid
        ``baseline.too_few_setups`` below 2; ``criterion.own_spread_share`` for a share outside 0 to 100, NaN or
        infinite; ``number.too_many_places``.

    Examples
    --------
    >>> round(tolerance_factor(20, Decimal(95), Decimal(95)), 6)
    2.760346
    """
    if count < 2:
        raise Invalid("baseline.too_few_setups", setups=str(count), least="2")
    held, lost = _parts(coverage, "coverage")
    sure, unsure = _parts(confidence, "confidence")
    freedom = count - 1
    offsets = (_NODES + 1) * _FARTHEST / 2
    weights = _WEIGHTS * _FARTHEST * np.exp(-(offsets**2) / 2) / math.sqrt(2 * math.pi)
    widths = _half_widths(offsets / math.sqrt(count), held, lost)

    def falls_short(k: float) -> bool:
        reach = freedom * (widths / k) ** 2
        if sure < unsure:
            return float(weights @ chdtrc(freedom, reach)) < sure
        return float(weights @ chdtr(freedom, reach)) > unsure

    low = high = 1.0
    while falls_short(high):
        high *= 2
    while not falls_short(low):
        low /= 2
    while high - low > _NEAR * high:
        middle = (low + high) / 2
        low, high = (middle, high) if falls_short(middle) else (low, middle)
    return (low + high) / 2


def _parts(share: Decimal, field: str) -> tuple[float, float]:
    """Split the whole into a share and what is left of it; both subtracted in decimals, so neither is lost."""
    if not share.is_finite() or not 0 < share < 100:
        raise Invalid("criterion.own_spread_share", field=field, value=str(share))
    if places_of(share) > MAX_PLACES:
        raise Invalid("number.too_many_places", field=field, entered=plain(share), places=str(MAX_PLACES))
    return float(share) / 100, float(100 - share) / 100


def _half_widths(offsets: np.ndarray, held: float, lost: float) -> np.ndarray:
    """Solve Phi(x + r) - Phi(x - r) = held for r by Newton's steps, from r = x + z, which holds too much."""
    widths = offsets - float(ndtri(lost / 2))
    for _ in range(60):
        near, far = offsets - widths, offsets + widths
        if held < lost:
            over = ndtr(-near) - ndtr(-far) - held
        else:
            over = lost - ndtr(near) - ndtr(-far)
        slope = (np.exp(-(near**2) / 2) + np.exp(-(far**2) / 2)) / math.sqrt(2 * math.pi)
        step = over / slope
        widths = widths - step
        if float(np.max(np.abs(step) / widths)) < _NEAR:
            break
    return widths
