"""The API object: its document, its addresses outside the sign-in pages, and answers to wrong addresses."""

from __future__ import annotations

from collections.abc import Callable
from functools import wraps
from typing import Any

from django.http import HttpRequest, HttpResponse
from django.http.response import HttpResponseBase
from django.urls import URLPattern, URLResolver, path
from ninja import NinjaAPI
from ninja.openapi.schema import OpenAPISchema

from qa_tracker.api.errors import PROBLEM_SCHEMA, no_such_address, wrong_method

View = Callable[..., HttpResponseBase]


class JsonApi(NinjaAPI):
    """An API that answers for itself: never a redirect to a page, never an HTML error."""

    def get_openapi_schema(self, **kwargs: Any) -> OpenAPISchema:
        """The document, with the shape of refusals among its components."""
        document = super().get_openapi_schema(**kwargs)
        document["components"]["schemas"]["Problem"] = PROBLEM_SCHEMA
        return document

    def _get_urls(self) -> list[URLPattern | URLResolver]:
        patterns = super()._get_urls()[:-1]  # the library's home page goes; its name stays, for the prefix
        patterns.append(path("", _nothing_here, name="api-root"))
        patterns.append(path("<path:rest>", _nothing_here))
        for pattern in patterns:
            pattern.callback = _outside_sign_in(pattern.callback)
        return patterns


def _nothing_here(request: HttpRequest, rest: str = "") -> HttpResponse:
    return no_such_address()


def _outside_sign_in(view: View) -> View:
    """Keep the page sign-in off a view: a caller is known by a token, which no other site's form can send."""

    @wraps(view, updated=())
    def answered(request: HttpRequest, *args: Any, **kwargs: Any) -> HttpResponseBase:
        answer = view(request, *args, **kwargs)
        if answer.status_code == 405:
            return wrong_method(str(request.method), answer["Allow"])
        return answer

    # Django reads both from the function itself, which has no such attributes by its type.
    answered.csrf_exempt = True  # type: ignore[attr-defined]  # bearer tokens, no cookies
    answered.login_required = False  # type: ignore[attr-defined]  # the middleware asks for it
    return answered
