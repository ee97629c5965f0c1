"""What is measured with: test objects with their true values, and instruments with their calibration."""

from __future__ import annotations

import datetime as dt

from django.http import HttpRequest, HttpResponse
from django.shortcuts import render
from django.urls import reverse
from django.utils.timezone import now
from django.utils.translation import gettext as _

from qa_tracker.core.library_shapes import INSTRUMENTS
from qa_tracker.core.library_specs import MeasurandSpec
from qa_tracker.records.queries import library, sites
from qa_tracker.records.queries import objects as rows
from qa_tracker.services import finding, guards, objects, wording
from qa_tracker.web.forms.asking import Asked, Done, ask
from qa_tracker.web.forms.fields import Field, Option
from qa_tracker.web.forms.typed import Typed
from qa_tracker.web.presenters.charts import amount_words


def _sites(request: HttpRequest, at: dt.datetime) -> tuple[Option, ...]:
    scope = guards.scope(request.user, at, "object.register")
    return tuple((str(each.uid), each.name) for each in sites.list_sites(scope))


def nominal_specs() -> list[MeasurandSpec]:
    """The measurands whose true value a test object gives, by name."""
    found = {
        spec.code: spec
        for edition in library.list_editions()
        for spec in edition.spec.measurands
        if spec.nominal_from == "test_object"
    }
    return sorted(found.values(), key=lambda spec: spec.name)


def test_objects(request: HttpRequest) -> HttpResponse:
    """Every test object in sight with its true values."""
    at = now()
    scope = guards.scope(request.user, at)
    names = {spec.code: spec for spec in nominal_specs()}
    lines = [
        (each, [(names[code].name, amount_words(value, names[code].unit)) if code in names else (code, value)
                for code, value in each.nominals.items()])
        for each in rows.list_test_objects(scope)
    ]  # fmt: skip
    context = {
        "lines": lines,
        "sites": {site.id: site.name for site in sites.list_sites(scope)},
        "may_register": guards.may_somewhere(request.user, "object.register", at),
    }
    return render(request, "test_objects.html", context)


def new_test_object(request: HttpRequest) -> HttpResponse:
    """Register a test object with its true values by measurand."""
    at = now()
    guards.check_may_somewhere(request.user, "object.register", at)
    specs = nominal_specs()
    asked = Asked(
        _("Register a test object"),
        _("Register"),
        reverse("test-objects"),
        _("Test objects"),
        (*_object_fields(_sites(request, at)), *(_nominal_field(spec) for spec in specs)),
        lead=_("A phantom, a water bath or air, with its true values from the certificate."),
    )

    def act(typed: Typed) -> Done:
        objects.register_test_object(
            site=finding.site(request.user, typed.choice("site"), at),
            name=typed.text("name"),
            serial=typed.text("serial", 80),
            material=typed.text("material", 60),
            nominals={spec.code: typed.text(spec.code, 40) for spec in specs if typed.text(spec.code, 40)},
            actor=request.user,
            at=at,
            maker=typed.text("maker", 80),
            model=typed.text("model", 80),
            sound_speed_m_s=typed.text("sound_speed_m_s", 10),
            layout_compensated=typed.ticked("layout_compensated"),
            depth_mm=typed.text("depth_mm", 10),
            certificate_ends_on=typed.day_or_none("certificate_ends_on"),
        )
        return Done(_("The test object is registered."), asked.back)

    return ask(request, asked, act)


def _object_fields(places: tuple[Option, ...]) -> tuple[Field, ...]:
    return (
        Field("site", _("Site"), "select", options=places),
        Field("name", _("Name")),
        Field("maker", _("Maker"), required=False),
        Field("model", _("Model"), required=False),
        Field("serial", _("Serial number")),
        Field("material", _("Material"), hint=_("Hydrogel, urethane, water or air.")),
        Field("sound_speed_m_s", _("Sound speed in m/s"), "decimal", required=False),
        Field(
            "layout_compensated",
            _("Its layout is already compensated for another sound speed"),
            "tick",
            _("Then distances in it are never corrected again."),
            required=False,
        ),
        Field("depth_mm", _("Depth in mm"), "decimal", required=False),
        Field("certificate_ends_on", _("Certificate ends"), "date", required=False),
    )


def _nominal_field(spec: MeasurandSpec) -> Field:
    unit = amount_words("", spec.unit).strip()
    name = f"{spec.name} ({unit})" if unit else spec.name
    return Field(spec.code, _("True value: %(name)s") % {"name": name}, "decimal", required=False)


def instruments(request: HttpRequest) -> HttpResponse:
    """Every instrument in sight with its calibration date."""
    at = now()
    scope = guards.scope(request.user, at)
    context = {
        "instruments": rows.list_instruments(scope),
        "sites": {site.id: site.name for site in sites.list_sites(scope)},
        "today": at.date(),
        "may_register": guards.may_somewhere(request.user, "object.register", at),
    }
    return render(request, "instruments.html", context)


def new_instrument(request: HttpRequest) -> HttpResponse:
    """Register an instrument."""
    at = now()
    guards.check_may_somewhere(request.user, "object.register", at)
    asked = Asked(
        _("Register an instrument"),
        _("Register"),
        reverse("instruments"),
        _("Instruments"),
        (
            Field("site", _("Site"), "select", options=_sites(request, at)),
            Field(
                "kind",
                _("What it is"),
                "radio",
                options=tuple((each, wording.kind_word(each)) for each in INSTRUMENTS),
            ),
            Field("maker", _("Maker")),
            Field("model", _("Model"), required=False),
            Field("serial", _("Serial number")),
            Field("calibration_due_on", _("Calibration due"), "date", required=False),
        ),
    )

    def act(typed: Typed) -> Done:
        objects.register_instrument(
            site=finding.site(request.user, typed.choice("site"), at),
            kind=typed.text("kind", 40),
            maker=typed.text("maker", 80),
            model=typed.text("model", 80),
            serial=typed.text("serial", 80),
            calibration_due_on=typed.day_or_none("calibration_due_on"),
            actor=request.user,
            at=at,
        )
        return Done(_("The instrument is registered."), asked.back)

    return ask(request, asked, act)
