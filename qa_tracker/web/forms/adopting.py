"""Adopting a set or an edition for the group or for one site."""

from __future__ import annotations

import datetime as dt
import uuid

from django.http import HttpRequest
from django.utils.translation import gettext as _

from qa_tracker.records.queries import sites
from qa_tracker.services import finding, guards
from qa_tracker.web.forms.asking import Asked
from qa_tracker.web.forms.fields import Field, Option
from qa_tracker.web.forms.typed import Typed


def adopting(request: HttpRequest, verb: str, back: str, at: dt.datetime) -> Asked | None:
    """The form, with the places where the person may adopt; none where there is no such place."""
    options = places(request, verb, at)
    if not options:
        return None
    return Asked(
        _("Adopt"),
        _("Adopt under my name"),
        back,
        "",
        (
            Field("place", _("Where"), "radio", options=options, values=(options[0][0],)),
            Field(
                "remark",
                _("Remark"),
                "area",
                _("What you compared it with, and what differs from local rules."),
                required=False,
            ),
        ),
    )


def places(request: HttpRequest, verb: str, at: dt.datetime) -> tuple[Option, ...]:
    """Where the person may do this: the whole group, and each site."""
    scope = guards.scope(request.user, at, verb)
    group = [("", _("the whole group"))] if guards.may(request.user, verb, None, at) else []
    held = [(str(site.uid), site.name) for site in sites.list_sites(scope)]
    return (*group, *held)


def adopting_site(request: HttpRequest, typed: Typed, at: dt.datetime) -> object | None:
    """The site chosen; none for the whole group."""
    chosen: uuid.UUID | None = typed.choice_or_none("place")
    return finding.site(request.user, chosen, at) if chosen else None


def ending(title: str, edition: str, place: str, back: str, of_site: bool) -> Asked:
    """The form that ends the adoption of a set, saying what is in force then."""
    told = {"edition": edition, "place": place}
    if of_site:
        lead = _("%(edition)s, at %(place)s. What the whole group has adopted is in force there again.")
    else:
        lead = _("%(edition)s, for %(place)s. Readings that only this set judges will have no verdict.")
    return Asked(
        _("End the adoption"),
        _("End it under my name"),
        back,
        title,
        (Field("reason", _("Reason"), "area"),),
        lead=lead % told,
        notes=(_("Verdicts that stand are not touched, and the set can be adopted again."),),
    )
