"""Ways to put rows into the tables: one at a time as commands do, or gathered and written together.

All hand out keys at once, so the code that builds rows is the same for a live check and for ten years
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
        row.pk = self._key(type(row))
        self.new.setdefault(type(row), {})[row.pk] = row

    def _key(self, model: type[models.Model]) -> int:
        if model not in self._next:
            highest = model._base_manager.aggregate(top=models.Max("pk"))["top"]
            self._next[model] = (highest or 0) + 1
        self._next[model] += 1
        return self._next[model] - 1

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


class BatchWriter(HistoryWriter):
    """Gathers rows while others write: on PostgreSQL keys are taken from the table's own sequence, in blocks.

    On SQLite the IMMEDIATE transaction keeps everybody else out, and keys are counted up from the highest. Nouns
    are changed by compare and set, as in :class:`LiveWriter`.
    """

    FIRST_BLOCK, LARGEST_BLOCK = 4, 1024

    def __init__(self) -> None:
        super().__init__()
        self._has_sequences = connection.vendor == "postgresql"
        self._blocks: dict[type[models.Model], list[int]] = {}
        self._size: dict[type[models.Model], int] = {}
        self._columns: dict[type[models.Model], dict[int, set[str]]] = {}

    def _key(self, model: type[models.Model]) -> int:
        if not self._has_sequences:
            return super()._key(model)
        block = self._blocks.get(model)
        if not block:
            size = self._size[model] = min(2 * self._size.get(model, self.FIRST_BLOCK), self.LARGEST_BLOCK)
            block = self._blocks[model] = _from_sequence(model, size)[::-1]
        return block.pop()

    def update(self, noun: Noun, columns: dict[str, object]) -> None:
        super().update(noun, columns)
        names = {noun._meta.get_field(name).attname for name in columns}
        self._columns.setdefault(type(noun), {}).setdefault(noun.pk, set()).update(names)

    def flush(self) -> None:
        """Write all that was gathered: one statement a table and set of changed columns."""
        for model, nouns in self.changed.items():
            alike: dict[frozenset[str], list[Noun]] = {}
            for key, noun in nouns.items():
                alike.setdefault(frozenset(self._columns[model][key]), []).append(noun)
            for names, rows in alike.items():
                _change_rows(model, sorted(names), rows)
        for model in sorted(self.new, key=_depth):
            insert_rows(model, list(self.new[model].values()), by_sequence=True)
        self.new, self.changed, self._columns = {}, {}, {}


def _from_sequence(model: type[models.Model], count: int) -> list[int]:
    """So many keys that nobody else gets."""
    with connection.cursor() as cursor:
        cursor.execute(
            "SELECT nextval(pg_get_serial_sequence(%s, %s)) FROM generate_series(1, %s)",
            [model._meta.db_table, model._meta.pk.column, count],
        )
        return sorted(key for (key,) in cursor.fetchall())


def _change_rows(model: type[models.Model], names: Sequence[str], nouns: Sequence[Noun]) -> None:
    """Change the named columns of nouns by one prepared statement; each has to have the version before."""
    fields = {field.attname: field for field in model._meta.concrete_fields}
    sets = [fields[name] for name in (*names, "version", "leaf_id")]
    quote = connections[DEFAULT_DB_ALIAS].ops.quote_name
    marks = ", ".join(f"{quote(field.column)} = %s" for field in sets)
    sql = f"UPDATE {quote(model._meta.db_table)} SET {marks} WHERE id = %s AND version = %s"
    keys = ([noun.pk for noun in nouns], [noun.version - 1 for noun in nouns])
    with connection.cursor() as cursor:
        cursor.executemany(sql, list(zip(*(_stored(field, nouns) for field in sets), *keys, strict=True)))
        if cursor.rowcount != len(nouns):
            raise Conflict("record.changed_meanwhile")


def put_rows(model: type[models.Model], rows: Sequence[models.Model]) -> None:
    """Insert rows of an unaudited table, or change those that are there with the same key, by one statement."""
    if not rows:
        return
    quote = connections[DEFAULT_DB_ALIAS].ops.quote_name
    key = model._meta.pk.column
    others = [field.column for field in model._meta.concrete_fields if field.column != key]
    sets = ", ".join(f"{quote(column)} = excluded.{quote(column)}" for column in others)
    with connection.cursor() as cursor:
        cursor.executemany(
            f"{_insert(model)} ON CONFLICT ({quote(key)}) DO UPDATE SET {sets}", _cells(model, rows)
        )


def _insert(model: type[models.Model]) -> str:
    fields = model._meta.concrete_fields
    quote = connections[DEFAULT_DB_ALIAS].ops.quote_name
    names = ", ".join(quote(field.column) for field in fields)
    marks = ", ".join(["%s"] * len(fields))
    return f"INSERT INTO {quote(model._meta.db_table)} ({names}) VALUES ({marks})"


def _cells(model: type[models.Model], rows: Sequence[models.Model]) -> list[tuple[Any, ...]]:
    return list(zip(*(_stored(field, rows) for field in model._meta.concrete_fields), strict=True))


def insert_rows(
    model: type[models.Model], rows: Sequence[models.Model], *, by_sequence: bool = False
) -> None:
    """Insert rows that already have their keys, by one prepared statement.

    ``by_sequence``: the keys came from the table's sequence, which is then left as it is: setting it to the highest
    key in sight would give out again what others took and have not committed.
    """
    if not rows:
        return
    with connection.cursor() as cursor:
        cursor.executemany(_insert(model), _cells(model, rows))
        if by_sequence:
            return
        for statement in connection.ops.sequence_reset_sql(no_style(), [model]):
            cursor.execute(statement)


def gather_statistics() -> None:
    """Let PostgreSQL look at the tables now: until it has, it plans joins of many new rows as if there were few."""
    if connection.vendor == "postgresql":
        with connection.cursor() as cursor:
            cursor.execute("ANALYZE")


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
