"""Signing in and out."""

from __future__ import annotations

import uuid
from collections.abc import Mapping
from typing import Any

from django.contrib import messages
from django.contrib.auth.forms import AuthenticationForm
from django.contrib.auth.views import LoginView, LogoutView
from django.http import HttpRequest, HttpResponse
from django.shortcuts import redirect
from django.utils.decorators import method_decorator
from django.utils.timezone import now
from django.utils.translation import gettext as _
from django.views.decorators.debug import sensitive_post_parameters

from qa_tracker.core.errors import DomainError
from qa_tracker.records.queries import people
from qa_tracker.services import drafts
from qa_tracker.services.drafts import KeptMeanwhile
from qa_tracker.web.forms import entry

CARRIED = "carried."


@method_decorator(sensitive_post_parameters("password"), name="dispatch")
class SignIn(LoginView):
    """The sign-in page; an empty database leads to making its first account."""

    template_name = "sign_in.html"
    authentication_form = AuthenticationForm
    redirect_authenticated_user = True

    def get(self, request: HttpRequest, *args: Any, **kwargs: Any) -> HttpResponse:
        """Show the form."""
        if not people.any_person():
            return redirect("first-administrator")
        return super().get(request, *args, **kwargs)

    def form_valid(self, form: AuthenticationForm) -> HttpResponse:
        """Sign in; what was typed into a check when the web session ended becomes the person's draft."""
        answer = super().form_valid(form)
        carried = carried_inputs(self.request.POST)
        if carried.get("typed_by") == str(self.request.user.uid):
            _keep(self.request, carried)
        return answer

    def get_context_data(self, **more: Any) -> dict[str, Any]:
        """The page's values; a wrong password loses nothing that is carried along."""
        carried = carried_inputs(self.request.POST)
        check = self.request.POST.get("carried_check", "")
        return super().get_context_data(**more) | {"carried": carried, "carried_check": check}


def carried_inputs(data: Mapping[str, str]) -> dict[str, str]:
    """What the sign-in page carries of another form, by its names there."""
    return {name.removeprefix(CARRIED): value for name, value in data.items() if name.startswith(CARRIED)}


def _keep(request: HttpRequest, carried: dict[str, str]) -> None:
    """Keep it as the draft it was sent as; it is the newest there is, since its owner has just sent it."""
    check, at = request.POST.get("carried_check", ""), now()
    typed = entry.typed_inputs(carried)
    try:
        uid = uuid.UUID(check)
        try:
            drafts.keep(check=uid, typed=typed, revision=0, actor=request.user, at=at)
        except KeptMeanwhile as error:
            revision = error.kept.revision
            drafts.keep(check=uid, typed=typed, revision=revision, actor=request.user, at=at)
    except (ValueError, DomainError):
        messages.error(
            request, _("What you had typed could not be kept: that check takes no values any more.")
        )


class SignOut(LogoutView):
    """Ends the web session and leads back to signing in."""

    next_page = "sign-in"
