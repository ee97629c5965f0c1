"""REPLACE, UPDATE OR REPLACE and upserts, through every unique key of every audited table."""

from __future__ import annotations

from contextlib import contextmanager

import pytest
from attacks import (
    KEYS,
    MODELS,
    cells_of,
    clash,
    columns_of,
    drop_guards,
    fresh_uid,
    insert,
    on_conflict,
    overwrite,
    update,
)
from django.db import connection
from row_maker import make

from qa_tracker.records import guards

REPLACING = {"sqlite": ("INSERT OR REPLACE", "REPLACE"), "postgresql": ()}
UPDATING = {
    "sqlite": ("UPDATE", "UPDATE OR REPLACE", "UPDATE OR IGNORE", "UPDATE OR FAIL"),
    "postgresql": ("UPDATE",),
}
UNIQUE_INDEXES = {
    "sqlite": 'SELECT COUNT(*) + 1 FROM pragma_index_list(%s) WHERE "unique"',
    "postgresql": "SELECT COUNT(*) FROM pg_index WHERE indisunique AND indrelid = %s::regclass",
}
every_key = pytest.mark.parametrize("key_name", KEYS)


@contextmanager
def recursion_off():
    """As a foreign tool opens SQLite: REPLACE then removes rows without firing the delete guard."""
    switch = connection.cursor().execute if connection.vendor == "sqlite" else (lambda sql: None)
    switch("PRAGMA recursive_triggers=OFF")
    try:
        yield
    finally:
        switch("PRAGMA recursive_triggers=ON")


@every_key
def test_row_is_kept_when_another_would_replace_it(db, engine, key_name):
    model, key = KEYS[key_name]
    rival = clash(cells_of(make(model)), model, key)
    attacks = [(verb, "") for verb in REPLACING[engine]] + [("INSERT", on_conflict(key, overwrite(rival)))]
    for verb, ending in attacks:
        assert "leadline" in insert(model._meta.db_table, rival, verb, ending), verb
        with recursion_off():
            assert "leadline" in insert(model._meta.db_table, rival, verb, ending), verb


@every_key
def test_row_is_kept_when_an_update_would_take_its_key(db, engine, key_name):
    model, key = KEYS[key_name]
    first, second = cells_of(make(model)), make(model)
    taken = {column: first[column] for column in columns_of(key)} | {"leaf_id": fresh_uid()}
    for verb in UPDATING[engine]:
        with recursion_off():
            said = update(model._meta.db_table, second.pk, taken, verb)
        assert "leadline" in said or "duplicate key" in said, verb


@every_key
def test_row_is_kept_when_an_upsert_would_change_it_under_its_old_leaf(db, key_name):
    model, key = KEYS[key_name]
    rival = clash(cells_of(make(model)), model, key)
    ending = on_conflict(key, f'DO UPDATE SET leaf_id = "{model._meta.db_table}".leaf_id')
    assert "leadline" in insert(model._meta.db_table, rival, "INSERT", ending)


@every_key
def test_row_is_unchanged_when_an_upsert_does_nothing(db, key_name):
    model, key = KEYS[key_name]
    row = make(model)
    before = cells_of(row)
    insert(model._meta.db_table, clash(before, model, key), "INSERT", on_conflict(key, "DO NOTHING"))
    assert cells_of(row) == before


@every_key
def test_row_would_be_replaced_if_not_for_the_guard_of_that_key(db, engine, key_name):
    model, key = KEYS[key_name]
    table, number = model._meta.db_table, key_name.rpartition(" ")[2]
    rival = clash(cells_of(make(model)), model, key)
    if engine == "sqlite":
        drop_guards(f"guard_{table}_insert_key{number}")
        with recursion_off():
            assert insert(table, rival, "INSERT OR REPLACE") == ""
    else:
        drop_guards(f"guard_{table}_write", f"guard_{table}_update")
        assert insert(table, rival, "INSERT", on_conflict(key, overwrite(rival))) == ""


@pytest.mark.parametrize("table", MODELS)
def test_every_unique_index_is_among_the_guarded_keys(db, engine, table):
    with connection.cursor() as cursor:
        cursor.execute(UNIQUE_INDEXES[engine], [table])
        assert cursor.fetchone()[0] == len(list(guards.unique_keys(MODELS[table])))
