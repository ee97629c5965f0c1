"""Bearer tokens of one's own, for the API."""

from __future__ import annotations

from django.contrib import messages
from django.http import HttpRequest, HttpResponse
from django.shortcuts import redirect, render
from django.urls import reverse
from django.utils.timezone import now
from django.utils.translation import gettext as _
from django.views.decorators.http import require_POST

from qa_tracker.core.errors import DomainError, Forbidden
from qa_tracker.records.queries.people import list_tokens
from qa_tracker.services import guards, people
from qa_tracker.web import refused
from qa_tracker.web.forms.asking import Asked, show_again
from qa_tracker.web.forms.fields import Field
from qa_tracker.web.forms.typed import Typed


def index(request: HttpRequest) -> HttpResponse:
    """The person's tokens; a new one is shown once, on the page that made it."""
    at = now()
    guards.check_may_somewhere(request.user, "token.issue", at)
    asked = Asked(
        _("Tokens"),
        _("Issue a token"),
        reverse("password"),
        _("Your password"),
        (Field("label", _("What it is for"), hint=_("Such as “reading room script”.")),),
        lead=_(
            "Whoever holds a token may do through the API what you may do. Keep it as you keep a password."
        ),
    )
    if request.method != "POST":
        return render(request, "tokens.html", {"asked": asked, "tokens": list_tokens(request.user.pk)})
    try:
        issued = people.issue_token(label=Typed(request.POST).text("label", 80), actor=request.user, at=at)
    except Forbidden:
        raise
    except DomainError as error:
        tokens = list_tokens(request.user.pk)
        return show_again(request, asked, refused.of(error), "tokens.html", tokens=tokens)
    context = {"asked": asked, "tokens": list_tokens(request.user.pk), "issued": issued}
    return render(request, "tokens.html", context)


@require_POST
def revoke(request: HttpRequest, token_id: int) -> HttpResponse:
    """End one of one's own tokens at once."""
    people.revoke_token(token_id=token_id, actor=request.user, at=now())
    messages.success(request, _("The token is ended."))
    return redirect("tokens")
