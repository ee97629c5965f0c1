"""The fields of a form: what is asked, and what was typed, kept when it is refused."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, replace

from django.http import QueryDict
from django.utils.functional import Promise

Words = str | Promise
Option = tuple[str, Words]
# A choice among radios and places may well mean "none" or "the whole group" by an empty value.
MAY_BE_EMPTY = ("select", "radio", "tick", "ticks", "file")


@dataclass(frozen=True)
class Field:
    """One question.

    Parameters
    ----------
    kind
        ``text``, ``area``, ``select``, ``radio``, ``ticks`` (several), ``tick``, ``date``, ``whole``,
        ``decimal``, ``email``, ``file``, ``password`` (never shown again) or ``new_password``.
    values
        What stands in it; one value, save for ``ticks``.
    """

    name: str
    label: Words
    kind: str = "text"
    hint: Words = ""
    options: Sequence[Option] = ()
    required: bool = True
    values: tuple[str, ...] = ()
    focus: bool = False

    @property
    def value(self) -> str:
        """The one value."""
        return self.values[0] if self.values else ""

    @property
    def hint_id(self) -> str:
        """Where the hint can be found by its field."""
        return f"hint_{self.name}" if self.hint else ""

    def starting(self, value: object) -> Field:
        """The field with a value to start from; an empty one stays empty."""
        return replace(self, values=(str(value),) if value not in (None, "") else ())


def unanswered(fields: Iterable[Field], typed: QueryDict) -> tuple[str, ...]:
    """The names of the questions that need an answer and got none."""
    return tuple(
        each.name
        for each in fields
        if each.required and each.kind not in MAY_BE_EMPTY and not str(typed.get(each.name, "")).strip()
    )


def keep(fields: Iterable[Field], typed: QueryDict) -> tuple[Field, ...]:
    """The fields with what was typed, save passwords."""
    return tuple(
        each
        if each.kind in ("password", "new_password", "file")
        else replace(each, values=_typed(each, typed), focus=False)
        for each in fields
    )


def _typed(field: Field, typed: QueryDict) -> tuple[str, ...]:
    return tuple(str(value) for value in typed.getlist(field.name))
