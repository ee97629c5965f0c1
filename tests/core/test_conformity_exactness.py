"""The kernel against the definition, worked in fractions, over random decimals."""

from __future__ import annotations

from fractions import Fraction
from math import inf

from hypothesis import given, settings
from hypothesis import strategies as st

from qa_tracker.core.conformity import judge
from qa_tracker.core.criteria import Criterion, Limit
from qa_tracker.core.decimals import from_scaled

LEVEL_RANK = {("conforming", None): 0, ("indeterminate", "remedial"): 1, ("not_assessable", None): 2}
LEVEL_RANK |= {
    ("remedial", "remedial"): 3,
    ("indeterminate", "suspension"): 4,
    ("suspension", "suspension"): 5,
}

# Coarse numbers meet their limits often, long ones leave 64 bits.
COARSE = st.builds(from_scaled, st.integers(-60, 60), st.integers(0, 1))
LONG = st.builds(from_scaled, st.integers(-(10**15), 10**15), st.integers(0, 12))
NUMBERS = st.one_of(COARSE, COARSE, LONG)
SIZES = NUMBERS.map(abs)
LIMITS = st.one_of(
    st.builds(Limit, SIZES),
    st.builds(Limit, st.none(), SIZES),
    st.builds(Limit, SIZES, SIZES, st.sampled_from(["larger", "smaller", "either"])),
)
CHANGES = st.builds(
    Criterion,
    st.sampled_from(["nominal", "baseline"]),
    st.sampled_from(["either", "above", "below"]),
    st.booleans(),
    LIMITS,
    st.none() | LIMITS,
)
VALUES = st.builds(
    Criterion,
    st.just("none"),
    st.sampled_from(["either", "above", "below"]),
    st.booleans(),
    st.builds(Limit, NUMBERS),
    st.none() | st.builds(Limit, NUMBERS),
)
RATIOS = st.builds(
    Criterion,
    st.just("ratio"),
    st.sampled_from(["above", "below"]),
    st.booleans(),
    st.builds(Limit, st.none(), SIZES),
    st.none() | st.builds(Limit, st.none(), SIZES),
)


def _interval(criterion, value, qualifier, reference):
    """The departure as an interval of real numbers: low, high, whether its finite end is left out."""
    x = Fraction(value) - (Fraction(reference) if criterion.basis in ("nominal", "baseline") else 0)
    low, high = {"=": (x, x), ">": (x, inf), "<": (-inf, x)}[qualifier]
    if criterion.direction == "below":
        low, high = -high, -low
    if criterion.direction == "either":
        if low < 0 < high:
            return Fraction(0), inf, False
        low, high = sorted((abs(low), abs(high)))
    return low, high, qualifier != "="


def _allowed(criterion, limit, reference):
    parts = [] if limit.absolute is None else [Fraction(limit.absolute)]
    if limit.percent is not None:
        parts.append(Fraction(limit.percent) * abs(Fraction(reference)) / 100)
    size = max(parts) if limit.governs == "larger" else min(parts)
    return -size if criterion.direction == "below" and criterion.basis in ("none", "ratio") else size


def _expected(criterion, value, qualifier, reference, uncertainty, rule):
    low, high, left_out = _interval(criterion, value, qualifier, reference)
    moves = {"simple": (0, 0), "guarded": (-1, -1), "zones": (-1, 1)}[rule]
    found = [("conforming", None)]
    for level, limit in criterion.levels():
        clear, beyond = (
            _allowed(criterion, limit, reference) + move * Fraction(uncertainty) for move in moves
        )
        some_beyond = high > clear or (high == clear and not criterion.strict and not left_out)
        all_beyond = low > beyond or (low == beyond and (left_out or not criterion.strict))
        found += [("indeterminate", level)] * some_beyond + [(level, level)] * all_beyond
    return max(found, key=LEVEL_RANK.__getitem__)


# Ten readings to an example: 2,000 in all.
@settings(max_examples=200, deadline=None)
@given(
    criterion=st.one_of(CHANGES, VALUES, RATIOS),
    values=st.lists(NUMBERS, min_size=10, max_size=10),
    qualifier=st.sampled_from("==><"),
    reference=NUMBERS.filter(bool),
    uncertainty=SIZES,
    rule=st.sampled_from(["simple", "simple", "guarded", "zones"]),
)
def test_judge_agrees_with_the_definition_in_fractions(
    criterion, values, qualifier, reference, uncertainty, rule
):
    reference = abs(reference) if criterion.basis == "ratio" else reference
    word = {"ratio": "reference", "none": "nominal"}.get(criterion.basis, criterion.basis)
    asked = {"qualifier": qualifier, word: reference, "uncertainty": uncertainty, "rule": rule}
    found = [judge(criterion, value=value, kind="number", **asked) for value in values]
    expected = [_expected(criterion, value, qualifier, reference, uncertainty, rule) for value in values]
    assert [(judgement.verdict, judgement.level) for judgement in found] == expected


@settings(max_examples=100, deadline=None)
@given(criterion=CHANGES, value=NUMBERS, reference=NUMBERS.filter(bool))
def test_shown_figures_agree_with_the_verdict(criterion, value, reference):
    judgement = judge(criterion, value=value, kind="number", nominal=reference, baseline=reference)
    past = judgement.departure > judgement.allowance
    reached = judgement.departure == judgement.allowance and not criterion.strict
    assert (past or reached) == (judgement.verdict != "conforming")
