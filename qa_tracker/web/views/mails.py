"""Mail under way, for the administrator: what was given up and what to do, what waits, what was sent, the pauses."""

from __future__ import annotations

from django.conf import settings
from django.contrib import messages
from django.http import HttpRequest, HttpResponse
from django.shortcuts import redirect, render
from django.urls import reverse
from django.utils.timezone import now
from django.utils.translation import gettext as _
from django.utils.translation import ngettext
from django.views.decorators.http import require_GET, require_POST

from qa_tracker.core.errors import Conflict, NotFound
from qa_tracker.records.queries import mail as rows
from qa_tracker.services import guards, mail, wording
from qa_tracker.services.health import health
from qa_tracker.tasks.beat import DELIVER_DIGEST
from qa_tracker.tasks.hints import send_hint
from qa_tracker.web.forms.asking import Asked, Done, ask
from qa_tracker.web.forms.fields import Field
from qa_tracker.web.forms.typed import LONGEST_REASON, Typed

MOST_FAILED = 200
MOST_DONE = 30


@require_GET
def index(request: HttpRequest) -> HttpResponse:
    """All mail to people whose duties are at the administrator's sites."""
    at = now()
    guards.check_may_somewhere(request.user, "mail.see", at)
    scope = guards.scope(request.user, at, "mail.see")
    context = {
        "says": wording.health_sentence(health(at=at)),
        "failed": rows.list_digests(scope, "failed", most=MOST_FAILED),
        "failed_count": rows.count_digests(scope, "failed"),
        "waiting": rows.list_digests(scope, *rows.AWAITED, most=MOST_FAILED),
        "done": rows.list_digests(scope, "sent", "unsent", most=MOST_DONE),
        "pending": rows.count_pending(scope),
        "gaps": rows.list_gaps(),
        "demo_mailbox": settings.DEMO_MAILBOX,
        "may_send_again": guards.may_somewhere(request.user, mail.SEND_AGAIN, at),
    }
    return render(request, "mails.html", context)


@require_POST
def send_again(request: HttpRequest, digest_id: int) -> HttpResponse:
    """Send one mail again that was given up."""
    try:
        mail.send_again(digest_id=digest_id, actor=request.user, at=now())
    except Conflict as error:
        messages.error(request, wording.refusal(error))
    else:
        send_hint(DELIVER_DIGEST, digest_id)
        messages.success(request, _("It is on its way again."))
    return redirect("mails")


@require_POST
def send_all_again(request: HttpRequest) -> HttpResponse:
    """Send all mail again that was given up."""
    try:
        count = mail.send_all_again(actor=request.user, at=now())
    except Conflict as error:
        messages.error(request, wording.refusal(error))
    else:
        told = ngettext("%(n)d mail is on its way again.", "%(n)d mails are on their way again.", count)
        messages.success(request, told % {"n": count})
    return redirect("mails")


def leave_unsent(request: HttpRequest, digest_id: int) -> HttpResponse:
    """Decide, with the reason, that a mail is not sent any more."""
    at = now()
    guards.check_may_somewhere(request.user, mail.SEND_AGAIN, at)
    scope = guards.scope(request.user, at, mail.SEND_AGAIN)
    found = next((each for each in rows.list_digests(scope, digest_id=digest_id)), None)
    if found is None:
        raise NotFound("mail.unknown")
    asked = Asked(
        _("Leave this mail unsent"),
        _("Leave it unsent"),
        reverse("mails"),
        _("Mail"),
        (Field("reason", _("Why"), "area", _("For example: has left, or was told by telephone.")),),
        lead=_(
            "To %(person)s, %(email)s. Its notices stay in the program; only this letter is not sent any more."
        )
        % {"person": found.person, "email": found.email},
    )

    def act(typed: Typed) -> Done:
        reason = typed.text("reason", LONGEST_REASON)
        mail.leave_unsent(digest_id=digest_id, reason=reason, actor=request.user, at=at)
        return Done(_("It is left unsent."), asked.back)

    return ask(request, asked, act)
