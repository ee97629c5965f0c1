"""Criteria: the published sets and their editions, every limit in words, adopting them and ending that."""

from __future__ import annotations

import datetime as dt
import uuid
from collections.abc import Iterable
from dataclasses import replace

from django.http import HttpRequest, HttpResponse
from django.shortcuts import render
from django.urls import reverse
from django.utils.timezone import now
from django.utils.translation import gettext as _

from qa_tracker.core.errors import NotFound
from qa_tracker.records.queries import library as rows
from qa_tracker.records.queries import sites
from qa_tracker.records.queries.library import AdoptionRow, CriteriaSetRow
from qa_tracker.services import cautions, finding, guards, library
from qa_tracker.web.forms.adopting import adopting, adopting_site, ending
from qa_tracker.web.forms.asking import Asked, Done, ask, attempt
from qa_tracker.web.forms.fields import keep
from qa_tracker.web.forms.typed import Typed
from qa_tracker.web.presenters.criteria import criterion_in_words, edition_name, set_groups, standing_counts
from qa_tracker.web.presenters.library import adoptions_in_words

VERB = "criteria.adopt"


def index(request: HttpRequest) -> HttpResponse:
    """Every published set with its editions, those in force first."""
    held = {site.id: site for site in sites.list_sites(guards.scope(request.user, now()))}
    groups = set_groups(rows.list_criteria_sets(), rows.list_adoptions(), held)
    context = {
        "adopted": [each for each in groups if each.in_force],
        "others": [each for each in groups if not each.in_force],
    }
    return render(request, "criteria.html", context)


def show(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """One edition with every limit in words."""
    at = now()
    row = criteria_set(uid)
    return _page(request, row, _form(request, row, at), at)


def criteria_set(uid: uuid.UUID) -> CriteriaSetRow:
    """A published edition, which everyone sees."""
    found = rows.find_criteria_set(uid)
    if found is None:
        raise NotFound("criteria_set.unknown")
    return found


def _form(request: HttpRequest, row: CriteriaSetRow, at: dt.datetime) -> Asked | None:
    back = reverse("criteria-set", args=[row.uid])
    asked = adopting(request, VERB, back, at)
    return asked and replace(asked, action=reverse("adopt-criteria", args=[row.uid]))


def _page(request: HttpRequest, row: CriteriaSetRow, asked: Asked | None, at: dt.datetime) -> HttpResponse:
    held = {site.id: site for site in sites.list_sites(guards.scope(request.user, at))}
    own = [each for each in rows.list_adoptions() if each.criteria_set_id == row.id]
    shown = [criterion_in_words(each) for each in row.criteria]
    editions = [each for each in rows.list_criteria_sets() if each.code == row.code]
    context = {
        "row": row,
        "criteria": shown,
        "adoptions": adoptions_in_words(own, held),
        "in_force": any(each.ended_at is None for each in own),
        "may_end": _may_end(request, own, at),
        "from_memory": any(each.from_memory for each in shown),
        "standing": standing_counts(row),
        "others": [each for each in editions if each.id != row.id],
        "before": _before(row, editions),
        "may_publish": guards.may(request.user, VERB, None, at),
        "adopting": asked,
        "caution": cautions.texts(["memory-limits"]),
    }
    return render(request, "criteria_set.html", context, status=422 if asked and asked.refused else 200)


def _may_end(request: HttpRequest, own: Iterable[AdoptionRow], at: dt.datetime) -> set[uuid.UUID]:
    """The adoptions in force that the person may end."""
    return {
        each.uid for each in own if each.ended_at is None and guards.may(request.user, VERB, each.site_id, at)
    }


def _before(row: CriteriaSetRow, editions: list[CriteriaSetRow]) -> CriteriaSetRow | None:
    """The edition published before this one."""
    place = next(number for number, each in enumerate(editions) if each.id == row.id)
    return editions[place + 1] if place + 1 < len(editions) else None


def adopt(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Adopt the set, for the group or one site, with a remark."""
    at = now()
    row = criteria_set(uid)
    guards.check_may_somewhere(request.user, VERB, at)

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


def end(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """End an adoption that is in force, with the reason."""
    at = now()
    guards.check_may_somewhere(request.user, VERB, at)
    adoption = library.criteria_adoption(uid, request.user, at)
    row = criteria_set(adoption.criteria_set.uid)
    guards.check_may(request.user, VERB, adoption.site_id, at)
    back = reverse("criteria-set", args=[row.uid])

    def act(typed: Typed) -> Done:
        library.end_criteria(adoption=uid, reason=typed.words("reason"), actor=request.user, at=at)
        return Done(_("%(title)s is no longer adopted there.") % {"title": row.title}, back)

    place = adoption.site.name if adoption.site else _("the whole group")
    return ask(request, ending(row.title, edition_name(row), place, back, adoption.site is not None), act)
