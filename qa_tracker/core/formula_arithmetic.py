"""A formula worked out on its tree: exactly in fractions, and in doubles that carry how far off they may be.

CEL computes a formula in doubles. ``Bounded`` repeats each of its steps with an error bound that holds for that step
and these numbers (running error analysis: Higham 2002, Accuracy and Stability of Numerical Algorithms, section 3.3):
with u = 2^-52, twice the unit roundoff of IEEE 754 binary64 so that the rounding of the bounds is covered too,

    of a number as entered           u |x|
    of x + y and x - y               e_x + e_y + u |x + y|
    of x * y                         |x| e_y + |y| e_x + e_x e_y + u |x y|
    of x / y                         (e_x + |x / y| e_y) / (|y| - e_y) + u |x / y|, none where e_y >= |y|
    of the square root of x          e_x / sqrt(x) + u sqrt(x), or sqrt(e_x + |x|) where e_x >= x

No bound depends on the sizes of inputs and result alone: a difference of two large products would break it.
"""

from __future__ import annotations

import math
import operator
from collections.abc import Callable, Mapping, Sequence
from fractions import Fraction
from typing import Any, Final, TypeAlias

from qa_tracker.core.formula_names import FUNCTIONS, PI
from qa_tracker.core.formula_tree import Call, Choice, Listing, Name, Node, Number, Operation, Sign, walk

UNIT: Final = 2.0**-52
# The least normal double: below it a product loses more than its last place.
_LEAST: Final = 2.0**-1022

Functions: TypeAlias = Mapping[str, Callable[..., Any]]
_JOINING: Final[dict[str, Callable[[Any, Any], Any]]] = {
    "+": operator.add,
    "-": operator.sub,
    "*": operator.mul,
    "/": operator.truediv,
}
_COMPARING: Final[dict[str, Callable[[Any, Any], bool]]] = {
    "<": operator.lt,
    "<=": operator.le,
    ">": operator.gt,
    ">=": operator.ge,
    "==": operator.eq,
    "!=": operator.ne,
}


class Bounded:
    """A double and how far it may be from the number it stands for; a bound of infinity or NaN says nothing."""

    __slots__ = ("bound", "value")

    def __init__(self, value: float, bound: float) -> None:
        self.value = value
        self.bound = bound

    def __neg__(self) -> Bounded:
        return Bounded(-self.value, self.bound)

    def __abs__(self) -> Bounded:
        return Bounded(abs(self.value), self.bound)

    def __add__(self, other: Bounded) -> Bounded:
        value = self.value + other.value
        return Bounded(value, self.bound + other.bound + UNIT * abs(value))

    def __sub__(self, other: Bounded) -> Bounded:
        value = self.value - other.value
        return Bounded(value, self.bound + other.bound + UNIT * abs(value))

    def __mul__(self, other: Bounded) -> Bounded:
        value = self.value * other.value
        carried = abs(self.value) * other.bound + abs(other.value) * self.bound + self.bound * other.bound
        return Bounded(value, carried + UNIT * abs(value) + _LEAST)

    def __truediv__(self, other: Bounded) -> Bounded:
        rest = abs(other.value) - other.bound
        if not rest > 0:
            return Bounded(math.nan, math.inf)
        value = self.value / other.value
        return Bounded(value, (self.bound + abs(value) * other.bound) / rest + UNIT * abs(value) + _LEAST)


def bounded(nearest: float) -> Bounded:
    """Enter the double nearest to an exact number."""
    return Bounded(nearest, UNIT * abs(nearest))


def _functions(
    number: Callable[[int], Any],
    greatest: Callable[[Sequence[Any]], Any],
    square_root: Callable[[Any], Any],
    undefined: object,
) -> Functions:
    """Build the functions of one arithmetic; ``undefined`` is the deviation of a single reading."""

    def mean(items: Sequence[Any]) -> Any:
        return sum(items[1:], items[0]) / number(len(items))

    def standard_deviation(items: Sequence[Any]) -> Any:
        if len(items) < 2:
            return undefined
        middle = mean(items)
        squares = [(item - middle) * (item - middle) for item in items]
        return square_root(sum(squares[1:], squares[0]) / number(len(items) - 1))

    def most(*given: Any) -> Any:
        return greatest(given[0] if isinstance(given[0], list) else given)

    def least(*given: Any) -> Any:
        return -greatest([-item for item in (given[0] if isinstance(given[0], list) else given)])

    return {
        "mean": mean,
        "range": lambda items: greatest(items) - least(items),
        "standard_deviation": standard_deviation,
        "least": least,
        "greatest": most,
        "abs": abs,
        "sqrt": square_root,
    }


def _root_of_double(value: float) -> float:
    return math.sqrt(value) if value >= 0 else math.nan


def _root_of_bounded(item: Bounded) -> Bounded:
    if item.value > item.bound:
        value = math.sqrt(item.value)
        return Bounded(value, item.bound / value + UNIT * value)
    return Bounded(math.sqrt(max(item.value, 0.0)), math.sqrt(item.bound + abs(item.value)))


def _greatest_bounded(items: Sequence[Bounded]) -> Bounded:
    return Bounded(max(item.value for item in items), max(item.bound for item in items))


DOUBLES: Final = _functions(float, max, _root_of_double, math.nan)
"""The functions as CEL is given them: they raise nothing, and are NaN where they are not defined."""
_BOUNDED: Final = _functions(
    lambda count: Bounded(float(count), 0.0), _greatest_bounded, _root_of_bounded, Bounded(math.nan, math.inf)
)
# A root is rarely a fraction: what names one is never worked out in this arithmetic.
_FRACTIONS: Final = {
    name: compute
    for name, compute in _functions(Fraction, max, Fraction, Fraction(0)).items()
    if FUNCTIONS[name].exact
}


class Exactly:
    """Arithmetic of fractions, for a formula that ``is_exact`` holds for."""

    functions = _FRACTIONS

    def number(self, text: str) -> Fraction:
        """Enter a written number."""
        return Fraction(text)

    def compare(self, sign: str, left: Any, right: Any) -> bool:
        """Compare two numbers."""
        return _COMPARING[sign](left, right)


class Nearly:
    """Arithmetic of bounded doubles; ``doubtful`` once two sides of a comparison were too near to tell apart.

    They then count as equal.
    """

    functions = _BOUNDED

    def __init__(self) -> None:
        self.doubtful = False

    def number(self, text: str) -> Bounded:
        """Enter a written number."""
        return bounded(float(text))

    def compare(self, sign: str, left: Any, right: Any) -> bool:
        """Compare two numbers, and note where their bounds meet."""
        if abs(left.value - right.value) > left.bound + right.bound:
            return _COMPARING[sign](left.value, right.value)
        self.doubtful = True
        return _COMPARING[sign](0, 0)


def is_exact(root: Node) -> bool:
    """Whether fractions can say what a formula gives: it takes no root and does not name pi."""
    return not any(
        part.path == (PI,) if isinstance(part, Name) else not FUNCTIONS[part.function].exact
        for part in walk(root)
        if isinstance(part, Name | Call)
    )


def compute(part: Node, values: Mapping[str, Any], arithmetic: Exactly | Nearly) -> Any:
    """Work out a formula on its tree.

    Parameters
    ----------
    part
        The root, of a formula that was checked.
    values
        The number of each name, dotted, in this arithmetic: a fraction or a bounded double, a list of them, or a
        yes or no.
    arithmetic
        Either arithmetic.

    Returns
    -------
    Fraction, Bounded or bool
        A quotient by what may be zero is a bound of infinity in bounded doubles.

    Raises
    ------
    ZeroDivisionError
        In fractions.

    Examples
    --------
    >>> tree = Operation(0, 9, 2, "-", Number(0, 4, 1, "1.15"), Number(7, 9, 1, "1.0"), 5)
    >>> compute(tree, {}, Exactly()), compute(tree, {}, Nearly()).value
    (Fraction(3, 20), 0.1499999999999999)
    """
    match part:
        case Number():
            return arithmetic.number(part.text)
        case Name():
            return values[part.dotted]
        case Sign():
            operand = compute(part.operand, values, arithmetic)
            return -operand if part.operator == "-" else not operand
        case Operation():
            return _operation(part, values, arithmetic)
        case Choice():
            chosen = part.yes if compute(part.condition, values, arithmetic) else part.no
            return compute(chosen, values, arithmetic)
        case Call():
            given = [compute(each, values, arithmetic) for each in part.arguments]
            return arithmetic.functions[part.function](*given)
        case Listing():
            return [compute(each, values, arithmetic) for each in part.items]


def _operation(part: Operation, values: Mapping[str, Any], arithmetic: Exactly | Nearly) -> Any:
    left = compute(part.left, values, arithmetic)
    if part.operator in ("&&", "||"):
        return left if left == (part.operator == "||") else compute(part.right, values, arithmetic)
    right = compute(part.right, values, arithmetic)
    if part.operator in _JOINING:
        return _JOINING[part.operator](left, right)
    return arithmetic.compare(part.operator, left, right)
