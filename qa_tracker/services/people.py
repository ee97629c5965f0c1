"""Accounts, roles and tokens. Who signs in with what is kept apart from the records."""

from __future__ import annotations

import datetime as dt
import hashlib
import secrets
import uuid

from django.contrib.auth.hashers import make_password
from django.contrib.auth.password_validation import validate_password
from django.core.exceptions import ValidationError
from django.core.validators import validate_email

from qa_tracker.core import roles
from qa_tracker.core.errors import Forbidden, Invalid, NotFound
from qa_tracker.core.roles import Grant, check_grant
from qa_tracker.records import ledger
from qa_tracker.records.models import ApiToken, Credential, Person, RoleGrant, Site
from qa_tracker.records.queries.scope import grants_of
from qa_tracker.services import guards
from qa_tracker.services.finding import person as find_person
from qa_tracker.services.guards import check_may, required

LONGEST_ADDRESS = 254
"""As the column of the address, which is as RFC 5321 4.5.3.1.3 limits a path with its brackets."""


def create_first_administrator(
    *, username: str, name: str, email: str, password: str, at: dt.datetime
) -> Person:
    """Make the first account of an empty database, an administrator of the whole group.

    Writes Person, RoleGrant, Credential; leaf ``person.first``. Refused once anybody exists.
    """
    with ledger.command("person.first", actor=None, at=at) as act:
        if Person.objects.exists():
            raise Forbidden("person.not_first")
        person = _new_person(act, username, name, email, None)
        _new_grant(act, person, "administrator", None, at.date(), None)
        act.about(person)
        act.tell({"person": str(person.uid), "role": "administrator"})
        _keep_password(person, password)
    return person


def create(
    *,
    username: str,
    name: str,
    email: str,
    password: str,
    site: Site | None,
    actor: Person,
    at: dt.datetime,
) -> Person:
    """Make an account. Writes Person and Credential; leaf ``person.created``.

    Refused: not an administrator of that site, a taken sign-in name, a bad address, a weak password.
    """
    check_may(actor, "person.manage", site.id if site else None, at)
    with ledger.command("person.created", actor=actor, at=at) as act:
        person = _new_person(act, username, name, email, site)
        act.about(person, site=site)
        act.tell({"person": str(person.uid), "username": person.username})
        _keep_password(person, password)
    return person


def _new_person(act: ledger.Act, username: str, name: str, email: str, site: Site | None) -> Person:
    username = required(username, "person.username_missing", "username").lower()
    if Person.objects.filter(username=username).exists():
        raise Invalid("person.username_taken", field="username", username=username)
    _check_address(email)
    return act.insert(
        Person(
            username=username,
            name=required(name, "person.name_missing", "name"),
            email=email,
            name_salt=secrets.token_urlsafe(24),
            duties_site=site,
        )
    )


def _check_address(email: str) -> None:
    try:
        validate_email(email)
    except ValidationError as error:
        raise Invalid("person.email_wrong", field="email") from error
    if len(email) > LONGEST_ADDRESS:
        raise Invalid("person.email_wrong", field="email")


def set_address(*, person: uuid.UUID, email: str, actor: Person, at: dt.datetime) -> None:
    """Change a person's mail address. Writes Person; leaf ``person.address_set`` (never the address).

    Mail that waits, and mail sent again, goes to the new one. Refused: not an administrator where the person
    works, what is no address, the address they have.
    """
    holder = find_person(person)
    check_may(actor, "person.manage", holder.duties_site_id, at)
    email = email.strip()
    _check_address(email)
    if email == holder.email:
        raise Invalid("person.email_same", field="email")
    with ledger.command("person.address_set", actor=actor, at=at) as act:
        act.change(holder, email=email)
        act.about(holder, site=holder.duties_site)
        act.tell({"person": str(holder.uid)})


def _keep_password(person: Person, password: str) -> None:
    try:
        validate_password(password)
    except ValidationError as error:
        raise Invalid("person.password_weak", field="password", why=" ".join(error.messages)) from error
    Credential.objects.update_or_create(person=person, defaults={"password": make_password(password)})


def grant_role(
    *,
    person: uuid.UUID,
    role: str,
    site: Site | None,
    from_on: dt.date,
    until_on: dt.date | None,
    actor: Person,
    at: dt.datetime,
) -> RoleGrant:
    """Give a role at a site or in the whole group. Writes RoleGrant; leaf ``role.granted``.

    Refused: not an administrator there, an unknown role, an auditor without an end, an end before the start.
    """
    check_may(actor, "person.manage", site.id if site else None, at)
    holder = find_person(person)
    with ledger.command("role.granted", actor=actor, at=at) as act:
        grant = _new_grant(act, holder, role, site, from_on, until_on)
        act.about(grant, site=site)
        act.tell({"person": str(holder.uid), "role": role, "site": site.code if site else None,
                  "from": from_on.isoformat(), "until": until_on.isoformat() if until_on else None})  # fmt: skip
    return grant


def _new_grant(
    act: ledger.Act, person: Person, role: str, site: Site | None, from_on: dt.date, until_on: dt.date | None
) -> RoleGrant:
    check_grant(Grant(role, site.id if site else None, from_on, until_on))
    return act.insert(RoleGrant(person=person, role=role, site=site, from_on=from_on, until_on=until_on))


def end_role(*, grant: uuid.UUID, until_on: dt.date, reason: str, actor: Person, at: dt.datetime) -> None:
    """End a role on a day. Writes RoleGrant; leaf ``role.ended``. Refused: not an administrator there."""
    row = RoleGrant.objects.select_related("site").filter(uid=grant).first()
    if row is None:
        raise NotFound("grant.unknown")
    check_may(actor, "person.manage", row.site_id, at)
    if until_on < row.from_on:
        raise Invalid("grant.ends_before_start", field="until_on", from_on=row.from_on, until_on=until_on)
    with ledger.command("role.ended", actor=actor, at=at, reason=reason) as act:
        old = {"until": row.until_on.isoformat() if row.until_on else None}
        act.change(row, until_on=until_on)
        act.about(row, site=row.site)
        act.tell({"until": until_on.isoformat()}, old)


def set_password(*, person: uuid.UUID, password: str, actor: Person, at: dt.datetime) -> None:
    """Set a password: one's own, or as an administrator. Leaf ``person.password_set`` (never the password).

    Refused: not an administrator wherever the person holds a role, since whoever sets it can sign in with it.
    """
    holder = find_person(person)
    if holder.pk != actor.pk:
        held = roles.grants_on(grants_of(holder.pk), at.date())
        for site_id in {holder.duties_site_id, *(grant.site_id for grant in held)}:
            check_may(actor, "person.manage", site_id, at)
    with ledger.command("person.password_set", actor=actor, at=at) as act:
        act.about(holder)
        act.tell({"person": str(holder.uid)})
        _keep_password(holder, password)


def issue_token(*, label: str, actor: Person, at: dt.datetime) -> str:
    """Make a bearer token for the actor and return it: it is shown once and kept as a hash.

    Leaf ``token.issued``. A token carries what its person may do, nothing more. Refused: role.
    """
    guards.check_may_somewhere(actor, "token.issue", at)
    token = secrets.token_urlsafe(32)
    with ledger.command("token.issued", actor=actor, at=at) as act:
        digest = hashlib.sha256(token.encode()).hexdigest()
        ApiToken.objects.create(
            person=actor, digest=digest, label=required(label, "token.label_missing", "label"), created_at=at
        )
        act.about(actor)
        act.tell({"label": label, "sha256": digest})
    return token


def revoke_token(*, token_id: int, actor: Person, at: dt.datetime) -> None:
    """End one of the actor's own tokens at once. Leaf ``token.revoked``."""
    row = ApiToken.objects.filter(pk=token_id, person=actor, revoked_at=None).first()
    if row is None:
        raise NotFound("token.unknown")
    with ledger.command("token.revoked", actor=actor, at=at) as act:
        ApiToken.objects.filter(pk=row.pk).update(revoked_at=at)
        act.about(actor)
        act.tell({"sha256": row.digest})
