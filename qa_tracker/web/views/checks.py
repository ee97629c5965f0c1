"""Checks that were done: reading one, countersigning it, sending it back; the list of all."""

from __future__ import annotations

import datetime as dt
import re
import uuid
from typing import Any

from django.contrib import messages
from django.http import HttpRequest, HttpResponse
from django.shortcuts import redirect, render
from django.utils.timezone import now
from django.utils.translation import gettext as _
from django.views.decorators.debug import sensitive_post_parameters
from django.views.decorators.http import require_GET, require_POST

from qa_tracker.core.errors import DomainError, NotFound
from qa_tracker.core.schedule import local_day
from qa_tracker.core.workflow import CHECK_AWAITED
from qa_tracker.records.queries import checks as queries
from qa_tracker.records.queries import devices, due_moves, library, notices, sites, submissions
from qa_tracker.records.queries.checks import CheckRow
from qa_tracker.records.queries.library import EditionRow
from qa_tracker.records.queries.scope import Scope
from qa_tracker.records.queries.submissions import SubmissionRow
from qa_tracker.services import checks, due_days, excuses, guards, wording
from qa_tracker.web import refused as refusals
from qa_tracker.web.presenters.check import shown_submission, to_countersign
from qa_tracker.web.presenters.due import zone_at
from qa_tracker.web.presenters.notices import holding, who_was_told
from qa_tracker.web.refused import Refused
from qa_tracker.web.views.due import enterable

PAGE = 50
EPOCH = dt.datetime(1970, 1, 1, tzinfo=dt.UTC)
MICROSECOND = dt.timedelta(microseconds=1)
VERDICTS = ("suspension", "remedial", "indeterminate", "not_assessable", "conforming")


@require_GET
def show(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """One check: how it stands, every submission, every signature, who was told."""
    return _page(request, uid)


def _page(
    request: HttpRequest,
    uid: uuid.UUID,
    refused: Refused | None = None,
    status: int = 200,
) -> HttpResponse:
    at = now()
    scope = guards.scope(request.user, at)
    row = queries.find_check(scope, uid)
    if row is None:
        raise NotFound("check.unknown")
    known = {site.id: site for site in sites.list_sites(scope)}
    zone = zone_at(known, row.site_id)
    done = submissions.submissions_of([row.id]).get(row.id, [])
    context = {
        "row": row,
        "zone": zone,
        "at": at,
        "due": wording.due_words(row, at, zone),
        "site": known.get(row.site_id or 0),
        "satisfies": queries.checks_satisfied_by(row.id) if done else [],
        "following": _following(row, done),
        "submissions": [
            shown_submission(each, library.edition_by_id(each.edition_id)) for each in reversed(done)
        ],
        "attempts": submissions.attempts_of(row.id),
        "told": who_was_told(notices.notices_of_check(row.id)),
        "awaited": CHECK_AWAITED,
        "holding": holding(request.user, row, at, local_day(at, zone)),
        "refused": refused,
        "remark": request.POST.get("remark", ""),
        "may_enter": row.state in CHECK_AWAITED and bool(enterable(request.user, [row], at)),
        "may_excuse": row.state in ("scheduled", "started")
        and excuses.may_excuse(row.site_id, actor=request.user, at=at),
        "moves": due_moves.due_moves(row.uid),
        "may_move": row.state in ("scheduled", "started")
        and due_days.may_move(row.uid, actor=request.user, at=at) is None,
        "next": _next_here(request, scope, row, at) if "signed" in request.GET else None,
    }
    return render(request, "check.html", context | _second(request, row, done, at), status=status)


def _following(row: CheckRow, done: list[SubmissionRow]) -> CheckRow | None:
    """The occurrence that was opened by a check accepted outside its window."""
    if row.plan_id is None or not any(each.reason for each in done):
        return None
    return queries.check_opened_after(row.plan_id, row.id)


def _second(request: HttpRequest, row: CheckRow, done: list[Any], at: dt.datetime) -> dict[str, Any]:
    """Whether a second signature can be given here, or the sentence that says why not."""
    if row.state != "submitted" or not done:
        return {}
    refusal = checks.may_countersign(check=row.uid, actor=request.user, at=at)
    never = not guards.may_somewhere(request.user, "check.countersign", at)
    return {
        "asks_second": not never,
        "second_refusal": wording.refusal(refusal) if isinstance(refusal, DomainError) else "",
        "shown_sha256": done[-1].shown_sha256,
    }


def _next_here(request: HttpRequest, scope: Scope, row: CheckRow, at: dt.datetime) -> CheckRow | None:
    """The next open check on the same scanner that the person may enter."""
    device = devices.device_by_id(row.device_id)
    label = row.scanner_label or f"{device.model} {device.serial}"
    here = [
        each
        for each in queries.due_checks(scope, at, horizon_days=0)
        if label in (each.scanner_label, each.device_label.partition(" ")[2])
    ]
    may = enterable(request.user, here, at)
    return next((each for each in here if each.uid in may and each.uid != row.uid), None)


@require_POST
@sensitive_post_parameters("password")
def countersign(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Countersign what is shown."""
    return _second_signature(request, uid, checks.countersign, _("Countersigned."))


@require_POST
@sensitive_post_parameters("password")
def send_back(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Send it back with what is to be done."""
    return _second_signature(request, uid, checks.send_back, _("Sent back, with your remark."))


def _second_signature(request: HttpRequest, uid: uuid.UUID, command: Any, done: str) -> HttpResponse:
    try:
        command(
            check=uid,
            shown_sha256=request.POST.get("shown_sha256", ""),
            remark=request.POST.get("remark", "").strip(),
            password=request.POST.get("password", ""),
            actor=request.user,
            at=now(),
        )
    except NotFound:
        raise
    except DomainError as error:
        return _page(request, uid, refusals.of(error), 422)
    messages.success(request, done)
    return redirect("check", uid=uid)


@require_GET
def index(request: HttpRequest) -> HttpResponse:
    """What waits for a countersignature, then what was done, newest first, paged by key."""
    at = now()
    scope = guards.scope(request.user, at)
    before = _key(request.GET.get("before", ""))
    wanted = {name: request.GET.get(name, "") for name in ("verdict", "procedure", "site")}
    done = queries.latest_done(scope, before=before, most=PAGE + 1, **_columns(wanted))
    known = {site.id: site for site in sites.list_sites(scope)}
    second = guards.may_somewhere(request.user, "check.countersign", at) and before is None
    context = {
        "waiting": to_countersign(queries.submitted_checks(scope), _editions()) if second else [],
        "asks_second": second,
        "done": [(row, zone_at(known, row.site_id)) for row in done[:PAGE]],
        "before": _key_of(done[PAGE - 1]) if len(done) > PAGE else "",
        "wanted": wanted,
        "query": "&".join(f"{name}={value}" for name, value in wanted.items() if value.isidentifier()),
        "filtered": any(wanted.values()),
        "verdicts": VERDICTS,
        "procedures": sorted({(e.code, e.title) for e in library.list_editions()}, key=lambda pair: pair[1]),
        "sites": sorted(known.values(), key=lambda site: site.code),
    }
    return render(request, "checks.html", context)


def _columns(wanted: dict[str, str]) -> dict[str, object]:
    """The filters as columns; an unknown value finds nothing."""
    columns = {"verdict": "verdict", "procedure": "procedure__code", "site": "site__code"}
    return {columns[name]: value for name, value in wanted.items() if value}


def _key_of(row: CheckRow) -> str:
    """Moment and key of a row, for the address of the page after it."""
    moment = row.submitted_at or EPOCH
    return f"{(moment - EPOCH) // MICROSECOND}-{row.id}"


def _key(text: str) -> tuple[dt.datetime, int] | None:
    """The same, read; anything else begins at the first page."""
    found = re.fullmatch(r"([0-9]{1,17})-([0-9]{1,18})", text, re.ASCII)
    return (EPOCH + int(found[1]) * MICROSECOND, int(found[2])) if found else None


def _editions() -> Any:
    """The edition a check is entered by, asked once for each procedure and site."""
    known: dict[tuple[int, int | None], EditionRow | None] = {}

    def edition_of(row: CheckRow) -> EditionRow | None:
        key = (row.procedure_id, row.site_id)
        if key not in known:
            known[key] = library.adopted_edition(*key)
        return known[key]

    return edition_of
