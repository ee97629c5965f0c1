"""The pages of what went wrong outside a form."""

from __future__ import annotations

from django.http import HttpRequest, HttpResponse
from django.shortcuts import render
from django.template.loader import render_to_string


def not_found(request: HttpRequest, exception: Exception | None = None) -> HttpResponse:
    """Nothing there, or out of sight: the two are never told apart."""
    return render(request, "not_found.html", status=404)


def forbidden(request: HttpRequest, exception: Exception | None = None) -> HttpResponse:
    """Refused by Django itself."""
    return render(request, "forbidden.html", status=403)


def csrf_failed(request: HttpRequest, reason: str = "") -> HttpResponse:
    """A form of a sign-in that has ended meanwhile."""
    return render(request, "form_outdated.html", status=403)


def server_error(request: HttpRequest) -> HttpResponse:
    """Our own mistake: a page that needs neither the database nor a person."""
    return HttpResponse(render_to_string("server_error.html"), status=500)
