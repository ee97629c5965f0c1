"""Reading parsed JSON key by key, refusing with the place that is wrong.

A rule reads the value found at a place. Rules are built from smaller ones, so a document's shape is a table.
Nothing here knows what a criterion or a procedure is.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Iterable, Mapping, Sequence
from typing import Any, TypeAlias

from qa_tracker.core.decimals import parse
from qa_tracker.core.errors import Invalid
from qa_tracker.core.units import unit

Rule: TypeAlias = Callable[[Any, str], Any]
"""Reads the value found at a place, or refuses it."""

_ABSENT = object()


def object_of(rules: Mapping[str, Rule | tuple[Rule, Any]], make: Callable[..., Any]) -> Rule:
    """Read an object key by key; a rule paired with a value may be absent and then has that value."""

    def read(value: Any, place: str) -> Any:
        if not isinstance(value, Mapping):
            raise Invalid("library.not_an_object", field=place)
        for key in value:
            if key not in rules:
                raise Invalid("library.unknown_key", field=_at(place, str(key)), key=str(key))
        return make(**{_argument(key): _field(value, place, key, rule) for key, rule in rules.items()})

    return read


def _field(value: Mapping[str, Any], place: str, key: str, rule: Rule | tuple[Rule, Any]) -> Any:
    found = value.get(key, _ABSENT)
    check, default = rule if isinstance(rule, tuple) else (rule, _ABSENT)
    if found is not _ABSENT:
        return check(found, _at(place, key))
    if default is _ABSENT:
        raise Invalid("library.missing", field=_at(place, key), key=key)
    return default


def _at(place: str, key: str) -> str:
    return f"{place}.{key}" if place else key


def _argument(key: str) -> str:
    """Name the dataclass field of a key; ``from`` and ``to`` can't be names in Python."""
    return f"{key}_value" if key in ("from", "to") else key


def many(rule: Rule) -> Rule:
    """Read a list, each item by the rule, as a tuple."""

    def read(value: Any, place: str) -> tuple[Any, ...]:
        if not isinstance(value, list | tuple):
            raise Invalid("library.not_a_list", field=place)
        return tuple(rule(item, f"{place}[{index}]") for index, item in enumerate(value))

    return read


def some(rule: Rule) -> Rule:
    """Read a list that may not be empty."""

    def read(value: Any, place: str) -> tuple[Any, ...]:
        items: tuple[Any, ...] = many(rule)(value, place)
        if not items:
            raise Invalid("library.empty", field=place)
        return items

    return read


def pairs(rule: Rule, names: Sequence[str]) -> Rule:
    """Read an object with free choice among known keys as sorted pairs."""

    def read(value: Any, place: str) -> tuple[tuple[str, Any], ...]:
        if not isinstance(value, Mapping):
            raise Invalid("library.not_an_object", field=place)
        known = one_of(*names)
        return tuple((known(key, place), rule(value[key], _at(place, key))) for key in sorted(value))

    return read


def or_none(rule: Rule) -> Rule:
    """Let null stand for None."""
    return lambda value, place: None if value is None else rule(value, place)


def note(value: Any, place: str) -> str:
    """Read a text that may be empty."""
    if not isinstance(value, str):
        raise Invalid("library.not_a_text", field=place)
    return value


def text(value: Any, place: str) -> str:
    """Read a text that says something."""
    if not note(value, place).strip():
        raise Invalid("library.empty", field=place)
    return str(value)


def matching(pattern: str) -> Rule:
    """Read a text of which the whole matches a pattern."""
    compiled = re.compile(pattern, re.ASCII)

    def read(value: Any, place: str) -> str:
        found = text(value, place)
        if not compiled.fullmatch(found):
            raise Invalid("library.not_allowed", field=place, value=found, allowed=pattern)
        return found

    return read


def one_of(*allowed: str) -> Rule:
    """Read one word of a closed list."""

    def read(value: Any, place: str) -> str:
        if not isinstance(value, str) or value not in allowed:
            raise Invalid("library.not_allowed", field=place, value=str(value), allowed=", ".join(allowed))
        return value

    return read


def flag(value: Any, place: str) -> bool:
    """Read true or false."""
    if not isinstance(value, bool):
        raise Invalid("library.not_a_flag", field=place, value=str(value))
    return value


def whole(low: int) -> Rule:
    """Read a whole number not below ``low``."""

    def read(value: Any, place: str) -> int:
        if isinstance(value, bool) or not isinstance(value, int) or value < low:
            raise Invalid("library.not_whole", field=place, value=str(value), low=low)
        return value

    return read


def decimal_text(value: Any, place: str) -> str:
    """Read a decimal written as text: a binary float could not say 0.1."""
    return parse(text(value, place), field=place).entered


def unit_code(value: Any, place: str) -> str:
    """Read a unit of the closed set."""
    return unit(text(value, place), field=place).code


def refuse_repeated(names: Iterable[str], place: str, key: str) -> None:
    """Refuse a name that comes twice in a list, at the second place."""
    seen: set[str] = set()
    for index, name in enumerate(names):
        if name in seen:
            raise Invalid("library.repeated", field=f"{place}[{index}].{key}", value=name)
        seen.add(name)
