"""One measurand of a draft: the inputs it is typed in, and the part of the document they make."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any, Final

from qa_tracker.core.typed_text import YES, Typed, decimal, flag, marked, neat, whole, words

NUMERIC: Final = ("number", "count", "image", "derived")
WORDED: Final = ("grade", "yes_no")
NEW: Final = {
    "kind": "number", "unit": "mm", "resolution": "1", "per": "device", "repeats": "1", "qualifiers": "=",
    "required": YES, "medium": "any",
}  # fmt: skip
"""What a new measurand begins with."""
SAMPLE: Final = "sample."
"""Begins the names of the sample values a formula is tried with: typed beside the measurand, no part of it."""

_TEXTS: Final = (
    "code",
    "name",
    "kind",
    "unit",
    "per",
    "medium",
    "prompt",
    "note",
    "method",
    "one_of",
    "formula",
)
_FLAGS: Final = ("by_condition", "required", "hide_last", "own_baseline", "sound_speed_correction", "yearly")
_LISTS: Final = ("qualifiers", "criteria", "suggests_quarantine_on", "kinds", "not_for_array_kinds")
_MAY_BE_ABSENT: Final = (
    "nominal_from", "reference_from", "own_baseline", "kinds", "not_for_array_kinds", "one_of", "formula",
    "sound_speed_correction", "yearly", "note", "method",
)  # fmt: skip


def measurand_typed(document: Mapping[str, Any]) -> dict[str, str]:
    """Write a measurand of a published document as it would be typed; what is empty is left out.

    Examples
    --------
    >>> measurand_typed({"code": "gain", "plausible": {"low": "1", "high": "9"}, "grades": [], "required": True})
    {'code': 'gain', 'required': 'yes', 'low': '1', 'high': '9'}
    """
    typed = {
        key: str(document.get(key) or "")
        for key in (*_TEXTS, "resolution", "repeats", "nominal", "reference_from")
    }
    typed |= {key: flag(document.get(key)) for key in _FLAGS}
    typed |= {key: " ".join(document.get(key) or ()) for key in _LISTS}
    typed["nominal_from"] = flag(document.get("nominal_from"))
    typed["grades"] = "\n".join(f"{each['value']}: {each['name']}" for each in document.get("grades") or ())
    typed |= {key: str(value) for key, value in (document.get("plausible") or {}).items()}
    return {name: text for name, text in typed.items() if text}


def measurand_document(typed: Typed) -> dict[str, Any]:
    """Make the measurand of a document from what was typed; nothing is checked.

    A comma is read as the decimal point. Of the inputs only those are used that the kind has: the others wait in
    the draft in case the kind is changed back.

    Examples
    --------
    >>> measurand_document(NEW | {"code": "gain", "resolution": "0,5"})["resolution"]
    '0.5'
    """
    kind = neat(typed, "kind")
    numeric = kind not in (*WORDED, "text")
    document: dict[str, Any] = {
        **{key: neat(typed, key) for key in ("code", "name", "kind", "per", "medium", "prompt")},
        **{key: marked(typed, key) for key in ("by_condition", "required", "hide_last")},
        "unit": neat(typed, "unit") if numeric else "1",
        "resolution": decimal(neat(typed, "resolution")) if numeric else "1",
        "repeats": 1 if kind == "derived" else whole(neat(typed, "repeats")),
        "qualifiers": words(typed, "qualifiers") if numeric and kind != "derived" else ["="],
        "criteria": words(typed, "criteria"),
        "nominal": (decimal(neat(typed, "nominal")) or None) if numeric else None,
        "plausible": _plausible(typed) if numeric else None,
        "grades": _grades(neat(typed, "grades")) if kind == "grade" else [],
        "suggests_quarantine_on": words(typed, "suggests_quarantine_on") if kind in WORDED else [],
    }
    return document | _optional(typed, kind, numeric)


def _plausible(typed: Typed) -> dict[str, str] | None:
    low, high = decimal(neat(typed, "low")), decimal(neat(typed, "high"))
    return {"low": low, "high": high} if low or high else None


def _grades(text: str) -> list[dict[str, str]]:
    """Lines of a value, a colon and a name."""
    lines = [line.partition(":") for line in text.splitlines() if line.strip()]
    return [{"value": value.strip(), "name": name.strip()} for value, _, name in lines]


def _optional(typed: Typed, kind: str, numeric: bool) -> dict[str, Any]:
    """The keys that are written only where they say something."""
    found: dict[str, Any] = {
        "nominal_from": "test_object" if numeric and marked(typed, "nominal_from") else None,
        "reference_from": neat(typed, "reference_from") if numeric else "",
        "own_baseline": numeric and marked(typed, "own_baseline"),
        "sound_speed_correction": numeric and marked(typed, "sound_speed_correction"),
        "kinds": words(typed, "kinds"),
        "not_for_array_kinds": words(typed, "not_for_array_kinds"),
        "one_of": neat(typed, "one_of"),
        "formula": formula_of(typed) if kind == "derived" else "",
        "yearly": marked(typed, "yearly"),
        "note": neat(typed, "note"),
        "method": neat(typed, "method"),
    }
    return {key: found[key] for key in _MAY_BE_ABSENT if found[key]}


def formula_of(typed: Typed) -> str:
    r"""The formula on one line, each character in the column it was typed in.

    Examples
    --------
    >>> formula_of({"formula": "a\n+ b"})
    'a + b'
    """
    return neat(typed, "formula").replace("\n", " ")


def samples_of(typed: Typed) -> dict[str, str]:
    """The sample values of a formula by the name they stand for.

    Examples
    --------
    >>> samples_of({"formula": "a", "sample.a": "12.5", "sample.b": ""})
    {'a': '12.5'}
    """
    return {
        name.removeprefix(SAMPLE): text.strip()
        for name, text in typed.items()
        if name.startswith(SAMPLE) and text.strip()
    }
