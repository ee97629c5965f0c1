"""Compliance: what became of the checks that fell due, by site, procedure or device, and the checks behind it."""

from __future__ import annotations

import datetime as dt
import uuid
from dataclasses import dataclass
from typing import Any

from django.http import HttpRequest, HttpResponse
from django.shortcuts import render
from django.utils.timezone import now
from django.views.decorators.http import require_GET

from qa_tracker.core.compliance import FIGURES
from qa_tracker.core.schedule import local_day
from qa_tracker.records.queries import compliance as queries
from qa_tracker.records.queries import devices, library, sites
from qa_tracker.records.queries.compliance import GROUPS, Extent, Group
from qa_tracker.records.queries.devices import DeviceRow
from qa_tracker.records.queries.scope import Scope
from qa_tracker.services import guards
from qa_tracker.web import asof
from qa_tracker.web.presenters import compliance as shown

MOST_LINES = 500
PAGE = 200
LONGEST_DAYS = 3700
"""Ten years at most are asked for at once."""


@dataclass(frozen=True)
class Asked:
    """What the page was asked for, read; ``wanted`` as it was typed."""

    scope: Scope
    extent: Extent
    by: str
    zone: str
    known: asof.Known
    at: dt.datetime
    wanted: dict[str, str]
    device: DeviceRow | None
    choices: dict[str, Any]

    @property
    def moment(self) -> dt.datetime:
        """The moment the figures are true at."""
        return self.known.moment or self.at

    @property
    def groups(self) -> list[Group]:
        """The figures."""
        return queries.groups(self.scope, self.extent, self.by, self.at, self.known.moment)


def _read(request: HttpRequest) -> Asked:
    at = now()
    scope = guards.scope(request.user, at)
    known_sites = sorted(sites.list_sites(scope), key=lambda site: site.code)
    names = ("site", "procedure", "device", "from", "until", "by", "as_of")
    wanted = {name: request.GET.get(name, "").strip() for name in names}
    site = next((each for each in known_sites if each.code == wanted["site"]), None)
    procedures = {each.code: (each.procedure_id, each.title) for each in library.list_editions()}
    device = _device(scope, wanted["device"])
    home = site or (known_sites[0] if known_sites else None)
    zone = home.time_zone if home else "UTC"
    today = local_day(at, zone)
    from_on, until_on = _day(wanted["from"], today - dt.timedelta(days=365)), _day(wanted["until"], today)
    until_on = min(until_on, from_on + dt.timedelta(days=LONGEST_DAYS)) if from_on <= until_on else from_on
    extent = Extent(
        from_on,
        until_on,
        # What is named and not there finds nothing.
        site.id if site else (0 if wanted["site"] else None),
        procedures.get(wanted["procedure"], (0,))[0] if wanted["procedure"] else None,
        device.id if device else (0 if wanted["device"] else None),
    )
    by = wanted["by"] if wanted["by"] in GROUPS else ("procedure" if device else "site")
    choices = {"sites": known_sites, "procedures": sorted((t, c) for c, (_id, t) in procedures.items())}
    return Asked(scope, extent, by, zone, asof.known(request, zone, at), at, wanted, device, choices)


def _device(scope: Scope, text: str) -> DeviceRow | None:
    try:
        return devices.find_device(scope, uuid.UUID(text))
    except ValueError:
        return None


def _day(text: str, otherwise: dt.date) -> dt.date:
    try:
        day = dt.date.fromisoformat(text)
    except ValueError:
        return otherwise
    return day if 1970 <= day.year <= 2200 else otherwise


@require_GET
def show(request: HttpRequest) -> HttpResponse:
    """The table: counts with percentages, as known at a moment."""
    asked = _read(request)
    groups = asked.groups
    kept = request.GET.copy()
    for name in ("figure", "key", "after"):
        kept.pop(name, None)
    context = {
        "asked": asked,
        "lines": shown.lines(groups[:MOST_LINES]),
        "left_off": len(groups) - MOST_LINES,
        "total": shown.line(None, "", shown.total(groups)),
        "figures": [(name, shown.figure_word(name)) for name in FIGURES],
        "groupings": shown.GROUP_WORDS.items(),
        "reasons": shown.reasons(queries.excuses(asked.scope, asked.extent, asked.known.moment)),
        "query": kept.urlencode(),
    }
    return render(request, "compliance.html", context)


@require_GET
def behind(request: HttpRequest) -> HttpResponse:
    """The checks behind one figure, as they stand now."""
    asked = _read(request)
    figure = request.GET.get("figure", "")
    figure = figure if figure in FIGURES else "late"
    after = request.GET.get("after", "")
    rows = queries.behind(
        asked.scope,
        asked.extent,
        figure,
        asked.at,
        after=int(after) if after.isascii() and after.isdigit() and len(after) < 19 else 0,
        most=PAGE + 1,
    )
    kept = request.GET.copy()
    kept.pop("after", None)
    context = {
        "asked": asked,
        "figure": shown.figure_word(figure),
        "rows": rows[:PAGE],
        "after": rows[PAGE - 1].id if len(rows) > PAGE else "",
        "query": kept.urlencode(),
    }
    return render(request, "compliance_list.html", context)


@require_GET
def download(request: HttpRequest) -> HttpResponse:
    """The table as a file."""
    asked = _read(request)
    period = (asked.extent.from_on, asked.extent.until_on)
    text = shown.as_csv(asked.groups, asked.by, period, asked.moment)
    name = f"compliance-{asked.by}-{period[0].isoformat()}-{period[1].isoformat()}.csv"
    headers = {"Content-Disposition": f'attachment; filename="{name}"'}
    return HttpResponse(text, content_type="text/csv; charset=utf-8", headers=headers)
