"""Who is told at which level of an awaited check, at a site."""

from __future__ import annotations

import uuid
from typing import Any

from ninja import Schema

from qa_tracker.api.authentication import ApiRequest, Caller
from qa_tracker.api.nouns import NounRouter
from qa_tracker.api.schemas import Given, Short
from qa_tracker.core.ladder import Rung
from qa_tracker.services import finding, ladders

router = NounRouter(tags=["notices"])


class RungOut(Schema):
    """A recipient of a level; `after_days` counts from overdue and belongs to the steps t1, t2 and so on."""

    level: str
    recipient: str
    after_days: int


class LadderOut(Schema):
    """The ladder a site goes by: its own (`site`), the group's (`group`) or the one the program comes with (`default`)."""

    origin: str
    rungs: list[RungOut]


class RungIn(Given):
    """A recipient of a level: responsible, lead, physicist, engineer or administrator."""

    level: str
    recipient: str
    after_days: int = 0


class LadderIn(Given):
    """Every rung of the new ladder, and why it changes."""

    rungs: list[RungIn]
    reason: Short


class LadderDropIn(Given):
    """Why a site goes back to the common ladder."""

    reason: Short


@router.reads("/sites/{uuid:uid}/ladder", LadderOut, "showLadder")
def show(request: ApiRequest, uid: uuid.UUID) -> dict[str, Any]:
    """The ladder in force at a site."""
    return _told(request.auth, uid)


@router.does("/sites/{uuid:uid}/ladder", LadderOut, "setLadder")
def set_ladder(request: ApiRequest, uid: uuid.UUID, body: LadderIn) -> dict[str, Any]:
    """Give a site a ladder of its own; levels that passed are not owed again by it."""
    caller = request.auth
    site = finding.site(caller.actor, uid, caller.at)
    rungs = [Rung(each.level, each.recipient, each.after_days) for each in body.rungs]
    ladders.set_ladder(site=site, rungs=rungs, reason=body.reason, actor=caller.actor, at=caller.at)
    return _told(caller, uid)


@router.does("/sites/{uuid:uid}/ladder/drop", LadderOut, "dropLadder")
def drop(request: ApiRequest, uid: uuid.UUID, body: LadderDropIn) -> dict[str, Any]:
    """Let a site go back to the common ladder."""
    caller = request.auth
    site = finding.site(caller.actor, uid, caller.at)
    ladders.drop_ladder(site=site, reason=body.reason, actor=caller.actor, at=caller.at)
    return _told(caller, uid)


def _told(caller: Caller, uid: uuid.UUID) -> dict[str, Any]:
    site_id = finding.site(caller.actor, uid, caller.at).pk
    known = ladders.in_force()
    rungs = [rung._asdict() for rung in known.of(site_id).rungs]
    return {"origin": known.origin(site_id), "rungs": rungs}
