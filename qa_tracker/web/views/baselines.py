"""Setting baselines: from a check that was submitted, or by value; shown with what they change, then signed."""

from __future__ import annotations

import uuid

from django.http import HttpRequest, HttpResponse
from django.urls import reverse
from django.utils.timezone import now
from django.utils.translation import gettext as _
from django.views.decorators.debug import sensitive_post_parameters

from qa_tracker.core.workflow import CHECK_DONE
from qa_tracker.records.queries import checks, submissions
from qa_tracker.records.queries.devices import DeviceRow
from qa_tracker.services import baselines
from qa_tracker.services.baselines import Value
from qa_tracker.web import sight
from qa_tracker.web.forms import baselines as forms
from qa_tracker.web.forms.asking import Asked, Done
from qa_tracker.web.forms.asking_twice import Ready, ask_twice
from qa_tracker.web.forms.fields import Field, Option
from qa_tracker.web.forms.typed import Typed
from qa_tracker.web.marks import local_time


@sensitive_post_parameters("password")
def from_check(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Make the numbers of a submitted check the baselines of their series."""
    at = now()
    row = sight.device_to(request, uid, "baseline.set", at)
    known = forms.Known(row)
    options = _submissions(row)
    asked = Asked(
        _("Baselines from a check"),
        forms.show_button(),
        reverse("device", args=[uid]),
        row.label,
        forms.overlaps_typed(
            request,
            known,
            (
                Field(
                    "submission",
                    _("Which check"),
                    "radio",
                    _(
                        "Every number in it that is judged against a baseline becomes the baseline of its series."
                    ),
                    options,
                    values=(options[0][0],) if options else (),
                ),
                *forms.terms_fields(),
            ),
        ),
        lead=row.label,
        notes=() if options else (_("No check of this device is submitted yet."),),
    )

    def given(typed: Typed) -> dict[str, object]:
        return {
            "submission": typed.choice("submission"),
            "reason": typed.words("reason"),
            "terms": forms.terms(typed, known),
            "actor": request.user,
            "at": at,
        }

    def propose(typed: Typed) -> Ready:
        return forms.ready_to_sign(baselines.propose_submission(**given(typed)))

    def act(typed: Typed) -> Done:
        found = baselines.adopt_submission(**given(typed), **forms.signature(typed))
        return Done(forms.done_words(len(found)), asked.back)

    return ask_twice(request, asked, forms.signing(), propose, act, known.overlaps_refused)


def _submissions(row: DeviceRow) -> tuple[Option, ...]:
    """The newest submission of each recent check of the device."""
    zone = sight.zone_of_site(row.site_id)
    done = [each for each in checks.checks_of_device(row.id, most=20) if each.state in CHECK_DONE]
    found = submissions.submissions_of([each.id for each in done])
    return tuple(
        (str(found[each.id][-1].uid), f"{each.procedure}, {local_time(each.submitted_at, zone)}")
        for each in done
        if each.id in found
    )


@sensitive_post_parameters("password")
def by_value(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Set baselines from values typed; fields left empty stay as they are."""
    at = now()
    row = sight.device_to(request, uid, "baseline.set", at)
    known = forms.Known(row)
    asked = Asked(
        _("Baselines by value"),
        forms.show_button(),
        reverse("device", args=[uid]),
        row.label,
        forms.overlaps_typed(
            request,
            known,
            (
                *(_value_field(known, each) for each in known.series),
                forms.object_field(request, at),
                *forms.terms_fields(),
            ),
        ),
        lead=row.label,
        notes=(
            _("Only the values you fill in are set. A value beyond an absolute limit is refused."),
            _("Penetration baselines don't pass between test objects: name the one these were measured on."),
        ),
    )

    def given(typed: Typed) -> dict[str, object]:
        return {
            "device": uid,
            "values": _typed_values(typed, known),
            "test_object": typed.choice_or_none("test_object"),
            "reason": typed.words("reason"),
            "terms": forms.terms(typed, known),
            "actor": request.user,
            "at": at,
        }

    def propose(typed: Typed) -> Ready:
        return forms.ready_to_sign(baselines.propose_values(**given(typed)))

    def act(typed: Typed) -> Done:
        found = baselines.set_values(**given(typed), **forms.signature(typed))
        return Done(forms.done_words(len(found)), asked.back)

    return ask_twice(request, asked, forms.signing(), propose, act, known.overlaps_refused)


def _typed_values(typed: Typed, known: forms.Known) -> list[Value]:
    return [each.value(typed.text(each.name)) for each in known.series if typed.text(each.name)]


def _value_field(known: forms.Known, each: forms.Series) -> Field:
    before = known.in_force.get(each.key)
    hint = _("Now %(value)s.") % {"value": forms.amount(before)} if before else ""
    return Field(each.name, each.label, "decimal", hint, required=False)
