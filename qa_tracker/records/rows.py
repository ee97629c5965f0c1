"""Rows as text for hashing: the same row gives the same bytes on both engines and in any year."""

from __future__ import annotations

import datetime as dt
import hashlib
import uuid
from collections.abc import Iterable
from functools import cache
from typing import Any

from django.db import models

from qa_tracker.core.canonical import canonical
from qa_tracker.records.models.base import Fact


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
        field.attname: cell(field.to_python(getattr(noun, field.attname)))
        for field in noun._meta.concrete_fields
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
def form_fields(model: type[Fact], form: int) -> tuple[models.Field[Any, Any], ...]:
    """The fields of a form, which names them by their columns."""
    by_column = {field.column: field for field in model._meta.concrete_fields}
    return tuple(by_column[column] for column in model.LEDGER_FORMS[form])


def fact_line(row: Fact, form: int) -> bytes:
    """One fact as a canonical line, the same before it is written and after it is read back."""
    fields = form_fields(type(row), form)
    return canonical([cell(field.to_python(getattr(row, field.attname))) for field in fields]) + b"\n"


def digest_of(rows: Iterable[Fact], form: int) -> dict[str, object]:
    """Count and SHA-256 of facts of one table, in the order of their ids."""
    ordered = sorted(rows, key=lambda row: row.pk)
    total = hashlib.sha256()
    for row in ordered:
        total.update(fact_line(row, form))
    return {"n": len(ordered), "sha256": total.hexdigest()}
