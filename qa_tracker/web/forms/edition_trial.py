"""The invented device that an edition is tried on: what is chosen of it, and example values."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from django.utils.translation import gettext as _

from qa_tracker.core.formula_names import NAMES, YES_NO
from qa_tracker.core.library_shapes import ARRAY_KINDS
from qa_tracker.core.library_specs import ProcedureSpec
from qa_tracker.services import wording
from qa_tracker.services.devices import APPLIED_PARTS, PROTECTION_CLASSES
from qa_tracker.services.edition_trial import Invented
from qa_tracker.web.forms.edition_editor import named
from qa_tracker.web.forms.fields import Field
from qa_tracker.web.presenters.edition_words import ATTRIBUTES

BASELINE, NOMINAL = "baseline.", "nominal."


def invented(typed: Mapping[str, str], spec: ProcedureSpec) -> Invented:
    """The device as it was chosen; a kind or array the procedure is not meant for gives its first."""
    kinds, arrays = spec.applies_to.kinds, _arrays(spec)
    kind = _one_of(kinds, typed.get("device_kind", ""), "probe" if "probe" in kinds else kinds[0])
    is_probe = kind == "probe"
    return Invented(
        kind,
        _one_of(arrays, typed.get("array_kind", ""), arrays[0]) if is_probe else "",
        _one_of(APPLIED_PARTS, typed.get("applied_part", ""), "BF") if is_probe else "",
        _one_of(PROTECTION_CLASSES, typed.get("protection_class", ""), "I") if kind == "scanner" else "",
        _examples(typed, BASELINE),
        _examples(typed, NOMINAL),
        {name: typed[name] for name in NAMES if name in typed},
    )


def _arrays(spec: ProcedureSpec) -> tuple[str, ...]:
    return spec.applies_to.array_kinds or ARRAY_KINDS


def _one_of(allowed: Sequence[str], chosen: str, otherwise: str) -> str:
    return chosen if chosen in allowed else otherwise


def _examples(typed: Mapping[str, str], begins: str) -> dict[str, str]:
    return {name.removeprefix(begins): text for name, text in typed.items() if name.startswith(begins)}


def device_fields(device: Invented, spec: ProcedureSpec, needs: Sequence[str]) -> tuple[Field, ...]:
    """What is chosen of the device, and the attributes that limits and formulas use."""
    kinds = named(spec.applies_to.kinds, wording.kind_word)
    fields = [Field("device_kind", _("Device"), "select", options=kinds, values=(device.kind,))]
    if device.kind == "probe":
        arrays = named(_arrays(spec), wording.array_word)
        parts = tuple((each, each) for each in APPLIED_PARTS)
        fields += [
            Field("array_kind", _("Array"), "select", options=arrays, values=(device.array_kind,)),
            Field("applied_part", _("Applied part"), "select", options=parts, values=(device.applied_part,)),
        ]
    if device.kind == "scanner":
        classes = tuple((each, each) for each in PROTECTION_CLASSES)
        held = (device.protection_class,)
        fields.append(
            Field("protection_class", _("Protection class"), "select", options=classes, values=held)
        )
    return (*fields, *(_attribute(name, device.attributes.get(name, "")) for name in needs))


def _attribute(name: str, value: str) -> Field:
    if NAMES[name] == YES_NO:
        options = (("", _("not said")), ("yes", _("yes")), ("no", _("no")))
        return Field(name, ATTRIBUTES[name], "select", options=options, values=(value,))
    return Field(name, ATTRIBUTES[name], "decimal", values=(value,))
