"""Procedures and criteria: published to the group, adopted by a named physicist for it or for one site."""

from __future__ import annotations

import uuid
from typing import Any

from ninja import Schema

from qa_tracker.api.authentication import ApiRequest, Caller
from qa_tracker.api.judged_shapes import CriterionOut, criterion_out
from qa_tracker.api.nouns import NounRouter
from qa_tracker.api.schemas import Given, Moment, Short
from qa_tracker.core.errors import NotFound
from qa_tracker.records.queries import library as rows
from qa_tracker.records.queries import sites
from qa_tracker.services import finding, library
from qa_tracker.services.wording import source_line

router = NounRouter(tags=["procedures and criteria"])


class AdoptionOut(Schema):
    """Who adopted it, where (an empty site is the whole group) and when."""

    uid: uuid.UUID
    site_code: str
    adopted_by: str
    adopted_at: Moment
    remark: str
    ended_at: Moment | None


class EditionOut(Schema):
    """A published edition of a procedure."""

    uid: uuid.UUID
    code: str
    title: str
    number: int
    content_sha256: str
    performed_by: list[str]
    signing: str
    measurands: list[str]
    adoptions: list[AdoptionOut]


class SourcedOut(CriterionOut):
    """A limit with the source and standing of each of its levels."""

    name: str
    remedial_source: str
    suspension_source: str


class CriteriaSetOut(Schema):
    """A published edition of a set of criteria."""

    uid: uuid.UUID
    code: str
    edition: str
    title: str
    source: str
    note: str
    criteria: list[SourcedOut]
    adoptions: list[AdoptionOut]


class AdoptEditionIn(Given):
    """An edition to adopt for a site, or without one for the whole group."""

    edition: uuid.UUID
    site: uuid.UUID | None = None
    remark: Short = ""


class AdoptCriteriaIn(Given):
    """A set to adopt for a site, or without one for the whole group."""

    criteria_set: uuid.UUID
    site: uuid.UUID | None = None
    remark: Short = ""


@router.reads("/procedures", list[EditionOut], "listProcedures", 404)
def list_procedures(request: ApiRequest, site: uuid.UUID | None = None) -> list[dict[str, Any]]:
    """Every published edition; with `site` the editions that site works by."""
    caller = request.auth
    if site is None:
        found = rows.list_editions()
    else:
        found = rows.adopted_procedures(_site_id(caller, site))
    adoptions = _adoptions(caller)
    return [_edition_out(row, adoptions) for row in found]


@router.reads("/criteria-sets", list[CriteriaSetOut], "listCriteriaSets")
def list_criteria_sets(request: ApiRequest) -> list[dict[str, Any]]:
    """Every published set, with its limits in words and their sources."""
    adoptions = _adoptions(request.auth)
    return [_set_out(row, adoptions) for row in rows.list_criteria_sets()]


@router.makes("/procedures/adoptions", AdoptionOut, "adoptProcedure")
def adopt_procedure(request: ApiRequest, body: AdoptEditionIn) -> dict[str, Any]:
    """Adopt an edition; the adoption before it, of the same procedure at the same place, ends."""
    caller = request.auth
    made = library.adopt_edition(
        edition=finding.edition(body.edition),
        site=finding.site(caller.actor, body.site, caller.at) if body.site else None,
        remark=body.remark,
        actor=caller.actor,
        at=caller.at,
    )
    return _adoption_out(caller, made.uid)


@router.makes("/criteria-sets/adoptions", AdoptionOut, "adoptCriteria")
def adopt_criteria(request: ApiRequest, body: AdoptCriteriaIn) -> dict[str, Any]:
    """Adopt a set of criteria; another edition of it at the same place ends."""
    caller = request.auth
    made = library.adopt_criteria(
        criteria_set=finding.criteria_set(body.criteria_set),
        site=finding.site(caller.actor, body.site, caller.at) if body.site else None,
        remark=body.remark,
        actor=caller.actor,
        at=caller.at,
    )
    return _adoption_out(caller, made.uid)


def _site_id(caller: Caller, uid: uuid.UUID) -> int:
    site = sites.find_site(caller.scope(), uid)
    if site is None:
        raise NotFound("site.unknown")
    return site.id


def _adoptions(caller: Caller) -> list[tuple[rows.AdoptionRow, dict[str, Any]]]:
    """Adoptions of the group and of the sites in sight."""
    codes: dict[int | None, str] = {None: ""}
    codes |= {site.id: site.code for site in sites.list_sites(caller.scope())}
    return [
        (row, vars(row) | {"site_code": codes[row.site_id]})
        for row in rows.list_adoptions()
        if row.site_id in codes
    ]


def _adoption_out(caller: Caller, uid: uuid.UUID) -> dict[str, Any]:
    return next(shown for row, shown in _adoptions(caller) if row.uid == uid)


def _edition_out(row: rows.EditionRow, adoptions: list[tuple[rows.AdoptionRow, dict[str, Any]]]) -> Any:
    return vars(row) | {
        "performed_by": row.spec.performed_by,
        "signing": row.spec.signing,
        "measurands": [spec.code for spec in row.spec.measurands],
        "adoptions": [shown for adoption, shown in adoptions if adoption.edition_id == row.id],
    }


def _set_out(row: rows.CriteriaSetRow, adoptions: list[tuple[rows.AdoptionRow, dict[str, Any]]]) -> Any:
    return vars(row) | {
        "criteria": [_sourced(each) for each in row.criteria],
        "adoptions": [shown for adoption, shown in adoptions if adoption.criteria_set_id == row.id],
    }


def _sourced(row: rows.CriterionRow) -> dict[str, Any]:
    shown = criterion_out(row) or {}
    return shown | {
        "name": row.spec.name,
        "remedial_source": source_line(row, "remedial"),
        "suspension_source": source_line(row, "suspension"),
    }
