"""Commands that end badly: nothing at all is written."""

from __future__ import annotations

import pytest
from attacks import MODELS
from django.apps import apps
from django.db import DatabaseError, connection, transaction
from row_maker import AT, Maker, make

from qa_tracker.core.errors import Conflict, Invalid
from qa_tracker.records import ledger
from qa_tracker.records.models import Site, Submission, Version

Leaf = apps.get_model("leadline", "Leaf")
BREAK_LEAVES = {
    "sqlite": "CREATE TRIGGER broken BEFORE INSERT ON leadline_leaf BEGIN SELECT RAISE(ABORT, 'broken'); END",
    "postgresql": "ALTER TABLE leadline_leaf ADD CONSTRAINT broken CHECK (false) NOT VALID",
}


def counts():
    tables = {model._meta.db_table: model.objects.count() for model in MODELS.values()}
    return tables | {"leaves": Leaf.objects.count(), "head": ledger.state()}


def refuse_half_way():
    with ledger.command("rows.made", actor=None, at=AT) as act:
        Maker(act).row(Submission)
        raise Conflict("check.submitted_already")


def tell_a_binary_fraction():
    with ledger.command("rows.made", actor=None, at=AT) as act:
        Maker(act).row(Submission)
        act.tell({"depth_mm": 1.5})


def refuse_the_past():
    with ledger.history("demo") as past:
        Maker(past.act("rows.made", actor=None, at=AT)).row(Submission)
        past.writer.flush()
        raise Conflict("check.submitted_already")


def change_twice(site):
    with ledger.command("site.renamed", actor=None, at=AT) as act:
        act.change(site, name="first")
        act.change(site, name="second")


def test_nothing_is_written_when_the_leaf_cannot_be(committed_db, engine):
    make(Site)
    before = counts()
    with connection.cursor() as cursor:
        cursor.execute(BREAK_LEAVES[engine])
    with pytest.raises(DatabaseError, match="broken"):
        make(Submission)
    assert counts() == before


def test_nothing_is_written_when_the_command_refuses_half_way(committed_db):
    before = counts()
    with pytest.raises(Conflict):
        refuse_half_way()
    assert counts() == before


def test_nothing_is_written_when_the_leaf_has_no_canonical_form(committed_db):
    before = counts()
    with pytest.raises(Invalid):
        tell_a_binary_fraction()
    assert counts() == before


def test_nothing_is_written_when_history_ends_badly(committed_db):
    before = counts()
    with pytest.raises(Conflict):
        refuse_the_past()
    assert counts() == before


def test_later_command_goes_on_without_a_gap_when_one_was_refused(committed_db):
    make(Site)
    with pytest.raises(Conflict), ledger.command("refused", actor=None, at=AT):
        raise Conflict("check.submitted_already")
    make(Site)
    assert list(Leaf.objects.order_by("seq").values_list("seq", flat=True)) == [0, 1]


def test_change_is_refused_when_someone_else_changed_it_first(db):
    site = make(Site)
    stale = Site.objects.get(pk=site.pk)
    with ledger.command("site.renamed", actor=None, at=AT) as act:
        act.change(site, name="first")
    with pytest.raises(Conflict) as refused, ledger.command("site.renamed", actor=None, at=AT) as act:
        act.change(stale, name="second")
    assert refused.value.code == "record.changed_meanwhile"
    assert Site.objects.get(pk=site.pk).name == "first"
    assert Version.objects.filter(noun="site").count() == 2


def test_second_change_of_a_noun_in_one_command_is_refused_by_the_database(db):
    site = make(Site)
    with pytest.raises(DatabaseError, match="new leaf"), transaction.atomic():
        change_twice(site)
    assert Site.objects.get(pk=site.pk).version == 1


def test_sweeping_writes_no_leaf_when_it_wrote_no_row(db):
    with ledger.sweeping("sweep.done", at=AT, as_if=None):
        pass
    assert ledger.state()[0] == 0


def test_sweeping_writes_one_leaf_when_it_wrote_a_row(db):
    with ledger.sweeping("sweep.done", at=AT, as_if=AT) as act:
        Maker(act).row(Site)
    assert (ledger.state()[0], Leaf.objects.get().actor_uid) == (1, None)
