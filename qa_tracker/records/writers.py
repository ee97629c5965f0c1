"""Two ways to put rows into the tables: one at a time as commands do, or gathered and written together.

Both hand out keys at once, so the code that builds rows is the same for a live check and for ten years
of history.
"""

from __future__ import annotations

from collections.abc import Sequence
from functools import cache
from operator import attrgetter
from typing import Any, Protocol, TypeVar

from django.core.management.color import no_style
from django.db import DEFAULT_DB_ALIAS, connection, connections, models
from django.db.models.base import ModelState

from qa_tracker.core.errors import Conflict
from qa_tracker.records.models.base import Noun

M = TypeVar("M", bound=models.Model)


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
        """Write all that was gathered, and what is pointed to before what points to it.

        Keys may be missing until the transaction ends, but each one that arrives late is looked for in every
        table that could have been waiting for it.
        """
        for nouns in self.changed.values():
            for noun in nouns.values():
                noun.save(force_update=True)
        for model in sorted(self.new, key=_depth):
            insert_rows(model, list(self.new[model].values()))
        self.new, self.changed = {}, {}


def insert_rows(model: type[models.Model], rows: Sequence[models.Model]) -> None:
    """Insert rows that already have their keys, by one prepared statement."""
    if not rows:
        return
    fields = model._meta.concrete_fields
    quote = connections[DEFAULT_DB_ALIAS].ops.quote_name
    names = ", ".join(quote(field.column) for field in fields)
    marks = ", ".join(["%s"] * len(fields))
    sql = f"INSERT INTO {quote(model._meta.db_table)} ({names}) VALUES ({marks})"
    cells = zip(*(_stored(field, rows) for field in fields), strict=True)
    with connection.cursor() as cursor:
        cursor.executemany(sql, list(cells))
        for statement in connection.ops.sequence_reset_sql(no_style(), [model]):
            cursor.execute(statement)


def new_row(model: type[M], **columns: Any) -> M:
    """Build an unsaved row from its columns (``device_id``, not ``device``); what is left out has its default.

    The same row as calling the model, without its descriptors and signals: many are built for each check. Only
    for models whose defaults are values.
    """
    row = model.__new__(model)
    row.__dict__ |= _defaults(model)
    row.__dict__ |= columns
    row._state = ModelState()
    return row


@cache
def _defaults(model: type[models.Model]) -> dict[str, Any]:
    return {name: value for name, value in vars(model()).items() if name != "_state"}


@cache
def _depth(model: type[models.Model]) -> int:
    """How many tables stand before one by its foreign keys; the ledger always comes last."""
    above = {field.related_model for field in model._meta.concrete_fields if field.name != "leaf"}
    return max((_depth(each) + 1 for each in above - {model} if isinstance(each, type)), default=0)


AS_IT_IS = (str, int, type(None))


def _stored(field: models.Field[Any, Any], rows: Sequence[models.Model]) -> list[Any]:
    """One column's values as the engine stores them; texts and whole numbers are stored as they are."""
    engine = connections[DEFAULT_DB_ALIAS]
    values = list(map(attrgetter(field.attname), rows))
    kinds = {*map(type, values)}
    if is_plain(field) and kinds.issubset(AS_IT_IS):
        return values
    known: dict[Any, Any] = {}
    for value in values:
        if value not in known:
            known[value] = field.get_db_prep_save(value, engine)
    return [known[value] for value in values]


def is_plain(field: models.Field[Any, Any]) -> bool:
    """Whether a field holds a text or a whole number, itself or by the key it points to."""
    while isinstance(field, models.ForeignKey):
        field = field.target_field
    if isinstance(field, models.BooleanField):
        return False
    return isinstance(field, models.CharField | models.TextField | models.IntegerField)
