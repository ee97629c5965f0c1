"""Whether the parts of a formula fit together: numbers, lists and yes or no, and the unit of every number."""

from __future__ import annotations

from collections.abc import Callable, Collection, Sequence
from dataclasses import dataclass
from difflib import get_close_matches
from fractions import Fraction
from functools import reduce
from typing import Final, Literal, TypeAlias

from qa_tracker.core.errors import Invalid
from qa_tracker.core.formula_names import FUNCTIONS, Function
from qa_tracker.core.formula_tree import (
    Call,
    Choice,
    Listing,
    Name,
    Node,
    Number,
    Operation,
    Sign,
    excerpt,
)
from qa_tracker.core.formula_units import (
    PLAIN,
    Measure,
    UnitClash,
    added,
    code_of,
    over,
    root,
    same,
    subtracted,
    times,
)

Form: TypeAlias = Literal["number", "list", "yes_no"]
_ARITHMETIC: Final[dict[str, Callable[[Measure, Measure], Measure]]] = {
    "+": added,
    "-": subtracted,
    "*": times,
    "/": over,
}


@dataclass(frozen=True, slots=True)
class Kind:
    """What a part of a formula is, and what it is measured in; of a list, each of its numbers."""

    form: Form
    measure: Measure = None


_YES_NO: Final = Kind("yes_no")


@dataclass(frozen=True, slots=True)
class Reading:
    """One formula being looked through.

    Parameters
    ----------
    formula
        Its text, to show the place.
    field
        Place of the measurand in its document.
    of_name
        Gives the kind of a named value, or refuses the name.
    """

    formula: str
    field: str
    of_name: Callable[[Name], Kind]

    def kind(self, part: Node) -> Kind:
        """Give the kind of a part.

        Raises
        ------
        Invalid
            ``formula.unit_clash``, ``formula.root``, ``formula.unknown_function``, ``formula.arguments``,
            ``formula.list_as_number``, ``formula.yes_no_as_number``, ``formula.not_yes_no``, or what ``of_name``
            raises; each with ``column`` (from 1) and ``at``, the characters that stand there.
        """
        match part:
            case Number():
                return Kind("number", PLAIN if Fraction(part.text) else None)
            case Name():
                return self.of_name(part)
            case Sign():
                return self._sign(part)
            case Operation():
                return self._operation(part)
            case Choice():
                self._check_yes_no(part.condition)
                return Kind("number", self._alike((part.yes, part.no), part, part.no.start))
            case Call():
                return self._call(part)
            case Listing():
                return Kind("list", self._alike(part.items, part, part.start))

    def number(self, part: Node) -> Measure:
        """Give the unit of a part that has to be a number; refusals as of ``kind``."""
        found = self.kind(part)
        column, at = part.start + 1, excerpt(self.formula, part)
        if found.form == "list":
            raise Invalid("formula.list_as_number", field=self.field, column=column, at=at)
        if found.form == "yes_no":
            raise Invalid("formula.yes_no_as_number", field=self.field, column=column, at=at)
        return found.measure

    def _check_yes_no(self, part: Node) -> None:
        if self.kind(part) != _YES_NO:
            at = excerpt(self.formula, part)
            raise Invalid("formula.not_yes_no", field=self.field, column=part.start + 1, at=at)

    def _sign(self, part: Sign) -> Kind:
        if part.operator == "-":
            return Kind("number", self.number(part.operand))
        self._check_yes_no(part.operand)
        return _YES_NO

    def _operation(self, part: Operation) -> Kind:
        if part.operator in ("&&", "||"):
            self._check_yes_no(part.left)
            self._check_yes_no(part.right)
            return _YES_NO
        left, right = self.number(part.left), self.number(part.right)
        measure = self._joined(_ARITHMETIC.get(part.operator, same), left, right, part, part.at)
        return Kind("number", measure) if part.operator in _ARITHMETIC else _YES_NO

    def _joined(
        self,
        rule: Callable[[Measure, Measure], Measure],
        left: Measure,
        right: Measure,
        part: Node,
        offset: int,
    ) -> Measure:
        try:
            return rule(left, right)
        except UnitClash:
            raise Invalid(
                "formula.unit_clash",
                field=self.field,
                column=offset + 1,
                at=excerpt(self.formula, part),
                left=code_of(left),
                right=code_of(right),
            ) from None

    def _alike(self, parts: Sequence[Node], whole: Node, offset: int) -> Measure:
        """Give the one unit of numbers that stand beside each other."""
        units = [self.number(each) for each in parts]
        return reduce(lambda left, right: self._joined(same, left, right, whole, offset), units)

    def _call(self, part: Call) -> Kind:
        function = FUNCTIONS.get(part.function)
        if function is None:
            raise Invalid(
                "formula.unknown_function",
                field=self.field,
                column=part.start + 1,
                at=part.function,
                nearest=nearest(part.function, FUNCTIONS),
            )
        measure = self._given(part, function)
        if function.measured == "difference":
            return Kind("number", subtracted(measure, measure))
        return Kind("number", self._root(part, measure) if function.measured == "root" else measure)

    def _given(self, part: Call, function: Function) -> Measure:
        """Give the unit of what a function is given, or refuse what it doesn't take."""
        first, *more = part.arguments
        if not more and function.takes != "number":
            found = self.kind(first)
            if found.form == "list":
                return found.measure
        elif bool(more) == (function.takes == "numbers"):
            return self._alike(part.arguments, part, part.start)
        raise Invalid(
            "formula.arguments",
            field=self.field,
            column=part.start + 1,
            at=excerpt(self.formula, part),
            usage=f"{part.function}{_USAGE[function.takes]}",
        )

    def _root(self, part: Call, measure: Measure) -> Measure:
        try:
            return root(measure)
        except UnitClash:
            column, at = part.start + 1, excerpt(self.formula, part)
            raise Invalid(
                "formula.root", field=self.field, column=column, at=at, unit=code_of(measure)
            ) from None


_USAGE: Final = {"number": "(a)", "list": "([a, b])", "numbers": "(a, b)"}


def nearest(word: str, known: Collection[str]) -> str:
    """Name up to three words that look like one, or else the first ten there are.

    Examples
    --------
    >>> nearest("maen", FUNCTIONS), nearest("q", ["a", "b"])
    ('mean', 'a, b')
    """
    return ", ".join(get_close_matches(word, known, n=3) or list(known)[:10])
