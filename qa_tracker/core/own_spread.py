"""A limit of the device's own spread (shape J) at one baseline: the interval's half width becomes its allowance."""

from __future__ import annotations

from dataclasses import dataclass, replace
from decimal import Decimal

from qa_tracker.core.baselines import LEAST_SETUPS, own_allowance
from qa_tracker.core.criteria import Criterion, Limit
from qa_tracker.core.decimals import plain


@dataclass(frozen=True)
class OwnSpread:
    """What is known of the set-ups that a baseline is the mean of.

    Parameters
    ----------
    count
        Independent set-ups; 0 for a baseline that was set by value.
    standard_deviation
        Of the set-ups, in the measurand's unit; None below two.
    resolution
        Of the measurand, in its unit, > 0.
    """

    count: int
    standard_deviation: Decimal | None
    resolution: Decimal


def lacking_setups(spread: OwnSpread | None) -> dict[str, str] | None:
    """Say how many set-ups there are and are needed, where they are too few; None where they serve.

    Examples
    --------
    >>> lacking_setups(OwnSpread(3, Decimal("0.4"), Decimal("0.5")))
    {'setups': '3', 'least': '10'}
    """
    count = spread.count if spread else 0
    if spread and count >= LEAST_SETUPS and spread.standard_deviation is not None:
        return None
    return {"setups": str(count), "least": str(LEAST_SETUPS)}


def at_spread(criterion: Criterion, spread: OwnSpread) -> tuple[Criterion, dict[str, str]]:
    """Give the criterion a plain allowance, and the parameters its sentence shows the arithmetic with.

    ``allowance = k * max(s, resolution / sqrt(12))``, k the exact two-sided factor (``tolerance_factor``).

    Parameters
    ----------
    criterion
        Without bands, its remedial level a limit of own spread.
    spread
        With enough set-ups (``lacking_setups`` gives None).
    """
    limit = criterion.remedial or Limit()
    coverage, confidence = limit.coverage or Decimal(0), limit.confidence or Decimal(0)
    deviation = spread.standard_deviation or Decimal(0)
    own = own_allowance(spread.count, deviation, spread.resolution, coverage, confidence)
    shown = {
        "setups": str(spread.count),
        "factor": f"{own.factor:.4f}",
        "spread": plain(own.spread),
        "spread_floored": "yes" if own.floored else "no",
        "coverage": plain(coverage),
        "confidence": plain(confidence),
    }
    return replace(criterion, remedial=Limit(absolute=own.size)), shown
