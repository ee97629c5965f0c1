"""The pages on which an edition is written: what is wrong and where, and each part in a line."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from django.urls import reverse
from django.utils.translation import gettext as _
from django.utils.translation import ngettext

from qa_tracker.core.edition_draft import HEAD, STEPS, Part, Writing
from qa_tracker.core.edition_places import MEASURANDS, Spot, spot_of
from qa_tracker.core.errors import DomainError, Invalid
from qa_tracker.core.measurand_draft import NUMERIC
from qa_tracker.core.typed_text import neat
from qa_tracker.services import wording
from qa_tracker.services.edition_drafts import Kept
from qa_tracker.services.wording_words import amount
from qa_tracker.web.presenters.edition_words import label, place_of
from qa_tracker.web.refused import Refusal, Refused

_CODES = ("code", "one_of", "method")


@dataclass(frozen=True)
class ToMend:
    """One thing that keeps a draft from being published, with the page and the input it is at."""

    spot: Spot
    sentence: str
    address: str


@dataclass(frozen=True)
class MeasurandLine:
    """A measurand of a draft in a line."""

    key: str
    name: str
    code: str
    about: str
    to_mend: str
    is_first: bool
    is_last: bool


def to_mend(refusals: Sequence[DomainError], kept: Kept) -> tuple[ToMend, ...]:
    """Everything that is wrong with a draft, each with its address, the measurand named."""
    return tuple(_to_mend(each, kept) for each in refusals)


def _to_mend(error: DomainError, kept: Kept) -> ToMend:
    spot = spot_of(error.field, kept.writing)
    said = sentence(error, spot)
    if spot.part not in (HEAD, STEPS, MEASURANDS):
        named, part = label(spot.name), measurand_name(kept.writing.part(spot.part))
        said = f"{part}: {said}" if said.startswith(named) else f"{part}, {named.lower()}: {said}"
    return ToMend(spot, said, _address(spot, kept))


def sentence(error: DomainError, spot: Spot) -> str:
    """The sentence of a refusal, its field named by the input's label."""
    plainer = _plainer(error, spot)
    shown = type(plainer)(plainer.code, field=label(spot.name), **plainer.parameters)
    return wording.refusal(shown)


def _plainer(error: DomainError, spot: Spot) -> DomainError:
    """A refusal that speaks of JSON, in the terms of the form."""
    value = error.parameters.get("value", "")
    if error.code == "library.not_allowed" and (spot.name in _CODES or ".value" in error.field):
        return Invalid("edition_draft.not_a_code", field=error.field, value=value)
    if error.code == "library.not_allowed" and spot.name in ("rule", "every"):
        return Invalid("edition_draft.not_a_rule", value=value)
    if error.code == "library.kind_does_not_fit":
        return Invalid("edition_draft.kind_lacks", field=error.field, kind=error.parameters.get("kind", ""))
    if error.code == "library.empty" and spot.part not in (STEPS, MEASURANDS):
        return Invalid("edition_draft.empty", field=error.field)
    if error.code == "library.empty" and spot.part == STEPS:
        return Invalid("edition_draft.no_step")
    if error.code == "library.empty" and spot.part == MEASURANDS:
        return Invalid("edition_draft.no_measurand")
    return error


def refused_in(part: str, refusals: Sequence[DomainError], writing: Writing) -> Refused:
    """What is wrong with one part, beside its inputs."""
    found = []
    for error in refusals:
        spot = spot_of(error.field, writing)
        if spot.part == part:
            found.append(Refusal(error.code, spot.name, sentence(error, spot)))
    return Refused(tuple(sorted(found, key=lambda each: place_of(each.field))))


def _address(spot: Spot, kept: Kept) -> str:
    names = {HEAD: "edition-draft-head", STEPS: "edition-draft-steps", MEASURANDS: "edition-draft"}
    if spot.part in names:
        address = reverse(names[spot.part], args=[kept.procedure])
    else:
        address = reverse("edition-draft-measurand", args=[kept.procedure, spot.part])
    return f"{address}#id_{spot.name}" if spot.name else address


def measurand_name(part: Part) -> str:
    """What a measurand is called, or that it has no name yet."""
    return neat(part.typed, "name") or neat(part.typed, "code") or _("New measurand")


def is_untouched(part: Part) -> bool:
    """Whether nothing was typed of a new measurand yet, so that nothing is said of what is missing."""
    return not any(neat(part.typed, name) for name in ("name", "code", "prompt"))


def measurand_lines(kept: Kept, refusals: Sequence[DomainError]) -> tuple[MeasurandLine, ...]:
    """Every measurand of a draft in its order."""
    parts = kept.writing.measurands
    spots = [spot_of(each.field, kept.writing).part for each in refusals]
    return tuple(
        MeasurandLine(
            each.key,
            measurand_name(each),
            neat(each.typed, "code"),
            _about(each),
            _count(spots.count(each.key)),
            number == 1,
            number == len(parts),
        )
        for number, each in enumerate(parts, 1)
    )


def _about(part: Part) -> str:
    """Its kind, unit and steps: "number, mm, in steps of 0.5 mm"."""
    kind, unit = neat(part.typed, "kind"), neat(part.typed, "unit")
    words = [wording.kind_word(kind)]
    if kind in NUMERIC:
        steps = amount(neat(part.typed, "resolution"), unit)
        words.append(_("in steps of %(step)s") % {"step": steps})
    return ", ".join(words)


def _count(number: int) -> str:
    if not number:
        return ""
    return ngettext("%(n)d thing to put right", "%(n)d things to put right", number) % {"n": number}


@dataclass(frozen=True)
class OtherValue:
    """What another window kept in an input, beside what is typed here."""

    label: str
    value: str


def others_of(there: Part, typed: dict[str, str]) -> tuple[OtherValue, ...]:
    """Where another window kept something else than what was typed here."""
    names = sorted({*there.typed, *typed}, key=lambda name: (place_of(name), name))
    return tuple(
        OtherValue(label(name), there.typed.get(name, ""))
        for name in names
        if there.typed.get(name, "").strip() != typed.get(name, "").strip()
    )
