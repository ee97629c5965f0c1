"""The values of one formula's names, taken from what a check read and from what is known around it."""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from decimal import Decimal
from itertools import chain, zip_longest
from typing import Any, Final, TypeAlias

from qa_tracker.core.decimals import plain
from qa_tracker.core.formula_names import NAMED_VALUES, PI


@dataclass(frozen=True, slots=True)
class Qualified:
    """A reading that is no plain number: more or less than ``value`` (``>``, ``<``), or ``not_seen`` without one."""

    qualifier: str
    value: Decimal | None = None


Given: TypeAlias = Decimal | bool | Qualified | None
"""What stands under a name: an exact number, a yes or no, a qualified reading, or None for what is not there."""
Values: TypeAlias = Mapping[str, object]
"""``Given`` or a sequence of them by measurand code, ``nominal``, and a mapping of attributes by noun: ``aperture``."""


_SHOWN: Final = {name: str(each.value) for name, each in NAMED_VALUES.items() if name != PI}


@dataclass(frozen=True, slots=True)
class Inputs:
    """What was found under the names of a formula, by dotted name.

    Parameters
    ----------
    numbers
        Exact: a decimal, a list of them, or a yes or no.
    doubles
        The doubles nearest to them.
    missing, qualified
        Names without a value, and names whose value is no plain number; each once, as first written.
    shown
        The values as text.
    """

    numbers: dict[str, Any]
    doubles: dict[str, Any]
    missing: tuple[str, ...]
    qualified: tuple[str, ...]
    shown: Mapping[str, str]

    @property
    def finite(self) -> bool:
        """Whether every number is finite."""
        return all(
            math.isfinite(number)
            for value in self.doubles.values()
            for number in (value if isinstance(value, list) else (value,))
        )


def given(name: str, values: Values) -> Any:
    """Look up a dotted name; None where there is nothing.

    Examples
    --------
    >>> given("aperture.elements", {"aperture": {"elements": Decimal(128)}})
    Decimal('128')
    """
    noun, _, attribute = name.partition(".")
    found = values.get(noun)
    return found.get(attribute) if attribute and isinstance(found, Mapping) else found


def gather(names: Iterable[str], values: Values) -> Inputs:
    """Find the values of a formula's names; those of named values such as ``pi`` are not asked for.

    A list with a gap, and an empty one, is missing.
    """
    found = {name: given(name, values) for name in dict.fromkeys(names) if name not in NAMED_VALUES}
    items = {name: value if isinstance(value, list | tuple) else (value,) for name, value in found.items()}
    missing = tuple(name for name, each in items.items() if not each or None in each)
    qualified = tuple(
        name for name, each in items.items() if any(isinstance(item, Qualified) for item in each)
    )
    numbers = {name: value for name, value in found.items() if name not in (*missing, *qualified)}
    doubles = {name: _double(value) for name, value in numbers.items()}
    shown = {name: _written(value) for name, value in found.items() if value is not None}
    return Inputs(numbers, doubles, missing, qualified, _SHOWN | shown)


def filled(pieces: Iterable[str], names: Iterable[str], shown: Mapping[str, str]) -> str:
    """Put values into a formula: the texts between its names, and in place of each name its value if there is one.

    Examples
    --------
    >>> filled(("", " - ", ""), ("a", "b"), {"a": "1.15"})
    '1.15 - b'
    """
    values = [shown.get(name, name) for name in names]
    return "".join(chain.from_iterable(zip_longest(pieces, values, fillvalue="")))


def _double(value: Any) -> Any:
    if isinstance(value, list | tuple):
        return [float(item) for item in value]
    return value if isinstance(value, bool) else float(value)


def _written(value: Any) -> str:
    if isinstance(value, list | tuple):
        return f"[{', '.join(map(_written, value))}]"
    if isinstance(value, Qualified):
        return f"({value.qualifier} {plain(value.value)})" if value.value is not None else value.qualifier
    if value is None:
        return "…"
    if isinstance(value, bool):
        return str(value).lower()
    text = plain(Decimal(value))
    return f"({text})" if text.startswith("-") else text
