"""The shapes of the library's documents as tables: which keys there are, and what each may hold.

What parts of a document must agree on is checked in ``library``.
"""

from __future__ import annotations

from typing import Any, Final

from qa_tracker.core.criteria import Criterion, from_json
from qa_tracker.core.library_reader import (
    Rule,
    decimal_text,
    flag,
    many,
    matching,
    note,
    object_of,
    one_of,
    or_none,
    pairs,
    some,
    text,
    unit_code,
    whole,
)
from qa_tracker.core.library_specs import (
    AppliesTo,
    ByLevel,
    CautionSpec,
    CriteriaSetSpec,
    CriterionSpec,
    DwellSpec,
    GradeSpec,
    MeasurandSpec,
    Plausible,
    ProcedureSpec,
    RecurrenceSpec,
    YearlySpec,
)
from qa_tracker.core.roles import ROLES

STANDINGS = ("confirmed", "memory", "practice", "local")
LEVELS = ("remedial", "suspension")
SHAPES = tuple("ABCDEFGHIJ")
MEDIA = ("phantom", "air", "electrical", "any")
KINDS = ("number", "count", "grade", "yes_no", "text", "derived", "image")
QUALIFIERS = ("=", ">", "<", "not_seen")
DEVICE_KINDS = ("scanner", "probe", "test_object")
ARRAY_KINDS = (
    "linear",
    "convex",
    "micro_convex",
    "phased",
    "matrix",
    "mechanical_3d",
    "cw_pencil",
    "single_element",
)
CONTACT_CLASSES = ("skin", "mucous_membrane", "sterile")
SIGNINGS = ("attestation", "sampled", "countersigned", "no_second_person")
INSTRUMENTS = ("leakage_tester", "scale", "thermometer", "photometer")


_CODE = matching(r"[a-z][a-z0-9_]*")
_SLUG = matching(r"[a-z0-9][a-z0-9-]*")
_CRITERION_ID = matching(r"[A-Z0-9][A-Z0-9-]*")
_ROLES = some(one_of(*ROLES))
_ARRAYS = many(one_of(*ARRAY_KINDS))
_MINUTES = pairs(whole(0), DEVICE_KINDS)
_BY_LEVEL_TEXT = {level: (text, None) for level in LEVELS}
_BY_LEVEL_STANDING = {level: (one_of(*STANDINGS), None) for level in LEVELS}


def _criterion(value: Any, place: str) -> Criterion:
    return from_json(value, field=place)


def _step(value: Any, place: str) -> str:
    return str(object_of({"text": text}, lambda text: text)(value, place))


_CRITERION: Final[dict[str, Rule | tuple[Rule, Any]]] = {
    "id": _CRITERION_ID,
    "name": text,
    "shape": one_of(*SHAPES),
    "unit": unit_code,
    "medium": one_of(*MEDIA),
    "methods": some(_CODE),
    "source": text,
    "standing": object_of(_BY_LEVEL_STANDING, ByLevel),
    "own_words": object_of(_BY_LEVEL_TEXT, ByLevel),
    "not_for_array_kinds": _ARRAYS,
    "electrical": flag,
    "applies_when": (pairs(text, ("part", "protection_class", "applied_part_type")), ()),
    "criterion": _criterion,
    "note": note,
    "measurands": (many(_CODE), ()),
}
CRITERION: Final = object_of(_CRITERION, CriterionSpec)
_SET: Final[dict[str, Rule | tuple[Rule, Any]]] = {
    "set": _SLUG,
    "edition": text,
    "title": text,
    "source": text,
    "note": note,
    "cautions": many(_SLUG),
    "criteria": some(CRITERION),
}
_MEASURAND: Final[dict[str, Rule | tuple[Rule, Any]]] = {
    "code": _CODE,
    "name": text,
    "kind": one_of(*KINDS),
    "unit": unit_code,
    "resolution": decimal_text,
    "per": one_of("aperture", "device"),
    "by_condition": flag,
    "repeats": whole(1),
    "qualifiers": some(one_of(*QUALIFIERS)),
    "required": flag,
    "criteria": many(_CRITERION_ID),
    "medium": one_of(*MEDIA),
    "nominal": or_none(decimal_text),
    "grades": many(object_of({"value": _CODE, "name": text}, GradeSpec)),
    "hide_last": flag,
    "plausible": or_none(object_of({"low": decimal_text, "high": decimal_text}, Plausible)),
    "prompt": text,
    "suggests_quarantine_on": many(_CODE),
    "nominal_from": (one_of("test_object"), None),
    "reference_from": (_CODE, None),
    "own_baseline": (flag, False),
    "kinds": (some(one_of(*DEVICE_KINDS)), None),
    "not_for_array_kinds": (_ARRAYS, ()),
    "one_of": (_CODE, None),
    "formula": (text, None),
    "sound_speed_correction": (flag, False),
    "yearly": (flag, False),
    "note": (note, ""),
    "method": (_CODE, ""),
}
_RECURRENCE = object_of(
    {"rule": matching(r"FREQ=[A-Z0-9=;,+-]+"), "before_days": whole(0), "grace_days": whole(0)},
    RecurrenceSpec,
)
_APPLIES_TO = object_of(
    {
        "kinds": some(one_of(*DEVICE_KINDS)),
        "array_kinds": or_none(_ARRAYS),
        "contact_classes": or_none(many(one_of(*CONTACT_CLASSES))),
    },
    AppliesTo,
)
_YEARLY = object_of({"performed_by": _ROLES, "minutes": _MINUTES, "recurrence": _RECURRENCE}, YearlySpec)
_PROCEDURE: Final[dict[str, Rule | tuple[Rule, Any]]] = {
    "procedure": _SLUG,
    "title": text,
    "edition": whole(1),
    "standing": text,
    "performed_by": _ROLES,
    "signing": one_of(*SIGNINGS),
    "minutes": _MINUTES,
    "when": text,
    "applies_to": _APPLIES_TO,
    "decontamination_gate": flag,
    "needs_test_object": flag,
    "needs_instrument": or_none(one_of(*INSTRUMENTS)),
    "recurrence": or_none(_RECURRENCE),
    "yearly": (_YEARLY, None),
    "cautions": many(_SLUG),
    "note": note,
    "steps": some(_step),
    "measurands": some(object_of(_MEASURAND, MeasurandSpec)),
}
_DWELL: Final[dict[str, Rule | tuple[Rule, Any]]] = {
    "from": decimal_text,
    "to": or_none(decimal_text),
    "minutes": or_none(decimal_text),
    "says": text,
}
_CAUTION: Final[dict[str, Rule | tuple[Rule, Any]]] = {
    "code": _SLUG,
    "text": text,
    "applies": some(_SLUG),
    "source": (text, ""),
    "standing": (one_of(*STANDINGS), None),
    "quantity": (text, ""),
    "table": (many(object_of(_DWELL, DwellSpec)), ()),
}

CRITERIA_SET: Final = object_of(_SET, CriteriaSetSpec)
PROCEDURE: Final = object_of(_PROCEDURE, ProcedureSpec)
CAUTIONS: Final = many(object_of(_CAUTION, CautionSpec))
