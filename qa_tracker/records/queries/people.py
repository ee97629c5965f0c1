"""People, the roles they hold, and who holds a role where."""

from __future__ import annotations

import datetime as dt
import hashlib
import uuid
from dataclasses import dataclass

from qa_tracker.core.roles import Grant
from qa_tracker.records.models import ApiToken, Person, RoleGrant, Site
from qa_tracker.records.queries.as_of import noun, nouns
from qa_tracker.records.queries.scope import Scope


@dataclass(frozen=True)
class GrantRow:
    """A role at a site (or the whole group) between two days."""

    uid: uuid.UUID
    role: str
    site_id: int | None
    site_code: str
    from_on: dt.date
    until_on: dt.date | None


@dataclass(frozen=True)
class PersonRow:
    """Someone who signs in."""

    id: int
    uid: uuid.UUID
    username: str
    name: str
    email: str
    active: bool
    duties_site_id: int | None
    grants: tuple[GrantRow, ...]


def _grant_row(grant: RoleGrant, codes: dict[int, str]) -> GrantRow:
    code = codes.get(grant.site_id, "") if grant.site_id else ""
    return GrantRow(grant.uid, grant.role, grant.site_id, code, grant.from_on, grant.until_on)


def _row(person: Person, grants: list[RoleGrant], codes: dict[int, str]) -> PersonRow:
    rows = tuple(_grant_row(grant, codes) for grant in grants)
    return PersonRow(
        person.id, person.uid, person.username, person.name, person.email, person.is_active,
        person.duties_site_id, rows,
    )  # fmt: skip


def list_people(scope: Scope, as_of: dt.datetime | None = None) -> list[PersonRow]:
    """People who work or hold a role at a site in sight, or in the whole group, by name."""
    codes = dict(Site.objects.values_list("id", "code"))
    grants: dict[int, list[RoleGrant]] = {}
    for grant in nouns(RoleGrant, as_of):
        grants.setdefault(grant.person_id, []).append(grant)
    rows = [_row(person, grants.get(person.id, []), codes) for person in nouns(Person, as_of)]
    seen = [row for row in rows if _in_sight(row, scope)]
    return sorted(seen, key=lambda row: row.name.casefold())


def _in_sight(row: PersonRow, scope: Scope) -> bool:
    return scope.holds(row.duties_site_id) or any(
        grant.site_id is None or scope.holds(grant.site_id) for grant in row.grants
    )


def find_person(scope: Scope, uid: uuid.UUID) -> PersonRow | None:
    """A person in sight by uid."""
    person = noun(Person, uid=uid)
    if person is None:
        return None
    codes = dict(Site.objects.values_list("id", "code"))
    row = _row(person, nouns(RoleGrant, person_id=person.id), codes)
    return row if _in_sight(row, scope) else None


def names(person_ids: set[int]) -> dict[int, str]:
    """Names by key."""
    return dict(Person.objects.filter(id__in=person_ids).values_list("id", "name"))


def person_by_id(person_id: int) -> Person | None:
    """The account itself, for the sign-in machinery and as the actor of commands."""
    return Person.objects.filter(pk=person_id).first()


def person_by_username(username: str) -> Person | None:
    """The account itself by its sign-in name."""
    return Person.objects.filter(username=username).first()


def person_by_token(token: str) -> Person | None:
    """The person a bearer token belongs to, if it is good."""
    digest = hashlib.sha256(token.encode()).hexdigest()
    found = ApiToken.objects.filter(digest=digest, revoked_at=None).select_related("person").first()
    return found.person if found and found.person.is_active else None


def holders(role: str, site_id: int | None, on: dt.date) -> list[int]:
    """Keys of active people who hold a role at a site (or in the whole group) on a day."""
    grants = RoleGrant.objects.filter(role=role, person__is_active=True).order_by("person_id")
    return list(
        dict.fromkeys(
            grant.person_id
            for grant in grants
            if grant.site_id in (None, site_id)
            and Grant(grant.role, grant.site_id, grant.from_on, grant.until_on).holds_on(on)
        )
    )


def role_holders() -> dict[str, list[tuple[int, Grant]]]:
    """Every grant of an active person, by role; one query for all sites and days."""
    found: dict[str, list[tuple[int, Grant]]] = {}
    grants = RoleGrant.objects.filter(person__is_active=True).order_by("person_id", "id")
    for person_id, *columns in grants.values_list("person_id", "role", "site_id", "from_on", "until_on"):
        grant = Grant(*columns)
        found.setdefault(grant.role, []).append((person_id, grant))
    return found


def any_person() -> bool:
    """Whether anybody can sign in at all."""
    return Person.objects.exists()


@dataclass(frozen=True)
class TokenRow:
    """A bearer token, without its secret."""

    id: int
    label: str
    created_at: dt.datetime
    revoked_at: dt.datetime | None


def list_tokens(person_id: int) -> list[TokenRow]:
    """A person's tokens, newest first."""
    return [
        TokenRow(token.id, token.label, token.created_at, token.revoked_at)
        for token in ApiToken.objects.filter(person_id=person_id).order_by("-id")
    ]
