"""One valid row of any audited table, made as commands make rows: through the ledger's door."""

from __future__ import annotations

import datetime as dt
import itertools
from typing import Any

from django.db import models

from qa_tracker.records import ledger
from qa_tracker.records import models as tables
from qa_tracker.records.ids import uuid7
from qa_tracker.records.models.base import Audited

AT = dt.datetime(2026, 3, 2, 9, 30, tzinfo=dt.UTC)
_numbers = itertools.count(1)

# Nullable columns that a unique key or a check constraint needs filled.
FILLED: dict[type[models.Model], tuple[str, ...]] = {
    tables.Adoption: ("edition",),
    tables.Check: ("plan", "due_on"),
    tables.Verdict: ("reading",),
}


class Maker:
    """Makes rows under one act; a row that several need is made once."""

    def __init__(self, act: ledger.Act) -> None:
        self.act = act
        self.made: dict[type[models.Model], Audited] = {}

    def row(self, model: type[Audited]) -> Audited:
        if model not in self.made:
            self.made[model] = self.act.insert(model(**self._values(model)))
        return self.made[model]

    def _values(self, model: type[Audited]) -> dict[str, Any]:
        filled = FILLED.get(model, ())
        return {
            field.name: self._value(field)
            for field in model._meta.concrete_fields
            if not field.primary_key and field.name != "leaf" and (field.name in filled or not field.null)
        }

    def _value(self, field: models.Field) -> Any:
        number = next(_numbers)
        if isinstance(field, models.ForeignKey):
            return self.row(field.related_model)
        if field.has_default() and not field.unique:
            return field.get_default()
        simple = {
            "UUIDField": uuid7(),
            "DateTimeField": AT,
            "DateField": AT.date() + dt.timedelta(days=number),
            "CharField": f"{field.name[:4]}{number}"[: field.max_length or None],
            "EmailField": f"person{number}@example.org",
            "TextField": f"{field.name} {number}",
            "PositiveSmallIntegerField": 7,
        }
        return simple.get(field.get_internal_type(), number)


def make(model: type[Audited]) -> Audited:
    """Make a row and all it refers to, in one command of its own."""
    with ledger.command("rows.made", actor=None, at=AT) as act:
        return Maker(act).row(model)
