"""Making a plan with its next due days in sight, and ending one."""

from __future__ import annotations

import datetime as dt
import uuid
from dataclasses import replace

from django.http import HttpRequest, HttpResponse, QueryDict
from django.shortcuts import render
from django.urls import reverse
from django.utils.timezone import now
from django.utils.translation import gettext as _

from qa_tracker.core.errors import DomainError, NotFound
from qa_tracker.core.schedule import Due, local_day
from qa_tracker.records.queries import library
from qa_tracker.records.queries import plans as rows
from qa_tracker.records.queries.devices import DeviceRow
from qa_tracker.records.queries.library import EditionRow
from qa_tracker.services import finding, guards, plans, wording
from qa_tracker.web import refused, sight
from qa_tracker.web.forms.asking import Asked, Done, ask, attempt, show_again
from qa_tracker.web.forms.fields import Field, keep
from qa_tracker.web.forms.plans import plan_fields, recurrence
from qa_tracker.web.forms.registering import reason
from qa_tracker.web.forms.typed import Typed
from qa_tracker.web.presenters.plans import fits, next_days, site_days, who_may_answer


def make(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Choose an adopted procedure, then how often and who; the next six due days are shown before it is made."""
    at = now()
    row = sight.device_to(request, uid, "plan.make", at)
    known = [each for each in library.adopted_procedures(row.site_id) if fits(each, row)]
    chosen = next((each for each in known if each.code == request.GET.get("procedure", "")), None)
    if chosen is None:
        planned = {each.procedure_id for each in rows.plans_of(row.id) if each.ended_at is None}
        context = {"device": row, "editions": known, "planned": planned}
        return render(request, "plan_choose.html", context)
    return _plan(request, row, chosen, at)


def _plan(request: HttpRequest, row: DeviceRow, edition: EditionRow, at: dt.datetime) -> HttpResponse:
    asked = _asked(request, row, edition, at)
    if request.method != "POST":
        return _shown(request, asked, row, QueryDict(_start(asked)))
    if "preview" in request.POST:
        kept = replace(asked, fields=keep(asked.fields, request.POST))
        return _shown(request, kept, row, request.POST)

    def act(typed: Typed) -> Done:
        plans.make(
            device=row.uid,
            procedure=edition.code,
            recurrence=recurrence(typed),
            responsible=finding.person(typed.choice("responsible")),
            actor=request.user,
            at=at,
        )
        return Done(_("%(procedure)s is planned.") % {"procedure": edition.title}, asked.back)

    answer = attempt(request, act)
    return answer if isinstance(answer, HttpResponse) else show_again(request, asked, answer, "plan.html")


def _asked(request: HttpRequest, row: DeviceRow, edition: EditionRow, at: dt.datetime) -> Asked:
    scope = guards.scope(request.user, at)
    people = who_may_answer(scope, row.site_id or request.user.duties_site_id, at.date())
    today = local_day(at, sight.zone_of_site(row.site_id))
    return Asked(
        _("Plan %(procedure)s") % {"procedure": edition.title},
        _("Make the plan"),
        reverse("device", args=[row.uid]),
        row.label,
        plan_fields(edition, people, today, str(request.user.uid)),
        lead=row.label,
        notes=(edition.spec.when,),
        preview=_("Show the due days"),
        action=f"{request.path}?procedure={edition.code}",
    )


def _start(asked: Asked) -> str:
    data = QueryDict(mutable=True)
    for field in asked.fields:
        data.setlist(field.name, list(field.values))
    return data.urlencode()


def _shown(request: HttpRequest, asked: Asked, row: DeviceRow, given: QueryDict) -> HttpResponse:
    """The form with the next due days, or with what keeps them from being known."""
    try:
        made = recurrence(Typed(given))
        days: tuple[Due, ...] = next_days(made, site_days(row.site_id))
    except DomainError as error:
        return render(request, "plan.html", {"asked": replace(asked, refused=refused.of(error))}, status=422)
    words = wording.recurrence_words(made.rule, made.basis)
    return render(request, "plan.html", {"asked": asked, "days": days, "recurrence": words})


def end(request: HttpRequest, uid: uuid.UUID, plan: uuid.UUID) -> HttpResponse:
    """End a plan; its awaited check is excused with the reason."""
    at = now()
    row = sight.device_to(request, uid, "plan.make", at)
    known = [each for each in rows.plans_of(row.id) if each.uid == plan and each.ended_at is None]
    if not known:
        raise NotFound("plan.unknown")
    asked = Asked(
        _("End the plan %(procedure)s") % {"procedure": known[0].procedure},
        _("End it"),
        reverse("device", args=[uid]),
        row.label,
        (Field("reason", _("Why"), "area", focus=True),),
        lead=_("What was done stays on record; the check that is awaited is excused."),
    )

    def act(typed: Typed) -> Done:
        plans.end(plan=plan, reason=reason(typed), actor=request.user, at=at)
        return Done(_("The plan is ended."), asked.back)

    return ask(request, asked, act)
