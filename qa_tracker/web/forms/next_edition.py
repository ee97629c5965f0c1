"""The form on which the next edition of a set is written over the one before."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from django.http import HttpRequest
from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy

from qa_tracker.core.errors import DomainError, Invalid, SeveralInvalid
from qa_tracker.core.next_edition import HEAD, REMOVE, WORDS
from qa_tracker.records.queries.library import CriteriaSetRow, CriterionRow
from qa_tracker.services import wording
from qa_tracker.services.wording_words import capital
from qa_tracker.web.forms.fields import Field, Option
from qa_tracker.web.forms.typed import LONGEST_REMARK, Typed
from qa_tracker.web.presenters.edition_differences import BAND, band_words, key_words
from qa_tracker.web.presenters.edition_differences import WORDS as KEY_WORDS
from qa_tracker.web.refused import Refusal, Refused

LONGEST = {"edition": 30, "title": 200, "source": LONGEST_REMARK, "note": LONGEST_REMARK}
NUMBER = 40
HEAD_WORDS = {
    "edition": (
        gettext_lazy("Name of the edition"),
        gettext_lazy("A year or a number that none of this set has yet."),
    ),
    "title": (gettext_lazy("Title"), ""),
    "source": (
        gettext_lazy("Source"),
        gettext_lazy("Where the numbers were published, or who decided them."),
    ),
    "note": (gettext_lazy("Note"), ""),
}
STANDINGS = ("confirmed", "memory", "practice", "local")


@dataclass(frozen=True)
class LevelFields:
    """The numbers of one level, in one band or of the whole criterion."""

    place: str
    name: str
    fields: tuple[Field, ...]


@dataclass(frozen=True)
class CriterionFields:
    """Everything that can be typed for one criterion; ``is_open`` where it was touched or refused."""

    code: str
    name: str
    words: str
    levels: tuple[LevelFields, ...]
    standings: tuple[Field, ...]
    words_fields: tuple[Field, ...]
    remove: Field
    is_open: bool


def head_fields(places: Mapping[str, str]) -> tuple[Field, ...]:
    """What is asked about the edition as a whole."""
    kinds = {"source": "area", "note": "area"}
    return tuple(
        Field(
            name, HEAD_WORDS[name][0], kinds.get(name, "text"), HEAD_WORDS[name][1], required=name != "note",
            values=(places[name],),
        )
        for name in HEAD
    )  # fmt: skip


def criterion_fields(
    row: CriteriaSetRow, known: Mapping[str, str], places: Mapping[str, str], refused: Refused
) -> tuple[CriterionFields, ...]:
    """The fields of each criterion, with what was typed or stands there now."""
    return tuple(_criterion(each, known, places, refused) for each in row.criteria)


def _criterion(
    row: CriterionRow, known: Mapping[str, str], places: Mapping[str, str], refused: Refused
) -> CriterionFields:
    own = [name for name in known if name.startswith(f"{row.code}.")]
    remove = f"{row.code}.{REMOVE}"
    touched = places.get(remove) or any(places[name] != known[name] for name in own)
    at_fault = any(each.field.startswith(f"{row.code}.") for each in refused.refusals)
    standings = [name for name in own if name.startswith(f"{row.code}.standing.")]
    return CriterionFields(
        row.code,
        row.spec.name,
        wording.criterion_words(row.spec),
        _levels(row, own, places),
        tuple(_standing(name, places[name]) for name in standings),
        tuple(
            Field(f"{row.code}.{name}", HEAD_WORDS[name][0], "area", required=name != "note",
                  values=(places[f"{row.code}.{name}"],))
            for name in WORDS
        ),
        Field(
            remove, _("Leave it out of the next edition"), "tick",
            _("What procedures judge by it then has no limit of this set."), required=False,
            values=("yes",) if places.get(remove) else (),
        ),
        bool(touched or at_fault),
    )  # fmt: skip


def _levels(row: CriterionRow, own: Sequence[str], places: Mapping[str, str]) -> tuple[LevelFields, ...]:
    found: dict[str, list[Field]] = {}
    for name in own:
        if name.startswith(f"{row.code}.criterion"):
            place, _dot, key = name.rpartition(".")
            found.setdefault(place, []).append(_number(name, key, row.spec.unit, places[name]))
    return tuple(
        LevelFields(place, _level_name(row, place), tuple(fields)) for place, fields in found.items()
    )


def _level_name(row: CriterionRow, place: str) -> str:
    """The level, and in which band: "remedial level, from 3 MHz to below 7 MHz"."""
    where = place.removeprefix(f"{row.code}.criterion").removeprefix(".")
    band = BAND.match(where)
    if not band:
        return capital(key_words(where))
    words = band_words(row.spec.criterion.bands[int(band[1])], row.spec.criterion.banded_by)
    return capital(f"{words}: {key_words(where.rpartition('.')[2])}")


def _number(name: str, key: str, unit: str, value: str) -> Field:
    if key == "governs":
        options: tuple[Option, ...] = tuple(
            (str(word), label) for word, label in KEY_WORDS["governs"].items()
        )
        return Field(name, _("Where both are given"), "select", options=options, values=(value or "larger",))
    symbol = wording.unit_symbol(unit)
    words = {
        "absolute": _("Absolute, in %(unit)s") % {"unit": symbol} if symbol else _("Absolute"),
        "percent": _("Percentage"),
        "coverage": _("Coverage, in percent"),
        "confidence": _("Confidence, in percent"),
    }
    return Field(name, words[key], "decimal", values=(value,))


def _standing(name: str, value: str) -> Field:
    options = [("", _("not given")), *((each, wording.standing_word(each)) for each in STANDINGS)]
    level = name.rpartition(".")[2]
    label = _("Standing of the %(level)s") % {"level": wording.level_word(level)}
    hint = _("Of a number that is changed it becomes a local decision, unless another standing is chosen.")
    return Field(name, label, "select", hint, options=options, values=(value,))


def typed_places_of(request: HttpRequest, known: Mapping[str, str], codes: Sequence[str]) -> dict[str, str]:
    """What was typed at each place, as it was typed; refused where longer than can be kept."""
    typed = Typed(request.POST)
    texts = {name: typed.text(name, _longest(name)).replace("\r\n", "\n") for name in known}
    removed = {f"{code}.{REMOVE}": "yes" for code in codes if typed.ticked(f"{code}.{REMOVE}")}
    return texts | removed


def _longest(name: str) -> int:
    return LONGEST.get(name.rpartition(".")[2], NUMBER)


def shown_places(request: HttpRequest, known: Mapping[str, str], codes: Sequence[str]) -> dict[str, str]:
    """What to show again, whatever was typed."""
    names = [*known, *(f"{code}.{REMOVE}" for code in codes)]
    return {name: str(request.POST.get(name, "")) for name in names}


def refused_at_fields(error: DomainError, fields: Sequence[str]) -> Refused:
    """Every refusal at the field it belongs to, or at the nearest part that has a place on the page."""
    errors = error.errors if isinstance(error, SeveralInvalid) else (error,)
    return Refused(tuple(_refusal(each, fields) for each in errors))


def _refusal(error: DomainError, fields: Sequence[str]) -> Refusal:
    if error.code == "library.empty" and error.field in fields:
        return Refusal(
            error.code, error.field, wording.refusal(Invalid("form.unanswered", field=error.field))
        )
    code, _dot, rest = error.field.partition(".")
    label = ", ".join(part for part in (code, key_words(rest)) if part) if rest else _head_label(error.field)
    told = type(error)(error.code, field=label, **error.parameters)
    place = error.field
    while place and place not in fields:
        place = place.rpartition(".")[0]
    return Refusal(error.code, place, wording.refusal(told))


def _head_label(field: str) -> str:
    return str(HEAD_WORDS[field][0]) if field in HEAD_WORDS else _("The list of criteria")
