"""Saying until when a check is known of: acknowledging it, snoozing one's own notices, ending either."""

from __future__ import annotations

import datetime as dt
import uuid
from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

from django.http import HttpRequest, HttpResponse
from django.urls import reverse
from django.utils.timezone import now
from django.utils.translation import gettext_lazy as _

from qa_tracker.core.errors import DomainError, Forbidden, NotFound
from qa_tracker.records.queries import checks
from qa_tracker.records.queries import holds as rows
from qa_tracker.records.queries.checks import CheckRow
from qa_tracker.services import guards, holds
from qa_tracker.web.forms.asking import Asked, Done, ask
from qa_tracker.web.forms.fields import Field, Words
from qa_tracker.web.forms.typed import LONGEST_REASON, Typed


@dataclass(frozen=True)
class Kind:
    """One way to hold: its words, its command, and who may ask."""

    title: Words
    button: Words
    lead: Words
    done: Words
    command: Callable[..., Any]
    may: Callable[..., DomainError | None]


ACKNOWLEDGE = Kind(
    _("Acknowledge this check"),
    _("Acknowledge it"),
    _(
        "Until then the notices climb to nobody else; whoever is responsible still gets theirs. The check stays as "
        "due, late or overdue as it is. When that day comes and it is not done, the highest level reached is told."
    ),
    _("Acknowledged. Nobody else is told until then."),
    holds.acknowledge,
    holds.may_acknowledge,
)
SNOOZE = Kind(
    _("Snooze your notices of this check"),
    _("Snooze them"),
    _(
        "Until then you get no notice of this check; others still get theirs. The check stays as due, late or overdue "
        "as it is. When that day comes and it is not done, you are told the highest level reached."
    ),
    _("Snoozed. You hear of this check again on that day, unless it is done by then."),
    holds.snooze,
    holds.may_snooze,
)


def acknowledge(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Say that a check is known of, and until when."""
    return _hold(request, uid, ACKNOWLEDGE)


def snooze(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Let one's own notices of a check wait."""
    return _hold(request, uid, SNOOZE)


def _hold(request: HttpRequest, uid: uuid.UUID, kind: Kind) -> HttpResponse:
    at = now()
    row = _row(request, uid, at)
    refusal = kind.may(uid, actor=request.user, at=at)
    if isinstance(refusal, Forbidden):
        raise refusal
    asked = Asked(
        kind.title,
        kind.button,
        reverse("check", args=[uid]),
        _named(row),
        (
            Field("reason", _("Why"), "area", _("Others read it beside the check.")),
            Field("until_on", _("Until the morning of"), "date", _("From tomorrow to 31 days ahead.")),
        ),
        lead=kind.lead,
    )

    def act(typed: Typed) -> Done:
        kind.command(
            check=uid,
            reason=typed.text("reason", LONGEST_REASON),
            until_on=typed.day_or_none("until_on"),
            actor=request.user,
            at=at,
        )
        return Done(kind.done, reverse("check", args=[uid]))

    return ask(request, asked, act)


def end(request: HttpRequest, uid: uuid.UUID, hold: uuid.UUID) -> HttpResponse:
    """End a hold before its day."""
    at = now()
    row = _row(request, uid, at)
    if all(each.uid != hold for each in rows.holds_of_check(row.id)):
        raise NotFound("hold.unknown")
    asked = Asked(
        _("End this hold"),
        _("End it now"),
        reverse("check", args=[uid]),
        _named(row),
        (Field("reason", _("Why"), "area"),),
        lead=_("What it kept back is told within the next minute, if the check is still not done."),
    )

    def act(typed: Typed) -> Done:
        holds.end_hold(hold=hold, reason=typed.text("reason", LONGEST_REASON), actor=request.user, at=at)
        return Done(_("Ended. Notices go their way again."), reverse("check", args=[uid]))

    return ask(request, asked, act)


def _row(request: HttpRequest, uid: uuid.UUID, at: dt.datetime) -> CheckRow:
    row = checks.find_check(guards.scope(request.user, at), uid)
    if row is None:
        raise NotFound("check.unknown")
    return row


def _named(row: CheckRow) -> str:
    return f"{row.procedure}, {row.device_label}"
