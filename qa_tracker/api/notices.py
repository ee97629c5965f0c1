"""Notices and holds: what the caller was told, who was told of a check and by which mail, and who knows until when."""

from __future__ import annotations

import datetime as dt
import uuid
from typing import Any

from ninja import Schema

from qa_tracker.api.authentication import ApiRequest, Caller
from qa_tracker.api.checks import check_row
from qa_tracker.api.nouns import NounRouter
from qa_tracker.api.schemas import Given, Moment, Ref, Short
from qa_tracker.records.queries import holds as hold_rows
from qa_tracker.records.queries import notices as rows
from qa_tracker.services import holds

router = NounRouter(tags=["notices"])


class NoticeOut(Schema):
    """A message owed to one person; `check_uid` is empty where it is about another thing, which `about` names.

    `recipient` is the rung of the ladder by which the person was told, `skipped` the levels that passed before it
    without a notice, separated by commas.
    """

    uid: uuid.UUID
    check_uid: uuid.UUID | None
    about: str
    device_label: str
    procedure: str
    site_code: str
    due_on: dt.date | None
    recipient: str
    level: str
    at: Moment
    skipped: str


class TryOut(Schema):
    """One try to hand a mail to the server: `begun` (and cut off), `sent`, `put_off` or `given_up`, and its answer."""

    at: Moment
    outcome: str
    reply: str


class NoticeOfCheckOut(NoticeOut):
    """A message about a check, to whom, by what channel; a mail with every try.

    `digest_state` is `waiting`, `claimed`, `sent`, `failed` or `unsent`, and empty until a mail carries the notice.
    """

    person: str
    channel: str
    digest_state: str
    sent_at: Moment | None
    tries: list[TryOut]


class HoldIn(Given):
    """Why, and until the beginning of which day at the check's site: from tomorrow to 31 days ahead."""

    reason: Short
    until_on: dt.date


class HoldEndIn(Given):
    """Why a hold ends before its day."""

    reason: Short


class HoldOut(Schema):
    """A hold: `acknowledged` keeps the ladder from climbing, `snoozed` the person's own notices."""

    uid: uuid.UUID
    person: str
    kind: str
    reason: str
    held_at: Moment
    until_at: Moment
    ended_at: Moment | None


@router.reads("/notices", list[NoticeOut], "listNotices")
def list_notices(request: ApiRequest) -> list[rows.NoticeRow]:
    """The caller's own notices, newest first."""
    return rows.notices_for(request.auth.actor.pk)


@router.reads("/checks/{uuid:uid}/notices", list[NoticeOfCheckOut], "listNoticesOfCheck")
def list_notices_of_check(request: ApiRequest, uid: uuid.UUID) -> list[rows.NoticeRow]:
    """Everyone who was told of a check, oldest first, with the mail server's answers."""
    return rows.notices_of_check(check_row(request.auth, uid).id)


@router.reads("/checks/{uuid:uid}/holds", list[HoldOut], "listHolds")
def list_holds(request: ApiRequest, uid: uuid.UUID) -> list[hold_rows.HoldRow]:
    """Every hold there was of a check, oldest first."""
    return hold_rows.holds_of_check(check_row(request.auth, uid).id)


@router.makes("/checks/{uuid:uid}/acknowledge", HoldOut, "acknowledgeCheck")
def acknowledge(request: ApiRequest, uid: uuid.UUID, body: HoldIn) -> hold_rows.HoldRow:
    """Say that a check is known of: until then its notices climb to nobody else. It changes nothing of the check."""
    caller = request.auth
    made = holds.acknowledge(check=uid, **vars(body), actor=caller.actor, at=caller.at)
    return _hold(caller, uid, made.uid)


@router.makes("/checks/{uuid:uid}/snooze", HoldOut, "snoozeCheck")
def snooze(request: ApiRequest, uid: uuid.UUID, body: HoldIn) -> hold_rows.HoldRow:
    """Let the caller's own notices of a check wait until then."""
    caller = request.auth
    made = holds.snooze(check=uid, **vars(body), actor=caller.actor, at=caller.at)
    return _hold(caller, uid, made.uid)


@router.does("/holds/{uuid:uid}/end", Ref, "endHold")
def end_hold(request: ApiRequest, uid: uuid.UUID, body: HoldEndIn) -> dict[str, Any]:
    """End a hold before its day; what it kept back is told with the next sweep."""
    caller = request.auth
    holds.end_hold(hold=uid, reason=body.reason, actor=caller.actor, at=caller.at)
    return {"uid": uid}


def _hold(caller: Caller, check: uuid.UUID, uid: uuid.UUID) -> hold_rows.HoldRow:
    found = hold_rows.holds_of_check(check_row(caller, check).id)
    return next(each for each in found if each.uid == uid)
