"""Readings of many criteria at once: each row is judged by the criterion that an index names.

How one criterion judges its rows is in ``verdict_kernel``; here rows are found, cut into chunks, and handed over.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from itertools import pairwise
from typing import Any

import numpy as np
from numpy.typing import NDArray

from qa_tracker.core.criteria import Criterion
from qa_tracker.core.errors import Invalid
from qa_tracker.core.verdict_kernel import CHUNK, NOT_ASSESSABLE, Columns, Rule, verdict_codes

FEW = 1 << 10
"""Rows a run of one criterion has on average, from which runs are judged where they stand."""
BLOCK = 1 << 18
"""Scattered rows gathered at once: what is fetched here and there stays near the processor."""


def verdict_codes_by_criterion(
    criteria: Sequence[Criterion],
    index: NDArray[Any],
    columns: Columns,
    rule: Rule = "simple",
) -> NDArray[np.uint8]:
    """Judge every row by the criterion its index names, in chunks.

    Rows of one criterion that stand together are judged where they stand; scattered ones are gathered first,
    a block at a time.

    Parameters
    ----------
    criteria
        Without bands or grades: a banded one is put in once for each band (``Criterion.at``).
    index
        Position in ``criteria`` per row, shape (n,); -1 where the reading lies outside every band.

    Returns
    -------
    uint8 array, shape (n,)
        As ``verdict_codes``; not assessable where the index is -1. No rows give an empty answer.

    Examples
    --------
    >>> from decimal import Decimal
    >>> from qa_tracker.core.criteria import Limit
    >>> loss = Criterion("baseline", "below", True, Limit(Decimal("6")), Limit(Decimal("10")))
    >>> upper = Criterion("none", "above", False, Limit(Decimal("2")))
    >>> rows = Columns(np.array([145, 20, 19, 20]), np.array([152, 0, 0, 0]), places=1)
    >>> verdict_codes_by_criterion([loss, upper], np.array([0, 1, 1, -1]), rows).tolist()
    [0, 3, 0, 2]
    """
    changes = index[1:] != index[:-1]
    together = np.count_nonzero(changes) * FEW <= len(index) + FEW * len(criteria)
    runs = _runs(changes, len(index)) if together else [(0, len(index))]
    _check_index(index[[start for start, _ in runs]] if together else index, len(criteria))
    judge_rows = _judge_run if together else _judge_block
    codes = np.empty(len(index), np.uint8)
    for start, end in _parts(runs, CHUNK if together else max(BLOCK, FEW * len(criteria))):
        part = slice(start, end)
        judge_rows(criteria, index[part], columns.rows(part), rule, codes[part])
    return codes


def _check_index(index: NDArray[Any], count: int) -> None:
    if len(index) and (int(index.min()) < -1 or int(index.max()) >= count):
        raise Invalid("kernel.index", count=str(count))


def _runs(changes: NDArray[np.bool_], rows: int) -> list[tuple[int, int]]:
    """Return where each run of equal criteria begins and ends; there is none where there are no rows."""
    return list(pairwise([0, *(np.flatnonzero(changes) + 1).tolist(), rows])) if rows else []


def _parts(runs: list[tuple[int, int]], most: int) -> Iterator[tuple[int, int]]:
    """Cut what is longer than ``most`` rows."""
    for start, end in runs:
        for first in range(start, end, most):
            yield first, min(first + most, end)


def _judge_run(
    criteria: Sequence[Criterion],
    index: NDArray[Any],
    columns: Columns,
    rule: Rule,
    codes: NDArray[np.uint8],
) -> None:
    """Judge rows that stand together and have one criterion, without copying them."""
    position = int(index[0])
    codes[:] = NOT_ASSESSABLE if position < 0 else verdict_codes(criteria[position], columns, rule)


def _judge_block(
    criteria: Sequence[Criterion],
    index: NDArray[Any],
    columns: Columns,
    rule: Rule,
    codes: NDArray[np.uint8],
) -> None:
    """Gather each criterion's rows, judge them, and put the codes back where they belong."""
    codes[:] = NOT_ASSESSABLE
    for position, rows in _groups(index, len(criteria)):
        if position >= 0:
            codes[rows] = verdict_codes(criteria[position], columns.rows(rows), rule)


def _groups(index: NDArray[Any], count: int) -> Iterator[tuple[int, NDArray[np.intp]]]:
    """Yield each criterion's rows, a chunk at a time."""
    # Small integers are sorted by radix, in time proportional to the rows.
    narrow = index.astype(np.int16 if count < 1 << 15 else np.int64)
    order = np.argsort(narrow, kind="stable")
    ends = np.searchsorted(narrow[order], np.arange(-1, count + 1, dtype=narrow.dtype))
    for position, (start, end) in enumerate(pairwise(ends.tolist()), start=-1):
        for first, last in _parts([(start, end)], CHUNK):
            yield position, order[first:last]
