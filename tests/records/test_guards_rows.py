"""Deleting, changing and adding rows behind the ledger's back, on every audited table."""

from __future__ import annotations

import pytest
from attacks import MODELS, cells_of, clash, fresh_uid, insert, refusal, update
from django.db import DatabaseError, IntegrityError, connection, transaction
from row_maker import make

from qa_tracker.records.models.base import Fact, Noun

NOUNS = [table for table, model in MODELS.items() if issubclass(model, Noun)]
FACTS = [table for table, model in MODELS.items() if issubclass(model, Fact)]
REMOVING = {
    "sqlite": ('DELETE FROM "{table}"', 'DELETE FROM "{table}" WHERE id > 0'),
    "postgresql": (
        'DELETE FROM "{table}"',
        'DELETE FROM "{table}" WHERE id > 0',
        'TRUNCATE "{table}" CASCADE',
        'TRUNCATE "{table}" RESTART IDENTITY CASCADE',
    ),
}
every_table = pytest.mark.parametrize("table", MODELS)
every_noun = pytest.mark.parametrize("table", NOUNS)


@every_table
def test_row_stays_when_it_is_deleted_or_truncated(db, engine, table):
    make(MODELS[table])
    for statement in REMOVING[engine]:
        assert "leadline" in refusal(statement.format(table=table)), statement


@every_table
def test_row_stays_when_its_own_model_deletes_it(db, table):
    row = make(MODELS[table])
    with pytest.raises(DatabaseError, match="leadline"), transaction.atomic():
        row.delete()


@pytest.mark.parametrize("table", FACTS)
def test_fact_is_never_updated_even_under_a_new_leaf(db, table):
    row = make(MODELS[table])
    assert "leadline" in update(table, row.pk, {"leaf_id": fresh_uid()})


@every_noun
def test_noun_is_not_updated_when_its_leaf_is_unchanged(db, table):
    row = make(MODELS[table])
    assert "new leaf" in update(table, row.pk, {"version": 2})


@every_noun
def test_noun_is_not_updated_when_the_leaf_is_another_already_written(db, table):
    row = make(MODELS[table])
    written = cells_of(make(MODELS[table]))["leaf_id"]
    assert "leadline" in update(table, row.pk, {"version": 2, "leaf_id": written})


@every_noun
@pytest.mark.parametrize("column", ["id", "uid"])
def test_noun_keeps_its_identity_when_a_new_leaf_would_change_it(db, table, column):
    row = make(MODELS[table])
    taken = {"id": row.pk + 1_000_003, "uid": fresh_uid()}[column]
    assert "new leaf" in update(table, row.pk, {column: taken, "leaf_id": fresh_uid()})


@every_noun
def test_noun_is_updated_when_the_leaf_is_new(db, table):
    row = make(MODELS[table])
    assert update(table, row.pk, {"version": 2, "leaf_id": fresh_uid()}) == ""


@every_table
def test_row_does_not_join_a_leaf_already_written(db, table):
    cells = cells_of(make(MODELS[table]))
    late = clash(cells, MODELS[table], None)
    assert insert(table, late) == ""
    assert "already written" in insert(table, late | {"leaf_id": cells["leaf_id"]})


@every_table
def test_row_needs_a_leaf_at_once_when_it_names_none(db, table):
    late = clash(cells_of(make(MODELS[table])), MODELS[table], None)
    assert "leaf_id" in insert(table, late | {"leaf_id": None})


def test_transaction_is_refused_at_its_end_when_a_row_has_no_leaf(committed_db):
    for table, model in MODELS.items():
        late = clash(cells_of(make(model)), model, None)
        with pytest.raises(IntegrityError):
            commit_insert(table, late)
        assert not model.objects.filter(pk=late["id"]).exists(), table


@transaction.atomic
def commit_insert(table, cells):
    names, marks = ", ".join(f'"{name}"' for name in cells), ", ".join(["%s"] * len(cells))
    with connection.cursor() as cursor:
        cursor.execute(f'INSERT INTO "{table}" ({names}) VALUES ({marks})', list(cells.values()))
