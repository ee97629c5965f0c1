"""Statements that no command makes, and what the database says to them."""

from __future__ import annotations

import datetime as dt
import re
import uuid
from typing import Any

from django.db import DatabaseError, connection, models, transaction

from qa_tracker.records import guards, guards_postgresql, guards_sqlite

Key = tuple[list[str], str]
Cells = dict[str, Any]

MODELS = {model._meta.db_table: model for model in guards.audited_models()}
KEYS = {
    f"{model._meta.db_table} key {number}": (model, key)
    for model in guards.audited_models()
    for number, key in enumerate(guards.unique_keys(model))
}


def refusal(sql: str, *cells: Any) -> str:
    """What the database says to a statement, or nothing where it does it; undone either way."""
    try:
        with transaction.atomic(), connection.cursor() as cursor:
            cursor.execute(sql, cells)
            transaction.set_rollback(True)
    except DatabaseError as error:
        return str(error)
    return ""


def cells_of(row: models.Model) -> Cells:
    """A row's columns as the engine stores them."""
    key = row._meta.pk.column
    with connection.cursor() as cursor:
        cursor.execute(f'SELECT * FROM "{row._meta.db_table}" WHERE "{key}" = %s', [row.pk])
        return dict(zip([column[0] for column in cursor.description], cursor.fetchone(), strict=True))


def fresh_uid() -> Any:
    """An identifier that no leaf has, as the engine stores it."""
    uid = uuid.uuid4()
    return uid if connection.vendor == "postgresql" else uid.hex


def columns_of(key: Key) -> list[str]:
    return re.findall(r'"(\w+)"', " ".join(key[0]))


def other(value: Any) -> Any:
    """A different value of the same type."""
    if isinstance(value, uuid.UUID):
        return uuid.uuid4()
    if isinstance(value, dt.date):
        return value + dt.timedelta(days=1000)
    return value + 1_000_003 if isinstance(value, int) else f"{value}x"


def clash(cells: Cells, model: type[models.Model], key: Key | None) -> Cells:
    """A new row that meets an old one in this unique key and in no other, under a leaf not yet written."""
    new, kept = dict(cells), set(columns_of(key)) if key else set()
    if "leaf_id" in new:
        new["leaf_id"] = fresh_uid()
    for each in guards.unique_keys(model):
        free = [name for name in columns_of(each) if name not in kept and cells[name] is not None]
        if each != key and free:
            new[free[0]] = other(cells[free[0]])
    return new


def insert(table: str, cells: Cells, verb: str = "INSERT", ending: str = "") -> str:
    names = ", ".join(f'"{name}"' for name in cells)
    marks = ", ".join(["%s"] * len(cells))
    return refusal(f'{verb} INTO "{table}" ({names}) VALUES ({marks}) {ending}', *cells.values())


def update(table: str, pk: Any, cells: Cells, verb: str = "UPDATE", pk_column: str = "id") -> str:
    settings = ", ".join(f'"{name}" = %s' for name in cells)
    return refusal(f'{verb} "{table}" SET {settings} WHERE "{pk_column}" = %s', *cells.values(), pk)


def on_conflict(key: Key, action: str) -> str:
    """An upsert's ending that names this unique key."""
    terms, condition = key
    target = ", ".join(term.format(row="") for term in terms)
    where = f" WHERE {condition.format(row='')}" if condition else ""
    return f"ON CONFLICT ({target}){where} {action}"


def overwrite(cells: Cells) -> str:
    return "DO UPDATE SET " + ", ".join(f'"{name}" = EXCLUDED."{name}"' for name in cells)


def drop_guards(*names: str) -> None:
    """Remove guards, as whoever owns the database could."""
    maker = {"sqlite": guards_sqlite, "postgresql": guards_postgresql}[connection.vendor]
    with connection.cursor() as cursor:
        for name in names:
            cursor.execute(maker.drop(name))
