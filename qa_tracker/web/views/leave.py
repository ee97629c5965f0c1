"""Leave: the days someone is away, and who stands in for them meanwhile."""

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

from qa_tracker.records.queries import people as rows
from qa_tracker.records.queries.leave import leave_from
from qa_tracker.records.queries.people import PersonRow
from qa_tracker.services import away, finding, guards
from qa_tracker.web.forms.asking import Asked, Done, ask
from qa_tracker.web.forms.fields import Field, Option
from qa_tracker.web.forms.typed import Typed
from qa_tracker.web.presenters.plans import who_may_answer


def index(request: HttpRequest) -> HttpResponse:
    """Leave to come, one's own and that of people one plans for, and the form that records another."""
    at = now()
    theirs = [
        each for each in rows.list_people(guards.scope(request.user, at)) if _answers_for(request, each, at)
    ]
    asked = _asked(request, theirs, at)

    def act(typed: Typed) -> Done:
        away.take_leave(
            person=finding.person(typed.choice("person")) if len(theirs) > 1 else request.user,
            deputy=finding.person(typed.choice("deputy")),
            from_on=typed.day("from_on"),
            until_on=typed.day("until_on"),
            note=typed.text("note", 300),
            actor=request.user,
            at=at,
        )
        return Done(_("The leave is recorded. Until it begins nothing changes."), reverse("leave"))

    lines = [
        (each, each.person_id in {one.id for one in theirs})
        for each in leave_from(at.date(), {request.user.pk, *(each.id for each in theirs)})
    ]
    return ask(request, asked, act, "leave.html", lines=lines, me=request.user.pk)


def _answers_for(request: HttpRequest, person: PersonRow, at: dt.datetime) -> bool:
    own = person.id == request.user.pk
    return own or (person.active and guards.may(request.user, "plan.make", person.duties_site_id, at))


def _asked(request: HttpRequest, theirs: list[PersonRow], at: dt.datetime) -> Asked:
    scope = guards.scope(request.user, at)
    places = {each.duties_site_id for each in theirs}
    able = {one.id: one for place in places for one in who_may_answer(scope, place, at.date())}
    deputies = sorted(able.values(), key=lambda one: one.name.casefold())
    whose = Field(
        "person", _("Who is away"), "select", options=_named(theirs), values=(str(request.user.uid),)
    )
    fields = (
        Field("from_on", _("First day away"), "date", values=(at.date().isoformat(),)),
        Field("until_on", _("Last day away"), "date"),
        Field(
            "deputy",
            _("Who stands in"),
            "select",
            _("They get the notices, and what is due counts as theirs until the last day."),
            options=(("", _("choose a person")), *_named(deputies)),
        ),
        Field("note", _("Remark"), required=False),
    )
    return Asked(
        _("Leave"),
        _("Record the leave"),
        reverse("due"),
        _("Due"),
        (whose, *fields) if len(theirs) > 1 else fields,
        lead=_("While someone is away, what is due falls to their deputy. Nobody's checks are forgotten."),
    )


def _named(people: list[PersonRow]) -> tuple[Option, ...]:
    return tuple((str(each.uid), each.name) for each in people)


@require_POST
def cancel(request: HttpRequest, leave: uuid.UUID) -> HttpResponse:
    """Cancel a leave: duties are the person's own again."""
    away.cancel_leave(leave=leave, actor=request.user, at=now())
    messages.success(request, _("The leave is cancelled."))
    return redirect("leave")
