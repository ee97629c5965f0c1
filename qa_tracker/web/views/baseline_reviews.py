"""Baselines under review after a software event: keep them, signed, or go on to replace them."""

from __future__ import annotations

import uuid

from django.http import HttpRequest, HttpResponse
from django.urls import reverse
from django.utils.timezone import now
from django.utils.translation import gettext as _
from django.utils.translation import ngettext
from django.views.decorators.debug import sensitive_post_parameters

from qa_tracker.core.errors import Invalid
from qa_tracker.core.schedule import local_day
from qa_tracker.records.queries import baselines as rows
from qa_tracker.records.queries import devices, library
from qa_tracker.records.queries.devices import DeviceRow
from qa_tracker.services import baseline_reviews, baselines
from qa_tracker.web import sight
from qa_tracker.web.forms.asking import Asked, Done, ask
from qa_tracker.web.forms.fields import Field, Option
from qa_tracker.web.forms.typed import Typed
from qa_tracker.web.presenters.baselines import Limits, ShownBaseline, ShownEpoch, baselines_in_words


@sensitive_post_parameters("password")
def review(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Keep baselines that are under review, or see how to replace them."""
    at = now()
    row = sight.device_to(request, uid, "baseline.set", at)
    options = _options(row, local_day(at, sight.zone_of_site(row.site_id)))
    asked = Asked(
        _("Baselines under review"),
        _("Keep and sign"),
        reverse("device", args=[uid]),
        row.label,
        (
            Field(
                "baselines",
                _("Which to keep"),
                "ticks",
                _("The same value, for the software in use now. The step recorded is none."),
                options,
                values=tuple(value for value, _label in options),
            ),
            Field("reason", _("Why they still hold"), "area", _("What was read before and after, on what.")),
            Field("password", _("Your password, as your signature"), "password"),
        ),
        lead=row.label,
        notes=()
        if options
        else (
            _(
                "None is under review. A baseline is put under review when the software of its scanner changes."
            ),
        ),
    )

    def act(typed: Typed) -> Done:
        kept = baseline_reviews.keep(
            device=uid,
            baselines=[_uid(each) for each in typed.several("baselines")],
            reason=typed.words("reason"),
            password=typed.raw("password"),
            actor=request.user,
            at=at,
        )
        said = ngettext("%(count)d baseline is kept.", "%(count)d baselines are kept.", len(kept))
        return Done(said % {"count": len(kept)}, asked.back)

    return ask(request, asked, act, "baseline_review.html", device=row)


def _uid(text: str) -> uuid.UUID:
    try:
        return uuid.UUID(text)
    except ValueError as error:
        raise Invalid("baseline.unknown", field="baselines") from error


def _options(row: DeviceRow, today: object) -> tuple[Option, ...]:
    limits = Limits(
        baselines.known_measurands(row.site_id),
        library.adopted_criteria(row.site_id),
        devices.conditions_of(row.id),
    )
    shown = baselines_in_words(rows.baselines_of(row.id), limits, today)
    return tuple((str(epoch.row.uid), _words(each, epoch)) for each in shown for epoch in each.under_review)


def _words(each: ShownBaseline, epoch: ShownEpoch) -> str:
    """Series, value, what it was measured with, and how far the device is from acceptance."""
    console = f"{epoch.row.console_model} {epoch.row.console_software}".strip()
    change = ", ".join(epoch.changes)
    told = _("from acceptance %(change)s") % {"change": change} if change else ""
    parts = (each.name, each.where, epoch.value, console, epoch.row.test_object, told)
    return ", ".join(part for part in parts if part)
