"""The expanded uncertainty a reading is judged with, from what a physicist stated about its measurand."""

from __future__ import annotations

import math
from collections.abc import Sequence
from decimal import Decimal
from fractions import Fraction
from typing import Literal

from qa_tracker.core.decimals import plain
from qa_tracker.core.uncertainty import (
    expanded_from_standard,
    from_repeats,
    rounded_up,
    standard_from_expanded,
)

Kind = Literal["standard", "expanded", "repeats", "repeats_of_check"]
KINDS: tuple[Kind, ...] = ("standard", "expanded", "repeats", "repeats_of_check")
TWO = Decimal(2)


def expanded(
    kind: str, entered: str, coverage_factor: str, repeats: Sequence[Decimal], resolution: str = ""
) -> str:
    """Return U (k = 2) as text; empty where it can't be told.

    A standard uncertainty is doubled. An expanded one is brought to k = 2 through its own coverage factor. One
    estimated from repeats, kept as ``t * s`` for 95 %, stands as it is: it is what two standard uncertainties
    are of many readings. Of a check's own repeats ``t * s`` is worked out, from two of them on. What comes from
    repeats is never below ``2 * resolution / sqrt(12)`` (GUM F.2.2.1): repeats that are all equal say that the
    scale is coarse, not that nothing is uncertain, and a guard band of nothing would be none.

    Parameters
    ----------
    kind
        One of ``KINDS``.
    entered, coverage_factor
        As stated.
    repeats
        The check's own readings of the measurand; used by ``repeats_of_check`` alone.
    resolution
        Of the measurand, in its unit; empty where it is not known.

    Examples
    --------
    >>> expanded("standard", "1.5", "", ()), expanded("expanded", "3", "2", ())
    ('3', '3')
    >>> expanded("repeats_of_check", "", "", (Decimal(12), Decimal(12)), "1")
    '0.5774'
    """
    if kind == "repeats_of_check":
        return _of_repeats(from_repeats(repeats).expanded_of_one, resolution) if len(repeats) > 1 else ""
    stated = Decimal(entered)
    if kind == "repeats":
        return _of_repeats(stated, resolution)
    if kind == "standard":
        return plain(expanded_from_standard(stated))
    if Decimal(coverage_factor) == TWO:
        return entered
    return plain(expanded_from_standard(standard_from_expanded(stated, Decimal(coverage_factor))))


def _of_repeats(found: Decimal, resolution: str) -> str:
    """Keep what repeats say from falling below what the resolution alone leaves open; at zero nothing is known."""
    least = rounded_up(Fraction(2 * float(resolution) / math.sqrt(12))) if resolution else Decimal(0)
    kept = max(found, least)
    return plain(kept, strip=True) if kept else ""
