"""Rules that every table keeps."""

from __future__ import annotations

import pytest
from django.apps import apps
from django.core.management import call_command
from django.db import models

from qa_tracker.records import guards
from qa_tracker.records.exempt import EXEMPT
from qa_tracker.records.models.base import Fact, Noun

MODELS = list(apps.get_app_config("leadline").get_models())


def test_exempt_list_names_exactly_the_tables_without_a_leaf():
    audited = guards.audited_models()
    assert sorted(EXEMPT) == sorted(model.__name__ for model in MODELS if model not in audited)
    assert all(EXEMPT.values())


@pytest.mark.parametrize("model", MODELS)
def test_no_table_keeps_a_number_that_an_engine_would_round(model):
    rounded = [
        field.name
        for field in model._meta.fields
        if isinstance(field, models.DecimalField | models.FloatField)
    ]
    assert rounded == []


@pytest.mark.parametrize("model", guards.audited_models())
def test_audited_table_is_a_fact_or_a_noun_and_names_its_leaf(model):
    leaf = model._meta.get_field("leaf")
    assert issubclass(model, Fact) != issubclass(model, Noun)
    assert (leaf.null, leaf.target_field.name, leaf.remote_field.on_delete) == (
        False,
        "uid",
        models.DO_NOTHING,
    )


@pytest.mark.parametrize("model", guards.audited_models())
def test_audited_table_deletes_nothing_by_cascade(model):
    keys = [field for field in model._meta.fields if isinstance(field, models.ForeignKey)]
    assert {key.remote_field.on_delete for key in keys} == {models.DO_NOTHING}


def test_every_table_is_named_after_the_label():
    assert all(model._meta.db_table.startswith("leadline_") for model in MODELS)


def test_migrations_say_what_the_models_say(db):
    call_command("makemigrations", check=True, dry_run=True, verbosity=0)
