"""Checks: what is due, what is asked, and what was done."""

from __future__ import annotations

import uuid
from typing import Any

from qa_tracker.api.authentication import ApiRequest, Caller
from qa_tracker.api.check_shapes import AskedOut, CheckPage, DueOut, WholeCheckOut
from qa_tracker.api.judged_shapes import item_out, verdict_of_row
from qa_tracker.api.nouns import NounRouter
from qa_tracker.api.schemas import LARGEST_KEY, Cursor, Limit, Mark, page
from qa_tracker.core.errors import NotFound
from qa_tracker.records.queries import checks as rows
from qa_tracker.records.queries import sites, submissions
from qa_tracker.records.queries.scope import EVERYTHING
from qa_tracker.records.queries.submissions import SubmissionRow
from qa_tracker.services import checks
from qa_tracker.services.wording import due_words

router = NounRouter(tags=["checks"])


@router.reads("/due", list[DueOut], "listDue")
def list_due(request: ApiRequest) -> list[object]:
    """What is open, due or overdue, or opens within a fortnight; by site, room in walking order, scanner."""
    caller = request.auth
    zones = {site.id: site.time_zone for site in sites.list_sites(EVERYTHING)}
    return [
        vars(row) | {"due_words": due_words(row, caller.at, zones.get(row.site_id or 0, "UTC"))}
        for row in rows.due_checks(caller.scope(), caller.at)
    ]


@router.reads("/checks", CheckPage, "listChecks")
def list_checks(
    request: ApiRequest,
    state: Mark | None = None,
    verdict: Mark | None = None,
    procedure: Mark | None = None,
    site: uuid.UUID | None = None,
    device: uuid.UUID | None = None,
    before: Cursor = LARGEST_KEY,
    limit: Limit = 50,
) -> dict[str, Any]:
    """Checks in sight, newest first."""
    wanted = {
        "state": state,
        "verdict": verdict,
        "procedure__code": procedure,
        "site__uid": site,
        "device__uid": device,
    }
    given = {name: value for name, value in wanted.items() if value is not None}
    return page(rows.list_checks(request.auth.scope(), before=before, most=limit + 1, **given), limit)


@router.reads("/checks/{uuid:uid}", WholeCheckOut, "showCheck")
def show_check(request: ApiRequest, uid: uuid.UUID) -> dict[str, Any]:
    """One check with its submissions, readings, verdicts and signatures."""
    return whole_check(request.auth, uid)


def check_row(caller: Caller, uid: uuid.UUID) -> rows.CheckRow:
    """A check in sight."""
    found = rows.find_check(caller.scope(), uid)
    if found is None:
        raise NotFound("check.unknown")
    return found


def whole_check(caller: Caller, uid: uuid.UUID) -> dict[str, Any]:
    """A check with all that was done for it."""
    check = check_row(caller, uid)
    done = submissions.submissions_of([check.id]).get(check.id, [])
    return vars(check) | {
        "satisfies": [each.uid for each in rows.checks_satisfied_by(check.id)],
        "submissions": [submission_out(each) for each in done],
        "attempts": submissions.attempts_of(check.id),
    }


def submission_out(row: SubmissionRow) -> dict[str, Any]:
    """A submission with the sentence of every verdict."""
    readings = [vars(each) | {"verdict": verdict_of_row(each.verdict)} for each in row.readings]
    return vars(row) | {"readings": readings}


@router.reads("/checks/{uuid:uid}/items", AskedOut, "listItems", 409)
def list_items(
    request: ApiRequest,
    uid: uuid.UUID,
    test_object: uuid.UUID | None = None,
) -> dict[str, Any]:
    """What a check asks of whoever may enter it; nominals are those of the test object named."""
    caller = request.auth
    laid = checks.sheet(check=uid, test_object=test_object, actor=caller.actor, at=caller.at)
    spec, console = laid.edition.spec, laid.console
    facts = ("decontamination_gate", "needs_test_object", "needs_instrument", "steps")
    return {name: getattr(spec, name) for name in facts} | {
        "procedure_code": laid.edition.code,
        "procedure": laid.edition.title,
        "edition": laid.edition.number,
        "edition_sha256": laid.edition.content_sha256,
        "console": f"{console.model} {console.serial}" if console else "",
        "console_software": laid.console_software,
        "items": [item_out(item) for item in laid.items],
    }
