"""The fields of registering and editing scanners and probes."""

from __future__ import annotations

from django.utils.translation import gettext_lazy as _

from qa_tracker.core.errors import Invalid
from qa_tracker.core.library_shapes import ARRAY_KINDS, CONTACT_CLASSES
from qa_tracker.records.queries.devices import DeviceRow
from qa_tracker.services import wording
from qa_tracker.services.devices import APPLIED_PARTS, PROTECTION_CLASSES, Identity
from qa_tracker.web.forms.fields import Field
from qa_tracker.web.forms.typed import LONGEST_REASON, Typed, whole

# Column and how it is asked. The longest each can be is its column's.
REGISTER_KINDS = {
    "udi": "text",
    "owner": "text",
    "purchased_on": "date",
    "warranty_ends_on": "date",
    "contract": "text",
    "replacement_year": "whole",
    "network_title": "text",
    "clinical_use": "text",
    "keeper": "text",
    "spare": "tick",
}
LONGEST = {"maker": 80, "model": 80, "serial": 80, "inventory_number": 40, "network_title": 64}


def identity_fields() -> tuple[Field, ...]:
    """Who the device is: maker, model and serial as they stand on the type plate."""
    return (
        Field("maker", _("Maker"), focus=True),
        Field("model", _("Model")),
        Field("serial", _("Serial number"), hint=_("As on the type plate: the history follows it.")),
        Field("inventory_number", _("Inventory number"), required=False),
    )


def register_fields() -> tuple[Field, ...]:
    """What the register keeps beside the identity."""
    return tuple(
        Field(name, wording.register_word(name), kind, required=False)
        for name, kind in REGISTER_KINDS.items()
    )


def scanner_fields() -> tuple[Field, ...]:
    """What only a scanner has."""
    return (
        Field("software_version", _("Software version"), hint=_("As the scanner shows it.")),
        Field(
            "protection_class",
            _("Protection class"),
            "radio",
            options=tuple((each, each) for each in PROTECTION_CLASSES),
            values=("I",),
        ),
        Field("handheld", _("Handheld: scanner and probe in one"), "tick", required=False),
    )


def probe_fields() -> tuple[Field, ...]:
    """What only a probe has; the array decides which measurands make sense."""
    return (
        Field(
            "array_kind",
            _("Array"),
            "radio",
            options=tuple((each, wording.array_word(each)) for each in ARRAY_KINDS),
        ),
        Field(
            "contact_class",
            _("Touches"),
            "radio",
            options=tuple((each, wording.contact_word(each)) for each in CONTACT_CLASSES),
        ),
        Field(
            "applied_part",
            _("Applied-part type"),
            "radio",
            options=tuple((each, each) for each in APPLIED_PARTS),
        ),
        Field(
            "apertures",
            _("Apertures"),
            "area",
            _("One on each line: its name, a comma, its number of elements. A biplane has two lines."),
            values=("main, 192",),
        ),
        Field("wireless", _("Wireless"), "tick", required=False),
    )


def identity(typed: Typed) -> Identity:
    """The identity and register fields that were typed."""
    return Identity(
        maker=typed.text("maker", LONGEST["maker"]),
        model=typed.text("model", LONGEST["model"]),
        serial=typed.text("serial", LONGEST["serial"]),
        inventory_number=typed.text("inventory_number", LONGEST["inventory_number"]),
        handheld=typed.ticked("handheld"),
        register=register(typed),
    )


def register(typed: Typed) -> dict[str, object]:
    """The register fields, each as its column wants it."""
    return {name: _column(typed, name, kind) for name, kind in REGISTER_KINDS.items()}


def _column(typed: Typed, name: str, kind: str) -> object:
    if kind == "date":
        return typed.day_or_none(name)
    if kind == "whole":
        return typed.whole_or_none(name, 9999)
    if kind == "tick":
        return typed.ticked(name)
    return typed.text(name, LONGEST.get(name, 120))


def apertures(typed: Typed) -> list[tuple[str, int | None]]:
    """Names and numbers of elements; a line without a number leaves it open."""
    found: list[tuple[str, int | None]] = []
    for line in typed.words("apertures").splitlines():
        name, comma, count = (part.strip() for part in line.partition(","))
        if not line.strip():
            continue
        if not name or len(name) > 40 or (comma and not count.isdigit()) or name in dict(found):
            raise Invalid("form.aperture_wrong", field="apertures", line=line.strip())
        found.append((name, whole(count, "apertures") if count else None))
    return found


def standing_in(fields: tuple[Field, ...], device: DeviceRow) -> tuple[Field, ...]:
    """The register fields with what the register says now."""
    known = device.register | {"inventory_number": device.inventory_number}
    return tuple(each.starting(known.get(each.name, "")) for each in fields)


def reason(typed: Typed, name: str = "reason") -> str:
    """A reason as a placement or a state keeps it."""
    return typed.text(name, LONGEST_REASON)
