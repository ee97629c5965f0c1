"""A million random decimals through the kernel and through fractions: no verdict differs.

Values lie at every limit and one unit of resolution to each side of it, and anywhere. What a limit allows is worked
out in ``Fraction``; the readings, whole numbers of a resolution, are then compared with it by its own numerator and
denominator, which is how fractions are compared.
"""

from __future__ import annotations

from decimal import Decimal
from fractions import Fraction

import numpy as np
import pytest

from qa_tracker.core.criteria import Criterion, Limit
from qa_tracker.core.decimals import from_scaled
from qa_tracker.core.verdict_groups import verdict_codes_by_criterion
from qa_tracker.core.verdict_kernel import Columns

ROWS = 1_000_000
CRITERIA, PLACES = 400, 3
RULES = ("simple", "guarded", "zones")
UNCERTAIN, PROVEN = {"remedial": 1, "suspension": 4}, {"remedial": 3, "suspension": 5}
SHAPES = [
    (basis, direction)
    for basis in ("nominal", "baseline", "none", "ratio")
    for direction in ("either", "above", "below")
    if (basis, direction) != ("ratio", "either")
]


def decimal(rng, most, places):
    return from_scaled(int(rng.integers(0, most * 10**places)), places)


def limit(rng, basis):
    absolute = decimal(rng, 30, int(rng.integers(0, PLACES + 1)))
    percent = decimal(rng, 100, int(rng.integers(0, 3)))
    if basis == "none":
        return Limit(absolute)
    if basis == "ratio":
        return Limit(None, percent)
    governs = ("larger", "smaller", "either")[int(rng.integers(3))]
    return (Limit(absolute), Limit(None, percent), Limit(absolute, percent, governs))[int(rng.integers(3))]


def criterion(rng, number):
    basis, direction = SHAPES[number % len(SHAPES)]
    levels = [limit(rng, basis), limit(rng, basis)]
    if number % 5 == 0:
        levels[number % 2] = None
    return Criterion(basis, direction, bool(number % 2), *levels)


def allowed(part, reference):
    """What a limit allows at a reference, worked in fractions."""
    share = None if part.percent is None else Fraction(part.percent) / 100 * abs(reference)
    absolute = None if part.absolute is None else Fraction(part.absolute)
    if share is None or absolute is None:
        return absolute if share is None else share
    return max(share, absolute) if part.governs == "larger" else min(share, absolute)


def departures(of, values, reference):
    change = values - reference if of.basis in ("nominal", "baseline") else values
    if of.direction == "either":
        return np.abs(change)
    return change if of.direction == "above" else -change


def beyond(of, departure, bound, moved):
    """Whether departures, in units of resolution, are beyond a fraction moved by whole units."""
    left, right = departure * bound.denominator, bound.numerator + moved * bound.denominator
    return left > right if of.strict else left >= right


def expected(of, values, reference, uncertainty, rule):
    """The codes of one criterion's readings at one reference, by the definition."""
    departure, codes = departures(of, values, reference), np.zeros(len(values), np.int64)
    mirrored = -1 if of.direction == "below" and of.basis in ("none", "ratio") else 1
    for level, part in of.levels():
        bound = mirrored * allowed(part, Fraction(reference, 10**PLACES)) * 10**PLACES
        inner = 0 if rule == "simple" else -uncertainty
        outer = {"simple": 0, "guarded": -uncertainty, "zones": uncertainty}[rule]
        codes[beyond(of, departure, bound, inner)] = UNCERTAIN[level]
        codes[beyond(of, departure, bound, outer)] = PROVEN[level]
    return codes


def readings(rng, of, reference, count, uncertainty):
    """Whole numbers of a resolution: at each limit and where a rule moves it to, one to each side, and anywhere."""
    centre = reference if of.basis in ("nominal", "baseline") else 0
    values = rng.integers(-200_000, 200_000, count)
    near = []
    for _, part in of.levels():
        bound = allowed(part, Fraction(reference, 10**PLACES)) * 10**PLACES
        for edge in (bound.numerator // bound.denominator, -(-bound.numerator // bound.denominator)):
            near += [
                centre + sign * (edge + moved) + step
                for sign in (1, -1)
                for moved in (0, -uncertainty, uncertainty)
                for step in (-1, 0, 1)
            ]
    values[: count // 2] = np.resize(np.array(near, np.int64), count // 2)
    return values


def lacks_a_size(of, reference):
    """Whether a share of this reference means nothing: it is all that a level has, or may decide it alone."""
    alone = any(
        part.percent is not None and (part.absolute is None or part.governs != "larger")
        for _, part in of.levels()
    )
    return alone and (reference <= 0 if of.basis == "ratio" else reference == 0)


@pytest.mark.parametrize("rule", RULES)
def test_kernel_agrees_with_fractions_for_a_million_decimals(rule):
    rng = np.random.default_rng(RULES.index(rule) + 2026)
    criteria = [criterion(rng, number) for number in range(CRITERIA)]
    count = ROWS // 3 // CRITERIA + 1
    uncertainty = int(rng.integers(0, 3000))
    values, references, wanted = [], [], []
    for of in criteria:
        reference = int(rng.integers(-3, 60)) * int(rng.integers(1, 3000))
        own = readings(rng, of, reference, count, uncertainty)
        values.append(own)
        references.append(np.full(count, reference))
        missing = lacks_a_size(of, reference)
        wanted.append(np.full(count, 2) if missing else expected(of, own, reference, uncertainty, rule))
    index = np.repeat(np.arange(CRITERIA, dtype=np.int32), count)
    rows = Columns(
        np.concatenate(values),
        np.concatenate(references),
        PLACES,
        uncertainties=np.full(len(index), uncertainty),
    )
    found = verdict_codes_by_criterion(criteria, index, rows, rule)
    assert (found == np.concatenate(wanted)).all()
    assert {0, 2, 3, 5} <= set(found.tolist())


LITERAL = {
    "20.3 against 20.0 with 0.3": (Limit(Decimal("0.3")), 203, 200),
    "1.5 % of 40": (Limit(None, Decimal("1.5")), 406, 400),
    "0.1 + 0.2": (Limit(Decimal("0.2")), 3, 1),
}


@pytest.mark.parametrize("name", LITERAL)
@pytest.mark.parametrize(("strict", "code"), [(True, 0), (False, 3)])
def test_exactly_the_limit_conforms_only_when_it_reads_more_than(name, strict, code):
    part, value, reference = LITERAL[name]
    rows = Columns(np.array([value, value + 1]), np.array([reference, reference]), 1)
    found = verdict_codes_by_criterion(
        [Criterion("nominal", "either", strict, part)], np.zeros(2, np.int32), rows
    )
    assert found.tolist() == [code, 3]
