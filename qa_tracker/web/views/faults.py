"""Faults: by grade and age, what was done about each, the look-back, and closing what proved to be none."""

from __future__ import annotations

import datetime as dt
import uuid
from dataclasses import replace

from django.http import HttpRequest, HttpResponse
from django.shortcuts import render
from django.urls import reverse
from django.utils.timezone import now
from django.utils.translation import gettext as _

from qa_tracker.core.errors import NotFound
from qa_tracker.records.queries import checks
from qa_tracker.records.queries import faults as rows
from qa_tracker.records.queries.faults import FaultRow
from qa_tracker.services import faults, guards, wording
from qa_tracker.services.faults import ACTION_KINDS, GRADES
from qa_tracker.web import sight
from qa_tracker.web.forms.asking import Act, Asked, Done, ask, attempt
from qa_tracker.web.forms.fields import Field, keep
from qa_tracker.web.forms.typed import Typed
from qa_tracker.web.presenters.faults import ACTION_WORDS, exposure, fault_lines


def index(request: HttpRequest) -> HttpResponse:
    """Open faults, suspension first and oldest first; those that were closed beneath."""
    at = now()
    known = rows.list_faults(guards.scope(request.user, at))
    grade = request.GET.get("grade", "")
    shown = [each for each in known if grade in ("", each.grade)]
    context = {
        "open": fault_lines([each for each in shown if each.state != "closed"], at),
        "closed": fault_lines([each for each in shown if each.state == "closed"][-50:][::-1], at),
        "grades": GRADES,
        "grade": grade,
    }
    return render(request, "faults.html", context)


def _fault(request: HttpRequest, uid: uuid.UUID, at: dt.datetime) -> FaultRow:
    found = rows.find_fault(guards.scope(request.user, at), uid)
    if found is None:
        raise NotFound("fault.unknown")
    return found


def show(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """One fault with its actions, and what the person may add."""
    at = now()
    return _page(request, _fault(request, uid, at), at)


def _page(
    request: HttpRequest, fault: FaultRow, at: dt.datetime, refused_form: Asked | None = None
) -> HttpResponse:
    """The fault's page; a form that was refused stands in it as it was typed, with status 422."""
    forms = {name: make(fault) for name, make in FORMS.items() if _may(request, fault, name, at)}
    if refused_form is not None:
        forms |= {name: refused_form for name, form in forms.items() if form.action == refused_form.action}
    seen = checks.checks_of_device(fault.device_id, until=fault.opened_at, most=60)
    context = {
        "fault": fault,
        "line": fault_lines([fault], at)[0],
        "actions": [(ACTION_WORDS.get(each.kind, each.kind), each) for each in rows.actions_of(fault.id)],
        "exposure": exposure(fault, seen) if fault.grade == "suspension" else None,
        "zone": sight.zone_of_site(fault.site_id),
        "forms": forms,
    }
    return render(request, "fault.html", context, status=422 if refused_form else 200)


VERBS = {"act": "fault.act", "look_back": "fault.close", "dismiss": "fault.close"}


def _may(request: HttpRequest, fault: FaultRow, name: str, at: dt.datetime) -> bool:
    open_for_it = {
        "act": fault.state != "closed",
        "look_back": fault.grade == "suspension",
        "dismiss": fault.grade == "remedial" and fault.state == "open",
    }[name]
    return open_for_it and guards.may(
        request.user, VERBS[name], sight.site_for(request, VERBS[name], fault.site_id), at
    )


def _action_form(fault: FaultRow) -> Asked:
    return Asked(
        _("Record what was done"),
        _("Record"),
        reverse("fault", args=[fault.uid]),
        "",
        (
            Field(
                "kind",
                _("What"),
                "select",
                options=tuple((each, ACTION_WORDS[each]) for each in ACTION_KINDS),
            ),
            Field("text", _("In words"), "area"),
            Field("job_number", _("Job number of the maker or another department"), required=False),
        ),
        action=reverse("fault-act", args=[fault.uid]),
    )


def _look_back_form(fault: FaultRow) -> Asked:
    return Asked(
        _("Look back"),
        _("Keep the statement"),
        reverse("fault", args=[fault.uid]),
        "",
        (
            Field(
                "look_back",
                _("Do patients need review?"),
                "area",
                _("Your statement, with any incident reference. No patient data."),
                values=(fault.look_back,) if fault.look_back else (),
            ),
        ),
        action=reverse("fault-look-back", args=[fault.uid]),
    )


def _dismiss_form(fault: FaultRow) -> Asked:
    return Asked(
        _("Dismiss"),
        _("Dismiss"),
        reverse("fault", args=[fault.uid]),
        "",
        (Field("remark", _("Why it proved to be none"), "area"),),
        action=reverse("fault-dismiss", args=[fault.uid]),
    )


FORMS = {"act": _action_form, "look_back": _look_back_form, "dismiss": _dismiss_form}


def _answer(request: HttpRequest, uid: uuid.UUID, name: str, at: dt.datetime, act: Act) -> HttpResponse:
    fault = _fault(request, uid, at)
    guards.check_may(request.user, VERBS[name], sight.site_for(request, VERBS[name], fault.site_id), at)
    answer = attempt(request, act)
    if isinstance(answer, HttpResponse):
        return answer
    asked = FORMS[name](fault)
    return _page(request, fault, at, replace(asked, fields=keep(asked.fields, request.POST), refused=answer))


def act(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Record an action."""
    at = now()

    def do(typed: Typed) -> Done:
        faults.act_on(
            fault=uid,
            kind=typed.text("kind"),
            text=typed.words("text"),
            job_number=typed.text("job_number", 60),
            actor=request.user,
            at=at,
        )
        return Done(_("It is recorded."), reverse("fault", args=[uid]))

    return _answer(request, uid, "act", at, do)


def look_back(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Keep the statement whether patients need review."""
    at = now()

    def do(typed: Typed) -> Done:
        faults.look_back(fault=uid, statement=typed.words("look_back"), actor=request.user, at=at)
        return Done(_("The statement is kept."), reverse("fault", args=[uid]))

    return _answer(request, uid, "look_back", at, do)


def dismiss(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Close a remedial fault that proved to be none."""
    at = now()

    def do(typed: Typed) -> Done:
        faults.dismiss(fault=uid, remark=typed.words("remark"), actor=request.user, at=at)
        return Done(_("The fault is dismissed."), reverse("fault", args=[uid]))

    return _answer(request, uid, "dismiss", at, do)


def open_fault(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Open a fault on a device by hand."""
    at = now()
    row = sight.device_to(request, uid, "fault.open", at)
    asked = Asked(
        _("Open a fault on %(device)s") % {"device": row.label},
        _("Open the fault"),
        reverse("device", args=[uid]),
        row.label,
        (
            Field("seen", _("What was seen"), "area", focus=True),
            Field(
                "grade",
                _("Grade"),
                "radio",
                _("At the suspension level the device should be quarantined as well."),
                tuple((each, wording.level_word(each)) for each in GRADES),
                values=("remedial",),
            ),
            Field("place", _("Where on it"), required=False),
        ),
    )

    def do(typed: Typed) -> Done:
        made = faults.open_fault(
            device=uid,
            grade=typed.text("grade"),
            seen=typed.words("seen"),
            place=typed.text("place", 60),
            actor=request.user,
            at=at,
        )
        return Done(_("The fault is open."), reverse("fault", args=[made.uid]))

    return ask(request, asked, do)
