"""Procedures, editions, criteria, and which of them are adopted where."""

from __future__ import annotations

import datetime as dt
import json
import uuid
from collections.abc import Iterable
from dataclasses import dataclass
from functools import lru_cache
from typing import Any

from django.db import models
from django.db.models import Prefetch, QuerySet

from qa_tracker.core import library as published
from qa_tracker.core.library_specs import CriterionSpec, ProcedureSpec
from qa_tracker.records.models import Adoption, CriteriaSet, Criterion, Edition, Measurand, Person, Procedure
from qa_tracker.records.queries.as_of import nouns


@dataclass(frozen=True)
class EditionRow:
    """A published edition with its content read."""

    id: int
    uid: uuid.UUID
    procedure_id: int
    procedure_uid: uuid.UUID
    code: str
    title: str
    number: int
    content_sha256: str
    spec: ProcedureSpec


@dataclass(frozen=True)
class CriterionRow:
    """A limit of a set, read; ``adopted`` tells whether a named physicist took it over."""

    id: int
    uid: uuid.UUID
    set_uid: uuid.UUID
    set_code: str
    set_edition: str
    set_source: str
    code: str
    spec: CriterionSpec


@dataclass(frozen=True)
class CriteriaSetRow:
    """A published set."""

    id: int
    uid: uuid.UUID
    code: str
    edition: str
    title: str
    source: str
    note: str
    published_at: dt.datetime
    criteria: tuple[CriterionRow, ...]


@dataclass(frozen=True)
class AdoptionRow:
    """Who adopted what, where and when."""

    uid: uuid.UUID
    edition_id: int | None
    criteria_set_id: int | None
    site_id: int | None
    adopted_by: str
    adopted_at: dt.datetime
    remark: str
    ended_at: dt.datetime | None


@lru_cache(maxsize=256)
def _spec(content: str) -> ProcedureSpec:
    return published.procedure(json.loads(content))


@lru_cache(maxsize=1024)
def criterion_spec(content: str) -> CriterionSpec:
    """A stored criterion, read; the same text is read once."""
    return published.criterion(json.loads(content))


def _edition_row(edition: Edition) -> EditionRow:
    procedure = edition.procedure
    return EditionRow(
        edition.id, edition.uid, procedure.id, procedure.uid, procedure.code, procedure.title,
        edition.number, edition.content_sha256, _spec(edition.content),
    )  # fmt: skip


def list_editions() -> list[EditionRow]:
    """Every published edition, newest of each procedure first."""
    found = Edition.objects.select_related("procedure").order_by("procedure__title", "-number")
    return [_edition_row(edition) for edition in found]


def edition_by_id(edition_id: int) -> EditionRow:
    """An edition by key."""
    return _edition_row(Edition.objects.select_related("procedure").get(pk=edition_id))


def find_edition(uid: uuid.UUID) -> EditionRow | None:
    """An edition by uid."""
    edition = Edition.objects.select_related("procedure").filter(uid=uid).first()
    return _edition_row(edition) if edition else None


def _criterion_row(criterion: Criterion, of: CriteriaSet) -> CriterionRow:
    return CriterionRow(
        criterion.id, criterion.uid, of.uid, of.code, of.edition, of.source, criterion.code,
        criterion_spec(criterion.content),
    )  # fmt: skip


def list_criteria_sets() -> list[CriteriaSetRow]:
    """Every published set with its criteria, by code, the edition published last first."""
    return [_set_row(one) for one in _sets().order_by("code", "-published_at", "-id")]


def find_criteria_set(uid: uuid.UUID) -> CriteriaSetRow | None:
    """A published set by uid."""
    found = _sets().filter(uid=uid).first()
    return _set_row(found) if found else None


def set_document(set_id: int) -> dict[str, Any]:
    """A published set as the document it was published from, save for cautions, which are not kept with it."""
    one = _sets().get(pk=set_id)
    words = {
        "set": one.code,
        "edition": one.edition,
        "title": one.title,
        "source": one.source,
        "note": one.note,
    }
    return {**words, "cautions": [], "criteria": [json.loads(each.content) for each in one.criteria.all()]}


def _sets() -> QuerySet[CriteriaSet]:
    return CriteriaSet.objects.prefetch_related(Prefetch("criteria", Criterion.objects.order_by("id")))


def _set_row(one: CriteriaSet) -> CriteriaSetRow:
    criteria = tuple(_criterion_row(each, one) for each in one.criteria.all())
    return CriteriaSetRow(
        one.id, one.uid, one.code, one.edition, one.title, one.source, one.note, one.published_at, criteria
    )


def criteria_by_id(ids: set[int]) -> dict[int, CriterionRow]:
    """Criteria by key."""
    found = Criterion.objects.filter(id__in=ids).select_related("criteria_set")
    return {each.id: _criterion_row(each, each.criteria_set) for each in found}


def list_adoptions(as_of: dt.datetime | None = None) -> list[AdoptionRow]:
    """Adoptions in force and ended, newest first."""
    found = nouns(Adoption, as_of)
    people = dict(Person.objects.filter(id__in={a.adopted_by_id for a in found}).values_list("id", "name"))
    rows = [
        AdoptionRow(
            a.uid,
            a.edition_id,
            a.criteria_set_id,
            a.site_id,
            people.get(a.adopted_by_id, ""),
            a.adopted_at,
            a.remark,
            a.ended_at,
        )
        for a in found
    ]
    return sorted(rows, key=lambda row: row.adopted_at, reverse=True)


def _in_force(site_id: int | None, as_of: dt.datetime | None, **which: object) -> list[Adoption]:
    """Adoptions in force at a site: its own first, then the group's, the newest of each first."""
    return _by_place(nouns(Adoption, as_of, ended_at=None, **which), site_id)


def adopted_edition(
    procedure_id: int, site_id: int | None, as_of: dt.datetime | None = None
) -> EditionRow | None:
    """The edition a site works by: its own adoption, or the group's."""
    if as_of is None:
        open_ones = Adoption.objects.filter(edition__procedure_id=procedure_id, ended_at=None)
        found = _by_place(open_ones.select_related("edition__procedure"), site_id)
        return _edition_row(found[0].edition) if found and found[0].edition else None
    ids = list(Edition.objects.filter(procedure_id=procedure_id).values_list("id", flat=True))
    then = _in_force(site_id, as_of, edition_id=ids)
    return edition_by_id(then[0].edition_id) if then and then[0].edition_id else None


def adopted_criteria(site_id: int | None, as_of: dt.datetime | None = None) -> dict[str, CriterionRow]:
    """The limits a site works by, by criterion code; a site's own adoption goes before the group's."""
    rows: dict[str, CriterionRow] = {}
    if as_of is None:
        for each in _criteria_in_force(site_id):
            rows.setdefault(each.code, _criterion_row(each, each.criteria_set))
        return rows
    order = [a.criteria_set_id for a in _in_force(site_id, as_of, edition_id=None)]
    found = Criterion.objects.filter(criteria_set_id__in=order).select_related("criteria_set").order_by("id")
    for each in sorted(found, key=lambda one: order.index(one.criteria_set_id)):
        rows.setdefault(each.code, _criterion_row(each, each.criteria_set))
    return rows


def _criteria_in_force(site_id: int | None) -> list[Criterion]:
    """Criteria of every set adopted for a site or the group, in one query, in the order of ``_by_place``."""
    adoption = "criteria_set__adoptions"
    here = models.Q(**{f"{adoption}__site": None}) | models.Q(**{f"{adoption}__site_id": site_id})
    found = Criterion.objects.filter(here, **{f"{adoption}__ended_at": None, f"{adoption}__isnull": False})
    ordered = found.annotate(
        for_group=models.Case(models.When(**{f"{adoption}__site": None}, then=1), default=0),
        adopted_at=models.F(f"{adoption}__adopted_at"),
        adoption_id=models.F(f"{adoption}__id"),
    ).order_by("for_group", "-adopted_at", "-adoption_id", "id")
    return list(ordered.select_related("criteria_set"))


def _by_place(adoptions: Iterable[Adoption], site_id: int | None) -> list[Adoption]:
    """Adoptions that hold at a site: its own first, then the group's, the newest of each first."""
    found = [each for each in adoptions if each.site_id in (None, site_id)]
    return sorted(found, key=lambda a: (a.site_id is None, -a.adopted_at.timestamp(), -a.id))


def adopted_procedures(site_id: int | None, as_of: dt.datetime | None = None) -> list[EditionRow]:
    """The editions a site works by, one for each adopted procedure."""
    seen: dict[int, EditionRow] = {}
    for adoption in _in_force(site_id, as_of, criteria_set_id=None):
        row = edition_by_id(adoption.edition_id) if adoption.edition_id else None
        if row is not None:
            seen.setdefault(row.procedure_id, row)
    return sorted(seen.values(), key=lambda row: row.title)


def measurand_ids() -> dict[str, int]:
    """Keys of measurands by code."""
    return dict(Measurand.objects.values_list("code", "id"))


def procedure_by_code(code: str) -> Procedure | None:
    """A procedure by code, for use inside commands."""
    return Procedure.objects.filter(code=code).first()


def electrical_procedures() -> frozenset[int]:
    """Keys of the procedures that ask for a leakage tester: what they find is never held back."""
    asks = '"needs_instrument":"leakage_tester"'  # the content is canonical JSON, so it is written in one way
    found = Edition.objects.filter(content__contains=asks).values_list("procedure_id", flat=True)
    return frozenset(found)
