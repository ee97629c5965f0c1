"""Around a check: it could not be made, it is excused, or one is begun that no plan asked for."""

from __future__ import annotations

import datetime as dt
import uuid

from django.contrib import messages
from django.http import HttpRequest, HttpResponse
from django.shortcuts import redirect, render
from django.utils.timezone import now
from django.utils.translation import gettext as _
from django.views.decorators.http import require_POST

from qa_tracker.core.errors import DomainError, NotFound
from qa_tracker.records.queries import checks as queries
from qa_tracker.records.queries import submissions
from qa_tracker.records.queries.checks import CheckRow
from qa_tracker.services import checks, excuses, guards, wording
from qa_tracker.services.entries import REASONS
from qa_tracker.web import refused as refusals
from qa_tracker.web.presenters.entry import Choice


def _row(request: HttpRequest, uid: uuid.UUID, at: dt.datetime) -> CheckRow:
    row = queries.find_check(guards.scope(request.user, at), uid)
    if row is None:
        raise NotFound("check.unknown")
    return row


def not_tested(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Record that the whole device could not be tested, and why."""
    at, refused = now(), None
    if request.method == "POST":
        try:
            checks.could_not_test(
                check=uid,
                reason=request.POST.get("reason", ""),
                remark=request.POST.get("remark", "").strip()[:300],
                actor=request.user,
                at=at,
            )
            messages.success(request, _("Recorded as an attempt. The check stays due."))
            return redirect("due")
        except NotFound:
            raise
        except DomainError as error:
            refused = refusals.of(error)
    row = _row(request, uid, at)
    chosen = request.POST.get("reason", "")
    context = {
        "row": row,
        "refused": refused,
        "reasons": [Choice(each, wording.reason_word(each), each == chosen) for each in REASONS],
        "attempts": submissions.attempts_of(row.id),
        "remark": request.POST.get("remark", ""),
    }
    return render(request, "check_not_tested.html", context, status=422 if refused else 200)


def excuse(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Excuse an occurrence with a reason."""
    at, refused = now(), None
    if request.method == "POST":
        try:
            excuses.excuse(check=uid, reason=request.POST.get("reason", ""), actor=request.user, at=at)
            messages.success(request, _("Excused. It is counted apart from what was done."))
            return redirect("check", uid=uid)
        except NotFound:
            raise
        except DomainError as error:
            refused = refusals.of(error)
    context = {"row": _row(request, uid, at), "refused": refused, "reason": request.POST.get("reason", "")}
    return render(request, "check_excuse.html", context, status=422 if refused else 200)


@require_POST
def open_unplanned(request: HttpRequest, uid: uuid.UUID, procedure_code: str) -> HttpResponse:
    """Begin a check that no plan asked for and go to entering it."""
    check = checks.open_unplanned(device=uid, procedure=procedure_code, actor=request.user, at=now())
    return redirect("check-enter", uid=check.uid)
