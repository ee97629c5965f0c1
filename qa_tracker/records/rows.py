"""Rows as text for hashing: the same row gives the same bytes on both engines and in any year."""

from __future__ import annotations

import datetime as dt
import hashlib
import uuid
from collections.abc import Iterable, Sequence
from functools import cache, lru_cache
from operator import attrgetter
from typing import Any, TypeAlias

from django.db import models

from qa_tracker.core.canonical import canonical
from qa_tracker.records.models.base import Fact

AnyField: TypeAlias = "models.Field[Any, Any]"


@lru_cache(maxsize=4096)
def moment_text(moment: dt.datetime) -> str:
    """A moment as UTC text with microseconds, the way leaves write it."""
    return moment.astimezone(dt.UTC).strftime("%Y-%m-%dT%H:%M:%S.%fZ")


def cell(value: object) -> str | None:
    """One column's value as text; empty stays empty."""
    if value is None:
        return None
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, dt.datetime):
        return moment_text(value)
    if isinstance(value, dt.date):
        return value.isoformat()
    if isinstance(value, str | int | uuid.UUID):
        return str(value)
    raise TypeError(f"no text form for {type(value).__name__}")


def columns_of(noun: models.Model) -> dict[str, str | None]:
    """Every column of a noun but its leaf, as text."""
    return {
        field.attname: _text(getattr(noun, field.attname), kind, field)
        for field, kind in _kinds(noun._meta.concrete_fields)
        if field.attname != "leaf_id"
    }


def noun_from(model: type[models.Model], columns: dict[str, str | None]) -> models.Model:
    """Rebuild an unsaved noun from the text columns of one of its versions."""
    fields = [field for field in model._meta.concrete_fields if field.attname in columns]
    return model(**{field.attname: _from_text(field, columns[field.attname]) for field in fields})


def _from_text(field: models.Field[Any, Any], text: str | None) -> object:
    """The value of :func:`cell`'s text."""
    if text is not None and isinstance(field, models.BooleanField):
        return text == "true"
    return field.to_python(text)


def newest_form(model: type[Fact]) -> int:
    """The number of the form in which new rows are hashed."""
    return max(model.LEDGER_FORMS)


@cache
def form_fields(model: type[Fact], form: int) -> tuple[AnyField, ...]:
    """The fields of a form, which names them by their columns."""
    by_column = {field.column: field for field in model._meta.concrete_fields}
    return tuple(by_column[column] for column in model.LEDGER_FORMS[form])


def fact_cells(rows: Sequence[Fact], form: int) -> list[tuple[str | None, ...]]:
    """Facts of one table as texts, the same before they are written and after they are read back.

    Read by column, which is quicker for many.
    """
    if not rows:
        return []
    columns = [_column(rows, field, kind) for field, kind in _kinds(form_fields(type(rows[0]), form))]
    return list(zip(*columns, strict=True))


def _column(rows: Sequence[Fact], field: AnyField, kind: type | None) -> list[str | None]:
    values = list(map(attrgetter(field.attname), rows))
    if {*map(type, values)} == {kind}:
        return values if kind is str else list(map(str, values))
    return [_text(value, kind, field) for value in values]


@cache
def _kinds(fields: tuple[AnyField, ...]) -> tuple[tuple[AnyField, type | None], ...]:
    """Fields with the type whose values are as the database would give them back, where there is one."""
    return tuple((field, _kind(field)) for field in fields)


def _kind(field: AnyField) -> type | None:
    while isinstance(field, models.ForeignKey):
        field = field.target_field
    if isinstance(field, models.CharField | models.TextField):
        return str
    whole = isinstance(field, models.IntegerField) and not isinstance(field, models.BooleanField)
    return int if whole else None


def _text(value: object, kind: type | None, field: AnyField) -> str | None:
    """One column's value as text, the same before it is written and after it is read back."""
    if value is None:
        return None
    if type(value) is kind:
        return str(value)
    return cell(field.to_python(value))


def digest_of(rows: Iterable[Fact], form: int) -> dict[str, object]:
    """Count, and SHA-256 of the canonical JSON list, of facts of one table in the order of their ids."""
    cells = fact_cells(sorted(rows, key=attrgetter("pk")), form)
    return {"n": len(cells), "sha256": hashlib.sha256(canonical(cells)).hexdigest()}
