"""What is worked out in doubles is rounded as the exact number is: random formulas against fractions."""

from __future__ import annotations

import operator
from fractions import Fraction

from hypothesis import given, settings
from hypothesis import strategies as st

from qa_tracker.core.decimals import from_scaled, round_half_even
from qa_tracker.core.formula_arithmetic import Nearly, bounded, compute
from qa_tracker.core.formula_grammar import parse
from qa_tracker.core.formulas import derive, evaluate
from tests.core.formula_documents import derived_spec

SIGNS = {"+": operator.add, "-": operator.sub, "*": operator.mul, "/": operator.truediv}
COMPARED = {"<": operator.lt, "<=": operator.le, "==": operator.eq, ">": operator.gt}
NAMES = "abcd"

# Sizes of the trade: coarse numbers make ties, fine ones come near them.
NUMBERS = st.one_of(
    st.builds(from_scaled, st.integers(-60, 60), st.integers(0, 2)),
    st.builds(from_scaled, st.integers(-400_000, 400_000), st.integers(0, 3)),
)
VALUES = st.fixed_dictionaries({name: NUMBERS for name in NAMES})
WRITTEN = st.sampled_from(["0.5", "2.0", "0.15", "100.0", "0.05"])
STEPS = st.builds(from_scaled, st.sampled_from([1, 2, 5]), st.integers(0, 3))
LEAVES = st.sampled_from(NAMES) | WRITTEN
FORMULAS = st.recursive(LEAVES, lambda inner: st.tuples(st.sampled_from("+-*/"), inner, inner), max_leaves=7)
CHOICES = st.tuples(st.sampled_from(list(COMPARED)), FORMULAS, FORMULAS)


def _text(formula):
    if isinstance(formula, str):
        return formula
    sign, left, right = formula
    return f"({_text(left)} {sign} {_text(right)})"


def _exact(formula, values):
    """The definition, in fractions."""
    if isinstance(formula, str):
        return Fraction(values.get(formula, formula))
    sign, left, right = formula
    return (SIGNS | COMPARED)[sign](_exact(left, values), _exact(right, values))


def _exact_or_none(formula, values):
    try:
        return _exact(formula, values)
    except ZeroDivisionError:
        return None


@settings(max_examples=400)
@given(FORMULAS, VALUES, STEPS)
def test_derived_quantity_is_the_exact_number_rounded(formula, values, step):
    exact = _exact_or_none(formula, values)
    found = derive(derived_spec(_text(formula), str(step)), values)
    if exact is None:
        assert found.problem == "not_finite"
    elif not found.problem:
        assert found.value == round_half_even(exact, step)
    else:
        assert found.problem == "out_of_range"
        assert abs(exact) > 10**11


@settings(max_examples=200)
@given(CHOICES, VALUES)
def test_choice_is_made_by_the_exact_numbers(choice, values):
    holds = _exact_or_none(choice, values)
    found = derive(derived_spec(f"{_text(choice)} ? 1.0 : 0.0", "1"), values)
    assert found.value is None if holds is None else found.value == holds


@settings(max_examples=200)
@given(FORMULAS, VALUES)
def test_error_bound_holds(formula, values):
    exact = _exact_or_none(formula, values)
    entered = {name: bounded(float(value)) for name, value in values.items()}
    found = compute(parse(_text(formula)), entered, Nearly())
    if exact is None or not found.bound < float("inf"):
        assert not found.bound < float("inf")
    else:
        assert abs(Fraction(evaluate(_text(formula), values)) - exact) <= Fraction(found.bound)


@settings(max_examples=200)
@given(st.lists(NUMBERS, min_size=2, max_size=6), STEPS)
def test_functions_of_lists_give_the_exact_number_rounded(numbers, step):
    exact = [Fraction(number) for number in numbers]
    spread, middle = max(exact) - min(exact), sum(exact) / len(exact)
    values = {"r": numbers}
    assert derive(derived_spec("range(r)", str(step)), values).value == round_half_even(spread, step)
    assert derive(derived_spec("mean(r)", str(step)), values).value == round_half_even(middle, step)
    between = derive(derived_spec("greatest(r) + least(r)", str(step)), values)
    assert between.value == round_half_even(max(exact) + min(exact), step)
