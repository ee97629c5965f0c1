"""The tree of a formula: its parts, each with the characters it was written in."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Final, TypeAlias

MOST_SHOWN: Final = 40
"""Most characters of a formula that a refusal shows."""


@dataclass(frozen=True, slots=True)
class Part:
    """A part of a formula: its characters from ``start`` to before ``end``, and how deep it nests."""

    start: int
    end: int
    depth: int


@dataclass(frozen=True, slots=True)
class Number(Part):
    """A number as written."""

    text: str


@dataclass(frozen=True, slots=True)
class Name(Part):
    """A named value: one word, or an attribute such as ``aperture.elements``."""

    path: tuple[str, ...]

    @property
    def dotted(self) -> str:
        """The name as one text."""
        return ".".join(self.path)


@dataclass(frozen=True, slots=True)
class Sign(Part):
    """``-`` or ``!`` before a part."""

    operator: str
    operand: Node


@dataclass(frozen=True, slots=True)
class Operation(Part):
    """Two parts joined by an operator, which stands at the offset ``at``."""

    operator: str
    left: Node
    right: Node
    at: int


@dataclass(frozen=True, slots=True)
class Choice(Part):
    """``condition ? yes : no``."""

    condition: Node
    yes: Node
    no: Node


@dataclass(frozen=True, slots=True)
class Call(Part):
    """A function and what it is given."""

    function: str
    arguments: tuple[Node, ...]


@dataclass(frozen=True, slots=True)
class Listing(Part):
    """A list of numbers."""

    items: tuple[Node, ...]


Node: TypeAlias = Number | Name | Sign | Operation | Choice | Call | Listing


def walk(root: Node) -> Iterator[Node]:
    """Give each part of a tree once, in the order in which the parts begin."""
    pending: list[Node] = [root]
    while pending:
        part = pending.pop()
        yield part
        pending.extend(reversed(_parts(part)))


def names_in(root: Node) -> tuple[Name, ...]:
    """Give every name in a tree in the order written, as often as it stands there."""
    return tuple(part for part in walk(root) if isinstance(part, Name))


def excerpt(formula: str, part: Part) -> str:
    """Give a part's own characters, cut where they are many.

    Examples
    --------
    >>> excerpt("a + bb", Name(4, 6, 1, ("bb",)))
    'bb'
    """
    text = formula[part.start : part.end]
    return text if len(text) <= MOST_SHOWN else f"{text[: MOST_SHOWN - 1]}…"


def _parts(part: Node) -> tuple[Node, ...]:
    match part:
        case Sign():
            return (part.operand,)
        case Operation():
            return part.left, part.right
        case Choice():
            return part.condition, part.yes, part.no
        case Call():
            return part.arguments
        case Listing():
            return part.items
    return ()
