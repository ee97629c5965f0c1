"""Two ways to put rows into the tables: one at a time as commands do, or gathered and written together.

Both hand out keys at once, so the code that builds rows is the same for a live check and for ten years
of history.
"""

from __future__ import annotations

from typing import Protocol

from django.core.management.color import no_style
from django.db import connection, models

from qa_tracker.core.errors import Conflict
from qa_tracker.records.models.base import Noun


class Writer(Protocol):
    """What a command writes through."""

    def insert(self, row: models.Model) -> None: ...

    def update(self, noun: Noun, columns: dict[str, object]) -> None: ...


class LiveWriter:
    """Writes each row as it comes; a noun that changed meanwhile is refused (compare and set)."""

    def insert(self, row: models.Model) -> None:
        row.save(force_insert=True)

    def update(self, noun: Noun, columns: dict[str, object]) -> None:
        before = noun.version
        for name, value in columns.items():
            setattr(noun, name, value)
        noun.version = before + 1
        changed = type(noun)._base_manager.filter(pk=noun.pk, version=before)
        values = {name: getattr(noun, name) for name in columns}
        if changed.update(**values, version=noun.version, leaf_id=noun.leaf_id) != 1:
            raise Conflict("record.changed_meanwhile")


class HistoryWriter:
    """Gathers rows and writes them at the end with one statement a table.

    Keys are counted up from each table's highest, which is safe because the ledger's head is locked first.
    """

    def __init__(self) -> None:
        self.new: dict[type[models.Model], dict[int, models.Model]] = {}
        self.changed: dict[type[models.Model], dict[int, models.Model]] = {}
        self._next: dict[type[models.Model], int] = {}

    def insert(self, row: models.Model) -> None:
        model = type(row)
        if model not in self._next:
            highest = model._base_manager.aggregate(top=models.Max("pk"))["top"]
            self._next[model] = (highest or 0) + 1
        row.pk = self._next[model]
        self._next[model] += 1
        self.new.setdefault(model, {})[row.pk] = row

    def update(self, noun: Noun, columns: dict[str, object]) -> None:
        for name, value in columns.items():
            setattr(noun, name, value)
        noun.version += 1
        if noun.pk not in self.new.get(type(noun), {}):
            self.changed.setdefault(type(noun), {})[noun.pk] = noun

    def flush(self) -> None:
        """Write all that was gathered; foreign keys are deferred, so the order of tables doesn't matter."""
        for nouns in self.changed.values():
            for noun in nouns.values():
                noun.save(force_update=True)
        for model, rows in self.new.items():
            insert_rows(model, list(rows.values()))
        self.new, self.changed = {}, {}


def insert_rows(model: type[models.Model], rows: list[models.Model]) -> None:
    """Insert rows that already have their keys, by one prepared statement."""
    if not rows:
        return
    fields = model._meta.concrete_fields
    quote = connection.ops.quote_name
    names = ", ".join(quote(field.column) for field in fields)
    marks = ", ".join(["%s"] * len(fields))
    sql = f"INSERT INTO {quote(model._meta.db_table)} ({names}) VALUES ({marks})"
    cells = [
        [field.get_db_prep_save(getattr(row, field.attname), connection) for field in fields] for row in rows
    ]
    with connection.cursor() as cursor:
        cursor.executemany(sql, cells)
        for statement in connection.ops.sequence_reset_sql(no_style(), [model]):
            cursor.execute(statement)
