"""The entry page: sections by condition and aperture, each field with what stands beside it."""

from __future__ import annotations

import json
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from itertools import groupby

from django.utils.formats import date_format
from django.utils.translation import gettext as _

from qa_tracker.core.units import UNITS
from qa_tracker.services import wording
from qa_tracker.services.entries import REASONS
from qa_tracker.services.items import Item
from qa_tracker.services.judging import Judged, JudgedItem
from qa_tracker.web.presenters.judged import Shown, shown_item, value_words, where_words
from qa_tracker.web.refused import Refused


@dataclass(frozen=True)
class Choice:
    """One option of a list or one radio button."""

    value: str
    words: str
    chosen: bool


@dataclass(frozen=True)
class Outcome:
    """What stands below a field once something is typed: refusal, question, verdict, last value."""

    key: str
    refusal: str
    asks: bool
    confirmed: bool
    shown: Shown | None
    last: str


@dataclass(frozen=True)
class Field:
    """One item to be filled in."""

    item: Item
    value: str
    remark: str
    unit: str
    beside: tuple[str, ...]
    qualifiers: tuple[Choice, ...]
    choices: tuple[Choice, ...]
    reasons: tuple[Choice, ...]
    outcome: Outcome

    @property
    def key(self) -> str:
        """Name of the input."""
        return self.item.key

    @property
    def is_open(self) -> bool:
        """Whether "could not test" is shown unfolded."""
        return any(reason.chosen for reason in self.reasons)


@dataclass(frozen=True)
class Section:
    """Fields that share condition and aperture; ``asks_condition`` on the first of each condition."""

    title: str
    condition_id: int | None
    condition: str
    settings: tuple[tuple[str, str], ...]
    asks_condition: bool
    said: str
    note: str
    refusal: str
    fields: tuple[Field, ...]


def sections(
    items: Sequence[Item], typed: Mapping[str, str], judged: Judged, refused: Refused
) -> tuple[Section, ...]:
    """The items in the order they are measured: the device, then each condition, each aperture within it."""
    found = {one.item.key: one for one in judged.items}
    apertures = len({item.aperture.id for item in items if item.aperture})
    made: list[Section] = []
    for _place, group in groupby(in_walking_order(items), key=_place_of):
        members = list(group)
        fields = tuple(_field(item, typed, found.get(item.key), refused) for item in members)
        known = {section.condition_id for section in made}
        made.append(_section(members[0], fields, typed, refused, known, apertures > 1))
    return tuple(made)


@dataclass(frozen=True)
class Worked:
    """A quantity that was worked out, with its verdict where a limit judges it."""

    name: str
    where: str
    value: str
    shown: Shown | None


def worked_out(judged: Judged) -> tuple[Worked, ...]:
    """What could be worked out from what is typed so far."""
    return tuple(
        Worked(
            one.item.spec.name,
            where_words(
                one.item.aperture.name if one.item.aperture else "",
                one.item.condition.name if one.item.condition else "",
                1,
            ),
            value_words(one.item.spec, "=", one.entry.text, one.item.spec.unit),
            shown_item(one),
        )
        for one in judged.items
        if one.item.spec.kind == "derived"
    )


def item_names(items: Sequence[Item]) -> dict[str, str]:
    """What each item is called where it is spoken of apart from its place on the page."""
    several = len({item.aperture.id for item in items if item.aperture}) > 1
    names = {}
    for item in items:
        aperture = item.aperture.name if item.aperture and several else ""
        condition = item.condition.name if item.condition else ""
        where = where_words(aperture, condition, item.repeat, item.spec.repeats)
        names[item.key] = f"{item.spec.name}, {where}" if where else item.spec.name
    return names


def in_walking_order(items: Sequence[Item]) -> list[Item]:
    """Items regrouped so that a condition is set once and everything under it read."""
    conditions = list(dict.fromkeys(item.condition.id if item.condition else 0 for item in items))
    apertures = list(dict.fromkeys(item.aperture.id if item.aperture else 0 for item in items))

    def place(item: Item) -> tuple[int, int, int, int]:
        condition = item.condition.id if item.condition else 0
        aperture = item.aperture.id if item.aperture else 0
        return (bool(condition), conditions.index(condition), bool(aperture), apertures.index(aperture))

    return sorted(items, key=place)


def _place_of(item: Item) -> tuple[int | None, int | None]:
    return (item.condition.id if item.condition else None, item.aperture.id if item.aperture else None)


def _section(
    first: Item,
    fields: tuple[Field, ...],
    typed: Mapping[str, str],
    refused: Refused,
    known: set[int | None],
    several_apertures: bool,
) -> Section:
    condition, aperture = first.condition, first.aperture
    name = f"condition-{condition.id}" if condition else ""
    titles = [condition.name if condition else "", aperture.name if aperture and several_apertures else ""]
    return Section(
        ", ".join(title for title in titles if title),
        condition.id if condition else None,
        condition.name if condition else "",
        settings_of(condition.settings) if condition else (),
        condition is not None and condition.id not in known,
        typed.get(name, ""),
        typed.get(f"{name}-note", ""),
        refused.at(name) if name else "",
        fields,
    )


def settings_of(text: str) -> tuple[tuple[str, str], ...]:
    """Recorded settings for reading: ``depth_mm`` as "depth (mm)"."""
    return tuple((_setting_name(name), value) for name, value in sorted(json.loads(text or "{}").items()))


def _setting_name(name: str) -> str:
    words, _sign, unit = name.rpartition("_")
    return f"{words.replace('_', ' ')} ({unit})" if words and unit in UNITS else name.replace("_", " ")


def _field(item: Item, typed: Mapping[str, str], one: JudgedItem | None, refused: Refused) -> Field:
    spec, key = item.spec, item.key
    value = typed.get(key, "")
    qualifier, reason = typed.get(f"q-{key}", "="), typed.get(f"n-{key}", "")
    return Field(
        item,
        value,
        typed.get(f"r-{key}", ""),
        wording.unit_symbol(spec.unit) if spec.unit != "1" else "",
        _beside(item),
        tuple(Choice(each, qualifier_choice(each), each == qualifier) for each in spec.qualifiers)
        if spec.qualifiers != ("=",)
        else (),
        _choices(item, value),
        tuple(Choice(each, wording.reason_word(each), each == reason) for each in REASONS),
        outcome(item, typed, one, refused),
    )


def qualifier_choice(qualifier: str) -> str:
    """How a qualifier is offered in a list: "=" as "is"."""
    return {"=": _("is"), ">": _("more than (>)"), "<": _("less than (<)")}.get(
        qualifier, wording.qualifier_word(qualifier)
    )


def _choices(item: Item, value: str) -> tuple[Choice, ...]:
    if item.spec.kind == "grade":
        return tuple(Choice(each.value, each.name, each.value == value) for each in item.spec.grades)
    if item.spec.kind == "yes_no":
        return (Choice("yes", _("Yes"), value == "yes"), Choice("no", _("No"), value == "no"))
    return ()


def _beside(item: Item) -> tuple[str, ...]:
    """Resolution, baseline or nominal, limits and last value: what a reader of the scale wants to see."""
    spec = item.spec
    said = []
    if spec.kind in ("number", "image"):
        step = value_words(spec, "=", spec.resolution, spec.unit)
        said.append(_("Read to %(step)s.") % {"step": step})
    if item.baseline is not None:
        value = value_words(spec, item.baseline.qualifier, item.baseline.entered, item.baseline.unit)
        since = date_format(item.baseline.valid_from, "j F Y")
        said.append(_("Baseline %(value)s, since %(day)s.") % {"value": value, "day": since})
    if item.nominal is not None:
        said.append(_("Nominal %(value)s.") % {"value": value_words(spec, "=", item.nominal, spec.unit)})
    said += [
        _("Limit: %(limit)s.") % {"limit": wording.criterion_words(each.spec)}
        for each in item.criteria
        if not each.spec.criterion.grades
    ]
    if item.last is not None:
        said.append(_("The last value is shown once yours is in.") if spec.hide_last else last_words(item))
    return tuple(said)


def last_words(item: Item) -> str:
    """The last value of the series with its day."""
    last = item.last
    if last is None:
        return ""
    value = value_words(item.spec, last.qualifier, last.entered, last.unit)
    return _("Last %(value)s on %(day)s.") % {"value": value, "day": date_format(last.measured_at, "j F Y")}


def outcome(item: Item, typed: Mapping[str, str], one: JudgedItem | None, refused: Refused) -> Outcome:
    """What the page says below a field now."""
    key = item.key
    asks = any(code.startswith("reading.confirm_") for code in refused.codes_at(key))
    read = one is not None and one.is_read
    return Outcome(
        key,
        refused.at(key),
        asks or f"c-{key}" in typed,
        f"c-{key}" in typed,
        shown_item(one) if one is not None else None,
        last_words(item) if read and item.spec.hide_last else "",
    )
