"""The ledger's own tables: leaves and checkpoints are only added, and the head only grows."""

from __future__ import annotations

import hashlib

import pytest
from attacks import cells_of, clash, fresh_uid, insert, on_conflict, overwrite, refusal, update
from django.apps import apps
from row_maker import AT, make

from qa_tracker.records import guards, ledger
from qa_tracker.records.models import Site

Leaf, Checkpoint, Head = (apps.get_model("leadline", name) for name in ("Leaf", "Checkpoint", "LedgerHead"))
REMOVING = {
    "sqlite": ('DELETE FROM "{table}"',),
    "postgresql": ('DELETE FROM "{table}"', 'TRUNCATE "{table}" CASCADE'),
}
REPLACING = {"sqlite": ("INSERT OR REPLACE", "REPLACE"), "postgresql": ()}
LEDGER_KEYS = [
    pytest.param(model, number, id=f"{model._meta.model_name} key {number}")
    for model in (Leaf, Checkpoint)
    for number, _ in enumerate(guards.unique_keys(model))
]


@pytest.fixture
def written(db):
    make(Site)
    size, root = ledger.state()
    ledger.keep_checkpoint(size=size, root=root, at=AT, note="origin\n1\n")


@pytest.mark.parametrize("model", [Leaf, Checkpoint, Head])
def test_ledger_row_stays_when_it_is_deleted_or_truncated(written, engine, model):
    for statement in REMOVING[engine]:
        assert "leadline" in refusal(statement.format(table=model._meta.db_table)), statement


@pytest.mark.parametrize("column", [field.column for field in Leaf._meta.concrete_fields])
def test_leaf_is_never_updated(written, column):
    leaf = Leaf.objects.get()
    value = cells_of(leaf)[column]
    assert "leadline" in update("leadline_leaf", leaf.seq, {column: value}, pk_column="seq")


@pytest.mark.parametrize("column", [field.column for field in Checkpoint._meta.concrete_fields])
def test_checkpoint_is_never_updated(written, column):
    row = Checkpoint.objects.get()
    assert "leadline" in update("leadline_checkpoint", row.pk, {column: cells_of(row)[column]})


@pytest.mark.parametrize(("model", "number"), LEDGER_KEYS)
def test_ledger_row_is_kept_when_another_would_replace_it(written, engine, model, number):
    key = list(guards.unique_keys(model))[number]
    rival = clash(cells_of(model.objects.get()), model, key)
    for verb in REPLACING[engine]:
        assert "leadline" in insert(model._meta.db_table, rival, verb), verb
    assert "leadline" in insert(model._meta.db_table, rival, "INSERT", on_conflict(key, overwrite(rival)))


@pytest.mark.parametrize("seq", [-1, 0, 2, 10**12], ids=["before the first", "taken", "a gap", "far away"])
def test_leaf_is_refused_when_its_number_is_not_the_next(written, seq):
    cells = cells_of(Leaf.objects.get()) | {"uid": fresh_uid(), "seq": 1}
    assert insert("leadline_leaf", cells) == ""
    assert "leadline" in insert("leadline_leaf", cells | {"seq": seq})


@pytest.mark.parametrize("seq", [1, -1], ids=["not from zero", "negative"])
def test_first_leaf_is_refused_when_it_is_not_number_zero(db, seq):
    given = {"uid": fresh_uid(), "kind": "x", "subject_type": "", "at": "2026-03-02 09:30:00+00"}
    cells = given | {"content": "{}", "leaf_hash": hashlib.sha256().digest()}
    assert insert("leadline_leaf", cells | {"seq": 0}) == ""
    assert "leadline" in insert("leadline_leaf", cells | {"seq": seq})


@pytest.mark.parametrize(
    "cells",
    [
        pytest.param({"size": 0}, id="shrunk"),
        pytest.param({"size": 1}, id="size kept"),
        pytest.param({"frontier": bytes(8)}, id="frontier alone"),
        pytest.param({"id": 2, "size": 9}, id="moved"),
    ],
)
def test_head_is_refused_when_it_does_not_grow(written, cells):
    assert "leadline" in update("leadline_ledgerhead", 1, cells)


def test_head_is_kept_when_a_second_or_a_new_one_would_be_inserted(written, engine):
    cells = cells_of(Head.objects.get()) | {"size": 99}
    for verb in ("INSERT", *REPLACING[engine]):
        for pk in (1, 2):
            assert "leadline" in insert("leadline_ledgerhead", cells | {"id": pk}, verb), (verb, pk)
    upsert = 'ON CONFLICT ("id") DO UPDATE SET size = 0'
    assert "leadline" in insert("leadline_ledgerhead", cells, "INSERT", upsert)
