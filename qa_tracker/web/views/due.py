"""What is due, where, and what to do first."""

from __future__ import annotations

import datetime as dt
import uuid
from collections.abc import Sequence

from django.http import HttpRequest, HttpResponse
from django.shortcuts import render
from django.utils.timezone import now

from qa_tracker.records.queries import checks, devices, holds, library, sites
from qa_tracker.records.queries.checks import CheckRow
from qa_tracker.services import guards
from qa_tracker.web.presenters.due import due_sites

FILTERS = ("site", "room", "who")


def show(request: HttpRequest) -> HttpResponse:
    """The checks that are open, late or overdue, and those that open within two weeks."""
    at = now()
    scope = guards.scope(request.user, at)
    known = sites.list_sites(scope)
    wanted = {name: request.GET.get(name, "") for name in FILTERS}
    rows = checks.due_checks(scope, at)
    shown = [row for row in rows if _fits(row, wanted, request.user.pk)]
    by_id = {site.id: site for site in known}
    held = holds.holds_of([row.id for row in shown], at)
    context = {
        "sites": due_sites(shown, by_id, enterable(request.user, shown, at), at, held),
        "choices": known,
        "rooms": sorted({row.location for row in rows if row.location}),
        "wanted": wanted,
        "filtered": len(rows) - len(shown),
        "at": at,
        "zone": known[0].time_zone if known else "UTC",
        "first_step": "" if rows else _first_step(request.user, scope, at),
        "may_quarantine": guards.may_somewhere(request.user, "device.quarantine", at),
    }
    return render(request, "due.html", context)


def _fits(row: CheckRow, wanted: dict[str, str], person_id: int) -> bool:
    return (
        wanted["site"] in ("", row.site_code)
        and wanted["room"] in ("", row.location)
        and (wanted["who"] != "me" or row.responsible_id == person_id)
    )


def enterable(actor: object, rows: Sequence[CheckRow], at: dt.datetime) -> set[uuid.UUID]:
    """The checks whose procedure the actor's role may enter there."""
    asked: dict[tuple[int, int | None], bool] = {}
    for row in rows:
        key = (row.procedure_id, row.site_id)
        if key not in asked:
            asked[key] = _may_enter(actor, *key, at)
    return {row.uid for row in rows if asked[(row.procedure_id, row.site_id)]}


def _may_enter(actor: object, procedure_id: int, site_id: int | None, at: dt.datetime) -> bool:
    edition = library.adopted_edition(procedure_id, site_id)
    if edition is None:
        return False
    verb = "check.enter_user" if "user" in edition.spec.performed_by else "check.enter"
    return guards.may(actor, verb, site_id or actor.duties_site_id, at)


def _first_step(actor: object, scope: object, at: dt.datetime) -> str:
    """What to do first where nothing is due: adopt, register, plan, or nothing at all."""
    if not guards.may_somewhere(actor, "plan.make", at):
        return "ask"
    if not library.list_adoptions():
        return "adopt"
    if not devices.list_devices(scope, most=1):
        return "register"
    return "plan"
