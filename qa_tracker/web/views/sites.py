"""Sites: rooms in walking order, days off, what to do on a remedial and a suspension verdict, and pools."""

from __future__ import annotations

import datetime as dt
import uuid
import zoneinfo
from collections.abc import Iterable
from dataclasses import replace

from django.http import HttpRequest, HttpResponse
from django.shortcuts import render
from django.urls import reverse
from django.utils.dates import WEEKDAYS
from django.utils.timezone import now
from django.utils.translation import gettext as _

from qa_tracker.core.errors import Invalid, NotFound
from qa_tracker.records.queries import sites as rows
from qa_tracker.records.queries.scope import Scope
from qa_tracker.records.queries.sites import SiteRow
from qa_tracker.services import finding, guards, sites
from qa_tracker.web.forms.asking import Act, Asked, Done, ask, attempt
from qa_tracker.web.forms.fields import Field, keep
from qa_tracker.web.forms.typed import Typed


def _scope(request: HttpRequest, at: dt.datetime) -> Scope:
    guards.check_may_somewhere(request.user, "site.manage", at)
    return guards.scope(request.user, at, "site.manage")


def index(request: HttpRequest) -> HttpResponse:
    """The sites the administrator answers for, and the pools they share."""
    at = now()
    scope = _scope(request, at)
    held = rows.list_sites(scope)
    codes = {site.id: site.code for site in held}
    pools = [
        (each.name, ", ".join(sorted(codes.get(key, "…") for key in each.site_ids)))
        for each in rows.list_pools(scope)
    ]
    may_make = guards.may(request.user, "site.manage", None, at)
    return render(request, "sites.html", {"sites": held, "pools": pools, "may_make": may_make})


def new(request: HttpRequest) -> HttpResponse:
    """Make a site."""
    at = now()
    guards.check_may(request.user, "site.manage", None, at)
    zones = tuple((each, each) for each in sorted(zoneinfo.available_timezones()) if "/" in each)
    asked = Asked(
        _("New site"),
        _("Make the site"),
        reverse("sites"),
        _("Sites"),
        (
            Field("code", _("Short name"), hint=_("A few capitals, such as AG."), focus=True),
            Field("name", _("Name")),
            Field("time_zone", _("Time zone"), "select", options=zones, values=("Europe/London",)),
            *week_fields((6, 7), 7),
            *instruction_fields("", ""),
        ),
    )

    def act(typed: Typed) -> Done:
        hour = typed.whole_or_none("digest_hour", 23)
        made = sites.create(
            code=typed.text("code", 12),
            name=typed.text("name", 120),
            time_zone=typed.text("time_zone"),
            weekend=[int(day) for day in typed.several("weekend") if day.isdecimal()],
            digest_hour=7 if hour is None else hour,
            remedial_instruction=typed.words("remedial_instruction"),
            suspension_instruction=typed.words("suspension_instruction"),
            actor=request.user,
            at=at,
        )
        return Done(_("The site is made. Next: its rooms and days off."), reverse("site", args=[made.uid]))

    return ask(request, asked, act)


def week_fields(weekend: Iterable[int], digest_hour: int) -> tuple[Field, ...]:
    """The days of each week nobody works, and from which hour the day's mail may come."""
    days = tuple((str(number), WEEKDAYS[number - 1].capitalize()) for number in range(1, 8))
    return (
        Field(
            "weekend",
            _("Days off each week"),
            "ticks",
            options=days,
            required=False,
            values=tuple(str(day) for day in weekend),
        ),
        Field(
            "digest_hour",
            _("Mail from this hour"),
            "whole",
            _("The day's one mail comes from this hour on, on working days; 0 to 23."),
        ).starting(digest_hour),
    )


def instruction_fields(remedial: str, suspension: str) -> tuple[Field, ...]:
    """What the site tells people to do now."""
    return (
        Field(
            "remedial_instruction",
            _("What to do now, remedial"),
            "area",
            _("Shown with every remedial verdict: label it, tell whom."),
            required=False,
        ).starting(remedial),
        Field(
            "suspension_instruction",
            _("What to do now, suspension"),
            "area",
            _("Shown with every suspension verdict: take it away, phone whom."),
            required=False,
        ).starting(suspension),
    )


def new_pool(request: HttpRequest) -> HttpResponse:
    """Make a pool of devices that sites share."""
    at = now()
    guards.check_may(request.user, "site.manage", None, at)
    options = tuple((str(each.uid), each.name) for each in rows.list_sites(_scope(request, at)))
    asked = Asked(
        _("New pool"),
        _("Make the pool"),
        reverse("sites"),
        _("Sites"),
        (Field("name", _("Name"), focus=True), Field("sites", _("Shared by"), "ticks", options=options)),
        lead=_("A pooled device is in sight at every site that shares it."),
    )

    def act(typed: Typed) -> Done:
        chosen = [finding.site(request.user, uid, at) for uid in _uids(typed.several("sites"))]
        sites.create_pool(name=typed.text("name", 80), sites=chosen, actor=request.user, at=at)
        return Done(_("The pool is made."), asked.back)

    return ask(request, asked, act)


def _uids(values: list[str]) -> list[uuid.UUID]:
    try:
        return [uuid.UUID(each) for each in dict.fromkeys(values)]
    except ValueError as error:
        raise Invalid("form.choice_missing", field="sites") from error


def _site(request: HttpRequest, uid: uuid.UUID, at: dt.datetime) -> SiteRow:
    found = rows.find_site(_scope(request, at), uid)
    if found is None:
        raise NotFound("site.unknown")
    return found


def _forms(site: SiteRow, position: int) -> dict[str, Asked]:
    back = (reverse("site", args=[site.uid]), site.name)
    return {
        "room": Asked(
            _("Add a room"),
            _("Add the room"),
            *back,
            (
                Field("name", _("Room")),
                Field(
                    "position",
                    _("Place in walking order"),
                    "whole",
                    _("Due lists rooms in this order."),
                    values=(str(position),),
                ),
            ),
        ),
        "holidays": Asked(
            _("Add days off"),
            _("Add them"),
            *back,
            (
                Field(
                    "days",
                    _("Days off"),
                    "area",
                    _("One on each line, a day, a colon and its name: 2025-12-25: Christmas Day."),
                ),
            ),
        ),
        "instructions": Asked(
            _("What to do now"),
            _("Keep the instructions"),
            *back,
            instruction_fields(site.remedial_instruction, site.suspension_instruction),
        ),
    }


def show(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """One site; each of its forms acts by itself and keeps what was typed when it is refused."""
    at = now()
    site = _site(request, uid, at)
    rooms = rows.list_locations(guards.scope(request.user, at), site.id)
    forms = _forms(site, max((each.position for each in rooms), default=0) + 1)
    status = 200
    name = request.POST.get("form", "")
    if request.method == "POST" and name in forms:
        answer = attempt(request, _acts(request, site, at)[name])
        if isinstance(answer, HttpResponse):
            return answer
        asked = forms[name]
        forms[name] = replace(asked, fields=keep(asked.fields, request.POST), refused=answer)
        status = 422
    context = {"site": site, "rooms": rooms, "holidays": rows.list_holidays(site.id), "forms": forms}
    return render(request, "site.html", context, status=status)


def _acts(request: HttpRequest, site: SiteRow, at: dt.datetime) -> dict[str, Act]:
    back = reverse("site", args=[site.uid])
    own = finding.site(request.user, site.uid, at)

    def room(typed: Typed) -> Done:
        position = typed.whole("position", 9999)
        sites.add_location(
            site=own, name=typed.text("name", 80), position=position, actor=request.user, at=at
        )
        return Done(_("The room is added."), back)

    def holidays(typed: Typed) -> Done:
        sites.add_holidays(site=own, days=_days(typed), actor=request.user, at=at)
        return Done(_("The days off are added."), back)

    def instructions(typed: Typed) -> Done:
        sites.instruct(
            site=own,
            remedial_instruction=typed.words("remedial_instruction"),
            suspension_instruction=typed.words("suspension_instruction"),
            actor=request.user,
            at=at,
        )
        return Done(_("The instructions are kept."), back)

    return {"room": room, "holidays": holidays, "instructions": instructions}


def _days(typed: Typed) -> dict[dt.date, str]:
    try:
        return {dt.date.fromisoformat(day): name[:80] for day, name in typed.pairs("days").items()}
    except ValueError as error:
        raise Invalid("form.line_wrong", field="days", line=typed.words("days").splitlines()[0]) from error
