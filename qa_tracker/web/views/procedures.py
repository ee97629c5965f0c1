"""Procedures: the published editions with steps, measurands and limits, and their adoption."""

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
from qa_tracker.records.queries.edition_drafts import drafts_of, editions_of, find_draft
from qa_tracker.records.queries.library import EditionRow
from qa_tracker.services import cautions, finding, guards, library
from qa_tracker.web.forms.adopting import adopting, adopting_site
from qa_tracker.web.forms.asking import Asked, Done, attempt
from qa_tracker.web.forms.fields import keep
from qa_tracker.web.forms.typed import Typed
from qa_tracker.web.presenters.library import (
    SIGNINGS,
    adoptions_in_words,
    edition_lines,
    measurands_in_words,
    minutes_words,
    recurrence_of,
    who_words,
)
from qa_tracker.web.presenters.procedure_differences import shown_differences


def index(request: HttpRequest) -> HttpResponse:
    """Every published edition, adopted or not."""
    held = {site.id: site for site in sites.list_sites(guards.scope(request.user, now()))}
    lines = edition_lines(rows.list_editions(), rows.list_adoptions(), held)
    context = {
        "adopted": [each for each in lines if each.adopted],
        "others": [each for each in lines if not each.adopted],
        "may_write": guards.may(request.user, "procedure.adopt", None, now()),
        "drafts": drafts_of(request.user.pk),
    }
    return render(request, "procedures.html", context)


def show(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """One edition, whole."""
    at = now()
    row = _edition(uid)
    return _page(request, row, _form(request, row, at), at)


def _edition(uid: uuid.UUID) -> EditionRow:
    found = rows.find_edition(uid)
    if found is None:
        raise NotFound("edition.unknown")
    return found


def _form(request: HttpRequest, row: EditionRow, at: dt.datetime) -> Asked | None:
    back = reverse("edition", args=[row.uid])
    asked = adopting(request, "procedure.adopt", back, at)
    return asked and replace(asked, action=reverse("adopt-edition", args=[row.uid]))


def _page(request: HttpRequest, row: EditionRow, asked: Asked | None, at: dt.datetime) -> HttpResponse:
    held = {site.id: site for site in sites.list_sites(guards.scope(request.user, at))}
    own = [each for each in rows.list_adoptions() if each.edition_id == row.id]
    context = {
        "row": row,
        "measurands": measurands_in_words(row.spec, rows.adopted_criteria(request.user.duties_site_id)),
        "minutes": minutes_words(row.spec),
        "who": who_words(row.spec),
        "recurrence": recurrence_of(row.spec),
        "signing": SIGNINGS[row.spec.signing],
        "cautions": cautions.texts(row.spec.cautions),
        "adoptions": adoptions_in_words(own, held),
        "adopting": asked,
        "may_write": guards.may(request.user, "procedure.adopt", None, at),
        "draft": find_draft(row.procedure_uid, request.user.pk),
        "others": [each for each in editions_of(row.procedure_uid) if each.uid != row.uid],
    }
    return render(request, "edition.html", context, status=422 if asked and asked.refused else 200)


def compare(request: HttpRequest, old: uuid.UUID, new: uuid.UUID) -> HttpResponse:
    """Two editions of a procedure side by side."""
    before, after = _edition(old), _edition(new)
    if before.procedure_id != after.procedure_id:
        raise NotFound("edition.unknown")
    laid = shown_differences(before.spec, after.spec)
    return render(request, "editions_compare.html", {"old": before, "new": after, "laid": laid})


def adopt(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Adopt the edition, for the group or one site, with a remark."""
    at = now()
    row = _edition(uid)
    guards.check_may_somewhere(request.user, "procedure.adopt", at)

    def act(typed: Typed) -> Done:
        library.adopt_edition(
            edition=finding.edition(uid),
            site=adopting_site(request, typed, at),
            remark=typed.words("remark"),
            actor=request.user,
            at=at,
        )
        return Done(_("%(title)s is adopted under your name.") % {"title": row.title}, back)

    back = reverse("edition", args=[uid])
    answer = attempt(request, act) if request.method == "POST" else None
    if isinstance(answer, HttpResponse):
        return answer
    asked = _form(request, row, at)
    if asked and answer:
        asked = replace(asked, fields=keep(asked.fields, request.POST), refused=answer)
    return _page(request, row, asked, at)
