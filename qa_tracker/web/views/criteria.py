"""Criteria: the published sets, their limits in words with source and standing, and their adoption."""

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
from qa_tracker.records.queries import library as rows
from qa_tracker.records.queries import sites
from qa_tracker.records.queries.library import CriteriaSetRow
from qa_tracker.services import cautions, finding, guards, library
from qa_tracker.web.forms.adopting import adopting, adopting_site
from qa_tracker.web.forms.asking import Asked, Done, attempt
from qa_tracker.web.forms.fields import keep
from qa_tracker.web.forms.typed import Typed
from qa_tracker.web.presenters.library import adoptions_in_words, criterion_in_words, set_lines


def index(request: HttpRequest) -> HttpResponse:
    """Every published set, adopted or not."""
    held = {site.id: site for site in sites.list_sites(guards.scope(request.user, now()))}
    lines = set_lines(rows.list_criteria_sets(), rows.list_adoptions(), held)
    context = {
        "adopted": [each for each in lines if each.adopted],
        "others": [each for each in lines if not each.adopted],
    }
    return render(request, "criteria.html", context)


def show(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """One set with every limit in words."""
    at = now()
    row = _set(uid)
    return _page(request, row, _form(request, row, at), at)


def _set(uid: uuid.UUID) -> CriteriaSetRow:
    found = next((each for each in rows.list_criteria_sets() if each.uid == uid), None)
    if found is None:
        raise NotFound("criteria_set.unknown")
    return found


def _form(request: HttpRequest, row: CriteriaSetRow, at: dt.datetime) -> Asked | None:
    back = reverse("criteria-set", args=[row.uid])
    asked = adopting(request, "criteria.adopt", back, at)
    return asked and replace(asked, action=reverse("adopt-criteria", args=[row.uid]))


def _page(request: HttpRequest, row: CriteriaSetRow, asked: Asked | None, at: dt.datetime) -> HttpResponse:
    held = {site.id: site for site in sites.list_sites(guards.scope(request.user, at))}
    own = [each for each in rows.list_adoptions() if each.criteria_set_id == row.id]
    shown = [criterion_in_words(each) for each in row.criteria]
    context = {
        "row": row,
        "criteria": shown,
        "adoptions": adoptions_in_words(own, held),
        "from_memory": any(each.from_memory for each in shown),
        "adopting": asked,
        "caution": cautions.texts(["memory-limits"]),
    }
    return render(request, "criteria_set.html", context, status=422 if asked and asked.refused else 200)


def adopt(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Adopt the set, for the group or one site, with a remark."""
    at = now()
    row = _set(uid)
    guards.check_may_somewhere(request.user, "criteria.adopt", at)

    def act(typed: Typed) -> Done:
        library.adopt_criteria(
            criteria_set=finding.criteria_set(uid),
            site=adopting_site(request, typed, at),
            remark=typed.words("remark"),
            actor=request.user,
            at=at,
        )
        return Done(_("%(title)s is adopted under your name.") % {"title": row.title}, back)

    back = reverse("criteria-set", args=[uid])
    answer = attempt(request, act) if request.method == "POST" else None
    if isinstance(answer, HttpResponse):
        return answer
    asked = _form(request, row, at)
    if asked and answer:
        asked = replace(asked, fields=keep(asked.fields, request.POST), refused=answer)
    return _page(request, row, asked, at)
