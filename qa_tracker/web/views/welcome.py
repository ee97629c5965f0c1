"""The first account of an empty database; once anybody exists this page is not there."""

from __future__ import annotations

from django.contrib.auth.decorators import login_not_required
from django.http import Http404, HttpRequest, HttpResponse
from django.urls import reverse
from django.utils.timezone import now
from django.utils.translation import gettext as _
from django.views.decorators.debug import sensitive_post_parameters

from qa_tracker.core.errors import Invalid
from qa_tracker.records.queries import people as rows
from qa_tracker.services import people, shipped
from qa_tracker.web.forms.asking import Asked, Done, ask
from qa_tracker.web.forms.fields import Field
from qa_tracker.web.forms.typed import Typed


@login_not_required
@sensitive_post_parameters("password", "again")
def first_administrator(request: HttpRequest) -> HttpResponse:
    """Make the first administrator, and publish the library that comes with the program."""
    if rows.any_person():
        raise Http404
    at = now()
    asked = Asked(
        _("Welcome to Leadline"),
        _("Make the first account"),
        reverse("sign-in"),
        _("Sign in"),
        (
            Field("name", _("Your name"), focus=True),
            Field("username", _("Sign-in name")),
            Field("email", _("Mail address"), "email"),
            Field("password", _("Password"), "new_password", _("At least 12 signs.")),
            Field("again", _("The same again"), "new_password"),
        ),
        lead=_("Nobody has an account yet. The first is an administrator of the whole group."),
        notes=(
            _(
                "An administrator makes sites and people and changes no record. The procedures and limits that "
                "come with the program are published now; a physicist adopts them."
            ),
        ),
    )

    def act(typed: Typed) -> Done:
        if typed.raw("password") != typed.raw("again"):
            raise Invalid("form.passwords_differ", field="again")
        people.create_first_administrator(
            username=typed.text("username", 60),
            name=typed.text("name", 300),
            email=typed.text("email", 254),
            password=typed.raw("password"),
            at=at,
        )
        shipped.publish_shipped(at=at)
        return Done(_("The account is made. Sign in, then make the first site."), reverse("sign-in"))

    return ask(request, asked, act)
