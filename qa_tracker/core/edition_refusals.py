"""Everything that keeps an edition from being published, found in one go, each at its place in the document.

``library.procedure`` stops at the first refusal. Here the document is read again and again, what was refused being
replaced by a stand-in, until the rest is whole. The stand-ins are never shown or kept.
"""

from __future__ import annotations

import copy
import re
from collections.abc import Collection, Iterator, Mapping, Sequence
from dataclasses import dataclass, field
from typing import Any, Final

from qa_tracker.core import library
from qa_tracker.core.decimals import parse
from qa_tracker.core.errors import DomainError, Invalid
from qa_tracker.core.library_specs import CriterionSpec, MeasurandSpec, ProcedureSpec, RecurrenceSpec
from qa_tracker.core.schedule import LONGEST_WINDOW
from qa_tracker.core.schedule_rule import parse_rule

_MOST: Final = 200
# As long as the columns of the tables are, and as often as anybody reads one value.
_CODE: Final = 60
_TITLE: Final = 160
_EDITIONS: Final = 9999
_REPEATS: Final = 50
_PLACE: Final = re.compile(r"measurands\[(\d+)\](?:\.(.*))?")
_ITEM: Final = re.compile(r"(\w+)\[(\d+)\].*")
_STEP: Final = {"text": "…"}
_MEASURAND: Final[dict[str, Any]] = {
    "name": "…", "kind": "number", "unit": "1", "resolution": "1", "per": "device", "by_condition": False,
    "repeats": 1, "qualifiers": ["="], "required": False, "criteria": [], "medium": "any", "nominal": None,
    "grades": [], "hide_last": False, "plausible": None, "prompt": "…", "suggests_quarantine_on": [],
}  # fmt: skip
_HEAD: Final[dict[str, Any]] = {
    "procedure": "unread", "title": "…", "edition": 1, "standing": "…", "performed_by": ["physicist"],
    "signing": "attestation", "minutes": {}, "when": "…",
    "applies_to": {"kinds": ["scanner"], "array_kinds": None, "contact_classes": None},
    "decontamination_gate": False, "needs_test_object": False, "needs_instrument": None, "recurrence": None,
    "cautions": [], "note": "", "steps": [_STEP], "measurands": [_MEASURAND | {"code": "unread"}],
}  # fmt: skip


@dataclass(frozen=True)
class Published:
    """What is published already; None for what is not to be looked at.

    Parameters
    ----------
    criteria
        Every criterion, each edition of it.
    cautions
        Codes of the cautions there are.
    measurands
        Kind and unit of each measurand that a procedure has: a code stands for one quantity everywhere.
    """

    criteria: Sequence[CriterionSpec] | None = None
    cautions: Collection[str] | None = None
    measurands: Mapping[str, tuple[str, str]] = field(default_factory=dict)


@dataclass(frozen=True)
class Found:
    """What a document says as far as it can be read, and all that is wrong with it.

    ``spec`` holds stand-ins at the places of ``refusals``; None where not even they help.
    """

    spec: ProcedureSpec | None
    refusals: tuple[DomainError, ...]


def read_whole(document: Any, published: Published | None = None) -> Found:
    """Read a procedure's document and find every refusal.

    Parameters
    ----------
    document
        Parsed JSON, or what ``edition_draft.document_of`` gives.
    published
        What it has to agree with; without it only the document itself is looked at.

    Returns
    -------
    Found
        Its refusals in the document's order, ``field`` being the place: ``title``, ``measurands[3].formula``.

    Examples
    --------
    >>> read_whole("a text").refusals[0].code
    'library.not_an_object'
    """
    given, found = copy.deepcopy(document), list[DomainError]()
    spec: ProcedureSpec | None = None
    for _ in range(_MOST):
        try:
            spec = library.procedure(given)
            break
        except DomainError as refusal:
            found.append(refusal)
            if not isinstance(given, dict) or not _stand_in(given, refusal.field):
                break
    if spec is not None:
        found += _beyond_shape(spec)
        found += _unlike_published(spec, published or Published(), {each.field for each in found})
    return Found(spec, in_order(found))


def in_order(refusals: Sequence[DomainError]) -> tuple[DomainError, ...]:
    """Sort refusals by their place: the head, the steps, then each measurand.

    Examples
    --------
    >>> [each.field for each in in_order([Invalid("a", field="measurands[10].name"), Invalid("b", field="steps")])]
    ['steps', 'measurands[10].name']
    """

    def place(refusal: DomainError) -> tuple[int, int]:
        found = _PLACE.fullmatch(refusal.field)
        if found:
            return 2, int(found[1])
        return (1 if refusal.field.startswith("steps") else 3 * (refusal.field == "measurands")), 0

    return tuple(sorted(refusals, key=place))


def _stand_in(given: dict[str, Any], place: str) -> bool:
    """Put something sound where a refusal was; False where that changes nothing, so that no round is endless."""
    found = _PLACE.fullmatch(place)
    if found and isinstance(given.get("measurands"), list):
        return _mend_measurand(given["measurands"], int(found[1]), found[2] or "")
    return _mend_head(given, place)


def _mend_head(given: dict[str, Any], place: str) -> bool:
    item = _ITEM.fullmatch(place)
    key = re.split(r"[.\[]", place)[0]
    if item and key == "steps":
        before, given[key][int(item[2])] = given[key][int(item[2])], dict(_STEP)
        return bool(before != _STEP)
    before = given.pop(key, None)
    if key in _HEAD:
        given[key] = copy.deepcopy(_HEAD[key])
    return bool(before != given.get(key))


def _mend_measurand(measurands: list[Any], index: int, place: str) -> bool:
    key = re.split(r"[.\[]", place)[0]
    sound = copy.deepcopy(_MEASURAND) | {"code": f"unread_{index}"}
    measurand = measurands[index]
    if not key or not isinstance(measurand, dict):
        measurands[index] = sound
        return bool(measurand != sound)
    before = dict(measurand)
    if key == "grades" and measurand.get("kind") == "grade":
        measurand |= {"grades": [{"value": "unread", "name": "…"}], "suggests_quarantine_on": []}
    elif key in ("kind", "formula"):
        measurand |= {key: sound[key] for key in ("kind", "grades", "suggests_quarantine_on")}
        measurand.pop("formula", None)
    elif key in sound:
        measurand[key] = sound[key]
    else:
        measurand.pop(key, None)
    return before != measurand


def _beyond_shape(spec: ProcedureSpec) -> Iterator[DomainError]:
    """Refuse what can be read and yet can't be kept or makes no sense: a rule nothing follows, a step of no width."""
    for place, words, most in (("procedure", spec.procedure, _CODE), ("title", spec.title, _TITLE)):
        if len(words) > most:
            yield Invalid("edition_draft.too_long", field=place, length=len(words), most=most)
    if spec.edition > _EDITIONS:
        yield Invalid("edition_draft.too_many", field="edition", count=spec.edition, most=_EDITIONS)
    if spec.recurrence is not None:
        yield from _wrong_recurrence(spec.recurrence)
    for index, measurand in enumerate(spec.measurands):
        place = f"measurands[{index}]"
        if len(measurand.code) > _CODE:
            yield Invalid(
                "edition_draft.too_long", field=f"{place}.code", length=len(measurand.code), most=_CODE
            )
        if measurand.repeats > _REPEATS:
            yield Invalid(
                "edition_draft.too_many", field=f"{place}.repeats", count=measurand.repeats, most=_REPEATS
            )
        if parse(measurand.resolution).scaled <= 0:
            yield Invalid("number.step", field=f"{place}.resolution", step=measurand.resolution)
        band = measurand.plausible
        if band is not None and parse(band.low).decimal >= parse(band.high).decimal:
            yield Invalid(
                "edition_draft.band_reversed", field=f"{place}.plausible", low=band.low, high=band.high
            )


def _wrong_recurrence(recurrence: RecurrenceSpec) -> Iterator[DomainError]:
    try:
        parse_rule(recurrence.rule)
    except Invalid as refusal:
        yield type(refusal)(refusal.code, field="recurrence.rule", **refusal.parameters)
    for key in ("before_days", "grace_days"):
        days = getattr(recurrence, key)
        if days > LONGEST_WINDOW:
            yield Invalid(
                "schedule.days_out_of_range", field=f"recurrence.{key}", days=days, most=LONGEST_WINDOW
            )


def _unlike_published(
    spec: ProcedureSpec, published: Published, refused: Collection[str]
) -> Iterator[DomainError]:
    """Refuse what doesn't agree with what is published; not where a stand-in is looked at."""
    if published.cautions is not None:
        for code in spec.cautions:
            if code not in published.cautions:
                yield Invalid("library.unknown_caution", field="cautions", caution=code)
    for index, measurand in enumerate(spec.measurands):
        place = f"measurands[{index}]"
        if any(f"{place}.{key}" in refused for key in ("code", "kind", "unit", "formula")):
            continue
        yield from _unlike_known(measurand, published.measurands, place)
        if published.criteria is not None:
            yield from _unfit_criteria(measurand, published.criteria, f"{place}.criteria")


def _unfit_criteria(
    measurand: MeasurandSpec, criteria: Sequence[CriterionSpec], place: str
) -> Iterator[DomainError]:
    try:
        library.check_criteria(measurand, criteria, place)
    except Invalid as refusal:
        yield refusal


def _unlike_known(
    measurand: MeasurandSpec, known: Mapping[str, tuple[str, str]], place: str
) -> Iterator[DomainError]:
    kind, unit = known.get(measurand.code, (measurand.kind, measurand.unit))
    if (kind, unit) != (measurand.kind, measurand.unit):
        key = "kind" if kind != measurand.kind else "unit"
        yield Invalid(
            "edition_draft.measurand_known",
            field=f"{place}.{key}",
            measurand=measurand.code,
            kind=kind,
            unit=unit,
        )
