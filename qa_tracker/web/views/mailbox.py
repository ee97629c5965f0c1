"""The demonstration's mailbox: what would have been sent, as text."""

from __future__ import annotations

from django.conf import settings
from django.http import Http404, HttpRequest, HttpResponse
from django.shortcuts import render
from django.utils.timezone import now

from qa_tracker.services import guards, mailbox


def _check(request: HttpRequest) -> None:
    guards.check_may_somewhere(request.user, "mail.see", now())
    if not settings.DEMO_MAILBOX:
        raise Http404


def index(request: HttpRequest) -> HttpResponse:
    """The newest letters first."""
    _check(request)
    return render(request, "mailbox.html", {"letters": mailbox.letters()})


def show(request: HttpRequest, name: str) -> HttpResponse:
    """One letter."""
    _check(request)
    return render(request, "mail.html", {"letter": mailbox.letter(name)})
