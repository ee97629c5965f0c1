"""The formulas of derived quantities, read into a tree whose every part knows its place.

A formula is an expression of CEL, the Common Expression Language (language definition at
https://github.com/google/cel-spec, section "Syntax"), of which the part that quantities need is allowed: decimal
numbers, names, ``+ - * /``, comparisons, ``&& || !``, ``? :``, brackets, lists and calls. What is outside is refused
at its column. Whole numbers are refused too: CEL never mixes them with decimal ones, so ``100 * x`` would fail only
once a reading is there.
"""

from __future__ import annotations

import re
from dataclasses import replace
from functools import cache, lru_cache
from typing import Any, Final, cast

from lark import Lark, Token, Transformer
from lark.exceptions import UnexpectedInput

from qa_tracker.core.errors import Invalid
from qa_tracker.core.formula_tree import (
    MOST_SHOWN,
    Call,
    Choice,
    Listing,
    Name,
    Node,
    Number,
    Operation,
    Sign,
    excerpt,
    walk,
)

MOST_CHARACTERS: Final = 400
"""Longest formula."""
MOST_DEPTH: Final = 40
"""Deepest nesting: CEL's own reader takes more, and no walk through a tree comes near Python's limit."""
# Reserved by CEL: no name may be one of these.
_RESERVED: Final = re.compile(
    "as|break|const|continue|else|false|for|function|if|import|in|let|loop|package|namespace|null|return|true|"
    "var|void|while"
)

# The precedence is CEL's own, rule by rule; a name with points stands where CEL says member access.
_GRAMMAR: Final = r"""
?start: choice
?choice: either | either QUERY either ":" choice -> choose
?either: both | either OR both -> operation
?both: relation | both AND relation -> operation
?relation: sum | relation COMPARED sum -> operation
?sum: product | sum (PLUS | MINUS) product -> operation
?product: signed | product (TIMES | OVER) signed -> operation
?signed: primary | negative | denial
negative: MINUS (negative | primary) -> sign
denial: NOT (denial | primary) -> sign
?primary: (DECIMAL | WHOLE) -> number
    | NAME ("." NAME)* -> name
    | NAME OPEN choice ("," choice)* CLOSE -> call
    | OPEN choice CLOSE -> group
    | BEGIN choice ("," choice)* END -> listing
OR: "||"
AND: "&&"
COMPARED: "<=" | ">=" | "==" | "!=" | "<" | ">"
PLUS: "+"
MINUS: "-"
TIMES: "*"
OVER: "/"
NOT: "!"
QUERY: "?"
OPEN: "("
CLOSE: ")"
BEGIN: "["
END: "]"
DECIMAL: /[0-9]+\.[0-9]+/
WHOLE: /[0-9]+/
NAME: /[A-Za-z_][A-Za-z0-9_]*/
%ignore /[ \t]+/
"""


def parse(formula: str, *, field: str = "") -> Node:
    """Read a formula into its tree.

    Parameters
    ----------
    formula
        One line of at most 400 characters.
    field
        Place of the measurand in its document, carried by a refusal.

    Returns
    -------
    Node
        The root. Columns are counted from 1: a part's is ``start + 1``.

    Raises
    ------
    Invalid
        ``formula.syntax`` and ``formula.unfinished`` for what is outside the allowed part of CEL (an empty text is
        unfinished), ``formula.whole_number``, ``formula.too_deep``, each with its ``column``; ``formula.too_long``.

    Examples
    --------
    >>> parse("a - aperture.pitch_mm").right.dotted
    'aperture.pitch_mm'
    """
    if len(formula) > MOST_CHARACTERS:
        raise Invalid("formula.too_long", field=field, most=str(MOST_CHARACTERS))
    try:
        root = _tree(formula)
    except UnexpectedInput as error:
        raise _misplaced(formula, error, field) from None
    if root.depth > MOST_DEPTH:
        raise Invalid("formula.too_deep", field=field, column=root.start + 1, most=str(MOST_DEPTH))
    for part in walk(root):
        _check_word(part, formula, field)
    return root


@lru_cache(maxsize=1024)
def _tree(formula: str) -> Node:
    read: Any = _reader().parse(formula)
    return cast("Node", read)


@cache
def _reader() -> Lark:
    return Lark(_GRAMMAR, parser="lalr", transformer=_Nodes())


class _Nodes(Transformer[Token, Node]):
    """Makes a node of each rule, from the tokens and nodes it is made of."""

    def number(self, parts: list[Token]) -> Node:
        start, end = _span(parts[0])
        return Number(start, end, 1, str(parts[0]))

    def name(self, parts: list[Token]) -> Node:
        path = tuple(str(part) for part in parts)
        return Name(_span(parts[0])[0], _span(parts[-1])[1], 1, path)

    def sign(self, parts: list[Any]) -> Node:
        operator, operand = parts
        return Sign(_span(operator)[0], operand.end, operand.depth + 1, str(operator), operand)

    def operation(self, parts: list[Any]) -> Node:
        left, operator, right = parts
        depth = 1 + max(left.depth, right.depth)
        return Operation(left.start, right.end, depth, str(operator), left, right, _span(operator)[0])

    def choose(self, parts: list[Any]) -> Node:
        condition, _, yes, no = parts
        depth = 1 + max(condition.depth, yes.depth, no.depth)
        return Choice(condition.start, no.end, depth, condition, yes, no)

    def call(self, parts: list[Any]) -> Node:
        function, _, *given, close = parts
        depth = 1 + max(each.depth for each in given)
        return Call(_span(function)[0], _span(close)[1], depth, str(function), tuple(given))

    def listing(self, parts: list[Any]) -> Node:
        begin, *items, end = parts
        depth = 1 + max(each.depth for each in items)
        return Listing(_span(begin)[0], _span(end)[1], depth, tuple(items))

    def group(self, parts: list[Any]) -> Node:
        """Brackets leave no part of their own: what they hold takes their place, and a single word keeps its own."""
        inner: Node = parts[1]
        if isinstance(inner, Name | Number):
            return replace(inner, depth=inner.depth + 1)
        return replace(inner, start=_span(parts[0])[0], end=_span(parts[2])[1], depth=inner.depth + 1)


def _span(token: Token) -> tuple[int, int]:
    start = token.start_pos or 0
    return start, start + len(token)


def _misplaced(formula: str, error: UnexpectedInput, field: str) -> Invalid:
    token = getattr(error, "token", None)
    if token is not None and token.type == "$END":
        return Invalid("formula.unfinished", field=field, column=len(formula) + 1)
    at = error.pos_in_stream or 0
    return Invalid("formula.syntax", field=field, column=at + 1, at=formula[at : at + MOST_SHOWN].strip())


def _check_word(part: Node, formula: str, field: str) -> None:
    """Refuse a word that CEL keeps for itself, and a number without decimals."""
    column, at = part.start + 1, excerpt(formula, part)
    if isinstance(part, Name) and any(map(_RESERVED.fullmatch, part.path)):
        raise Invalid("formula.syntax", field=field, column=column, at=at)
    if isinstance(part, Number) and "." not in part.text:
        raise Invalid("formula.whole_number", field=field, column=column, at=at, instead=f"{part.text}.0")
