"""Refusals as problem details (RFC 9457): the status of each kind, and the one shape all of them have."""

from __future__ import annotations

import json
from http import HTTPStatus
from typing import Any

from django.http import HttpRequest, HttpResponse
from ninja import NinjaAPI
from ninja.errors import AuthenticationError, HttpError, ValidationError

from qa_tracker.core.errors import Conflict, DomainError, Forbidden, Invalid, NotFound, SeveralInvalid
from qa_tracker.services.wording import refusal

MEDIA_TYPE = "application/problem+json"
STATUS: dict[type[DomainError], HTTPStatus] = {
    NotFound: HTTPStatus.NOT_FOUND,
    Forbidden: HTTPStatus.FORBIDDEN,
    Conflict: HTTPStatus.CONFLICT,
    Invalid: HTTPStatus.UNPROCESSABLE_ENTITY,
    SeveralInvalid: HTTPStatus.UNPROCESSABLE_ENTITY,
}
TITLES = {
    HTTPStatus.BAD_REQUEST: "Not readable",
    HTTPStatus.UNAUTHORIZED: "Not signed in",
    HTTPStatus.FORBIDDEN: "Not allowed",
    HTTPStatus.NOT_FOUND: "Not there",
    HTTPStatus.METHOD_NOT_ALLOWED: "Not done here",
    HTTPStatus.CONFLICT: "Not possible now",
    HTTPStatus.UNPROCESSABLE_ENTITY: "Not usable as given",
}
ALWAYS = (HTTPStatus.UNAUTHORIZED, HTTPStatus.FORBIDDEN, HTTPStatus.UNPROCESSABLE_ENTITY)
PLACES = ("body", "query", "path", "header", "data", "content")

_SAID: dict[str, Any] = {
    "code": {"type": "string", "description": "Stable dotted name of the refusal."},
    "field": {"type": "string", "description": "The input it belongs to; empty for the whole."},
    "detail": {"type": "string", "description": "What, why and what to do, for a person."},
}
_FINDING = {"type": "object", "required": [*_SAID], "properties": _SAID}
PROBLEM_SCHEMA: dict[str, Any] = {
    "title": "Problem",
    "description": "Problem details of RFC 9457, with the refusal's own code.",
    "type": "object",
    "required": ["type", "title", "status", "detail", "code", "field", "errors"],
    "properties": {
        "type": {"type": "string", "const": "about:blank"},
        "title": {"type": "string"},
        "status": {"type": "integer"},
        **_SAID,
        "errors": {"type": "array", "items": _FINDING, "description": "One for each input to mend."},
    },
}


def refusals(*statuses: int) -> dict[str, Any]:
    """What an operation may answer besides success, for its ``openapi_extra``.

    401, 403 and 422 are always among them.
    """
    wanted = sorted({*ALWAYS, *map(HTTPStatus, statuses)})
    content = {MEDIA_TYPE: {"schema": {"$ref": "#/components/schemas/Problem"}}}
    return {
        "responses": {int(status): {"description": TITLES[status], "content": content} for status in wanted}
    }


def problem(error: DomainError, status: HTTPStatus | None = None) -> HttpResponse:
    """A refusal as an answer."""
    status = status or STATUS[type(error)]
    several = error.errors if isinstance(error, SeveralInvalid) else (error,)
    body = {
        "type": "about:blank",
        "title": TITLES[status],
        "status": int(status),
        **_finding(error),
        "errors": [_finding(each) for each in several],
    }
    answer = HttpResponse(json.dumps(body), content_type=MEDIA_TYPE, status=status)
    if status is HTTPStatus.UNAUTHORIZED:
        answer["WWW-Authenticate"] = 'Bearer realm="Leadline"'
    return answer


def _finding(error: DomainError) -> dict[str, str]:
    return {"code": error.code, "field": error.field, "detail": refusal(error)}


def unknown_token() -> HttpResponse:
    """No token, or one that is not good: 401."""
    return problem(Forbidden("token.refused"), HTTPStatus.UNAUTHORIZED)


def no_such_address() -> HttpResponse:
    """An address this API does not have: 404."""
    return problem(NotFound("request.address_unknown"))


def wrong_method(method: str, allowed: str) -> HttpResponse:
    """A method the address does not take: 405, with those it takes."""
    error = Invalid("request.method_wrong", method=method, allowed=allowed)
    answer = problem(error, HTTPStatus.METHOD_NOT_ALLOWED)
    answer["Allow"] = allowed
    return answer


def malformed(found: list[dict[str, Any]]) -> SeveralInvalid:
    """The findings of the parser, each beside the input it belongs to."""
    return SeveralInvalid(tuple(_malformed(each) for each in found))


def _malformed(found: dict[str, Any]) -> Invalid:
    parts = [str(part) for part in found["loc"] if part not in PLACES]
    return Invalid("request.malformed", field=".".join(parts), why=found["msg"])


def install(api: NinjaAPI) -> None:
    """Answer every refusal of an operation in the one shape."""
    api.add_exception_handler(DomainError, lambda request, error: problem(error))
    api.add_exception_handler(ValidationError, lambda request, error: problem(malformed(error.errors)))
    api.add_exception_handler(AuthenticationError, lambda request, error: unknown_token())
    api.add_exception_handler(HttpError, _unreadable)


def _unreadable(request: HttpRequest, error: HttpError) -> HttpResponse:
    """The library's own refusals: a body that is no JSON."""
    return problem(Invalid("request.not_json", why=str(error)), HTTPStatus(error.status_code))
