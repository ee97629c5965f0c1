"""How well each measurand is measured, and by which decision rule it is judged."""

from __future__ import annotations

import uuid
from typing import Any

from ninja import Schema

from qa_tracker.api.authentication import ApiRequest, Caller
from qa_tracker.api.nouns import NounRouter
from qa_tracker.api.schemas import Given, Moment, Ref, Short, Words
from qa_tracker.records.queries import sites
from qa_tracker.records.queries import uncertainties as rows
from qa_tracker.services import finding, uncertainties
from qa_tracker.services.uncertainties import Statement

router = NounRouter(tags=["uncertainties"])


class UncertaintyOut(Schema):
    """A statement: a standard or an expanded uncertainty in the measurand's unit, or the repeats it comes from.

    An empty `site_code` is the whole group, an empty `rule` the default of each limit.
    """

    uid: uuid.UUID
    measurand: str
    unit: str
    site_code: str
    kind: str
    entered: str
    coverage_factor: str
    repeats: list[str]
    rule: str
    source: str
    stated_by: str
    stated_at: Moment
    ended_at: Moment | None


class StatementIn(Given):
    """What is stated. `kind` is `standard`, `expanded` (with its coverage factor), `repeats` or `none` (a rule alone)."""

    measurand: str
    kind: str
    entered: Short = ""
    coverage_factor: Short = ""
    repeats: list[str] = []
    rule: Short = ""
    source: Words
    site: uuid.UUID | None = None


class EndIn(Given):
    """Why a statement ends."""

    reason: Short


@router.reads("/uncertainties", list[UncertaintyOut], "listUncertainties")
def list_uncertainties(request: ApiRequest) -> list[dict[str, Any]]:
    """Every statement of the group and of the sites in sight, ended ones too."""
    return _told(request.auth)


@router.makes("/uncertainties", UncertaintyOut, "stateUncertainty")
def state(request: ApiRequest, body: StatementIn) -> dict[str, Any]:
    """State an uncertainty; the statement before it, of the same measurand at the same place, ends."""
    caller, given = request.auth, dict(vars(body))
    site = given.pop("site")
    made = uncertainties.state(
        statement=Statement(**given),
        site=finding.site(caller.actor, site, caller.at) if site else None,
        actor=caller.actor,
        at=caller.at,
    )
    return next(each for each in _told(caller) if each["uid"] == made.uid)


@router.does("/uncertainties/{uuid:uid}/end", Ref, "endUncertainty")
def end(request: ApiRequest, uid: uuid.UUID, body: EndIn) -> dict[str, Any]:
    """End a statement: later readings are judged without it."""
    caller = request.auth
    uncertainties.end(statement=uid, reason=body.reason, actor=caller.actor, at=caller.at)
    return {"uid": uid}


def _told(caller: Caller) -> list[dict[str, Any]]:
    codes: dict[int | None, str] = {None: ""}
    codes |= {site.id: site.code for site in sites.list_sites(caller.scope())}
    found = rows.list_uncertainties()
    return [vars(row) | {"site_code": codes[row.site_id]} for row in found if row.site_id in codes]
