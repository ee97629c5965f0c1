"""The words of an edition: a label for every input and key of it, and what stands there as people read it."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Final

from django.utils.functional import Promise
from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy

from qa_tracker.core.edition_differences import Value
from qa_tracker.core.errors import DomainError
from qa_tracker.services import cautions, wording

LABELS: Final[Mapping[str, Promise]] = {
    # The head
    "title": gettext_lazy("Title"),
    "when": gettext_lazy("When it is done"),
    "standing": gettext_lazy("Where it comes from"),
    "note": gettext_lazy("Note"),
    "performed_by": gettext_lazy("Who may do it"),
    "signing": gettext_lazy("Signing"),
    "minutes_scanner": gettext_lazy("Minutes a scanner"),
    "minutes_probe": gettext_lazy("Minutes a probe"),
    "minutes_test_object": gettext_lazy("Minutes a test object"),
    "every": gettext_lazy("How many of them"),
    "period": gettext_lazy("Due"),
    "rule": gettext_lazy("Or by another rule"),
    "before_days": gettext_lazy("Days before on which it may already be done"),
    "grace_days": gettext_lazy("Days of grace after"),
    "needs_test_object": gettext_lazy("It needs a test object"),
    "needs_instrument": gettext_lazy("Instrument"),
    "decontamination_gate": gettext_lazy("Cleaning is recorded before and after"),
    "applies_kinds": gettext_lazy("Meant for"),
    "applies_arrays": gettext_lazy("Only for these arrays"),
    "applies_contacts": gettext_lazy("Only for probes that touch"),
    "cautions": gettext_lazy("Cautions shown with it"),
    "steps": gettext_lazy("Steps"),
    # A measurand
    "name": gettext_lazy("Name"),
    "code": gettext_lazy("Code"),
    "kind": gettext_lazy("Kind"),
    "unit": gettext_lazy("Unit"),
    "resolution": gettext_lazy("Read in steps of"),
    "formula": gettext_lazy("Formula"),
    "per": gettext_lazy("Read for"),
    "by_condition": gettext_lazy("Under each condition"),
    "repeats": gettext_lazy("How many times"),
    "qualifiers": gettext_lazy("How a value may be given"),
    "required": gettext_lazy("An answer is required"),
    "one_of": gettext_lazy("One answer is enough of those named"),
    "criteria": gettext_lazy("Limits"),
    "medium": gettext_lazy("Medium"),
    "method": gettext_lazy("Method"),
    "nominal": gettext_lazy("Nominal value"),
    "nominal_from": gettext_lazy("The nominal value is the test object's own"),
    "reference_from": gettext_lazy("Judged as a share of"),
    "own_baseline": gettext_lazy("Compared with the device's own baseline"),
    "grades": gettext_lazy("Answers"),
    "suggests_quarantine_on": gettext_lazy("Quarantine is suggested on"),
    "low": gettext_lazy("Plausible from"),
    "high": gettext_lazy("Plausible to"),
    "hide_last": gettext_lazy("Hold the last value back until one is entered"),
    "prompt": gettext_lazy("Prompt"),
    "kinds": gettext_lazy("Only at"),
    "not_for_array_kinds": gettext_lazy("Not for these arrays"),
    "sound_speed_correction": gettext_lazy("A distance along the beam, scaled by the speed of sound"),
    "yearly": gettext_lazy("Only once a year"),
}
MEDIA: Final = {
    "any": gettext_lazy("any medium"),
    "phantom": gettext_lazy("on a phantom"),
    "air": gettext_lazy("in air"),
    "electrical": gettext_lazy("electrical"),
}
PER: Final = {"device": gettext_lazy("the whole device"), "aperture": gettext_lazy("each aperture")}
SIGNINGS: Final = {
    "attestation": gettext_lazy("attested by who does it, no countersignature"),
    "sampled": gettext_lazy("a sample is countersigned, and whatever does not conform"),
    "countersigned": gettext_lazy("each one is countersigned"),
    "no_second_person": gettext_lazy("no second person is required"),
}
PERIODS: Final = {
    "": gettext_lazy("when something happens, as said above"),
    "DAILY": gettext_lazy("every so many days"),
    "WEEKLY": gettext_lazy("every so many weeks"),
    "MONTHLY": gettext_lazy("every so many months"),
    "YEARLY": gettext_lazy("every so many years"),
}

ATTRIBUTES: Final = {
    "device.handheld": gettext_lazy("Handheld"),
    "probe.wireless": gettext_lazy("Wireless"),
    "aperture.elements": gettext_lazy("Elements of the aperture"),
    "aperture.pitch_mm": gettext_lazy("Pitch (mm)"),
    "condition.test_frequency_mhz": gettext_lazy("Test frequency (MHz)"),
    "condition.sound_speed_m_s": gettext_lazy("The console's sound-speed setting (m/s)"),
    "test_object.sound_speed_m_s": gettext_lazy("Sound speed of the test object (m/s)"),
    "test_object.depth_mm": gettext_lazy("Depth of the test object (mm)"),
    "test_object.layout_compensated": gettext_lazy("The test object's layout is compensated already"),
}


def label(key: str) -> str:
    """The label of an input or key; one of the yearly part says so."""
    if key.startswith("yearly."):
        return _("Yearly part: %(label)s") % {"label": label(key.partition(".")[2])}
    if key.startswith("step-"):
        return _("Step %(number)s") % {"number": key.partition("-")[2]}
    return str(LABELS.get(key, key.replace("_", " ")))


def place_of(key: str) -> int:
    """Where an input stands on its page, to put refusals in that order."""
    return list(LABELS).index(key) if key in LABELS else len(LABELS)


def medium_word(medium: str) -> str:
    """What a measurand is read in."""
    return str(MEDIA.get(medium, medium))


def unit_name(unit: str) -> str:
    """The unit's symbol, or that there is none."""
    return wording.unit_symbol(unit) or _("none: a plain number")


def qualifier_name(qualifier: str) -> str:
    """How a value may be given: a plain value, more or less than it, or not seen."""
    named = {"=": _("a plain value"), ">": _("more than (>)"), "<": _("less than (<)")}
    return named.get(qualifier, wording.qualifier_word(qualifier))


def caution_words(code: str) -> str:
    """The sentence of a caution; one that is not there by its code."""
    return next(iter(cautions.texts([code])), code)


def _rule_words(rule: str) -> str:
    try:
        return wording.recurrence_words(rule, "calendar")
    except DomainError:
        return rule


_ITEMS: Final[Mapping[str, Callable[[str], str]]] = {
    "performed_by": wording.role_word,
    "applies_kinds": wording.kind_word,
    "applies_arrays": wording.array_word,
    "applies_contacts": wording.contact_word,
    "kinds": wording.kind_word,
    "not_for_array_kinds": wording.array_word,
    "qualifiers": qualifier_name,
    "cautions": caution_words,
}
_WORDS: Final[Mapping[str, Callable[[str], str]]] = {
    "kind": wording.kind_word,
    "unit": unit_name,
    "medium": medium_word,
    "per": lambda per: str(PER.get(per, per)),
    "signing": lambda signing: str(SIGNINGS.get(signing, signing)),
    "needs_instrument": wording.kind_word,
    "nominal_from": wording.kind_word,
    "rule": _rule_words,
}


def value_lines(key: str, value: Value) -> tuple[str, ...]:
    """What stands at a key, a line for each part of it; nothing where nothing does."""
    key = key.rpartition(".")[2]
    if value is None:
        return ()
    if isinstance(value, bool):
        return (_("yes") if value else _("no"),)
    if isinstance(value, tuple):
        words = [_ITEMS[key](each) if key in _ITEMS else each for each in value]
        return tuple(words) if key in ("grades", "cautions") else (", ".join(words),)
    text = str(value)
    return (_WORDS[key](text) if key in _WORDS else text,)
