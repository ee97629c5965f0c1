"""How well each measurand is measured, and the decision rule its limits are applied by."""

from __future__ import annotations

import datetime as dt
import uuid

from django.http import HttpRequest, HttpResponse
from django.shortcuts import render
from django.urls import reverse
from django.utils.timezone import now
from django.utils.translation import gettext as _

from qa_tracker.records.queries import sites, uncertainties
from qa_tracker.services import guards
from qa_tracker.services import uncertainties as commands
from qa_tracker.services.uncertainties import Statement
from qa_tracker.web.forms.adopting import adopting_site, places
from qa_tracker.web.forms.asking import Asked, Done, ask
from qa_tracker.web.forms.fields import Field, Option
from qa_tracker.web.forms.typed import Typed
from qa_tracker.web.presenters.uncertainties import KINDS, RULES, measurand_options, shown_statement

VERB = "criteria.adopt"


def index(request: HttpRequest) -> HttpResponse:
    """Every statement in force in sight, and those that were."""
    at = now()
    scope = guards.scope(request.user, at)
    held = {site.id: site.name for site in sites.list_sites(scope)}
    rows = [row for row in uncertainties.list_uncertainties() if row.site_id is None or row.site_id in held]
    names = dict(measurand_options())
    shown = [shown_statement(row, names, held) for row in rows]
    context = {
        "in_force": [each for each in shown if each.row.ended_at is None],
        "ended": [each for each in shown if each.row.ended_at is not None],
        "may_state": guards.may_somewhere(request.user, VERB, at),
    }
    return render(request, "uncertainties.html", context)


def state(request: HttpRequest) -> HttpResponse:
    """State the uncertainty of a measurand, with the decision rule."""
    at = now()
    guards.check_may_somewhere(request.user, VERB, at)
    back = reverse("uncertainties")

    def act(typed: Typed) -> Done:
        commands.state(
            statement=_statement(typed), site=adopting_site(request, typed, at), actor=request.user, at=at
        )
        return Done(
            _("The uncertainty is stated under your name; readings from now on are judged with it."), back
        )

    return ask(request, _asked(request, back, at), act)


def _asked(request: HttpRequest, back: str, at: dt.datetime) -> Asked:
    where: tuple[Option, ...] = places(request, VERB, at)
    return Asked(
        _("State an uncertainty"),
        _("State it under my name"),
        back,
        _("Uncertainty and decision rules"),
        (
            Field("measurand", _("Measurand"), "select", options=measurand_options()),
            Field("place", _("Where"), "radio", options=where, values=(where[0][0],) if where else ()),
            Field("kind", _("Stated as"), "radio", options=tuple(KINDS.items()), values=("expanded",)),
            Field(
                "entered", _("Uncertainty"), "decimal",
                _(
                    "In the measurand's unit; for a standard or an expanded uncertainty. It is taken as that of "
                    "what is judged: where a limit stands on a baseline or on another reading, count theirs in."
                ),
                required=False,
            ),
            Field(
                "coverage_factor", _("Coverage factor k"), "decimal",
                _("Of an expanded uncertainty; 2 if left empty."), required=False,
            ),
            Field(
                "repeats", _("Repeats"), "area",
                _("For an estimate from repeats: at least two readings, one a line."), required=False,
            ),
            Field(
                "rule", _("Decision rule"), "radio",
                _("How close to a limit a reading may come."), options=tuple(RULES.items()), required=False,
                values=("",),
            ),
            Field("source", _("Where it comes from"), "area", _("Certificate, study, or who measured the repeats.")),
        ),
        lead=_("A reading near a limit is only as sure as its measurement. Verdicts that stand are not touched."),
    )  # fmt: skip


def _statement(typed: Typed) -> Statement:
    return Statement(
        typed.text("measurand"),
        typed.text("kind"),
        typed.text("entered", 40),
        typed.text("coverage_factor", 10),
        [line.strip() for line in typed.words("repeats").splitlines() if line.strip()],
        typed.text("rule"),
        typed.words("source"),
    )


def end(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """End a statement, with the reason."""
    at = now()
    guards.check_may_somewhere(request.user, VERB, at)
    row = commands.in_sight(uid, request.user, at)
    back = reverse("uncertainties")

    def act(typed: Typed) -> Done:
        commands.end(statement=uid, reason=typed.words("reason"), actor=request.user, at=at)
        return Done(_("The statement has ended."), back)

    names = dict(measurand_options())
    asked = Asked(
        _("End a stated uncertainty"),
        _("End it"),
        back,
        _("Uncertainty and decision rules"),
        (Field("reason", _("Reason"), "area"),),
        lead=names.get(row.measurand.code, row.measurand.code),
    )
    return ask(request, asked, act)
