"""Triggers that refuse what no command does, on both engines.

An audited row is never deleted; a fact is never updated; a noun is updated only under a new leaf; and no
row joins a leaf that is already written, since a leaf is inserted last. REPLACE and upserts reach a row
through any unique index, so each of them is guarded too. The triggers are put back after every migration
(SQLite drops a table's triggers when it rebuilds it) and compared with what they should be at start.
"""

from __future__ import annotations

from collections.abc import Iterator

from django.apps import apps
from django.db import connections, models
from django.db.backends.base.base import BaseDatabaseWrapper

from qa_tracker.records import guards_postgresql, guards_sqlite
from qa_tracker.records.models.base import Audited, Fact


class GuardsMissing(RuntimeError):
    """The database lacks a guard, so nothing may be served from it."""


def audited_models() -> list[type[Audited]]:
    """Every table whose rows name a leaf."""
    return [model for model in apps.get_app_config("leadline").get_models() if issubclass(model, Audited)]


def ledger_models() -> list[type[models.Model]]:
    """The ledger's own insert-only tables."""
    config = apps.get_app_config("leadline")
    return [config.get_model("Leaf"), config.get_model("Checkpoint")]


def unique_keys(model: type[models.Model]) -> Iterator[tuple[list[str], str]]:
    """Yield each unique key as column expressions with ``{row}`` for the row, and its condition."""
    for field in model._meta.concrete_fields:
        if field.primary_key or field.unique:
            yield [f'{{row}}"{field.column}"'], ""
    for constraint in model._meta.constraints:
        if isinstance(constraint, models.UniqueConstraint):
            terms = [_term(model, item) for item in (constraint.expressions or constraint.fields)]
            yield terms, _condition(model, constraint)


def _term(model: type[models.Model], item: object) -> str:
    if isinstance(item, str):
        return f'{{row}}"{model._meta.get_field(item).column}"'
    if isinstance(item, models.F):
        return _term(model, item.name)
    if isinstance(item, models.functions.Coalesce):
        name, default = item.get_source_expressions()
        return f"COALESCE({_term(model, name)}, {default.value})"
    raise TypeError(f"no guard for a unique key over {item!r}")


def _condition(model: type[models.Model], constraint: models.UniqueConstraint) -> str:
    if constraint.condition is None:
        return ""
    ((name, value),) = constraint.condition.children
    if value is not None:
        raise TypeError("a guarded unique key's condition is that a column is empty")
    return f'{{row}}"{model._meta.get_field(name).column}" IS NULL'


def statements(connection: BaseDatabaseWrapper) -> dict[str, str]:
    """Every trigger by name, as the SQL that makes it."""
    maker = {"sqlite": guards_sqlite, "postgresql": guards_postgresql}[connection.vendor]
    made: dict[str, str] = {}
    for model in audited_models():
        keys = list(unique_keys(model))
        made |= maker.row_guards(model._meta.db_table, keys, fact=issubclass(model, Fact))
    for model in ledger_models():
        made |= maker.ledger_guards(model._meta.db_table, list(unique_keys(model)))
    return made | maker.head_guards(apps.get_model("leadline", "LedgerHead")._meta.db_table)


def install(connection: BaseDatabaseWrapper) -> None:
    """Make every guard anew; safe to repeat."""
    maker = {"sqlite": guards_sqlite, "postgresql": guards_postgresql}[connection.vendor]
    with connection.cursor() as cursor:
        for sql in maker.PREPARE:
            cursor.execute(sql)
        for name, sql in statements(connection).items():
            cursor.execute(maker.drop(name))
            cursor.execute(sql)


def before_migrate(*, using: str, plan: list[object], **_: object) -> None:
    """Take the guards down while tables change (receiver of ``pre_migrate``).

    SQLite refuses to rebuild a table that triggers of other tables read, and every guard reads the leaves.
    A migration that fails leaves them down; the program then refuses to start until one has succeeded.
    """
    connection = connections[using]
    if not plan or connection.vendor != "sqlite":
        return
    with connection.cursor() as cursor:
        for name in guards_sqlite.installed(cursor):
            if name.startswith("guard_"):
                cursor.execute(guards_sqlite.drop(name))


def after_migrate(*, using: str, **_: object) -> None:
    """Put the guards back once the tables stand (receiver of ``post_migrate``)."""
    connection = connections[using]
    if apps.get_model("leadline", "LedgerHead")._meta.db_table in connection.introspection.table_names():
        install(connection)


def assert_installed(connection: BaseDatabaseWrapper) -> None:
    """Compare the guards in the database with what they should be.

    Raises
    ------
    GuardsMissing
        naming the guards that are missing or were changed.
    """
    maker = {"sqlite": guards_sqlite, "postgresql": guards_postgresql}[connection.vendor]
    wanted = statements(connection)
    with connection.cursor() as cursor:
        found = maker.installed(cursor)
        unenforced = maker.unenforced(cursor)
    wrong = sorted(name for name, sql in wanted.items() if not maker.same(found.get(name), sql)) + unenforced
    if wrong:
        raise GuardsMissing(
            f"{len(wrong)} guard(s) of the records are missing or changed, the first is {wrong[0]}: "
            "run 'manage.py migrate' and find out who changed the database"
        )
