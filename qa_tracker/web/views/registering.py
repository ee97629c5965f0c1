"""Entering scanners and probes, and changing what the register says of them."""

from __future__ import annotations

import uuid

from django.http import HttpRequest, HttpResponse
from django.urls import reverse
from django.utils.timezone import now
from django.utils.translation import gettext as _
from django.utils.translation import ngettext

from qa_tracker.services import devices, guards
from qa_tracker.web import sight
from qa_tracker.web.forms.asking import Asked, Done, ask
from qa_tracker.web.forms.fields import Field
from qa_tracker.web.forms.places import chosen_place, place_field
from qa_tracker.web.forms.registering import (
    apertures,
    identity,
    identity_fields,
    probe_fields,
    register,
    register_fields,
    scanner_fields,
    standing_in,
)
from qa_tracker.web.forms.typed import Typed


def new_scanner(request: HttpRequest) -> HttpResponse:
    """Register a scanner."""
    at = now()
    guards.check_may_somewhere(request.user, "device.register", at)
    place = place_field(guards.scope(request.user, at), "scanner")
    asked = Asked(
        _("Register a scanner"),
        _("Register"),
        reverse("register"),
        _("Register"),
        (*identity_fields(), place, *scanner_fields(), *register_fields()),
        lead=_("It awaits acceptance until a physicist or clinical engineer accepts it into use."),
    )

    def act(typed: Typed) -> Done:
        made = devices.register_scanner(
            identity=identity(typed),
            place=chosen_place(request, typed, at),
            software_version=typed.text("software_version", 60),
            protection_class=typed.text("protection_class"),
            actor=request.user,
            at=at,
        )
        return Done(
            _("The scanner is registered. Next: accept it, and plan its checks."),
            reverse("device", args=[made.uid]),
        )

    return ask(request, asked, act)


def new_probe(request: HttpRequest) -> HttpResponse:
    """Register a probe."""
    at = now()
    guards.check_may_somewhere(request.user, "device.register", at)
    place = place_field(guards.scope(request.user, at), "probe").starting(request.GET.get("place", ""))
    asked = Asked(
        _("Register a probe"),
        _("Register"),
        reverse("register"),
        _("Register"),
        (*identity_fields(), place, *probe_fields(), *register_fields()),
        lead=_("It awaits acceptance until a physicist or clinical engineer accepts it into use."),
    )

    def act(typed: Typed) -> Done:
        made = devices.register_probe(
            identity=identity(typed),
            place=chosen_place(request, typed, at),
            array_kind=typed.text("array_kind"),
            contact_class=typed.text("contact_class"),
            applied_part=typed.text("applied_part"),
            apertures=apertures(typed),
            wireless=typed.ticked("wireless"),
            actor=request.user,
            at=at,
        )
        return Done(
            _("The probe is registered. Next: accept it, name its conditions, and plan its checks."),
            reverse("device", args=[made.uid]),
        )

    return ask(request, asked, act)


def edit(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Change register fields."""
    at = now()
    row = sight.device_to(request, uid, "device.edit", at)
    fields = (Field("inventory_number", _("Inventory number"), required=False), *register_fields())
    asked = Asked(
        _("Register fields of %(device)s") % {"device": row.label},
        _("Keep"),
        reverse("device", args=[uid]),
        row.label,
        standing_in(fields, row),
        lead=_("Maker, model and serial stay as they were registered."),
    )

    def act(typed: Typed) -> Done:
        changes = register(typed) | {"inventory_number": typed.text("inventory_number", 40)}
        devices.edit(device=uid, changes=changes, actor=request.user, at=at)
        return Done(_("The register is changed; what it said before is kept."), asked.back)

    return ask(request, asked, act)


def software(request: HttpRequest, uid: uuid.UUID) -> HttpResponse:
    """Record a software version of a scanner."""
    at = now()
    row = sight.device_to(request, uid, "device.edit", at)
    asked = Asked(
        _("Software of %(device)s") % {"device": row.label},
        _("Record"),
        reverse("device", args=[uid]),
        row.label,
        (
            Field("version", _("Version"), values=(row.software_version,)),
            Field("options", _("Options"), "area", required=False),
            Field("since_on", _("Since"), "date", values=(at.date().isoformat(),)),
        ),
        notes=(
            _(
                "Test before and after on one day, with the same object and preset. Baselines that were measured on "
                "this scanner come under review: still compared, and every verdict says so, until a physicist keeps "
                "or replaces them."
            ),
        ),
    )

    def act(typed: Typed) -> Done:
        marked = devices.record_software(
            scanner=uid,
            version=typed.text("version", 60),
            options=typed.words("options"),
            since_on=typed.day("since_on"),
            actor=request.user,
            at=at,
        )
        said = ngettext(
            "The software version is recorded; %(count)d baseline is under review.",
            "The software version is recorded; %(count)d baselines are under review.",
            len(marked),
        )
        return Done(said % {"count": len(marked)}, asked.back)

    return ask(request, asked, act)
