"""Signing a check: everything exactly as it will be recorded, and the password once more."""

from __future__ import annotations

import datetime as dt
import uuid

from django.contrib import messages
from django.http import HttpRequest, HttpResponse, HttpResponseRedirect
from django.shortcuts import redirect, render
from django.urls import reverse
from django.utils.timezone import now
from django.utils.translation import gettext as _
from django.views.decorators.debug import sensitive_post_parameters

from qa_tracker.core.errors import DomainError, NotFound
from qa_tracker.records.queries import checks as check_queries
from qa_tracker.services import checks, drafts, guards, wording
from qa_tracker.services.checks import Preview, Typed
from qa_tracker.services.drafts import Kept
from qa_tracker.tasks.beat import SWEEP
from qa_tracker.tasks.hints import send_hint
from qa_tracker.web import refused as refusals
from qa_tracker.web.forms import entry as inputs
from qa_tracker.web.presenters.judged import about_to_be_signed
from qa_tracker.web.refused import Refused
from qa_tracker.web.views import entry


@sensitive_post_parameters("password")
def sign(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Show what would be recorded; with the password, record it."""
    at = now()
    kept = drafts.find(check=uid, actor=request.user, at=at)
    if request.method == "POST":
        return _submitted(request, uid, kept, at)
    if kept is None:
        return redirect("check-enter", uid=uid)
    return _page(request, uid, kept, at)


def _submitted(request: HttpRequest, uid: uuid.UUID, kept: Kept | None, at: dt.datetime) -> HttpResponse:
    """Record it; the same form twice is one submission, so a second click leads to the same page."""
    try:
        checks.submit(
            check=uid,
            form_uid=_form_uid(request),
            typed=_typed(request, uid, kept, at),
            shown_sha256=request.POST.get("shown_sha256", ""),
            password=request.POST.get("password", ""),
            quarantine="quarantine" in request.POST,
            actor=request.user,
            at=at,
        )
    except DomainError as error:
        if kept is None:
            raise
        return _page(request, uid, kept, at, refusals.of(error), 422)
    send_hint(SWEEP)
    messages.success(request, _("Signed and recorded."))
    return HttpResponseRedirect(f"{reverse('check', args=[uid])}?signed=1")


def _form_uid(request: HttpRequest) -> uuid.UUID:
    try:
        return uuid.UUID(request.POST.get("form_uid", ""))
    except ValueError as error:
        raise NotFound("check.unknown") from error


def _typed(request: HttpRequest, uid: uuid.UUID, kept: Kept | None, at: dt.datetime) -> Typed:
    """What the draft holds; without one (already signed by this form) nothing."""
    if kept is None:
        return Typed(entries={})
    return entry.typed_for(request, uid, kept, at)


def _page(
    request: HttpRequest,
    uid: uuid.UUID,
    kept: Kept,
    at: dt.datetime,
    refused: Refused | None = None,
    status: int = 200,
) -> HttpResponse:
    try:
        seen = entry.whole(request, uid, kept, at)
    except DomainError as error:
        return entry.page(request, uid, kept.typed, kept.revision, refusals.of(error), 422)
    context = _shown(seen) | {
        "row": check_queries.find_check(guards.scope(request.user, at), uid),
        "kept": kept,
        "refused": refused,
        "quarantine": "quarantine" in request.POST
        if request.method == "POST"
        else seen.judged.suggests_quarantine(),
        "zone": entry.zone_of_sheet(seen.sheet),
    }
    return render(request, "check_sign.html", context, status=status)


def _shown(seen: Preview) -> dict[str, object]:
    """The preview in the words of the page."""
    judged, facts = seen.judged, seen.facts
    several = len({one.item.aperture.id for one in judged.items if one.item.aperture}) > 1
    worst = about_to_be_signed(judged.worst, name_aperture=several) if judged.worst else None
    return {
        "sheet": seen.sheet,
        "facts": facts,
        "readings": [
            about_to_be_signed(one, name_aperture=several)
            for one in judged.items
            if one.is_read or one.entry.not_tested or one.judgement
        ],
        "verdict": judged.verdict,
        "level": judged.level,
        "worst": worst if worst and judged.verdict != "conforming" else None,
        "partial_reason": wording.reason_word(facts.partial_reason) if facts.partial_reason else "",
        "shown_sha256": seen.shown_sha256,
        "unchanged": inputs.UNCHANGED,
    }
