"""Readings that were judged once, judged in bulk by another criterion with what was kept beside them.

This asks the same kernel as ``conformity.judge`` and gives the same verdicts, without the sentences: those are
made only for the few readings that are shown.
"""

from __future__ import annotations

from collections.abc import Sequence
from decimal import Decimal
from functools import lru_cache
from typing import NamedTuple, TypeAlias

import numpy as np
from numpy.typing import NDArray

from qa_tracker.core.conformity import NUMBER_KINDS, WORD_KINDS
from qa_tracker.core.criteria import Criterion
from qa_tracker.core.decimals import from_scaled, places_of, scaled_at, ten_to
from qa_tracker.core.judgement import VERDICT_OF_CODE
from qa_tracker.core.open_baseline import AgainstBound, code_against_bound
from qa_tracker.core.own_spread import OwnSpread, at_spread, lacking_setups
from qa_tracker.core.verdict_kernel import (
    NOT_ASSESSABLE,
    PROVEN_CODE,
    Columns,
    Rule,
    column,
    finest_places,
    verdict_codes,
)

Whole: TypeAlias = tuple[int, int]
"""A number as a whole number and its decimal places."""
SIGNS = {"<": -1, "=": 0, ">": 1}


class Kept(NamedTuple):
    """One reading with what its verdict kept; None where nothing was.

    Parameters
    ----------
    kind
        Of the measurand.
    qualifier, word, value
        The reading: ``word`` is a grade, a yes or a no, ``value`` a number.
    baseline, baseline_qualifier
        The baseline it was compared with.
    reference
        The nominal value, or the other reading of a ratio.
    quantity
        Banding quantity.
    uncertainty
        Expanded uncertainty U (k = 2).
    rule
        Decision rule.
    spread
        Of the baseline's set-ups.
    never_below_zero
        Of the quantity.
    least_reference
        Of a ratio: to a smaller other reading it is not assessable.
    """

    kind: str
    qualifier: str = "="
    word: str = ""
    value: Whole | None = None
    baseline: Whole | None = None
    baseline_qualifier: str = "="
    reference: Whole | None = None
    quantity: Decimal | None = None
    uncertainty: Whole | None = None
    rule: Rule = "simple"
    spread: OwnSpread | None = None
    never_below_zero: bool = False
    least_reference: Whole | None = None


@lru_cache(maxsize=4096)
def whole(text: str) -> Whole | None:
    """Read a kept number; an empty text is none.

    Examples
    --------
    >>> whole("80.0"), whole("")
    ((800, 1), None)
    """
    if not text:
        return None
    number = Decimal(text)
    places = places_of(number)
    return scaled_at(number, places), places


def verdict_ranks(criterion: Criterion, rows: Sequence[Kept]) -> NDArray[np.uint8]:
    """Judge kept readings by a criterion; equal to ranking ``conformity.judge`` of each.

    Parameters
    ----------
    criterion
        Of any shape.
    rows
        Readings in the criterion's unit, shape (n,); none gives an empty answer. One that lacks what the criterion
        needs (value, reference, band, set-ups) is not assessable.

    Returns
    -------
    uint8 array, shape (n,)
        Positions in ``judgement.VERDICT_OF_CODE``: 0 conforming to 5 suspension.

    Examples
    --------
    >>> from qa_tracker.core.criteria import Limit
    >>> loss = Criterion("baseline", "below", True, Limit(Decimal("6")), Limit(Decimal("10")))
    >>> rows = [Kept("number", value=(value, 0), baseline=(152, 0)) for value in (146, 145, 141)]
    >>> verdict_ranks(loss, [*rows, Kept("number", value=(152, 0))]).tolist()
    [0, 3, 5, 2]
    """
    ranks = np.full(len(rows), NOT_ASSESSABLE, np.uint8)
    if criterion.grades:
        words = {grade: _rank_of(verdict) for grade, verdict in criterion.grades}
        for position, row in enumerate(rows):
            if row.kind in WORD_KINDS:
                ranks[position] = words.get(row.word, NOT_ASSESSABLE)
        return ranks
    groups: dict[tuple[int, Rule], list[int]] = {}
    flats = _Flats(criterion)
    for position, row in enumerate(rows):
        flat = flats.of(row)
        if isinstance(flat, int):
            ranks[position] = flat
        elif flat.basis == "baseline" and row.baseline_qualifier != "=":
            ranks[position] = _against_bound(flat, row)
        else:
            groups.setdefault((id(flat), row.rule), []).append(position)
    for (key, rule), positions in groups.items():
        flat = flats.by_key[key]
        ranks[positions] = verdict_codes(flat, _columns(flat, [rows[one] for one in positions]), rule)
    return ranks


def _rank_of(verdict: str) -> int:
    return next(rank for rank, (name, _) in enumerate(VERDICT_OF_CODE) if name == verdict)


class _Flats:
    """The criterion as it holds for a reading: at its band and at its device's own spread, each made once."""

    def __init__(self, criterion: Criterion) -> None:
        self.criterion = criterion
        self.by_key: dict[int, Criterion] = {}
        self._at_band: dict[Decimal | None, Criterion | None] = {}
        self._at_spread: dict[tuple[int, OwnSpread | None], Criterion | None] = {}

    def of(self, row: Kept) -> Criterion | int:
        """The criterion to compare by, or the rank where nothing is compared."""
        if row.kind not in NUMBER_KINDS or (row.value is None and row.qualifier != "not_seen"):
            return NOT_ASSESSABLE
        flat = self._band(row.quantity)
        if flat is None:
            return NOT_ASSESSABLE
        if row.qualifier == "not_seen":
            return NOT_ASSESSABLE if flat.direction == "either" else PROVEN_CODE[flat.levels()[-1][0]]
        if not _has_reference(flat, row) or _is_below_zero(flat, row) or _is_too_small(flat, row):
            return NOT_ASSESSABLE
        settled = self._spread(flat, row.spread) if flat.of_own_spread else flat
        if settled is None:
            return NOT_ASSESSABLE
        self.by_key[id(settled)] = settled
        return settled

    def _band(self, quantity: Decimal | None) -> Criterion | None:
        if not self.criterion.bands:
            return self.criterion
        if quantity not in self._at_band:
            self._at_band[quantity] = None if quantity is None else self.criterion.at(quantity)
        return self._at_band[quantity]

    def _spread(self, flat: Criterion, spread: OwnSpread | None) -> Criterion | None:
        key = id(flat), spread
        if key not in self._at_spread:
            enough = spread if lacking_setups(spread) is None else None
            self._at_spread[key] = at_spread(flat, enough)[0] if enough else None
        return self._at_spread[key]


def _has_reference(flat: Criterion, row: Kept) -> bool:
    if flat.basis == "baseline":
        return row.baseline is not None and row.baseline_qualifier != "not_seen"
    return flat.basis == "none" or row.reference is not None


def _is_below_zero(flat: Criterion, row: Kept) -> bool:
    """Whether a number is below zero that never can be; less than zero is below it too."""
    if not row.never_below_zero:
        return False
    based = flat.basis == "baseline"
    numbers = [
        (row.value, row.qualifier),
        (row.baseline, row.baseline_qualifier) if based else (row.reference, "="),
    ]
    if flat.basis == "none":
        numbers.pop()
    return any(
        number is not None and (number[0] < 0 or (qualifier == "<" and not number[0]))
        for number, qualifier in numbers
    )


def _is_too_small(flat: Criterion, row: Kept) -> bool:
    """Whether a ratio is to a reading too small to take a share of."""
    if flat.basis != "ratio" or row.reference is None or row.least_reference is None:
        return False
    return from_scaled(*row.reference) < from_scaled(*row.least_reference)


def _against_bound(flat: Criterion, row: Kept) -> int:
    value, baseline = row.value or (0, 0), row.baseline or (0, 0)
    asked = AgainstBound(
        from_scaled(*value),
        SIGNS[row.qualifier],
        from_scaled(*baseline),
        SIGNS[row.baseline_qualifier],
        None if row.uncertainty is None else from_scaled(*row.uncertainty),
        row.never_below_zero,
    )
    return code_against_bound(flat, asked, row.rule)


def _columns(flat: Criterion, rows: Sequence[Kept]) -> Columns:
    """The readings as whole numbers of one count of places."""
    references = [row.baseline if flat.basis == "baseline" else row.reference for row in rows]
    numbers = [*(row.value for row in rows), *references, *(row.uncertainty for row in rows)]
    places = max(finest_places(flat), *(each[1] for each in numbers if each is not None), 0)
    steps = [ten_to(power) for power in range(places + 1)]

    def at(number: Whole | None, missing: int) -> int:
        return missing if number is None else number[0] * steps[places - number[1]]

    return Columns(
        values=column(*(at(row.value, 0) for row in rows)),
        references=column(*(at(each, 0) for each in references)),
        places=places,
        qualifiers=np.array([SIGNS[row.qualifier] for row in rows], np.int8),
        uncertainties=column(*(at(row.uncertainty, -1) for row in rows)),
    )
