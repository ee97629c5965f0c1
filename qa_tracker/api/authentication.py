"""Who calls: a bearer token, and with it the moment of the call. Here alone the clock is read."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass
from typing import TYPE_CHECKING

from django.http import HttpRequest
from django.utils import timezone
from ninja.security import HttpBearer

from qa_tracker.records.queries.people import person_by_token
from qa_tracker.records.queries.scope import Scope
from qa_tracker.services import guards

if TYPE_CHECKING:
    from qa_tracker.records.models import Person


@dataclass(frozen=True)
class Caller:
    """The person a token acts for, at one moment for the whole request."""

    actor: Person
    at: dt.datetime

    def scope(self, verb: str = "see") -> Scope:
        """The sites at which the caller may do this."""
        return guards.scope(self.actor, self.at, verb)

    def check_may_somewhere(self, verb: str) -> None:
        """Refuse when the caller may do this nowhere."""
        guards.check_may_somewhere(self.actor, verb, self.at)


class ApiRequest(HttpRequest):
    """A request past authentication."""

    auth: Caller


class BearerToken(HttpBearer):
    """A token of one's own, made on the page Tokens; it carries what its person may do, nothing more."""

    openapi_type = "http"

    def authenticate(self, request: HttpRequest, token: str) -> Caller | None:
        """The caller, or None for a token that is unknown or revoked.

        Raises
        ------
        Forbidden
            ``role.not_allowed`` for a person whose every role has ended.
        """
        person = person_by_token(token)
        if person is None:
            return None
        caller = Caller(person, timezone.now())
        caller.check_may_somewhere("see")
        return caller
