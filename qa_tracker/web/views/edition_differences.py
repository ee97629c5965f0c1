"""Two editions of a set, or of two sets, side by side."""

from __future__ import annotations

import uuid

from django.http import HttpRequest, HttpResponse
from django.shortcuts import render
from django.views.decorators.http import require_GET

from qa_tracker.core.errors import NotFound
from qa_tracker.records.queries import library as rows
from qa_tracker.records.queries.library import CriteriaSetRow
from qa_tracker.web.presenters.edition_differences import side_by_side, spec_of


@require_GET
def show(request: HttpRequest) -> HttpResponse:
    """The form that chooses two editions, and what differs between those chosen."""
    sets = rows.list_criteria_sets()
    old, new = (_chosen(request, name, sets) for name in ("old", "new"))
    context = {
        "sets": sets,
        "old": old,
        "new": new,
        "laid": side_by_side(spec_of(old), spec_of(new), rows.list_editions()) if old and new else None,
    }
    return render(request, "criteria_differences.html", context)


def _chosen(request: HttpRequest, name: str, sets: list[CriteriaSetRow]) -> CriteriaSetRow | None:
    """The edition named in the address; none where none is, and one that is not there is refused."""
    text = request.GET.get(name, "")
    if not text:
        return None
    try:
        uid = uuid.UUID(text)
    except ValueError as error:
        raise NotFound("criteria_set.unknown") from error
    found = next((each for each in sets if each.uid == uid), None)
    if found is None:
        raise NotFound("criteria_set.unknown")
    return found
