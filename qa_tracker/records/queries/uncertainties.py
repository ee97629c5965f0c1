"""Stated uncertainties of measurands, and the decision rule chosen for each."""

from __future__ import annotations

import datetime as dt
import json
import uuid
from dataclasses import dataclass
from typing import Literal

from qa_tracker.records.models import Measurand, StatedUncertainty
from qa_tracker.records.queries.as_of import nouns
from qa_tracker.records.queries.people import names

Rule = Literal["simple", "guarded", "zones"]


@dataclass(frozen=True)
class UncertaintyRow:
    """One statement; ``rule`` is empty where the default of the criterion holds."""

    id: int
    uid: uuid.UUID
    measurand: str
    unit: str
    site_id: int | None
    kind: str
    entered: str
    coverage_factor: str
    repeats: tuple[str, ...]
    rule: Rule | Literal[""]
    source: str
    stated_by: str
    stated_at: dt.datetime
    ended_at: dt.datetime | None


def list_uncertainties(as_of: dt.datetime | None = None) -> list[UncertaintyRow]:
    """Every statement, ended ones too, by measurand and newest first."""
    found = nouns(StatedUncertainty, as_of)
    measurands = {
        row.id: row for row in Measurand.objects.filter(id__in={each.measurand_id for each in found})
    }
    people = names({each.stated_by_id for each in found})
    rows = [_row(each, measurands[each.measurand_id], people.get(each.stated_by_id, "")) for each in found]
    return sorted(rows, key=lambda row: (row.measurand, row.site_id or 0, -row.stated_at.timestamp()))


def in_force(site_id: int | None) -> dict[str, UncertaintyRow]:
    """What holds at a site by measurand code: its own statement, or the group's."""
    open_ones = StatedUncertainty.objects.filter(ended_at=None).select_related("measurand")
    rows: dict[str, UncertaintyRow] = {}
    for each in sorted(open_ones, key=lambda one: one.site_id is None):
        if each.site_id in (None, site_id):
            rows.setdefault(each.measurand.code, _row(each, each.measurand, ""))
    return rows


def _row(each: StatedUncertainty, measurand: Measurand, stated_by: str) -> UncertaintyRow:
    repeats = tuple(json.loads(each.repeats)) if each.repeats else ()
    return UncertaintyRow(
        each.id, each.uid, measurand.code, measurand.unit, each.site_id, each.kind, each.entered,
        each.coverage_factor, repeats, each.rule, each.source, stated_by, each.stated_at, each.ended_at,
    )  # fmt: skip
