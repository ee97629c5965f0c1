"""Readings of many criteria at once: each row is judged by the criterion that an index names.

How one criterion judges its rows is in ``verdict_kernel``; here rows are found, cut into chunks, and handed over.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from concurrent.futures import ThreadPoolExecutor
from functools import partial
from itertools import pairwise
from typing import Any

import numpy as np
from numpy.typing import NDArray

from qa_tracker.core.criteria import Criterion
from qa_tracker.core.errors import Invalid
from qa_tracker.core.verdict_kernel import CHUNK, NOT_ASSESSABLE, Columns, Rule, verdict_codes

FEW = 1 << 10
"""Rows a run of one criterion has on average, from which runs are judged where they stand."""


def verdict_codes_by_criterion(
    criteria: Sequence[Criterion],
    index: NDArray[Any],
    columns: Columns,
    rule: Rule = "simple",
    threads: int = 1,
) -> NDArray[np.uint8]:
    """Judge every row by the criterion its index names, in chunks.

    Rows of one criterion that stand together are judged where they stand; scattered ones are gathered first.

    Parameters
    ----------
    criteria
        Without bands or grades: a banded one is put in once for each band (``Criterion.at``).
    index
        Position in ``criteria`` per row, shape (n,); -1 where the reading lies outside every band.
    threads
        That work side by side where rows stand together.

    Returns
    -------
    uint8 array, shape (n,)
        As ``verdict_codes``; not assessable where the index is -1.
    """
    codes = np.full(len(index), NOT_ASSESSABLE, np.uint8)
    _check_index(index, len(criteria))
    starts = _run_starts(index)
    if len(starts) * FEW > len(index) + FEW * len(criteria):
        return _by_groups(criteria, index, columns, rule, codes)
    judge_run = partial(_judge_run, criteria, index, columns, rule, codes)
    runs = [(int(a), int(b)) for a, b in pairwise([*starts, len(index)])]
    if threads == 1:
        for start, end in runs:
            judge_run(start, end)
        return codes
    # NumPy lets go of the interpreter while it computes, so chunks of one run may go side by side.
    with ThreadPoolExecutor(threads) as pool:
        list(pool.map(lambda part: judge_run(*part), _parts(runs, threads)))
    return codes


def _check_index(index: NDArray[Any], count: int) -> None:
    if len(index) and (int(index.min()) < -1 or int(index.max()) >= count):
        raise Invalid("kernel.index", count=str(count))


def _run_starts(index: NDArray[Any]) -> NDArray[np.intp]:
    """Return where each run of equal criteria begins."""
    if not len(index):
        return np.empty(0, np.intp)
    return np.concatenate(([0], np.flatnonzero(index[1:] != index[:-1]) + 1))


def _parts(runs: list[tuple[int, int]], threads: int) -> Iterator[tuple[int, int]]:
    """Cut runs so that every thread has something to do."""
    rows = max(CHUNK, (runs[-1][1] if runs else 0) // (4 * threads))
    for start, end in runs:
        for first in range(start, end, rows):
            yield first, min(first + rows, end)


def _judge_run(
    criteria: Sequence[Criterion],
    index: NDArray[Any],
    columns: Columns,
    rule: Rule,
    codes: NDArray[np.uint8],
    start: int,
    end: int,
) -> None:
    """Judge rows that stand together and have one criterion, without copying them."""
    position = int(index[start])
    if position < 0:
        return
    for first in range(start, end, CHUNK):
        rows = slice(first, min(first + CHUNK, end))
        codes[rows] = verdict_codes(criteria[position], columns.rows(rows), rule)


def _by_groups(
    criteria: Sequence[Criterion],
    index: NDArray[Any],
    columns: Columns,
    rule: Rule,
    codes: NDArray[np.uint8],
) -> NDArray[np.uint8]:
    """Gather each criterion's rows, judge them, and put the codes back where they belong."""
    for position, rows in _groups(index, len(criteria)):
        if position >= 0:
            codes[rows] = verdict_codes(criteria[position], columns.rows(rows), rule)
    return codes


def _groups(index: NDArray[Any], count: int) -> Iterator[tuple[int, NDArray[np.intp]]]:
    """Yield each criterion's rows, a chunk at a time."""
    # Small integers are sorted by radix, in time proportional to the rows.
    narrow = index.astype(np.int16) if count < 1 << 15 else index
    order = np.argsort(narrow, kind="stable")
    ends = np.searchsorted(narrow[order], np.arange(-1, count + 1))
    for position, (start, end) in enumerate(pairwise(ends), start=-1):
        for first in range(int(start), int(end), CHUNK):
            yield position, order[first : min(first + CHUNK, int(end))]
