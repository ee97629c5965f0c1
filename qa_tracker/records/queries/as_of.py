"""Nouns now, or as they were known at a past moment."""

from __future__ import annotations

import datetime as dt
import json
from typing import Any, TypeVar

from django.db.models import Max

from qa_tracker.records.models import Version
from qa_tracker.records.models.base import Noun
from qa_tracker.records.rows import noun_from

N = TypeVar("N", bound=Noun)


def nouns(model: type[N], as_of: dt.datetime | None = None, **wanted: Any) -> list[N]:
    """Return the nouns whose columns equal those wanted, in the order of their keys.

    ``wanted`` names columns (``site_id``, ``state``); a set or list means any of its values. With ``as_of``
    they are rebuilt from the versions known at that moment, so what came later is not there.
    """
    if as_of is None:
        filters = {
            f"{name}__in" if isinstance(value, set | frozenset | list) else name: value
            for name, value in wanted.items()
        }
        return list(model._base_manager.filter(**filters).order_by("pk"))
    found = _rebuilt(model, as_of, wanted)
    return [noun for noun in found if all(_fits(noun, name, value) for name, value in wanted.items())]


def noun(model: type[N], as_of: dt.datetime | None = None, **wanted: Any) -> N | None:
    """Return the first such noun, or None."""
    found = nouns(model, as_of, **wanted)
    return found[0] if found else None


def _rebuilt(model: type[N], as_of: dt.datetime, wanted: dict[str, Any]) -> list[N]:
    versions = Version.objects.filter(noun=model._meta.model_name, recorded_at__lte=as_of)
    if isinstance(wanted.get("id"), int):
        versions = versions.filter(subject_id=wanted["id"])
    newest = versions.values("subject_id").annotate(top=Max("number")).values_list("subject_id", "top")
    numbers = dict(newest)
    rows = versions.order_by("subject_id").values_list("subject_id", "number", "columns")
    return [
        noun_from(model, json.loads(columns))  # type: ignore[misc]  # rebuilt by the model it was given
        for subject_id, number, columns in rows.iterator()
        if numbers[subject_id] == number
    ]


def _fits(noun: Noun, name: str, value: Any) -> bool:
    own = getattr(noun, name)
    return own in value if isinstance(value, set | frozenset | list) else own == value
