"""Versions: every change of a noun keeps the columns it had, and the newest equals the current row."""

from __future__ import annotations

import json

import pytest
from attacks import MODELS
from row_maker import AT, make

from qa_tracker.core.canonical import canonical
from qa_tracker.records import ledger
from qa_tracker.records.models import Site, Version
from qa_tracker.records.models.base import Noun
from qa_tracker.records.rows import columns_of, noun_from

NOUNS = {table: model for table, model in MODELS.items() if issubclass(model, Noun)}


def versions_of(noun):
    return list(Version.objects.filter(noun=noun._meta.model_name, subject_id=noun.pk).order_by("number"))


@pytest.mark.parametrize("table", NOUNS)
def test_first_version_equals_the_row_when_it_was_made(db, table):
    noun = NOUNS[table].objects.get(pk=make(NOUNS[table]).pk)
    (version,) = versions_of(noun)
    assert (version.number, version.leaf_id) == (1, noun.leaf_id)
    assert version.columns == canonical(columns_of(noun)).decode()


@pytest.mark.parametrize("table", NOUNS)
def test_noun_is_rebuilt_from_its_version(db, table):
    noun = NOUNS[table].objects.get(pk=make(NOUNS[table]).pk)
    rebuilt = noun_from(NOUNS[table], json.loads(versions_of(noun)[0].columns))
    columns = [field.attname for field in noun._meta.concrete_fields if field.attname != "leaf_id"]
    assert [getattr(rebuilt, column) for column in columns] == [getattr(noun, column) for column in columns]


def test_each_change_keeps_a_version_and_the_newest_equals_the_row(db):
    site = make(Site)
    for name in ("second", "third"):
        with ledger.command("site.renamed", actor=None, at=AT) as act:
            act.change(site, name=name)
    now, kept = Site.objects.get(pk=site.pk), versions_of(site)
    assert [json.loads(version.columns)["name"] for version in kept][1:] == ["second", "third"]
    assert [version.number for version in kept] == [1, 2, 3]
    assert (now.version, now.leaf_id, now.name) == (3, kept[-1].leaf_id, "third")
    assert kept[-1].columns == canonical(columns_of(now)).decode()
