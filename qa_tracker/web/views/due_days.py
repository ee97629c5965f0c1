"""Moving a due day inside its window, with the reason."""

from __future__ import annotations

import uuid

from django.http import HttpRequest, HttpResponse
from django.urls import reverse
from django.utils.timezone import now
from django.utils.translation import gettext as _

from qa_tracker.core.errors import NotFound
from qa_tracker.records.queries import checks
from qa_tracker.records.queries.checks import CheckRow
from qa_tracker.services import due_days, guards
from qa_tracker.services.wording_words import day_words
from qa_tracker.web.forms.asking import Asked, Done, ask
from qa_tracker.web.forms.fields import Field
from qa_tracker.web.forms.typed import LONGEST_REASON, Typed


def move(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Choose another day inside the window, and say why."""
    at = now()
    row = checks.find_check(guards.scope(request.user, at), uid)
    if row is None:
        raise NotFound("check.unknown")
    room = due_days.room(check=uid, actor=request.user, at=at)
    asked = Asked(
        _("Move the due day"),
        _("Move it"),
        reverse("check", args=[uid]),
        f"{row.procedure}, {row.device_label}",
        _fields(row),
        lead=_days_open(room),
    )

    def act(typed: Typed) -> Done:
        due_days.move(
            check=uid,
            to_on=typed.day("to_on"),
            reason=typed.text("reason", LONGEST_REASON),
            actor=request.user,
            at=at,
        )
        return Done(
            _("Moved. The next check is counted from the plan's own day."), reverse("check", args=[uid])
        )

    return ask(request, asked, act)


def _fields(row: CheckRow) -> tuple[Field, ...]:
    return (
        Field("to_on", _("Due on"), "date").starting(row.due_on.isoformat() if row.due_on else ""),
        Field("reason", _("Why"), "area", _("It is shown beside the check.")),
    )


def _days_open(room: due_days.Room) -> str:
    """Where it may go, and what stays."""
    told = {"first": day_words(room.first_on), "last": day_words(room.last_on)}
    return (
        _(
            "Any day from %(first)s to %(last)s. The window stays as it is, and the next check is counted from the "
            "plan's own day."
        )
        % told
    )
