"""The one comparison behind every verdict, for one reading or ten million.

Readings and references are whole numbers at one count of decimal places, so a departure d is a whole number
and an allowance a, which may be any fraction, becomes a whole bound without loss:

    d > a  <=>  d > floor(a)            d >= a  <=>  d > ceil(a) - 1

A qualified reading (more than, less than) is a half-line: its departure runs from ``low`` to ``high``, the
finite end not reached. A level is proven only where all of it is beyond, and cleared only where none of it is.
For the end that is not reached the same two bounds serve, whatever the strictness: some d < h is beyond a
exactly where h > floor(a), and every d > l is beyond a exactly where l > ceil(a) - 1.

Decision rules (JCGM 106:2012, clauses 7 and 8; ILAC-G8:09/2019, 4.2) move the two bounds by the expanded
uncertainty U: *simple* not at all, *guarded* both inwards, *zones* the clearing bound inwards and the proving
bound outwards. What lies between them is indeterminate.

Arithmetic is in 64-bit integers where that is proven to be enough beforehand, and otherwise in Python's
unbounded ones by the same lines.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from decimal import Decimal
from typing import Any, Literal, NamedTuple

import numpy as np
from numpy.typing import NDArray

from qa_tracker.core.allowances import needs_a_size, without_shares
from qa_tracker.core.criteria import Criterion, Level, Limit
from qa_tracker.core.decimals import places_of
from qa_tracker.core.errors import Invalid
from qa_tracker.core.verdict_plain import Buffers, fits, plain_codes, whole_limit

Rule = Literal["simple", "guarded", "zones"]
RULES: tuple[Rule, ...] = ("simple", "guarded", "zones")
Whole = NDArray[Any]
"""int64, or object holding Python integers."""

# Codes are ranks: a larger code is a worse verdict (PRACTICE's order of severity).
CONFORMING, INDETERMINATE_REMEDIAL, NOT_ASSESSABLE, REMEDIAL, INDETERMINATE_SUSPENSION, SUSPENSION = range(6)
UNCERTAIN_CODE: dict[Level, int] = {
    "remedial": INDETERMINATE_REMEDIAL,
    "suspension": INDETERMINATE_SUSPENSION,
}
PROVEN_CODE: dict[Level, int] = {"remedial": REMEDIAL, "suspension": SUSPENSION}

# Inputs, products and bounds up to LARGEST leave every sum below, and FAR beyond, in 64 bits: a departure is
# at most 2 * LARGEST, a moved bound too, and an open end stays at least FAR - LARGEST = 3 * LARGEST away.
LARGEST = 1 << 60
FAR = 1 << 62
FAR_UNBOUNDED = 1 << 2048
CHUNK = 1 << 17
"""Rows judged at once: few enough to stay in the cache, and enough that calls take longer than making them."""


@dataclass(frozen=True)
class Columns:
    """Readings judged by one criterion or many, one row each, all at ``places`` decimal places.

    Parameters
    ----------
    values
        Whole numbers, shape (n,).
    references
        Nominal, baseline or other reading per row; ignored with basis none. Any number where ``assessable``
        is false.
    places
        Decimal places of values, references and uncertainties; at least those of every absolute limit.
    qualifiers
        -1 less than, 0 exactly, 1 more than; None: all exact.
    uncertainties
        Expanded uncertainty U (k = 2) of the departure; -1 where it is not known, None: nowhere known.
    assessable
        False where the reading or its reference is missing; None: all can be judged.
    """

    values: Whole
    references: Whole
    places: int
    qualifiers: NDArray[np.int8] | None = None
    uncertainties: Whole | None = None
    assessable: NDArray[np.bool_] | None = None

    def rows(self, chosen: slice | NDArray[np.intp]) -> Columns:
        """Return the chosen rows."""
        return Columns(
            self.values[chosen],
            self.references[chosen],
            self.places,
            None if self.qualifiers is None else self.qualifiers[chosen],
            None if self.uncertainties is None else self.uncertainties[chosen],
            None if self.assessable is None else self.assessable[chosen],
        )


class Departures(NamedTuple):
    """Where each departure lies: from ``low`` to ``high``, ends not reached where ``open_ended``."""

    low: Whole
    high: Whole
    open_ended: NDArray[np.bool_]


def verdict_codes(criterion: Criterion, columns: Columns, rule: Rule = "simple") -> NDArray[np.uint8]:
    """Judge every row by one criterion without bands or grades.

    Parameters
    ----------
    criterion
        With at least one level.
    columns
        The readings; none at all gives an empty answer.
    rule
        ``guarded`` and ``zones`` need uncertainties: a row without is compared simply, and what is not then
        proven beyond a level is not assessable.

    Returns
    -------
    uint8 array, shape (n,)
        0 conforming, 1 indeterminate at the remedial level, 2 not assessable, 3 remedial, 4 indeterminate at
        the suspension level, 5 suspension.

    Examples
    --------
    >>> loss = Criterion("baseline", "below", True, Limit(Decimal("6")), Limit(Decimal("10")))
    >>> values = np.array([1460, 1459, 1420, 1419])
    >>> verdict_codes(loss, Columns(values, np.full(4, 1520), 1)).tolist()
    [0, 3, 3, 5]
    """
    if not criterion.levels():
        raise Invalid("kernel.no_level")
    if criterion.of_own_spread:
        raise Invalid("kernel.own_spread")
    if _is_plain(columns, rule) and fits(criterion, columns.places, columns.values, columns.references):
        return _plainly(criterion, columns)
    if not fits_in_64_bits(criterion, columns):
        columns = _unbounded(columns)
    departures = _departures(criterion, columns)
    codes = np.zeros(len(columns.values), np.uint8)
    # Ascending severity, so the last one written is the worst.
    for level, limit in criterion.levels():
        clear, beyond = _bounds(criterion, limit, columns, departures.open_ended, rule)
        codes[_where(departures.high > clear)] = UNCERTAIN_CODE[level]
        proven = _where(departures.low > beyond)
        codes[proven] = PROVEN_CODE[level]
    if rule != "simple":
        known = columns.uncertainties
        codes[(codes < NOT_ASSESSABLE) & (True if known is None else _where(known < 0))] = NOT_ASSESSABLE
    _settle(criterion, columns, rule, codes)
    return codes


def _is_plain(columns: Columns, rule: Rule) -> bool:
    """Tell whether rows are exact readings in 64-bit integers, to be judged by simple acceptance."""
    if rule != "simple" or columns.values.dtype != np.int64 or columns.references.dtype != np.int64:
        return False
    return columns.qualifiers is None or not columns.qualifiers.any()


def _plainly(criterion: Criterion, columns: Columns) -> NDArray[np.uint8]:
    rows = len(columns.values)
    codes, room = np.empty(rows, np.uint8), Buffers(min(rows, CHUNK))
    for first in range(0, rows, CHUNK):
        part = slice(first, first + CHUNK)
        values, references = columns.values[part], columns.references[part]
        plain_codes(criterion, columns.places, values, references, room, codes[part])
    _settle(criterion, columns, "simple", codes)
    return codes


def fits_in_64_bits(criterion: Criterion, columns: Columns) -> bool:
    """Tell beforehand whether no step of judging these rows can leave 64 bits."""
    arrays = (columns.values, columns.references, columns.uncertainties)
    kinds = {part.dtype for part in arrays if part is not None}
    if not kinds <= {np.dtype(np.int64), np.dtype(object)}:
        raise Invalid("kernel.numbers", kinds=", ".join(sorted(str(kind) for kind in kinds)))
    if np.dtype(object) in kinds:
        return False
    largest = [_largest(part) for part in arrays if part is not None]
    for _, limit in criterion.levels():
        absolute, percent, divisor = whole_limit(limit, columns.places)
        largest += [abs(absolute or 0), (percent or 0) * max(largest[1], 1), divisor]
    return max(largest) <= LARGEST


def _largest(numbers: Whole) -> int:
    return max(-int(numbers.min()), int(numbers.max())) if len(numbers) else 0


def _unbounded(columns: Columns) -> Columns:
    """Return the same rows in Python's own integers."""
    known = columns.uncertainties
    return replace(
        columns,
        values=columns.values.astype(object),
        references=columns.references.astype(object),
        uncertainties=None if known is None else known.astype(object),
    )


def _where(comparison: Any) -> NDArray[np.bool_]:
    """Return a comparison as booleans: object arrays compare to objects."""
    return np.asarray(comparison, dtype=np.bool_)


def _departures(criterion: Criterion, columns: Columns) -> Departures:
    """Turn values into departures that grow as things get worse."""
    values = columns.values
    change = values - columns.references if criterion.basis in ("nominal", "baseline") else values
    low, high, open_ended = _half_lines(change, columns.qualifiers)
    if criterion.direction == "above":
        return Departures(low, high, open_ended)
    if criterion.direction == "below":
        return Departures(-high, -low, open_ended)
    # A half-line that holds no change at all starts at zero, and reaches it.
    across = _where(low < 0) & _where(high > 0)
    nearest = np.where(across, 0, np.minimum(np.abs(low), np.abs(high)))
    return Departures(nearest, np.maximum(np.abs(low), np.abs(high)), open_ended & ~across)


def _half_lines(change: Whole, qualifiers: NDArray[np.int8] | None) -> Departures:
    if qualifiers is None or not qualifiers.any():
        return Departures(change, change, np.zeros(len(change), np.bool_))
    far = FAR_UNBOUNDED if change.dtype == object else FAR
    low, high = np.where(qualifiers < 0, -far, change), np.where(qualifiers > 0, far, change)
    return Departures(low, high, qualifiers != 0)


def _bounds(
    criterion: Criterion, limit: Limit, columns: Columns, open_ended: NDArray[np.bool_], rule: Rule
) -> tuple[Whole, Whole]:
    """Return the bounds above which a departure is no longer cleared, and is proven beyond."""
    floor, whole = _allowances(criterion, limit, columns)
    clear = floor - (whole & (not criterion.strict) & ~open_ended)
    beyond = floor - (whole & (open_ended | (not criterion.strict)))
    if rule == "simple" or columns.uncertainties is None:
        return clear, beyond
    moved = np.maximum(columns.uncertainties, 0)
    return clear - moved, beyond + moved if rule == "zones" else beyond - moved


def _allowances(criterion: Criterion, limit: Limit, columns: Columns) -> tuple[Whole, NDArray[np.bool_]]:
    """Return floor(allowance) and whether the allowance is whole, per row.

    A lower limit L becomes the allowance -L for the departure -value.
    """
    sign = -1 if criterion.direction == "below" and criterion.basis in ("none", "ratio") else 1
    absolute, percent, divisor = whole_limit(limit, columns.places)
    exact = np.ones(len(columns.values), np.bool_)
    fixed = np.full(len(columns.values), sign * (absolute or 0), columns.values.dtype)
    if percent is None:
        return fixed, exact
    share = np.abs(columns.references) * (sign * percent)
    floor, whole = share // divisor, _where(share % divisor == 0)
    if absolute is None:
        return floor, whole
    if limit.governs == "larger":
        governs = _where(fixed > floor) | (_where(fixed == floor) & whole)
    else:
        governs = _where(fixed <= floor)
    return np.where(governs, fixed, floor), governs | whole


def _settle(criterion: Criterion, columns: Columns, rule: Rule, codes: NDArray[np.uint8]) -> None:
    """Put right the rows that lack something: marked so, or a percentage of a reference that has no size."""
    if needs_a_size(criterion):
        sizes = columns.references
        sizeless = _where(sizes <= 0 if criterion.basis == "ratio" else sizes == 0)
        if sizeless.any():
            rows = np.flatnonzero(sizeless)
            codes[rows] = _codes_without_shares(criterion, columns.rows(rows), rule)
    if columns.assessable is not None:
        codes[~columns.assessable] = NOT_ASSESSABLE


def _codes_without_shares(criterion: Criterion, columns: Columns, rule: Rule) -> NDArray[np.uint8]:
    """Judge by the absolute parts alone, which prove that a level is passed and clear nothing."""
    left = without_shares(criterion)
    if not left.levels():
        return np.full(len(columns.values), NOT_ASSESSABLE, np.uint8)
    return np.maximum(verdict_codes(left, columns, rule), np.uint8(NOT_ASSESSABLE))


def finest_places(criterion: Criterion, *numbers: Decimal | None) -> int:
    """Return the count of places at which the numbers and every absolute limit are whole."""
    known = [number for number in numbers if number is not None]
    known += [limit.absolute for _, limit in criterion.levels() if limit.absolute is not None]
    return max((places_of(number) for number in known), default=0)


def column(*numbers: int) -> Whole:
    """Return whole numbers as a column: int64 where they fit, Python's integers where not."""
    fits = all(abs(number) <= LARGEST for number in numbers)
    return np.array(numbers, np.int64 if fits else object)
