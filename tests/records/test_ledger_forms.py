"""Forms: what of a fact is hashed, and that it hashes the same before and after the database."""

from __future__ import annotations

import hashlib

import pytest
from row_maker import make

from qa_tracker.core.canonical import canonical
from qa_tracker.records import guards
from qa_tracker.records.models import Holiday
from qa_tracker.records.models.base import Fact
from qa_tracker.records.rows import digest_of, fact_cells, newest_form

FACTS = {model._meta.model_name: model for model in guards.audited_models() if issubclass(model, Fact)}


@pytest.mark.parametrize("name", FACTS)
def test_newest_form_covers_every_column_but_the_leaf(name):
    columns = {field.column for field in FACTS[name]._meta.concrete_fields} - {"leaf_id"}
    form = FACTS[name].LEDGER_FORMS[newest_form(FACTS[name])]
    assert set(form) == columns
    assert len(form) == len(columns)


@pytest.mark.parametrize("name", FACTS)
def test_fact_hashes_the_same_when_it_is_read_back(db, name):
    written = make(FACTS[name])
    form = newest_form(FACTS[name])
    kept = FACTS[name].objects.get(pk=written.pk)
    assert fact_cells([kept], form) == fact_cells([written], form)


def test_fact_hashes_the_same_when_a_day_was_given_as_text():
    said, kept = (
        Holiday(pk=1, site_id="4", day_on="2026-03-02"),
        Holiday(pk=1, site_id=4, day_on="2026-03-02"),
    )
    kept.day_on = Holiday._meta.get_field("day_on").to_python("2026-03-02")
    assert fact_cells([said], 1) == fact_cells([kept], 1) == [("1", "4", "2026-03-02", "")]


def test_digest_is_over_the_rows_in_the_order_of_ids():
    rows = [Holiday(pk=pk, site_id=1, day_on="2026-03-02", name=str(pk)) for pk in (10, 9)]
    listed = canonical([[str(pk), "1", "2026-03-02", str(pk)] for pk in (9, 10)])
    assert digest_of(rows, 1) == {"n": 2, "sha256": hashlib.sha256(listed).hexdigest()}
