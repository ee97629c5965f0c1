"""The register: which scanners and probes there are, where, and how they stand."""

from __future__ import annotations

import datetime as dt

from django.http import HttpRequest, HttpResponse
from django.shortcuts import render
from django.utils.timezone import now

from qa_tracker.core.workflow import DEVICE
from qa_tracker.records.queries import devices, sites, standings
from qa_tracker.records.queries.devices import DeviceRow
from qa_tracker.records.queries.scope import Scope
from qa_tracker.records.queries.sites import SiteRow
from qa_tracker.services import guards
from qa_tracker.web.asof import Known, known
from qa_tracker.web.presenters.register import register_sites

PAGE = 100
FILTERS = ("site", "kind", "state", "text")
KINDS = ("scanner", "probe")


def show(request: HttpRequest) -> HttpResponse:
    """Devices by site, scanners with their probes beneath; what no plan covers is named above them."""
    at = now()
    scope = guards.scope(request.user, at)
    held = sites.list_sites(scope)
    asked = known(request, held[0].time_zone if len(held) == 1 else "UTC", at)
    wanted = {name: request.GET.get(name, "").strip() for name in FILTERS}
    top, beneath, following = _page(scope, wanted, held, _after(request), asked)
    keys = [each.id for each in (*top, *beneath)]
    context = {
        "groups": register_sites(top, beneath, standings.standings_of(keys, asked.moment)),
        "wanted": wanted,
        "choices": held,
        "kinds": KINDS,
        "states": DEVICE.states,
        "unplanned": [] if asked.moment else standings.unplanned_devices(scope),
        "following": following,
        "filtered": any(wanted.values()),
        "asked": asked,
        "may_register": guards.may_somewhere(request.user, "device.register", at),
        "may_plan": guards.may_somewhere(request.user, "plan.make", at),
    }
    return render(request, "register.html", context)


def _after(request: HttpRequest) -> int:
    text = request.GET.get("after", "")
    return int(text) if text.isascii() and text.isdigit() and len(text) < 19 else 0


def _page(
    scope: Scope, wanted: dict[str, str], held: list[SiteRow], after: int, asked: Known
) -> tuple[list[DeviceRow], list[DeviceRow], int | None]:
    """The devices of one page, the probes beneath them, and the key the next page begins after."""
    columns = _columns(wanted, held)
    flat = bool(wanted["kind"] or wanted["state"] or wanted["text"])
    if not flat:
        columns["scanner_id"] = None
    found = devices.list_devices(
        scope, as_of=asked.moment, text=wanted["text"], after=after, most=PAGE + 1, **columns
    )
    top = found[:PAGE]
    following = top[-1].id if len(found) > PAGE else None
    scanners = [each.id for each in top if each.kind == "scanner"]
    beneath = [] if flat or not scanners else _beneath(scope, scanners, asked.moment)
    return top, beneath, following


def _columns(wanted: dict[str, str], held: list[SiteRow]) -> dict[str, object]:
    columns: dict[str, object] = {}
    if wanted["kind"] in KINDS:
        columns["kind"] = wanted["kind"]
    if wanted["state"] in DEVICE.states:
        columns["state"] = wanted["state"]
    if wanted["site"]:
        columns["site_id"] = next((each.id for each in held if each.code == wanted["site"]), 0)
    return columns


def _beneath(scope: Scope, scanners: list[int], as_of: dt.datetime | None) -> list[DeviceRow]:
    return devices.list_devices(scope, as_of=as_of, scanner_id=scanners)
