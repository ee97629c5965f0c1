"""Who may do what: each rule once, to be asked (``may``) or to refuse (``check_may``)."""

from __future__ import annotations

import datetime as dt
import hmac
from collections.abc import Sequence

from qa_tracker.core import roles
from qa_tracker.core.errors import Forbidden, Invalid
from qa_tracker.core.roles import Grant
from qa_tracker.records.models import Person
from qa_tracker.records.queries.scope import Scope, grants_of, scope_of

Grants = Sequence[Grant] | None
"""Grants that were fetched already, for a command that asks more than once; None: they are fetched."""


def check_may(actor: Person, verb: str, site_id: int | None, at: dt.datetime, grants: Grants = None) -> None:
    """Refuse when none of the actor's grants allows the verb at the site on that day.

    Raises
    ------
    Forbidden
        ``role.not_allowed``
    """
    if not may(actor, verb, site_id, at, grants):
        raise Forbidden("role.not_allowed", verb=verb)


def may(actor: Person, verb: str, site_id: int | None, at: dt.datetime, grants: Grants = None) -> bool:
    """Whether a grant allows the verb at the site; without a site, only a grant for the whole group does."""
    held = grants_of(actor.pk) if grants is None else grants
    return actor.is_active and roles.may(held, verb, site_id, at.date())


def may_somewhere(actor: Person, verb: str, at: dt.datetime) -> bool:
    """Whether a grant allows the verb at any site."""
    return actor.is_active and roles.may_somewhere(grants_of(actor.pk), verb, at.date())


def check_may_somewhere(actor: Person, verb: str, at: dt.datetime) -> None:
    """Refuse when no grant allows the verb anywhere (``role.not_allowed``)."""
    if not may_somewhere(actor, verb, at):
        raise Forbidden("role.not_allowed", verb=verb)


def scope(actor: Person, at: dt.datetime, verb: str = "see", grants: Grants = None) -> Scope:
    """What the actor may see now."""
    if grants is not None:
        return Scope(roles.sites_for(grants, verb, at.date()))
    return scope_of(actor.pk, at.date(), verb)


def role_for(actor: Person, verb: str, site_id: int | None, at: dt.datetime) -> str:
    """The role under which the actor does this, for a signature."""
    for grant in roles.grants_on(grants_of(actor.pk), at.date()):
        if grant.site_id in (None, site_id) and roles.PERMISSIONS[verb][grant.role]:
            return grant.role
    raise Forbidden("role.not_allowed", verb=verb)


def check_password(actor: Person, password: str) -> None:
    """Refuse to sign without the actor's own password (``signature.password_wrong``)."""
    if not password:
        raise Invalid("signature.password_missing", field="password")
    if not actor.check_password(password):
        raise Invalid("signature.password_wrong", field="password")


def check_shown(shown_sha256: str, current_sha256: str) -> None:
    """Refuse a signature on something else than what would be recorded (``signature.shown_differs``)."""
    if not hmac.compare_digest(shown_sha256, current_sha256):
        raise Invalid("signature.shown_differs", field="shown_sha256")


def required(value: str, code: str, field: str) -> str:
    """The text without surrounding blanks, refused when empty."""
    if not value.strip():
        raise Invalid(code, field=field)
    return value.strip()
