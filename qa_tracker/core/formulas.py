"""Derived quantities: a formula of CEL worked out from a check's readings, rounded once, and vouched for.

CEL (the Common Expression Language) computes in IEEE 754 doubles; readings are exact decimals. A result is rounded
half-even to the measurand's resolution, and binary noise must never choose the side: 1.15 - 1.0 is 0.15 exactly, a tie
at 0.1 that goes to 0.2, though the double 0.1499999999999999 would go to 0.1. So the double comes with an error bound
(``formula_arithmetic``): where both its ends round alike, that is the answer; where they don't, the same formula is
worked out in fractions and these are rounded. A formula with a root or pi has no fractions: there a result within its
bound of a tie is taken as that tie. Nothing is ever evaluated as Python.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from decimal import Decimal
from fractions import Fraction
from functools import cache, lru_cache
from importlib import import_module
from types import ModuleType
from typing import Any, Final

from qa_tracker.core import decimals
from qa_tracker.core.decimals import MAX_SCALED, from_scaled, places_of, round_half_even
from qa_tracker.core.errors import Invalid
from qa_tracker.core.formula_arithmetic import (
    DOUBLES,
    Bounded,
    Exactly,
    Nearly,
    bounded,
    compute,
    is_exact,
)
from qa_tracker.core.formula_check import correction_problem, corrects
from qa_tracker.core.formula_grammar import parse
from qa_tracker.core.formula_inputs import Inputs, Values, filled, gather, given
from qa_tracker.core.formula_names import LAYOUT_COMPENSATED, NAMED_VALUES
from qa_tracker.core.formula_tree import Call, Node, names_in, walk
from qa_tracker.core.library_specs import MeasurandSpec


@dataclass(frozen=True, slots=True)
class Derived:
    """What a formula gave.

    Parameters
    ----------
    value
        A multiple of the measurand's resolution; None where there is a problem, and the reading is not assessable.
    problem
        Empty, ``missing`` (of ``names``), ``qualified`` (``names`` are no plain numbers), ``not_finite``,
        ``out_of_range``, ``layout_compensated``, ``lateral_correction`` or ``no_correction``.
    names
        Those that the problem is about, in the formula's order.
    text
        The arithmetic: the formula with its numbers put in.
    """

    value: Decimal | None
    problem: str
    names: tuple[str, ...]
    text: str


def evaluate(formula: str, values: Values) -> float:
    """Work out a formula in CEL, unrounded.

    Parameters
    ----------
    formula
        Of a procedure that was checked (``formula_check``).
    values
        A value for each name; as ``Values``.

    Returns
    -------
    float
        The double that CEL gives.

    Raises
    ------
    Invalid
        ``formula.value_missing`` or ``formula.value_qualified`` with ``names``, ``formula.not_finite`` for a
        division by zero and the like; what ``formula_grammar.parse`` raises.

    Examples
    --------
    >>> evaluate("a / 8.0", {"a": Decimal("1")})
    0.125
    """
    ready = _ready(formula)
    inputs = gather(ready.names, values)
    if inputs.missing:
        raise Invalid("formula.value_missing", names=inputs.missing)
    if inputs.qualified:
        raise Invalid("formula.value_qualified", names=inputs.qualified)
    found = _in_cel(ready, inputs)
    if not math.isfinite(found):
        raise Invalid("formula.not_finite")
    return found


def derive(spec: MeasurandSpec, values: Values) -> Derived:
    """Work out a derived measurand, rounded half-even to its resolution.

    The answer is the exact value of the formula, rounded, where the formula takes no root and does not name pi.

    Parameters
    ----------
    spec
        A derived measurand of a procedure that was checked.
    values
        As ``Values``; numbers in the units of their measurands and of ``formula_names.NAMES``.

    Returns
    -------
    Derived
        Its value, or the problem that makes it not assessable. A list with a gap is missing, and so is an empty
        one; a number that is not finite gives ``not_finite``.

    Examples
    --------
    >>> from types import SimpleNamespace
    >>> spec = SimpleNamespace(code="change", formula="after - before", resolution="0.1")
    >>> derive(spec, {"after": Decimal("1.15"), "before": Decimal("1.0")})
    Derived(value=Decimal('0.2'), problem='', names=(), text='1.15 - 1.0')
    """
    ready = _ready(spec.formula or "")
    inputs = gather(ready.names, values)
    text = filled(ready.pieces, ready.names, inputs.shown)
    problem, names = _problem(spec, ready, inputs, values)
    if problem:
        return Derived(None, problem, names, text)
    value, problem = _outcome(ready, inputs, _step(spec.resolution))
    return Derived(value, problem, (), text)


@dataclass(frozen=True, slots=True)
class _Ready:
    """A formula read and compiled, with all of it that no value changes.

    ``names`` are in the order written; ``pieces`` are the texts before, between and after them.
    """

    program: Any
    root: Node
    names: tuple[str, ...]
    pieces: tuple[str, ...]
    context: Mapping[str, Any]
    exact: bool
    corrects: bool


@lru_cache(maxsize=1024)
def _ready(formula: str) -> _Ready:
    root = parse(formula)
    found = names_in(root)
    names = tuple(name.dotted for name in found)
    ends = [0, *(name.end for name in found)]
    starts = [*(name.start for name in found), len(formula)]
    called = {part.function for part in walk(root) if isinstance(part, Call)}
    fixed = {name: value for name, value in _FIXED_DOUBLES.items() if name in names}
    return _Ready(
        _cel().compile(formula),
        root,
        names,
        tuple(formula[end:start] for end, start in zip(ends, starts, strict=True)),
        {function: DOUBLES[function] for function in called} | _nested(fixed),
        is_exact(root),
        corrects(names),
    )


@cache
def _cel() -> ModuleType:
    """Load the library at the first formula: its package brings a command line of 150 ms and 29 MiB with it."""
    return import_module("cel")


def _problem(
    spec: MeasurandSpec, ready: _Ready, inputs: Inputs, values: Values
) -> tuple[str, tuple[str, ...]]:
    """Why a formula is not worked out, and the names that it is for; empty where it is."""
    compensated = given(LAYOUT_COMPENSATED, values) if ready.corrects else False
    missing = inputs.missing if compensated is not None else (*inputs.missing, LAYOUT_COMPENSATED)
    reasons: tuple[tuple[str, tuple[str, ...], bool], ...] = (
        (correction_problem((*ready.names, spec.code)), (), ready.corrects),
        ("missing", missing, bool(missing)),
        ("qualified", inputs.qualified, bool(inputs.qualified)),
        ("layout_compensated", (), bool(compensated)),
        ("not_finite", (), not inputs.finite),
    )
    return next(((problem, names) for problem, names, holds in reasons if problem and holds), ("", ()))


def _in_cel(ready: _Ready, inputs: Inputs) -> float:
    try:
        return float(ready.program.execute({**ready.context, **_nested(inputs.doubles)}))
    except TypeError:
        # The library has no order for NaN. What is wrong in another way is wrong on the tree as well.
        _near(ready, inputs)
        return math.nan


def _nested(values: Mapping[str, Any]) -> dict[str, Any]:
    """Give CEL its maps: the names with a point, by what stands before it."""
    found: dict[str, Any] = {}
    for name, value in values.items():
        noun, _, attribute = name.partition(".")
        if attribute:
            found.setdefault(noun, {})[attribute] = value
        else:
            found[noun] = value
    return found


def _outcome(ready: _Ready, inputs: Inputs, step: Decimal) -> tuple[Decimal | None, str]:
    """The rounded value, or the problem there is with it."""
    found = _in_cel(ready, inputs)
    rounded = _rounded(ready, inputs, found, step) if math.isfinite(found) else None
    if rounded is None:
        return None, "not_finite"
    return (
        (rounded, "") if abs(rounded) <= from_scaled(MAX_SCALED, places_of(step)) else (None, "out_of_range")
    )


def _rounded(ready: _Ready, inputs: Inputs, found: float, step: Decimal) -> Decimal | None:
    """Round what CEL gave; in fractions where the double can't tell to which side. None where nothing can."""
    near, doubtful = _near(ready, inputs)
    middle = near.value if doubtful else found
    if not abs(middle) + near.bound < math.inf or (doubtful and ready.exact):
        return _in_fractions(ready, inputs, step) if ready.exact else None
    low, high = (round_half_even(Fraction(end), step) for end in (middle - near.bound, middle + near.bound))
    if low == high:
        return low
    if ready.exact:
        return _in_fractions(ready, inputs, step)
    return round_half_even((Fraction(low) + Fraction(high)) / 2, step) if high - low == step else None


def _near(ready: _Ready, inputs: Inputs) -> tuple[Bounded, bool]:
    """The double with its error bound, and whether a comparison on the way to it was in doubt."""
    nearly = Nearly()
    entered = {name: _converted(value, bounded) for name, value in inputs.doubles.items()}
    return compute(ready.root, _FIXED_BOUNDED | entered, nearly), nearly.doubtful


def _in_fractions(ready: _Ready, inputs: Inputs, step: Decimal) -> Decimal | None:
    entered = {name: _converted(value, Fraction) for name, value in inputs.numbers.items()}
    try:
        exact = compute(ready.root, _FIXED_EXACT | entered, Exactly())
    except ZeroDivisionError:
        return None
    return round_half_even(exact, step)


def _converted(value: Any, convert: Callable[[Any], Any]) -> Any:
    if isinstance(value, list):
        return [convert(item) for item in value]
    return value if isinstance(value, bool) else convert(value)


@lru_cache(maxsize=256)
def _step(resolution: str) -> Decimal:
    return decimals.parse(resolution).decimal


_FIXED_EXACT: Final[dict[str, Fraction]] = {name: each.value for name, each in NAMED_VALUES.items()}
_FIXED_DOUBLES: Final = {name: float(value) for name, value in _FIXED_EXACT.items()}
_FIXED_BOUNDED: Final = {name: bounded(value) for name, value in _FIXED_DOUBLES.items()}
