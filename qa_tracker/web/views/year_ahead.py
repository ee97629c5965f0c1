"""A year ahead: the work of each week by person, and moving due days to even it out."""

from __future__ import annotations

import datetime as dt
import uuid

from django.contrib import messages
from django.http import HttpRequest, HttpResponse
from django.shortcuts import redirect, render
from django.utils.timezone import now
from django.utils.translation import ngettext

from qa_tracker.core.errors import DomainError, Forbidden, Invalid, NotFound
from qa_tracker.core.schedule import local_day
from qa_tracker.records.queries import people, sites
from qa_tracker.services import guards, year_ahead
from qa_tracker.web import refused as refusals
from qa_tracker.web.forms.typed import LONGEST_REASON, Typed
from qa_tracker.web.presenters.year_ahead import offers, shown
from qa_tracker.web.refused import Refused


def show(request: HttpRequest) -> HttpResponse:
    """The weeks with their hours and what could be moved; sending it moves what was chosen."""
    if request.method != "POST":
        return _page(request)
    try:
        count = _spread(request)
    except (NotFound, Forbidden):
        raise
    except DomainError as error:
        return _page(request, refusals.of(error), 422)
    said = ngettext("%(n)d due day is moved.", "%(n)d due days are moved.", count) % {"n": count}
    messages.success(request, said)
    return redirect("year-ahead")


def _spread(request: HttpRequest) -> int:
    typed = Typed(request.POST)
    moves = [_move(text) for text in typed.several("move")]
    reason = typed.text("reason", LONGEST_REASON)
    year_ahead.spread(moves=moves, reason=reason, actor=request.user, at=now())
    return len(moves)


def _move(text: str) -> tuple[uuid.UUID, dt.date]:
    check, _line, day = text.partition("_")
    try:
        return uuid.UUID(check), dt.date.fromisoformat(day)
    except ValueError as error:
        raise Invalid("due_day.none_chosen", field="moves") from error


def _page(request: HttpRequest, refused: Refused | None = None, status: int = 200) -> HttpResponse:
    at = now()
    scope = guards.scope(request.user, at)
    known = sorted(sites.list_sites(scope), key=lambda site: site.code)
    asked = request.GET.get("site", "")
    site = next((each for each in known if each.code == asked), None)
    home = site or (known[0] if known else None)
    zone = home.time_zone if home else "UTC"
    year = year_ahead.look(scope, local_day(at, zone), site.id if site else None)
    names = people.names({person for _week, person in year.loads})
    may_move = guards.may_somewhere(request.user, "check.move_due", at)
    context = {
        "year": year,
        "shown": shown(year, names),
        "offers": offers(year, names) if may_move else (),
        "sites": known,
        "site": asked,
        "refused": refused,
        "chosen": request.POST.getlist("move"),
        "reason": request.POST.get("reason", ""),
        "at": at,
        "zone": zone,
    }
    return render(request, "year_ahead.html", context, status=status)
