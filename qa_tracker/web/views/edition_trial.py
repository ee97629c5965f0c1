"""Trying an edition on sample values: the fields as they would be asked, and what its limits would say."""

from __future__ import annotations

import datetime as dt
import uuid
from dataclasses import replace
from typing import Any

from django.http import HttpRequest, HttpResponse, JsonResponse
from django.shortcuts import render
from django.template.loader import render_to_string
from django.utils.timezone import now
from django.utils.translation import gettext as _

from qa_tracker.core.library_specs import ProcedureSpec
from qa_tracker.services import edition_drafts as drafts
from qa_tracker.services import edition_trial, live
from qa_tracker.web import refused as refusals
from qa_tracker.web.forms import entry as inputs
from qa_tracker.web.forms.edition_trial import device_fields, invented
from qa_tracker.web.presenters.edition_editor import to_mend
from qa_tracker.web.presenters.edition_trial import trial_sections
from qa_tracker.web.presenters.entry import outcome, worked_out
from qa_tracker.web.refused import Refused


def trial(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Try the draft; nothing typed here is kept."""
    at = now()
    kept = drafts.get(procedure=uid, actor=request.user, at=at)
    found = drafts.looked_through(kept.writing)
    context: dict[str, Any] = {"kept": kept, "to_mend": to_mend(found.refusals, kept)}
    if found.refusals or found.spec is None:
        return render(request, "edition_trial.html", context)
    told = _tried(request, found.spec, at)
    if request.headers.get("Accept") == "application/json":
        return JsonResponse({"parts": told["parts"]})
    return render(request, "edition_trial.html", context | told)


def _tried(request: HttpRequest, spec: ProcedureSpec, at: dt.datetime) -> dict[str, Any]:
    typed = inputs.typed_inputs(request.POST)
    device = replace(invented(typed, spec), condition=_("Example condition"))
    laid = edition_trial.lay_out(spec, device, request.user.duties_site_id, at)
    judged, errors = live.judge_what_can_be(laid, inputs.entries_of(laid.items, typed))
    beside = Refused(tuple(each for error in errors for each in refusals.of(error).refusals))
    wrong = Refused(tuple(each for error in laid.wrong for each in refusals.of(error).refusals))
    known = {one.item.key: one for one in judged.items}
    outcomes = [outcome(item, typed, known.get(item.key), beside) for item in laid.items]
    worked = worked_out(judged)
    parts = {f"out-{one.key}": render_to_string("_outcome.html", {"outcome": one}) for one in outcomes}
    return {
        "fields": device_fields(device, spec, laid.needs),
        "sections": trial_sections(laid, typed, judged, beside, wrong),
        "wrong": wrong,
        "worked": worked,
        "works_out": bool(laid.derived),
        "parts": parts | {"out-worked-out": render_to_string("_worked_out.html", {"worked": worked})},
    }
