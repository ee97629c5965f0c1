"""Refusals nobody caught, as pages that say what, why and what to do."""

from __future__ import annotations

from collections.abc import Callable

from django.http import HttpRequest, HttpResponse
from django.shortcuts import render
from django.utils.cache import add_never_cache_headers

from qa_tracker.core.errors import Conflict, DomainError, Forbidden, NotFound
from qa_tracker.services import wording
from qa_tracker.web import errors

STATUS = ((NotFound, 404), (Forbidden, 403), (Conflict, 409))


def status_of(error: DomainError) -> int:
    """The HTTP status of a refusal."""
    return next((status for kind, status in STATUS if isinstance(error, kind)), 422)


class RefusalMiddleware:
    """Turns an uncaught ``DomainError`` into its page, and keeps pages out of shared caches."""

    def __init__(self, get_response: Callable[[HttpRequest], HttpResponse]) -> None:
        self.get_response = get_response

    def __call__(self, request: HttpRequest) -> HttpResponse:
        response = self.get_response(request)
        if "Cache-Control" not in response and not response.has_header("ETag"):
            add_never_cache_headers(response)
        return response

    def process_exception(self, request: HttpRequest, error: Exception) -> HttpResponse | None:
        """Answer a refusal; anything else is left to Django."""
        if not isinstance(error, DomainError):
            return None
        if isinstance(error, NotFound):
            return errors.not_found(request)
        sentence = wording.refusal(error)
        return render(request, "refused.html", {"sentence": sentence}, status=status_of(error))
