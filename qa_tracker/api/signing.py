"""Doing a check: judged without writing, signed, countersigned, sent back, or not tested."""

from __future__ import annotations

import datetime as dt
import uuid
from typing import Any

from qa_tracker.api.authentication import ApiRequest
from qa_tracker.api.check_shapes import (
    CheckOut,
    EntryIn,
    JudgeIn,
    NotTestedIn,
    SecondSignatureIn,
    SubmitIn,
    TypedIn,
    UnplannedIn,
    WholeCheckOut,
)
from qa_tracker.api.checks import check_row, submission_out, whole_check
from qa_tracker.api.judged_shapes import JudgedOut, SubmissionOut, judged_item_out
from qa_tracker.api.nouns import NounRouter
from qa_tracker.records.queries import submissions
from qa_tracker.services import checks
from qa_tracker.services.checks import Typed
from qa_tracker.services.entries import Entry

router = NounRouter(tags=["checks"])


@router.does("/checks/{uuid:uid}/judge", JudgedOut, "judgeCheck")
def judge(request: ApiRequest, uid: uuid.UUID, body: JudgeIn) -> dict[str, Any]:
    """Judge what is given, and write nothing."""
    caller = request.auth
    seen = checks.preview(check=uid, typed=_typed(body), whole=body.whole, actor=caller.actor, at=caller.at)
    return {
        "verdict": seen.judged.verdict,
        "level": seen.judged.level,
        "decided_by": seen.judged.worst.item.key if seen.judged.worst else "",
        "suggests_quarantine": seen.judged.suggests_quarantine(),
        "meaning": "performed",
        "items": [judged_item_out(one) for one in seen.judged.items],
        "shown_sha256": seen.shown_sha256,
    }


@router.makes("/checks/{uuid:uid}/submissions", SubmissionOut, "submitCheck")
def submit(request: ApiRequest, uid: uuid.UUID, body: SubmitIn) -> dict[str, Any]:
    """Sign what was done; the same form again answers the submission it made."""
    caller = request.auth
    made = checks.submit(
        check=uid,
        form_uid=body.form_uid,
        typed=_typed(body),
        shown_sha256=body.shown_sha256,
        password=body.password,
        quarantine=body.quarantine,
        actor=caller.actor,
        at=caller.at,
    )
    done = submissions.submissions_of([made.check_of_id])[made.check_of_id]
    return submission_out(next(each for each in done if each.uid == made.uid))


def _typed(body: TypedIn) -> Typed:
    return Typed(
        entries={key: _entry(entry) for key, entry in body.entries.items()},
        measured_at=body.measured_at.astimezone(dt.UTC) if body.measured_at else None,
        test_object=body.test_object,
        instrument=body.instrument,
        port=body.port,
        cleaned_before=body.cleaned_before,
        cleaned_after=body.cleaned_after,
        partial_reason=body.partial_reason,
        remark=body.remark,
        outside_reason=body.outside_reason.strip(),
    )


def _entry(given: EntryIn) -> Entry:
    return Entry(**vars(given), origin="api")


@router.makes("/checks/{uuid:uid}/countersignatures", WholeCheckOut, "countersignCheck")
def countersign(request: ApiRequest, uid: uuid.UUID, body: SecondSignatureIn) -> dict[str, Any]:
    """Countersign the latest submission; nobody countersigns their own work."""
    caller = request.auth
    checks.countersign(check=uid, **vars(body), actor=caller.actor, at=caller.at)
    return whole_check(caller, uid)


@router.makes("/checks/{uuid:uid}/send-backs", WholeCheckOut, "sendCheckBack")
def send_back(request: ApiRequest, uid: uuid.UUID, body: SecondSignatureIn) -> dict[str, Any]:
    """Send the latest submission back, with what is to be done."""
    caller = request.auth
    checks.send_back(check=uid, **vars(body), actor=caller.actor, at=caller.at)
    return whole_check(caller, uid)


@router.makes("/checks/{uuid:uid}/not-tested", WholeCheckOut, "recordNotTested")
def not_tested(request: ApiRequest, uid: uuid.UUID, body: NotTestedIn) -> dict[str, Any]:
    """Record an attempt that could not be made."""
    caller = request.auth
    checks.could_not_test(check=uid, **vars(body), actor=caller.actor, at=caller.at)
    return whole_check(caller, uid)


@router.makes("/devices/{uuid:uid}/checks", CheckOut, "openCheck")
def open_check(request: ApiRequest, uid: uuid.UUID, body: UnplannedIn) -> object:
    """Begin a check that no plan asked for."""
    caller = request.auth
    made = checks.open_unplanned(device=uid, procedure=body.procedure, actor=caller.actor, at=caller.at)
    return check_row(caller, made.uid)
