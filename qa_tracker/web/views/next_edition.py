"""Writing the next edition of a set over the one before, looking at what differs, and publishing it."""

from __future__ import annotations

import uuid
from collections.abc import Mapping
from typing import Any

from django.contrib import messages
from django.http import HttpRequest, HttpResponse
from django.shortcuts import redirect, render
from django.urls import reverse
from django.utils.timezone import now
from django.utils.translation import gettext as _

from qa_tracker.core.errors import DomainError, Forbidden, NotFound
from qa_tracker.core.library_specs import CriteriaSetSpec
from qa_tracker.core.next_edition import typed_places
from qa_tracker.records.queries.library import CriteriaSetRow, set_document
from qa_tracker.services import finding, guards, next_edition
from qa_tracker.web.forms.next_edition import (
    criterion_fields,
    head_fields,
    refused_at_fields,
    shown_places,
    typed_places_of,
)
from qa_tracker.web.presenters.edition_differences import side_by_side, spec_of
from qa_tracker.web.refused import Refused
from qa_tracker.web.views.criteria import VERB, criteria_set


def write(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """The form with the present edition's numbers; what differs, where that is asked for; or publish it."""
    at = now()
    guards.check_may(request.user, VERB, None, at)
    row = criteria_set(uid)
    known = typed_places(set_document(row.id))
    codes = [each.code for each in row.criteria]
    if request.method != "POST":
        return _page(request, row, known, known | {"edition": ""})
    before, shown = finding.criteria_set(uid), shown_places(request, known, codes)
    try:
        typed = typed_places_of(request, known, codes)
        if "preview" in request.POST:
            return _page(request, row, known, shown, preview=next_edition.read_next(before, typed))
        made = next_edition.publish_next(before=before, typed=typed, actor=request.user, at=at)
    except (NotFound, Forbidden):
        raise
    except DomainError as error:
        return _page(request, row, known, shown, refused=refused_at_fields(error, _anchors(known)))
    messages.success(
        request,
        _("Edition %(edition)s is published. It has no force until it is adopted.")
        % {"edition": made.edition},
    )
    return redirect(f"{reverse('criteria-differences')}?old={row.uid}&new={made.uid}")


def _anchors(known: Mapping[str, str]) -> set[str]:
    """The places on the page beside which a refusal is shown: each field, and each criterion."""
    return {*known, *(f"{name.partition('.')[0]}.criterion" for name in known if "." in name)}


def _page(
    request: HttpRequest,
    row: CriteriaSetRow,
    known: Mapping[str, str],
    places: Mapping[str, str],
    *,
    refused: Refused | None = None,
    preview: CriteriaSetSpec | None = None,
) -> HttpResponse:
    refused = refused or Refused()
    context: dict[str, Any] = {
        "row": row,
        "head": head_fields(places),
        "criteria": criterion_fields(row, known, places, refused),
        "refused": refused,
        "laid": side_by_side(spec_of(row), preview) if preview else None,
    }
    return render(request, "criteria_next.html", context, status=422 if refused else 200)
