"""The kernel's short way: exact readings by simple acceptance, in 64-bit integers, chunk by chunk in the cache.

No allowance is worked out: a share p / q of a reference r is passed where ``q d > p |r|``, which is exact in whole
numbers as long as both products are. Whether they are is asked of every chunk beforehand.
"""

from __future__ import annotations

from typing import Any

import numpy as np
from numpy.typing import NDArray

from qa_tracker.core.criteria import Criterion, Limit
from qa_tracker.core.decimals import places_of, scaled_at, ten_to

Whole = NDArray[Any]
NOT_ASSESSABLE, REMEDIAL, SUSPENSION = 2, 3, 5
CODE_OF_LEVEL = {"remedial": REMEDIAL, "suspension": SUSPENSION}
FITS = 1 << 62
"""Sums and products up to here leave 64 bits room."""


class Buffers:
    """Room for one chunk's intermediate numbers, used again and again."""

    def __init__(self, rows: int) -> None:
        self.departure = np.empty(rows, np.int64)
        self.share = np.empty(rows, np.int64)
        self.scaled = np.empty(rows, np.int64)
        self.beyond = np.empty(rows, np.bool_)
        self.other = np.empty(rows, np.bool_)


def whole_limit(limit: Limit, places: int) -> tuple[int | None, int | None, int]:
    """Return the absolute part at ``places``, and the percentage as whole number and its divisor."""
    absolute = None if limit.absolute is None else scaled_at(limit.absolute, places)
    if limit.percent is None:
        return absolute, None, 1
    own = places_of(limit.percent)
    return absolute, scaled_at(limit.percent, own), ten_to(own + 2)


def fits(criterion: Criterion, places: int, values: Whole, references: Whole) -> bool:
    """Tell whether every sum and product of judging these rows stays below ``FITS``."""
    most = _largest(values)
    uses_reference = criterion.basis != "none"
    reference = _largest(references) if uses_reference else 0
    departure = most + reference
    bounds = [departure]
    for _, limit in criterion.levels():
        absolute, percent, divisor = whole_limit(limit, places)
        bounds.append(abs(absolute or 0))
        if percent is not None:
            # Each factor too: a zero beside it hides it in the product.
            bounds += [percent, divisor, percent * reference, departure * divisor]
    return max(bounds) <= FITS


def _largest(numbers: Whole) -> int:
    return max(-int(numbers.min()), int(numbers.max())) if len(numbers) else 0


def plain_codes(
    criterion: Criterion, places: int, values: Whole, references: Whole, room: Buffers, out: NDArray[np.uint8]
) -> None:
    """Write the codes of one chunk into ``out``; the chunk ``fits``.

    Parameters
    ----------
    criterion
        Without bands or grades, its limits plain ones.
    values, references
        int64, shape (n,), at ``places``; references are not read with basis none.
    out
        uint8, shape (n,): 0 conforming, 2 not assessable, 3 remedial, 5 suspension.
    """
    rows = len(values)
    departure = _departure(criterion, values, references, room.departure[:rows])
    out[:] = 0
    for level, limit in criterion.levels():
        beyond = _beyond(criterion, limit, places, departure, references, room)
        # The levels' allowances need not be nested, so the worse of the two counts.
        np.maximum(out, beyond.view(np.uint8) * np.uint8(CODE_OF_LEVEL[level]), out=out)


def _departure(criterion: Criterion, values: Whole, references: Whole, into: Whole) -> Whole:
    """Give what grows as things get worse; lower limits are compared the other way round instead."""
    if criterion.basis in ("none", "ratio"):
        return np.abs(values, out=into) if criterion.direction == "either" else values
    first, second = (references, values) if criterion.direction == "below" else (values, references)
    np.subtract(first, second, out=into)
    return np.abs(into, out=into) if criterion.direction == "either" else into


def _beyond(
    criterion: Criterion, limit: Limit, places: int, departure: Whole, references: Whole, room: Buffers
) -> NDArray[np.bool_]:
    rows, downwards = len(departure), criterion.direction == "below" and criterion.basis in ("none", "ratio")
    upper = np.greater if criterion.strict else np.greater_equal
    lower = np.less if criterion.strict else np.less_equal
    passed = lower if downwards else upper
    absolute, percent, divisor = whole_limit(limit, places)
    beyond, other = room.beyond[:rows], room.other[:rows]
    if absolute is not None:
        passed(departure, absolute, out=beyond)
    if percent is None:
        return beyond
    share = np.abs(references, out=room.share[:rows])
    np.multiply(share, percent, out=share)
    scaled = np.multiply(departure, divisor, out=room.scaled[:rows])
    if absolute is None:
        return np.asarray(passed(scaled, share, out=beyond), np.bool_)
    passed(scaled, share, out=other)
    # Beyond the larger of two is beyond both, beyond the smaller is beyond either.
    both = np.logical_and if limit.governs == "larger" else np.logical_or
    return np.asarray(both(beyond, other, out=beyond), np.bool_)
