"""What an edition would have said of the readings there are, over a scope and a time that the person chooses."""

from __future__ import annotations

import datetime as dt
import uuid
from collections.abc import Sequence

from django.http import HttpRequest, HttpResponse
from django.shortcuts import render
from django.utils.timezone import now
from django.views.decorators.http import require_GET

from qa_tracker.core.errors import DomainError, Invalid, NotFound
from qa_tracker.core.schedule_days import starts_at
from qa_tracker.records.queries import devices, sites
from qa_tracker.records.queries.scope import Scope
from qa_tracker.records.queries.sites import SiteRow
from qa_tracker.records.queries.what_if import Extent
from qa_tracker.services import guards
from qa_tracker.services.what_if import WhatIf, would_have_said
from qa_tracker.web import refused as refusals
from qa_tracker.web.forms.typed import Typed
from qa_tracker.web.presenters.what_if import shown_answer
from qa_tracker.web.refused import Refused
from qa_tracker.web.views.criteria import criteria_set

ASKED = ("site", "serial", "since", "until")
YEAR = dt.timedelta(days=365)
ONE_DAY = dt.timedelta(days=1)


@require_GET
def show(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """The form that asks, and the answer; nothing is changed by either."""
    at = now()
    row = criteria_set(uid)
    scope = guards.scope(request.user, at)
    held = sites.list_sites(scope)
    asked = "asked" in request.GET
    answer: WhatIf | None = None
    refused = Refused()
    if asked:
        try:
            answer = would_have_said(row, _extent(request, scope, held), scope, page=_page(request))
        except NotFound:
            raise
        except DomainError as error:
            refused = refusals.of(error)
    wanted = {name: request.GET.get(name, "") for name in ASKED}
    if not asked:
        wanted["since"] = (at.date() - YEAR).isoformat()
    context = {
        "row": row,
        "sites": held,
        "wanted": wanted,
        "refused": refused,
        "answer": shown_answer(answer) if answer else None,
        "query": _query(request),
    }
    return render(request, "criteria_what_if.html", context, status=422 if refused else 200)


def _extent(request: HttpRequest, scope: Scope, held: Sequence[SiteRow]) -> Extent:
    """What is asked about; days are those of the chosen site, or of the only one in sight."""
    typed = Typed(request.GET)
    site = _site(typed.text("site"), held)
    chosen = [site] if site else held
    zone = chosen[0].time_zone if len(chosen) == 1 else "UTC"
    since, until = typed.day_or_none("since"), typed.day_or_none("until")
    return Extent(
        site.id if site else None,
        _devices(typed.text("serial"), scope),
        starts_at(since, zone) if since else None,
        starts_at(until + ONE_DAY, zone) if until else None,
    )


def _site(code: str, held: Sequence[SiteRow]) -> SiteRow | None:
    if not code:
        return None
    found = next((each for each in held if each.code == code), None)
    if found is None:
        raise NotFound("site.unknown")
    return found


def _devices(serial: str, scope: Scope) -> frozenset[int] | None:
    if not serial:
        return None
    found = devices.by_serial(scope, serial)
    if not found:
        raise Invalid("what_if.device_unknown", field="serial", serial=serial)
    return frozenset(each.id for each in found)


def _page(request: HttpRequest) -> int:
    text = request.GET.get("page", "1")
    return int(text) if text.isascii() and text.isdigit() and len(text) < 7 else 1


def _query(request: HttpRequest) -> str:
    """What was asked, for the addresses of the other pages of the answer."""
    given = request.GET.copy()
    given.pop("page", None)
    return given.urlencode()
