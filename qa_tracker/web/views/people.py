"""People: accounts, the roles they hold, and passwords."""

from __future__ import annotations

import datetime as dt
import uuid

from django.contrib.auth import update_session_auth_hash
from django.http import HttpRequest, HttpResponse
from django.shortcuts import render
from django.urls import reverse
from django.utils.timezone import now
from django.utils.translation import gettext as _
from django.views.decorators.debug import sensitive_post_parameters

from qa_tracker.core.errors import Invalid, NotFound
from qa_tracker.core.roles import ROLES
from qa_tracker.records.queries import people as rows
from qa_tracker.records.queries import sites
from qa_tracker.records.queries.people import GrantRow, PersonRow
from qa_tracker.records.queries.scope import Scope
from qa_tracker.services import finding, guards, people, wording
from qa_tracker.web.forms.asking import Asked, Done, ask
from qa_tracker.web.forms.fields import Field, Option
from qa_tracker.web.forms.registering import reason
from qa_tracker.web.forms.typed import Typed


def _scope(request: HttpRequest, at: dt.datetime) -> Scope:
    guards.check_may_somewhere(request.user, "person.manage", at)
    return guards.scope(request.user, at, "person.manage")


def _person(request: HttpRequest, uid: uuid.UUID, at: dt.datetime) -> PersonRow:
    found = rows.find_person(_scope(request, at), uid)
    if found is None:
        raise NotFound("person.unknown")
    return found


def index(request: HttpRequest) -> HttpResponse:
    """Everyone at the sites the administrator answers for, with the roles in force."""
    at = now()
    lines = [(each, _in_force(each.grants, at.date())) for each in rows.list_people(_scope(request, at))]
    return render(request, "people.html", {"lines": lines})


def _in_force(grants: tuple[GrantRow, ...], day: dt.date) -> list[GrantRow]:
    return [
        each for each in grants if each.from_on <= day and (each.until_on is None or day <= each.until_on)
    ]


def show(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """One person with every role, past and present."""
    at = now()
    found = _person(request, uid, at)
    held = {site.id: site.name for site in sites.list_sites(guards.scope(request.user, at))}
    context = {
        "person": found,
        "duties": held.get(found.duties_site_id, ""),
        "grants": [(each, each in _in_force(found.grants, at.date())) for each in found.grants],
    }
    return render(request, "person.html", context)


def place_options(request: HttpRequest, verb: str, at: dt.datetime) -> tuple[Option, ...]:
    """The whole group, where the person may, and each site they answer for."""
    group = [("", _("the whole group"))] if guards.may(request.user, verb, None, at) else []
    scope = guards.scope(request.user, at, verb)
    return (*group, *((str(each.uid), each.name) for each in sites.list_sites(scope)))


@sensitive_post_parameters("password")
def new(request: HttpRequest) -> HttpResponse:
    """Make an account; its first role is given next."""
    at = now()
    _scope(request, at)
    asked = Asked(
        _("New person"),
        _("Make the account"),
        reverse("people"),
        _("People"),
        (
            Field("name", _("Name"), focus=True),
            Field("username", _("Sign-in name")),
            Field("email", _("Mail address"), "email"),
            Field(
                "site",
                _("Where they work"),
                "select",
                _("Days and hours of their mail go by this site."),
                place_options(request, "person.manage", at),
            ),
            Field(
                "password",
                _("First password"),
                "new_password",
                _("At least 12 signs; ask them to set their own."),
            ),
        ),
        lead=_("An account alone may do nothing; a role is given next."),
    )

    def act(typed: Typed) -> Done:
        site = typed.choice_or_none("site")
        made = people.create(
            username=typed.text("username", 60),
            name=typed.text("name", 300),
            email=typed.text("email", 254),
            password=typed.raw("password"),
            site=finding.site(request.user, site, at) if site else None,
            actor=request.user,
            at=at,
        )
        return Done(_("The account is made. Give it a role."), reverse("role-grant", args=[made.uid]))

    return ask(request, asked, act)


def grant(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Give a role at a site or in the whole group."""
    at = now()
    holder = _person(request, uid, at)
    asked = Asked(
        _("Give %(name)s a role") % {"name": holder.name},
        _("Give the role"),
        reverse("person", args=[uid]),
        holder.name,
        (
            Field(
                "role", _("Role"), "radio", options=tuple((each, wording.role_word(each)) for each in ROLES)
            ),
            Field("site", _("Where"), "select", options=place_options(request, "person.manage", at)),
            Field("from_on", _("From"), "date", values=(at.date().isoformat(),)),
            Field("until_on", _("Until"), "date", _("An auditor's role has to end."), required=False),
        ),
    )

    def act(typed: Typed) -> Done:
        site = typed.choice_or_none("site")
        people.grant_role(
            person=uid,
            role=typed.text("role"),
            site=finding.site(request.user, site, at) if site else None,
            from_on=typed.day("from_on"),
            until_on=typed.day_or_none("until_on"),
            actor=request.user,
            at=at,
        )
        return Done(_("The role is given."), reverse("person", args=[uid]))

    return ask(request, asked, act)


def end(request: HttpRequest, uid: uuid.UUID, grant: uuid.UUID) -> HttpResponse:
    """End a role on a day."""
    at = now()
    holder = _person(request, uid, at)
    role = next((each for each in holder.grants if each.uid == grant), None)
    if role is None:
        raise NotFound("grant.unknown")
    asked = Asked(
        _("End the role %(role)s of %(name)s") % {"role": wording.role_word(role.role), "name": holder.name},
        _("End it"),
        reverse("person", args=[uid]),
        holder.name,
        (
            Field("until_on", _("Last day"), "date", values=(at.date().isoformat(),)),
            Field("reason", _("Why"), "area", required=False),
        ),
    )

    def act(typed: Typed) -> Done:
        people.end_role(
            grant=grant, until_on=typed.day("until_on"), reason=reason(typed), actor=request.user, at=at
        )
        return Done(_("The role ends on that day."), asked.back)

    return ask(request, asked, act)


def _new_password(typed: Typed) -> str:
    first, again = typed.raw("new_password"), typed.raw("again")
    if first != again:
        raise Invalid("form.passwords_differ", field="again")
    return first


NEW_PASSWORD = ("new_password", "again")


def _password_fields() -> tuple[Field, ...]:
    return (
        Field("new_password", _("New password"), "new_password", _("At least 12 signs.")),
        Field("again", _("The same again"), "new_password"),
    )


def set_address(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Change somebody's mail address."""
    at = now()
    holder = _person(request, uid, at)
    guards.check_may(request.user, "person.manage", holder.duties_site_id, at)
    asked = Asked(
        _("Mail address of %(name)s") % {"name": holder.name},
        _("Keep the address"),
        reverse("person", args=[uid]),
        holder.name,
        (Field("email", _("Mail address"), "email").starting(holder.email),),
        lead=_("Mail that waits goes to it, and mail that is sent again."),
    )

    def act(typed: Typed) -> Done:
        people.set_address(person=uid, email=typed.text("email", 254), actor=request.user, at=at)
        return Done(_("The address is kept."), asked.back)

    return ask(request, asked, act)


@sensitive_post_parameters(*NEW_PASSWORD)
def set_password(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Set somebody's password."""
    at = now()
    holder = _person(request, uid, at)
    guards.check_may(request.user, "person.manage", holder.duties_site_id, at)
    asked = Asked(
        _("Set the password of %(name)s") % {"name": holder.name},
        _("Set it"),
        reverse("person", args=[uid]),
        holder.name,
        _password_fields(),
        lead=_("It ends every sign-in of theirs. Ask them to set their own."),
    )

    def act(typed: Typed) -> Done:
        people.set_password(person=uid, password=_new_password(typed), actor=request.user, at=at)
        return Done(_("The password is set."), asked.back)

    return ask(request, asked, act)


@sensitive_post_parameters("password", *NEW_PASSWORD)
def own_password(request: HttpRequest) -> HttpResponse:
    """Set one's own password."""
    at = now()
    asked = Asked(
        _("Your password"),
        _("Set it"),
        reverse("due"),
        _("Due"),
        (Field("password", _("Your present password"), "password"), *_password_fields()),
        lead=_("It is also your signature: tell it to nobody."),
    )

    def act(typed: Typed) -> Done:
        guards.check_password(request.user, typed.raw("password"))
        people.set_password(person=request.user.uid, password=_new_password(typed), actor=request.user, at=at)
        update_session_auth_hash(request, request.user)
        return Done(_("Your password is set. Other sign-ins of yours have ended."), reverse("password"))

    may_issue = guards.may_somewhere(request.user, "token.issue", at)
    return ask(request, asked, act, "password.html", may_issue=may_issue)
