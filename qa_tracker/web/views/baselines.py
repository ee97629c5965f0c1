"""Setting baselines: from a check that was submitted, or by value."""

from __future__ import annotations

import datetime as dt
import uuid
from collections.abc import Mapping

from django.http import HttpRequest, HttpResponse
from django.urls import reverse
from django.utils.timezone import now
from django.utils.translation import gettext as _

from qa_tracker.core.library import asked_of
from qa_tracker.core.library_specs import MeasurandSpec
from qa_tracker.core.workflow import CHECK_DONE
from qa_tracker.records.queries import baselines as rows
from qa_tracker.records.queries import checks, devices, objects, submissions
from qa_tracker.records.queries.baselines import BaselineRow, SeriesKey
from qa_tracker.records.queries.devices import ApertureRow, ConditionRow, DeviceRow
from qa_tracker.services import baselines, guards
from qa_tracker.services.baselines import DIGITS, Value
from qa_tracker.web import sight
from qa_tracker.web.forms.asking import Asked, Done, ask
from qa_tracker.web.forms.fields import Field, Option
from qa_tracker.web.forms.typed import Typed
from qa_tracker.web.marks import local_time
from qa_tracker.web.presenters.charts import amount_words
from qa_tracker.web.presenters.device import place_of


def signing_fields() -> tuple[Field, ...]:
    """Why, and the signature."""
    return (
        Field("reason", _("Why"), "area", _("What changed, and why the value before no longer serves.")),
        Field("password", _("Your password, as your signature"), "password"),
    )


def from_check(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Make the numbers of a submitted check the baselines of their series."""
    at = now()
    row = sight.device_to(request, uid, "baseline.set", at)
    options = _submissions(row)
    asked = Asked(
        _("Baselines from a check"),
        _("Set and sign"),
        reverse("device", args=[uid]),
        row.label,
        (
            Field(
                "submission",
                _("Which check"),
                "radio",
                _("Every number in it that is judged against a baseline becomes the baseline of its series."),
                options,
                values=(options[0][0],) if options else (),
            ),
            *signing_fields(),
        ),
        lead=row.label,
        notes=() if options else (_("No check of this device is submitted yet."),),
    )

    def act(typed: Typed) -> Done:
        found = baselines.adopt_submission(
            submission=typed.choice("submission"),
            reason=typed.words("reason"),
            password=typed.raw("password"),
            actor=request.user,
            at=at,
        )
        return Done(_("Baselines are set for %(count)d series.") % {"count": len(found)}, asked.back)

    return ask(request, asked, act)


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


def by_value(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Set baselines from values typed; fields left empty stay as they are."""
    at = now()
    row = sight.device_to(request, uid, "baseline.set", at)
    asked_for = _values_asked(row)
    asked = Asked(
        _("Baselines by value"),
        _("Set and sign"),
        reverse("device", args=[uid]),
        row.label,
        (*(field for field, _value in asked_for), _object_field(request, at), *signing_fields()),
        lead=row.label,
        notes=(
            _("Only the values you fill in are set. A value beyond an absolute limit is refused."),
            _("Penetration baselines don't pass between test objects: name the one these were measured on."),
        ),
    )

    def act(typed: Typed) -> Done:
        found = baselines.set_values(
            device=uid,
            values=_typed_values(typed, asked_for),
            test_object=typed.choice_or_none("test_object"),
            reason=typed.words("reason"),
            password=typed.raw("password"),
            actor=request.user,
            at=at,
        )
        return Done(_("Baselines are set for %(count)d series.") % {"count": len(found)}, asked.back)

    return ask(request, asked, act)


def _typed_values(typed: Typed, asked_for: list[tuple[Field, Value]]) -> list[Value]:
    return [
        Value(value.measurand, typed.text(field.name), value.aperture, value.condition)
        for field, value in asked_for
        if typed.text(field.name)
    ]


def _values_asked(row: DeviceRow) -> list[tuple[Field, Value]]:
    """A field for every series of the adopted procedures that can have a baseline on this device."""
    apertures: list[ApertureRow] = devices.apertures_of(row.id)
    conditions: list[ConditionRow] = devices.conditions_of(row.id)
    in_force = rows.in_force(row.id)
    return [
        (_value_field(spec, aperture, condition, in_force), _value(spec, aperture, condition))
        for spec in baselines.known_measurands(row.site_id).values()
        if spec.kind in DIGITS and baselines.wants_baseline(spec, row.site_id)
        if asked_of(spec, device_kind=row.kind, array_kind=row.array_kind or None)
        for aperture in (apertures if spec.per == "aperture" and apertures else [None])
        for condition in (conditions if spec.by_condition and conditions else [None])
    ]


def _value(spec: MeasurandSpec, aperture: ApertureRow | None, condition: ConditionRow | None) -> Value:
    return Value(spec.code, "", aperture.uid if aperture else None, condition.uid if condition else None)


def _value_field(
    spec: MeasurandSpec,
    aperture: ApertureRow | None,
    condition: ConditionRow | None,
    in_force: Mapping[SeriesKey, BaselineRow],
) -> Field:
    key = (spec.code, aperture.id if aperture else None, condition.id if condition else None)
    before = in_force.get(key)
    where = place_of(aperture.name if aperture else "", condition.name if condition else "")
    unit = amount_words("", spec.unit).strip()
    return Field(
        spec.code if key[1:] == (None, None) else f"{spec.code}.{key[1] or 0}.{key[2] or 0}",
        ", ".join(part for part in (spec.name, where, unit) if part),
        "decimal",
        _("Now %(value)s.") % {"value": amount_words(before.entered, before.unit)} if before else "",
        required=False,
    )


def _object_field(request: HttpRequest, at: dt.datetime) -> Field:
    known = objects.list_test_objects(guards.scope(request.user, at))
    options = [("", _("none")), *((str(each.uid), f"{each.name} {each.serial}") for each in known)]
    return Field("test_object", _("Test object"), "select", options=options, required=False)
