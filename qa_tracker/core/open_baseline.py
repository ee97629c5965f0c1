"""Judging against a baseline that is only a bound: by every value that it can stand for.

A baseline "more than 160" is every value above 160. A level is cleared where the reading clears it for each of these
values, proven where it is beyond it for each, and else in doubt.

The departure and the allowance are linear in the baseline between a few places, so what holds at one point of a piece
between two places where anything can turn holds in all of it. Each piece is asked at one decimal, and so is each
turning point that is a decimal; at another turning point a departure only passes from one side of a bound to the other.
"""

from __future__ import annotations

from collections.abc import Iterator
from decimal import Decimal
from fractions import Fraction
from functools import lru_cache
from itertools import pairwise
from typing import NamedTuple

import numpy as np

from qa_tracker.core.criteria import Criterion, Level, Limit
from qa_tracker.core.decimals import MAX_PLACES, from_scaled, scaled_at, ten_to
from qa_tracker.core.verdict_kernel import (
    CONFORMING,
    NOT_ASSESSABLE,
    PROVEN_CODE,
    UNCERTAIN_CODE,
    Columns,
    Rule,
    column,
    finest_places,
    verdict_codes,
)


class AgainstBound(NamedTuple):
    """A reading and the bound that its baseline is.

    Parameters
    ----------
    value, sign
        The reading: -1 less than, 0 exactly, 1 more than.
    bound, side
        The baseline: -1 less than the bound, 1 more than it.
    uncertainty
        Expanded uncertainty U (k = 2), >= 0, or None.
    never_below_zero
        Whether the baseline's true value can't be below zero.
    """

    value: Decimal
    sign: int
    bound: Decimal
    side: int
    uncertainty: Decimal | None = None
    never_below_zero: bool = False


@lru_cache(maxsize=4096)
def code_against_bound(criterion: Criterion, asked: AgainstBound, rule: Rule = "simple") -> int:
    """Judge a reading against a baseline that is a bound.

    Parameters
    ----------
    criterion
        On a baseline, without bands or grades, its limits plain ones.
    asked
        The reading and the bound.
    rule
        As in ``verdict_codes``.

    Returns
    -------
    int
        As ``verdict_codes`` gives it: the worst that its levels say.

    Examples
    --------
    >>> loss = Criterion("baseline", "below", True, Limit(Decimal("6")), Limit(Decimal("10")))
    >>> more_than = [AgainstBound(Decimal(value), 0, Decimal(160), 1) for value in (150, 158)]
    >>> [code_against_bound(loss, each) for each in more_than]
    [5, 4]
    >>> code_against_bound(loss, AgainstBound(Decimal(158), 0, Decimal(160), -1))
    0
    """
    points = list(_witnesses(criterion, asked))
    places = max(finest_places(criterion, asked.value, asked.uncertainty, point) for point in points)
    many = len(points)
    known = None if asked.uncertainty is None else column(*[scaled_at(asked.uncertainty, places)] * many)
    columns = Columns(
        values=column(*[scaled_at(asked.value, places)] * many),
        references=column(*(scaled_at(point, places) for point in points)),
        places=places,
        qualifiers=np.full(many, asked.sign, np.int8),
        uncertainties=known,
    )
    found = (
        _together(level, set(verdict_codes(criterion.alone(level), columns, rule).tolist()))
        for level, _ in criterion.levels()
    )
    return max(found)


def _together(level: Level, codes: set[int]) -> int:
    """What one level says of all baselines at once, from what it says of each."""
    if codes == {PROVEN_CODE[level]}:
        return PROVEN_CODE[level]
    if codes <= {CONFORMING, NOT_ASSESSABLE}:
        return max(codes)
    return UNCERTAIN_CODE[level]


def _witnesses(criterion: Criterion, asked: AgainstBound) -> Iterator[Decimal]:
    """Yield baselines that stand for all: one of each piece, and the turning points between that are decimals."""
    bound, away = Fraction(asked.bound), asked.side
    # Turned so that the baseline lies above its bound; at its other end it may be zero, which is reached.
    inside = sorted({away * turn for turn in _turning_points(criterion, asked) if away * turn > away * bound})
    ends = [away * bound, *inside]
    if asked.never_below_zero and away < 0:
        ends = [end for end in ends if end <= 0]
    else:
        ends.append(ends[-1] + 1)
    for low, high in pairwise(ends):
        yield _between(*sorted((away * low, away * high)))
    # The last end is beyond every turn, or the zero that is reached.
    yield from (found for end in ends[1:] if (found := _decimal(away * end)) is not None)


def _turning_points(criterion: Criterion, asked: AgainstBound) -> Iterator[Fraction]:
    """Yield every baseline at which a departure can cross a bound, or either can take another course."""
    value, uncertainty = Fraction(asked.value), Fraction(asked.uncertainty or 0)
    yield Fraction(0)
    for moved in (value, value - uncertainty, value + uncertainty):
        yield moved
        for _, limit in criterion.levels():
            yield from _crossings(limit, moved, uncertainty)


def _crossings(limit: Limit, moved: Fraction, uncertainty: Fraction) -> Iterator[Fraction]:
    absolute = Fraction(limit.absolute or 0)
    yield from (moved - absolute, moved + absolute)
    if not limit.percent:
        return
    share = Fraction(limit.percent) / 100
    yield from (moved / (1 + sign * share) for sign in (1, -1) if 1 + sign * share)
    # Where the parts are equal, and where a share leaves nothing of the uncertainty.
    yield from (sign * each / share for sign in (1, -1) for each in (absolute, uncertainty))


def _between(low: Fraction, high: Fraction) -> Decimal:
    """Return a short decimal strictly between two different numbers."""
    places = 0
    while ten_to(places) * (high - low) <= 2:
        places += 1
    return from_scaled(int((low + high) / 2 * ten_to(places) // 1), places)


def _decimal(number: Fraction) -> Decimal | None:
    """Return the number as a decimal where it is one that can be typed."""
    scaled = number * ten_to(MAX_PLACES)
    return from_scaled(scaled.numerator, MAX_PLACES) if scaled.denominator == 1 else None
