"""The expanded uncertainty a reading is judged with, from what a physicist stated about its measurand."""

from __future__ import annotations

from collections.abc import Sequence
from decimal import Decimal
from typing import Literal

from qa_tracker.core.decimals import plain
from qa_tracker.core.uncertainty import expanded_from_standard, from_repeats, standard_from_expanded

Kind = Literal["standard", "expanded", "repeats", "repeats_of_check"]
KINDS: tuple[Kind, ...] = ("standard", "expanded", "repeats", "repeats_of_check")
TWO = Decimal(2)


def expanded(kind: str, entered: str, coverage_factor: str, repeats: Sequence[Decimal]) -> str:
    """Return U (k = 2) as text; empty where it can't be told.

    A standard uncertainty is doubled. An expanded one is brought to k = 2 through its own coverage factor. One
    estimated from repeats, kept as ``t * s`` for 95 %, stands as it is: it is what two standard uncertainties
    are of many readings. Of a check's own repeats ``t * s`` is worked out, from two of them on.

    Parameters
    ----------
    kind
        One of ``KINDS``.
    entered, coverage_factor
        As stated.
    repeats
        The check's own readings of the measurand; used by ``repeats_of_check`` alone.

    Examples
    --------
    >>> expanded("standard", "1.5", "", ()), expanded("expanded", "3", "2", ())
    ('3', '3')
    """
    if kind == "repeats_of_check":
        return plain(from_repeats(repeats).expanded_of_one, strip=True) if len(repeats) > 1 else ""
    stated = Decimal(entered)
    if kind == "standard":
        return plain(expanded_from_standard(stated))
    if kind == "repeats" or Decimal(coverage_factor) == TWO:
        return entered
    return plain(expanded_from_standard(standard_from_expanded(stated, Decimal(coverage_factor))))
