"""A million random decimals through the kernel and through the definition in fractions: no verdict differs.

Readings lie at every limit and one unit of resolution to each side of it, and anywhere about. Those at the limits are
judged one by one in ``Fraction``. All are judged by witnesses besides: as bounds are whole in halves of one common
denominator, a half-line is known by three of its points, the one next to its end, a far one, and zero if it holds it.
"""

from __future__ import annotations

from fractions import Fraction
from math import lcm

import definition_in_fractions as definition
import numpy as np
import pytest

from qa_tracker.core.criteria import Criterion, Limit
from qa_tracker.core.decimals import from_scaled
from qa_tracker.core.verdict_groups import verdict_codes_by_criterion
from qa_tracker.core.verdict_kernel import Columns

# Name: rule, whether some readings are qualified. Each at every count of places: a million readings in all.
WAYS = {
    "simple": ("simple", False),
    "qualified": ("simple", True),
    "guarded": ("guarded", True),
    "zones": ("zones", True),
}
PLACES = (0, 1, 2, 3, 6)
SHAPES = [
    (basis, direction)
    for basis in ("nominal", "baseline", "none", "ratio")
    for direction in ("either", "above", "below")
    if (basis, direction) != ("ratio", "either")
]
CRITERIA = 8 * len(SHAPES)
ROWS = 570
"""Readings of one criterion."""
SMALL, VAST = 10**4, 2 * 10**17
"""Sizes of readings in units of resolution; products with the vast ones leave 64 bits."""
MARKS = {-1: "<", 0: "=", 1: ">"}
UNCERTAIN, PROVEN = {"remedial": 1, "suspension": 4}, {"remedial": 3, "suspension": 5}


def limit(rng, basis, kind, places, size):
    """A limit of a kind: absolute, percent or both; one in eight percentages is zero."""
    steps = int(rng.integers(-size // 3 if basis == "none" else 0, size // 3))
    absolute, finer = from_scaled(steps, places), int(rng.integers(0, 3))
    percent = from_scaled(int(rng.integers(0, 60 * 10**finer)) * int(rng.integers(8) > 0), finer)
    if basis == "none" or (kind == 0 and basis != "ratio"):
        return Limit(absolute)
    if basis == "ratio" or kind == 1:
        return Limit(None, percent)
    return Limit(absolute, percent, ("larger", "smaller", "either")[int(rng.integers(3))])


def criterion(rng, number, places, size):
    """Every shape, strict and not, with absolute, relative and combined limits, of one level or two."""
    round_of, shape = divmod(number, len(SHAPES))
    basis, direction = SHAPES[shape]
    levels = [limit(rng, basis, round_of // 2, places, size) for _ in range(2)]
    if number % 5 == 0:
        levels[number % 2] = None
    return Criterion(basis, direction, round_of % 2 == 0, *levels)


def in_steps(within, places):
    """Bounds in units of resolution."""
    return [(level, clear * 10**places, beyond * 10**places) for level, clear, beyond in within]


def at_the_limits(of, places, setting, rule, signs):
    """Readings at each bound and one unit to each side of it, with the verdict by definition."""
    reference, uncertainty = setting
    known = from_scaled(max(uncertainty, 0), places)
    within = in_steps(definition.bounds(of, from_scaled(reference, places), known, rule), places)
    centre = reference if of.basis in ("nominal", "baseline") else 0
    whole = {near for _, *ends in within for end in ends for near in (end.__floor__(), end.__ceil__())}
    changes = {side * (near + step) for near in whole for side in (1, -1) for step in (-1, 0, 1)}
    for change in sorted(changes):
        for sign in signs:
            departure = definition.interval(of, change, MARKS[sign])
            rank = definition.RANK[definition.worst(of, departure, within)]
            if rank < 2 and rule != "simple" and uncertainty < 0:
                rank = 2
            yield (
                change + centre,
                reference,
                sign,
                uncertainty,
                max(rank, 2) if definition.without_size(of, reference) else rank,
            )


def anywhere(rng, of, size, signs, count):
    """Readings about their references, of which a few are zero; a few uncertainties are unknown."""
    references = rng.integers(-size // 10, size, count) * (rng.integers(0, 20, count) > 0)
    spread = rng.integers(-size // 2, size // 2, count)
    values = spread + references if of.basis in ("nominal", "baseline") else spread
    uncertainties = np.where(rng.integers(0, 8, count) > 0, rng.integers(0, size // 10, count), -1)
    return np.stack([values, references, rng.choice(np.array(signs), count), uncertainties])


def by_witnesses(of, places, rows, rule):
    """The codes of readings, from a few points of each half-line and whole numbers alone."""
    values, references, signs, uncertainties = rows
    limits = dict(of.levels())
    shares = {level: Fraction(part.percent or 0) / 100 for level, part in limits.items()}
    half = 2 * lcm(*(share.denominator for share in shares.values()))
    change = values - references if of.basis in ("nominal", "baseline") else values
    end, far = half * change + signs, 1 << (200 if rows.dtype == object else 60)
    points = [end, np.where(signs != 0, signs * far, end), np.where(signs * change < 0, 0, end)]
    turned = {"either": np.abs, "above": np.positive, "below": np.negative}[of.direction]
    codes = np.zeros(len(values), np.int64)
    sizeless = np.array(references <= 0 if of.basis == "ratio" else references == 0, np.bool_)
    for level, part in limits.items():
        allowed = allowances(of, part, shares[level], references, places, half)
        for number, (codes_of, every) in enumerate(((UNCERTAIN, np.any), (PROVEN, np.all))):
            bound = allowed + half * definition.MOVES[rule][number] * np.maximum(uncertainties, 0)
            beyond = [turned(point) > bound if of.strict else turned(point) >= bound for point in points]
            told = every(np.array(beyond, np.bool_), axis=0)
            codes[told & ~sizeless if part.absolute is None else told] = codes_of[level]
    if rule != "simple":
        codes[(codes < 2) & np.array(uncertainties < 0, np.bool_)] = 2
    if definition.without_size(of, 0):
        codes[sizeless & (codes < 2)] = 2
    return codes


def allowances(of, part, share, references, places, half):
    """What a level allows, one for each reference, in units of resolution divided by ``half``."""
    by_share = np.abs(references) * share.numerator * (half // share.denominator)
    absolute = half * int((part.absolute or 0) * 10**places) + 0 * references
    if part.absolute is None or part.percent is None:
        found = by_share if part.absolute is None else absolute
    else:
        found = (np.maximum if part.governs == "larger" else np.minimum)(absolute, by_share)
        found = np.where(references == 0, absolute, found)
    return -found if of.direction == "below" and of.basis in ("none", "ratio") else found


def where_parts_meet(of, places, size):
    """A reference whose share is less than a step more than the absolute part, where there is one."""
    for _, part in of.levels():
        if part.absolute is not None and part.percent:
            meeting = Fraction(part.absolute) * 10**places * 100 / Fraction(part.percent)
            if meeting < size:
                return meeting.__floor__() + 1
    return size // 3


def readings(rng, of, places, size, way):
    """Readings of one criterion, and the verdicts that the definition gives on them."""
    rule, qualified = WAYS[way]
    signs = (-1, 0, 0, 1) if qualified else (0,)
    references = (int(rng.integers(-size // 10, size)), where_parts_meet(of, places, size))
    known = [(reference, int(rng.integers(0, size // 10))) for reference in references]
    near = [row for setting in known for row in at_the_limits(of, places, setting, rule, sorted(set(signs)))]
    near += at_the_limits(of, places, (known[0][0], -1), rule, (0,))
    numbers = np.array(near, np.int64).T[:, :ROWS]
    about = anywhere(rng, of, size, signs, ROWS - numbers.shape[1])
    rows = np.concatenate([numbers[:4], about], axis=1)
    wanted = by_witnesses(of, places, rows.astype(object) if size == VAST else rows, rule)
    assert wanted[: numbers.shape[1]].tolist() == numbers[4].tolist()
    return rows, wanted


@pytest.mark.parametrize("places", PLACES)
@pytest.mark.parametrize("way", WAYS)
def test_kernel_agrees_with_fractions_for_a_million_decimals(way, places):
    rng = np.random.default_rng([2026, list(WAYS).index(way), places])
    sizes = [VAST if number % 7 == 0 else SMALL for number in range(CRITERIA)]
    criteria = [criterion(rng, number, places, size) for number, size in enumerate(sizes)]
    found = [readings(rng, of, places, size, way) for of, size in zip(criteria, sizes, strict=True)]
    rows, wanted = np.concatenate([part for part, _ in found], axis=1), np.concatenate([w for _, w in found])
    index = np.repeat(np.arange(CRITERIA, dtype=np.int32), ROWS)
    # Rows that stand together and rows that are scattered are found in two ways.
    order = rng.permutation(len(index)) if places % 2 else np.arange(len(index))
    values, references, signs, uncertainties = rows[:, order]
    columns = Columns(values, references, places, signs.astype(np.int8), uncertainties)
    codes = verdict_codes_by_criterion(criteria, index[order], columns, WAYS[way][0])
    assert np.flatnonzero(codes != wanted[order]).tolist() == []


def test_readings_come_to_a_million():
    assert len(WAYS) * len(PLACES) * CRITERIA * ROWS >= 1_000_000
