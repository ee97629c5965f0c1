"""Signing in and out."""

from __future__ import annotations

from typing import Any

from django.contrib.auth.forms import AuthenticationForm
from django.contrib.auth.views import LoginView, LogoutView
from django.http import HttpRequest, HttpResponse
from django.shortcuts import redirect
from django.utils.decorators import method_decorator
from django.views.decorators.debug import sensitive_post_parameters

from qa_tracker.records.queries import people


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


class SignOut(LogoutView):
    """Ends the web session and leads back to signing in."""

    next_page = "sign-in"
