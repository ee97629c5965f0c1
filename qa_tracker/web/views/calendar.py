"""The calendar of one's own checks: its address, and the feed that calendar programs fetch."""

from __future__ import annotations

import hashlib

from django.conf import settings
from django.contrib import messages
from django.contrib.auth.decorators import login_not_required
from django.http import Http404, HttpRequest, HttpResponse
from django.shortcuts import redirect, render
from django.urls import reverse
from django.utils.timezone import now
from django.utils.translation import gettext as _
from django.views.decorators.http import require_GET, require_http_methods, require_POST

from qa_tracker.services import feed_content, feeds

BASE_URL = settings.BASE_URL.rstrip("/")


@require_http_methods(["GET", "HEAD", "POST"])
def index(request: HttpRequest) -> HttpResponse:
    """What the calendar shows, and its address; a new address is shown once, on the page that made it."""
    address = ""
    if request.method == "POST":
        token = feeds.issue(actor=request.user, at=now())
        address = BASE_URL + reverse("calendar-feed", args=[token])
    context = {"address": address, "issued_at": feeds.issued_at(request.user)}
    return render(request, "calendar.html", context)


@require_POST
def revoke(request: HttpRequest) -> HttpResponse:
    """End the address of one's own calendar at once."""
    feeds.revoke(actor=request.user, at=now())
    messages.success(request, _("The address of your calendar is ended."))
    return redirect("calendar")


@login_not_required
@require_GET
def feed(request: HttpRequest, token: str) -> HttpResponse:
    """The calendar of whoever the address belongs to; any other address is not there."""
    person = feeds.owner_of(token)
    if person is None:
        raise Http404
    content = feed_content.as_file(person, BASE_URL, now())
    etag = f'"{hashlib.sha256(content).hexdigest()}"'
    known = [each.strip().removeprefix("W/") for each in request.headers.get("If-None-Match", "").split(",")]
    if etag in known or "*" in known:
        response = HttpResponse(status=304)
    else:
        response = HttpResponse(content, content_type="text/calendar; charset=utf-8")
    response["ETag"] = etag
    response["Cache-Control"] = "private"
    response["Referrer-Policy"] = "no-referrer"
    return response
