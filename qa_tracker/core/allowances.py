"""How far a limit lets a reading go from its reference, exactly.

The decimal arithmetic here is what a sentence shows; the vectorised comparison in ``verdict_kernel`` does the
same in whole numbers, and a property test holds the two together.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from decimal import Decimal
from typing import Literal

from qa_tracker.core.criteria import Criterion, Limit
from qa_tracker.core.decimals import from_scaled, places_of, scaled_at

GovernedBy = Literal["absolute", "percent"]
LEAST_STEPS = 10
"""Steps of its resolution that a reading has at least, for a ratio to it to mean something: common practice, no source."""


@dataclass(frozen=True)
class Allowance:
    """An allowance with the parts it came from.

    Parameters
    ----------
    size
        The allowance, in the measurand's unit.
    governed_by
        Which part it is.
    percent_value
        The percentage turned into the measurand's unit; None where the limit has no percentage.
    """

    size: Decimal
    governed_by: GovernedBy
    percent_value: Decimal | None


def needs_a_size(criterion: Criterion) -> bool:
    """Tell whether a reference of zero leaves a level without meaning: its percentage alone may decide."""
    return any(
        limit.percent is not None and (limit.absolute is None or limit.governs != "larger")
        for _, limit in criterion.levels()
    )


def without_shares(criterion: Criterion) -> Criterion:
    """Return what is left of a criterion where no share can be taken: the absolute part of each level that has one.

    Beyond the absolute part is beyond the limit where the larger governs a reference of zero, and wherever the smaller
    does. Within it is within the limit only in the first case.

    Examples
    --------
    >>> left = without_shares(Criterion("baseline", remedial=Limit(percent=Decimal(5)), suspension=Limit(Decimal(9))))
    >>> left.remedial, left.suspension.absolute
    (None, Decimal('9'))
    """
    kept = {level: Limit(limit.absolute) for level, limit in criterion.levels() if limit.absolute is not None}
    return replace(criterion, remedial=kept.get("remedial"), suspension=kept.get("suspension"))


def least_reference(resolution: str) -> Decimal:
    """Return the least other reading of a ratio: ``LEAST_STEPS`` steps of its resolution.

    One step is then a tenth of it at most. Common practice, no source.

    Examples
    --------
    >>> least_reference("0.5")
    Decimal('5.0')
    """
    step = Decimal(resolution)
    places = places_of(step)
    return from_scaled(LEAST_STEPS * scaled_at(step, places), places)


def share_of(percent: Decimal, reference: Decimal) -> Decimal:
    """Return percent / 100 * |reference| exactly: two decimals always have a decimal product.

    Examples
    --------
    >>> share_of(Decimal("1.5"), Decimal("40"))
    Decimal('0.600')
    """
    places, own = places_of(percent), places_of(reference)
    product = scaled_at(percent, places) * abs(scaled_at(reference, own))
    return from_scaled(product, places + own + 2)


def allowance(limit: Limit, reference: Decimal | None) -> Allowance:
    """Return what a limit allows at a reference.

    The absolute part, or ``share_of`` the percentage; of both, the larger, or (smaller, either) the smaller.
    Equal parts are said to be governed by the absolute one.

    Parameters
    ----------
    limit
        With a percentage only where there is a reference.
    reference
        Nominal, baseline or other reading; None with basis none. At zero a percentage allows nothing.

    Examples
    --------
    >>> allowance(Limit(Decimal("1.5"), Decimal("1.5")), Decimal("200")).size
    Decimal('3.000')
    """
    if limit.percent is None or reference is None:
        return Allowance(limit.absolute or Decimal(0), "absolute", None)
    share = share_of(limit.percent, reference)
    if limit.absolute is None or (
        share > limit.absolute if limit.governs == "larger" else share < limit.absolute
    ):
        return Allowance(share, "percent", share)
    return Allowance(limit.absolute, "absolute", share)
