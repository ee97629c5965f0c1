"""Where in a draft a refusal belongs: from a place in the document to a part and an input of it."""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import Final

from qa_tracker.core.edition_draft import HEAD, STEPS, Writing
from qa_tracker.core.typed_text import neat

MEASURANDS: Final = "measurands"
_MEASURAND: Final = re.compile(r"measurands\[(\d+)\](?:\.(.*))?")
_STEP: Final = re.compile(r"steps\[(\d+)\].*")
_APPLIES: Final = {
    "kinds": "applies_kinds",
    "array_kinds": "applies_arrays",
    "contact_classes": "applies_contacts",
}


@dataclass(frozen=True)
class Spot:
    """A part of a draft by its key (``measurands`` for all of them together), and an input of it by its name."""

    part: str
    name: str = ""


def spot_of(place: str, writing: Writing) -> Spot:
    """Find the input that a place of the document was made from.

    Parameters
    ----------
    place
        As refusals have it, such as ``measurands[3].plausible.low``; one that is not known leads to the head.
    writing
        The draft that the document was made from.

    Examples
    --------
    >>> from qa_tracker.core.edition_draft import begin
    >>> draft = begin({"edition": 1, "steps": [], "measurands": [{"code": "gain"}]}, 2)
    >>> spot_of("measurands[0].plausible.high", draft)
    Spot(part='m1', name='high')
    """
    found = _MEASURAND.fullmatch(place)
    if found:
        return Spot(writing.measurands[int(found[1])].key, _measurand_input(found[2] or ""))
    if place.startswith(MEASURANDS):
        return Spot(MEASURANDS)
    if place.startswith(STEPS):
        step = _STEP.fullmatch(place)
        return Spot(STEPS, f"step-{int(step[1]) + 1}" if step else "step-1")
    return Spot(HEAD, _head_input(place, writing))


def _measurand_input(place: str) -> str:
    key, *rest = re.split(r"[.\[]", place)
    if key == "plausible":
        return rest[0] if rest and rest[0] in ("low", "high") else "low"
    return key


def _head_input(place: str, writing: Writing) -> str:
    key, *rest = re.split(r"[.\[]", place)
    if key == "recurrence" and rest == ["rule"]:
        return "rule" if neat(writing.head.typed, "rule") else "every"
    if key == "recurrence":
        return rest[0] if rest else "every"
    if key == "minutes" and rest:
        return f"minutes_{rest[0]}"
    if key == "applies_to" and rest:
        return _APPLIES.get(rest[0], "applies_kinds")
    return key
