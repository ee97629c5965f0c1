"""When a site's mail comes and when it is quiet, and which of its rooms work round the clock."""

from __future__ import annotations

import datetime as dt
import uuid

from django.contrib import messages
from django.http import HttpRequest, HttpResponse
from django.shortcuts import redirect
from django.urls import reverse
from django.utils.timezone import now
from django.utils.translation import gettext as _
from django.views.decorators.http import require_POST

from qa_tracker.core.errors import Conflict, NotFound
from qa_tracker.services import finding, guards, site_hours, wording
from qa_tracker.web.forms.asking import Asked, Done, ask
from qa_tracker.web.forms.fields import Field
from qa_tracker.web.forms.typed import Typed


def hours(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Set the hours of a site's mail."""
    at = now()
    _check(request, uid, at)
    site = finding.site(request.user, uid, at)
    asked = Asked(
        _("Hours of mail"),
        _("Keep the hours"),
        reverse("site", args=[uid]),
        site.name,
        (
            Field(
                "digest_hour",
                _("The day's letter from this hour"),
                "whole",
                _("By the site's clock, 0 to 23. It comes on working days."),
            ).starting(site.digest_hour),
            Field(
                "quiet_from_hour",
                _("Quiet from this hour"),
                "whole",
                _("For example 20. Leave both empty where no hours are quiet."),
                required=False,
            ).starting(site.quiet_from_hour),
            Field(
                "quiet_until_hour",
                _("Quiet until this hour"),
                "whole",
                _("For example 6; it may be past midnight. Mail comes again from this hour on."),
                required=False,
            ).starting(site.quiet_until_hour),
        ),
        lead=_(
            "In the quiet hours and on days off mail waits and nothing is lost. Suspension verdicts and overdue "
            "electrical safety go at any hour where the device's room works round the clock."
        ),
    )

    def act(typed: Typed) -> Done:
        digest_hour = typed.whole("digest_hour", 23)
        site_hours.set_hours(
            site=site,
            digest_hour=digest_hour,
            quiet_from_hour=typed.whole_or_none("quiet_from_hour", 23),
            quiet_until_hour=typed.whole_or_none("quiet_until_hour", 23),
            actor=request.user,
            at=at,
        )
        return Done(_("The hours are kept."), asked.back)

    return ask(request, asked, act)


@require_POST
def room(request: HttpRequest, uid: uuid.UUID, room: uuid.UUID) -> HttpResponse:
    """Say whether a room works round the clock."""
    at = now()
    _check(request, uid, at)
    found = finding.location(finding.site(request.user, uid, at), room)
    if found is None:
        raise NotFound("location.unknown")
    wanted = request.POST.get("round_the_clock") == "yes"
    try:
        site_hours.set_round_the_clock(room=found, round_the_clock=wanted, actor=request.user, at=at)
    except Conflict as error:
        messages.error(request, wording.refusal(error))
    else:
        messages.success(request, _("Recorded for %(room)s.") % {"room": found.name})
    return redirect("site", uid=uid)


def _check(request: HttpRequest, uid: uuid.UUID, at: dt.datetime) -> None:
    """A site that the actor does not manage answers as one that is not there."""
    guards.check_may_somewhere(request.user, "site.manage", at)
    site = finding.site(request.user, uid, at)
    if not guards.scope(request.user, at, "site.manage").holds(site.id):
        raise NotFound("site.unknown")
