"""Who signs in: the account's own credential, checked in constant work whether the name exists or not."""

from __future__ import annotations

from typing import Any

from django.contrib.auth.backends import BaseBackend
from django.contrib.auth.hashers import make_password
from django.http import HttpRequest

from qa_tracker.records.queries import people


class CredentialBackend(BaseBackend):
    """Signs a person in by sign-in name and password; the lock-out stands before it."""

    def authenticate(
        self, request: HttpRequest | None, username: str | None = None, password: str | None = None, **_: Any
    ) -> Any:
        """The person, or None; a name that is not there takes as long as a wrong password."""
        if username is None or password is None:
            return None
        person = people.person_by_username(username.strip().lower())
        if person is None:
            make_password(password)
            return None
        return person if person.check_password(password) and person.is_active else None

    def get_user(self, user_id: int) -> Any:
        """The person of a web session, as long as the account is active."""
        person = people.person_by_id(user_id)
        return person if person is not None and person.is_active else None
