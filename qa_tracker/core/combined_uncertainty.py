"""The uncertainty of a departure: that of the reading, and of what it is compared with where that was measured too."""

from __future__ import annotations

from dataclasses import dataclass
from decimal import Decimal
from fractions import Fraction

from qa_tracker.core.allowances import allowance, share_of
from qa_tracker.core.criteria import Criterion, Level, Limit
from qa_tracker.core.decimals import plain, subtract
from qa_tracker.core.uncertainty import root_rounded_up

ONE = Decimal(1)


@dataclass(frozen=True)
class Departing:
    """What a reading departs from, and how well both are known.

    Parameters
    ----------
    value, reference
        The reading and what it is compared with, in one unit.
    uncertainty, of_reference
        Expanded uncertainties U (k = 2) of the two, >= 0, in the same unit.
    """

    value: Decimal
    reference: Decimal
    uncertainty: Decimal
    of_reference: Decimal


def combined_at_levels(criterion: Criterion, given: Departing) -> tuple[tuple[Level, Decimal, Decimal], ...]:
    """Return level, weight c of the reference and combined U of each level, the highest level first.

    What is judged at a level is ``y - c r``, so ``U = sqrt(U_y^2 + (c U_r)^2)``; JCGM 100:2008 (GUM), 5.1.2,
    equation 10, for uncorrelated y and r, both expanded by k = 2. For an absolute limit on a change c = 1; for p % of
    a nominal or baseline, where that part governs, c = 1 + p/100 upwards and 1 - p/100 downwards (of a reference
    below zero the other way round); for a ratio c = p/100.

    Parameters
    ----------
    criterion
        Without bands or grades; one of own spread or with basis none gives nothing, since its factor holds what is
        not known of the baseline, or there is no reference.
    given
        Finite numbers.

    Returns
    -------
    tuple
        U as ``root_rounded_up`` keeps it: exact, or rounded up to four significant digits.

    Examples
    --------
    >>> ratio = Criterion("ratio", "above", suspension=Limit(percent=Decimal(80)))
    >>> three = Departing(Decimal(62), Decimal(210), Decimal(3), Decimal(3))
    >>> combined_at_levels(ratio, three)
    (('suspension', Decimal('0.80'), Decimal('3.842')),)
    """
    if criterion.basis == "none" or criterion.of_own_spread:
        return ()
    found = []
    for level, limit in reversed(criterion.levels()):
        weight = _weight(criterion, limit, given)
        square = Fraction(given.uncertainty) ** 2 + (Fraction(weight) * Fraction(given.of_reference)) ** 2
        found.append((level, weight, root_rounded_up(square)))
    return tuple(found)


def _weight(criterion: Criterion, limit: Limit, given: Departing) -> Decimal:
    """By how much what is judged changes with the reference."""
    if limit.percent is None or allowance(limit, given.reference).governed_by == "absolute":
        return ONE
    share = share_of(limit.percent, ONE)
    if criterion.basis == "ratio":
        return share
    upwards = criterion.direction == "above" or (
        criterion.direction == "either" and given.value >= given.reference
    )
    grows = upwards == (given.reference >= 0)
    return subtract(ONE, share.copy_negate() if grows else share)


def told(uncertainty: str, of_reference: str, weight: Decimal, *, own: bool) -> dict[str, str]:
    """Write out what was combined, for the sentence: both uncertainties, the weight, and whose the second is.

    Examples
    --------
    >>> told("3", "3", Decimal("0.80"), own=False)["uncertainty_weight"]
    '0.8'
    """
    return {
        "uncertainty_reading": uncertainty,
        "uncertainty_reference": of_reference,
        "uncertainty_weight": plain(weight, strip=True),
        "uncertainty_whose": "own" if own else "measurand",
    }
