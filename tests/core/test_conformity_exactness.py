"""The kernel against the definition, worked in fractions, over random decimals."""

from __future__ import annotations

from fractions import Fraction

import definition_in_fractions as definition
from hypothesis import given, settings
from hypothesis import strategies as st

from qa_tracker.core.conformity import judge
from qa_tracker.core.criteria import Criterion, Limit
from qa_tracker.core.decimals import from_scaled

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


def _expected(criterion, value, qualifier, reference, uncertainty, rule):
    change = Fraction(value) - (Fraction(reference) if criterion.basis in ("nominal", "baseline") else 0)
    within = definition.bounds(criterion, reference, uncertainty, rule)
    return definition.worst(criterion, definition.interval(criterion, change, qualifier), within)


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
