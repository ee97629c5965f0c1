"""A baseline from several set-ups: choose a series, choose readings or type values, look at the figures, sign."""

from __future__ import annotations

import datetime as dt
import uuid

from django.http import HttpRequest, HttpResponse
from django.shortcuts import render
from django.urls import reverse
from django.utils.timezone import now
from django.utils.translation import gettext as _
from django.views.decorators.debug import sensitive_post_parameters

from qa_tracker.core.errors import Invalid, NotFound
from qa_tracker.records.queries.baseline_readings import StoredReading, readings_of
from qa_tracker.services import baseline_setups, wording
from qa_tracker.services.baseline_setups import Chosen
from qa_tracker.web import sight
from qa_tracker.web.forms import baselines as forms
from qa_tracker.web.forms.asking import Asked, Done
from qa_tracker.web.forms.asking_twice import Ready, ask_twice
from qa_tracker.web.forms.fields import Field, Option
from qa_tracker.web.forms.typed import Typed
from qa_tracker.web.marks import local_time
from qa_tracker.web.presenters.baselines import value_words


@sensitive_post_parameters("password")
def from_set_ups(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """The mean of readings of several days becomes the baseline of one series."""
    at = now()
    row = sight.device_to(request, uid, "baseline.set", at)
    known = forms.Known(row)
    name = request.GET.get("series", "")
    if not name:
        return render(request, "baseline_series.html", {"device": row, "series": known.series})
    series = next((each for each in known.series if each.name == name), None)
    if series is None:
        raise NotFound("device.unknown")
    stored = readings_of(row.id, series.key)
    asked = _asked(request, known, series, stored, at)

    def given(typed: Typed) -> dict[str, object]:
        return {
            "device": uid,
            "series": series.value(),
            "setups": _chosen(typed),
            "test_object": typed.choice_or_none("test_object"),
            "reason": typed.words("reason"),
            "terms": forms.terms(typed, known),
            "actor": request.user,
            "at": at,
        }

    def propose(typed: Typed) -> Ready:
        return forms.ready_to_sign(baseline_setups.propose_setups(**given(typed)))

    def act(typed: Typed) -> Done:
        baseline_setups.set_from_setups(**given(typed), **forms.signature(typed))
        return Done(forms.done_words(1), asked.back)

    return ask_twice(request, asked, forms.signing(), propose, act, known.overlaps_refused)


def _asked(
    request: HttpRequest,
    known: forms.Known,
    series: forms.Series,
    stored: list[StoredReading],
    at: dt.datetime,
) -> Asked:
    zone = sight.zone_of_site(known.row.site_id)
    return Asked(
        _("Baseline from several set-ups"),
        forms.show_button(),
        reverse("device", args=[known.row.uid]),
        known.row.label,
        forms.overlaps_typed(
            request,
            known,
            (
                Field(
                    "setups",
                    _("Readings on record"),
                    "ticks",
                    _("Choose those that were set up anew, on different days."),
                    [_option(each, zone) for each in stored],
                    required=False,
                ),
                Field(
                    "typed",
                    _("Further values"),
                    "area",
                    _("A day and a value on each line, such as 2030-01-31 8.5."),
                    required=False,
                ),
                forms.object_field(request, at),
                *forms.terms_fields(),
            ),
        ),
        lead=series.label,
        notes=(
            _(
                "The mean becomes the baseline. From ten independent set-ups on, a limit of the device's own spread "
                "can judge by it; fewer are kept and shown."
            ),
        ),
    )


def _option(each: StoredReading, zone: str) -> Option:
    words = (
        f"{local_time(each.measured_at, zone)}: {value_words(each.qualifier, each.entered, each.unit)}",
        wording.verdict_word(each.verdict) if each.verdict else "",
        each.console,
        each.test_object,
    )
    return str(each.submission_uid), ", ".join(word for word in words if word)


def _chosen(typed: Typed) -> list[Chosen]:
    """The checks ticked, oldest first, then what was typed."""
    ticked = [Chosen(submission=_uid(each)) for each in reversed(typed.several("setups"))]
    return ticked + [_line(line) for line in typed.words("typed").splitlines() if line.strip()]


def _uid(text: str) -> uuid.UUID:
    try:
        return uuid.UUID(text)
    except ValueError as error:
        raise Invalid("baseline.setup_unknown", field="setups") from error


def _line(line: str) -> Chosen:
    day, _blank, value = line.strip().partition(" ")
    try:
        return Chosen(value.strip(), dt.date.fromisoformat(day))
    except ValueError as error:
        raise Invalid("baseline.setups_line", field="typed", line=line.strip()) from error
