"""Two editions side by side in words: each criterion's limit in both, and every key at which they differ."""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from decimal import Decimal

from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy, ngettext

from qa_tracker.core.criteria import Band
from qa_tracker.core.decimals import plain
from qa_tracker.core.edition_differences import Difference, KeyChange, Value, differences, stand_ins
from qa_tracker.core.library_specs import CriteriaSetSpec, CriterionSpec
from qa_tracker.records.queries.library import CriteriaSetRow, EditionRow
from qa_tracker.services import wording
from qa_tracker.services.wording_words import amount, banding_unit, banding_word
from qa_tracker.web.presenters.criteria import SHAPES, medium_word, methods_words

STATES = {
    "changed": gettext_lazy("Changed"),
    "added": gettext_lazy("Added"),
    "removed": gettext_lazy("Removed"),
}
OF_TWO_SETS = {
    "changed": gettext_lazy("Differs"),
    "added": gettext_lazy("Only in %(new)s"),
    "removed": gettext_lazy("Only in %(old)s"),
}
KEYS = {
    "basis": gettext_lazy("compared with"),
    "direction": gettext_lazy("which way is worse"),
    "strict": gettext_lazy("exactly the limit"),
    "banded_by": gettext_lazy("bands of"),
    "unit": gettext_lazy("unit"),
    "medium": gettext_lazy("medium"),
    "methods": gettext_lazy("method"),
    "not_for_array_kinds": gettext_lazy("not for these arrays"),
    "electrical": gettext_lazy("electrical"),
    "shape": gettext_lazy("shape"),
    "measurands": gettext_lazy("judged beside the procedure's own limit"),
    "name": gettext_lazy("name"),
    "source": gettext_lazy("source"),
    "note": gettext_lazy("note"),
    "title": gettext_lazy("title"),
    "absolute": gettext_lazy("absolute"),
    "percent": gettext_lazy("percentage"),
    "governs": gettext_lazy("which of the two counts"),
    "coverage": gettext_lazy("coverage"),
    "confidence": gettext_lazy("confidence"),
    "from": gettext_lazy("from"),
    "below": gettext_lazy("to below"),
    "standing": gettext_lazy("standing"),
    "own_words": gettext_lazy("the source's own word"),
    "remedial": gettext_lazy("remedial level"),
    "suspension": gettext_lazy("suspension level"),
    "part": gettext_lazy("part"),
    "protection_class": gettext_lazy("protection class"),
    "applied_part_type": gettext_lazy("type of the applied part"),
}
WORDS = {
    "basis": {
        "nominal": gettext_lazy("the nominal value"),
        "baseline": gettext_lazy("the baseline"),
        "none": gettext_lazy("nothing: the value itself is judged"),
        "ratio": gettext_lazy("another reading of the check"),
    },
    "direction": {
        "either": gettext_lazy("either way"),
        "above": gettext_lazy("more"),
        "below": gettext_lazy("less"),
    },
    "governs": {
        "larger": gettext_lazy("the larger"),
        "smaller": gettext_lazy("the smaller"),
        "either": gettext_lazy("whichever is passed first"),
    },
    "strict": {True: gettext_lazy("conforms"), False: gettext_lazy("is beyond it")},
    "electrical": {True: gettext_lazy("yes"), False: gettext_lazy("no")},
}
BAND = re.compile(r"bands\[(\d+)\]")


@dataclass(frozen=True)
class ShownChange:
    """One key with what stands there in either edition; empty where nothing does."""

    key: str
    old: str
    new: str


@dataclass(frozen=True)
class ShownDifference:
    """One criterion that differs, with its limit in both editions; empty where an edition lacks it."""

    state: str
    name: str
    ids: tuple[str, ...]
    old: str
    new: str
    changes: tuple[ShownChange, ...]


@dataclass(frozen=True)
class SideBySide:
    """Two editions laid side by side; of two sets, what one lacks was not taken out of it."""

    of_one_set: bool
    old_label: str
    new_label: str
    counts: str
    head: tuple[ShownChange, ...]
    differing: tuple[ShownDifference, ...]
    same: tuple[CriterionSpec, ...]


def spec_of(row: CriteriaSetRow) -> CriteriaSetSpec:
    """A published edition as it is compared."""
    criteria = tuple(each.spec for each in row.criteria)
    return CriteriaSetSpec(row.code, row.edition, row.title, row.source, row.note, (), criteria)


def side_by_side(
    old: CriteriaSetSpec, new: CriteriaSetSpec, procedures: Sequence[EditionRow] = ()
) -> SideBySide:
    """Compare two editions; of two sets, by what procedures name for one measurand."""
    named = [measurand.criteria for one in procedures for measurand in one.spec.measurands]
    pairs = stand_ins(named, [each.id for each in old.criteria], [each.id for each in new.criteria])
    laid = differences(old.criteria, new.criteria, {} if old.set == new.set else pairs)
    one_set = old.set == new.set
    labels = _labels(old, new)
    told = dict(zip(("old", "new"), labels, strict=True))
    states = {state: str(word) % told for state, word in (STATES if one_set else OF_TWO_SETS).items()}
    return SideBySide(
        one_set,
        *labels,
        _counts(laid) if one_set else _counts_of_two(laid, told),
        _head(old, new) if one_set else (),
        tuple(_shown(each, states) for each in laid if each.state != "same"),
        tuple(each.new for each in laid if each.state == "same" and each.new),
    )


def _labels(old: CriteriaSetSpec, new: CriteriaSetSpec) -> tuple[str, str]:
    if old.set != new.set:
        return f"{old.set} {old.edition}", f"{new.set} {new.edition}"
    return old.edition, new.edition


def _counts(laid: Sequence[Difference]) -> str:
    """How many criteria became what: "2 criteria changed, 1 added, 6 are the same"."""
    found = Counter(each.state for each in laid)
    words = {
        "changed": ngettext("%(n)d criterion changed", "%(n)d criteria changed", found["changed"]),
        "added": ngettext("%(n)d added", "%(n)d added", found["added"]),
        "removed": ngettext("%(n)d removed", "%(n)d removed", found["removed"]),
        "same": ngettext("%(n)d is the same", "%(n)d are the same", found["same"]),
    }
    return ", ".join(text % {"n": found[state]} for state, text in words.items() if found[state])


def _counts_of_two(laid: Sequence[Difference], labels: Mapping[str, str]) -> str:
    """The same of two sets: "2 criteria differ, 3 are only in tg1 1998"."""
    found = Counter(each.state for each in laid)
    words = {
        "changed": ngettext("%(n)d criterion differs", "%(n)d criteria differ", found["changed"]),
        "removed": ngettext("%(n)d is only in %(old)s", "%(n)d are only in %(old)s", found["removed"]),
        "added": ngettext("%(n)d is only in %(new)s", "%(n)d are only in %(new)s", found["added"]),
        "same": ngettext("%(n)d is the same", "%(n)d are the same", found["same"]),
    }
    return ", ".join(text % {"n": found[state], **labels} for state, text in words.items() if found[state])


def _head(old: CriteriaSetSpec, new: CriteriaSetSpec) -> tuple[ShownChange, ...]:
    """What differs of the sets themselves."""
    pairs = ((name, getattr(old, name), getattr(new, name)) for name in ("title", "source", "note"))
    return tuple(ShownChange(str(KEYS[name]), was, now) for name, was, now in pairs if was != now)


def _shown(each: Difference, states: Mapping[str, str]) -> ShownDifference:
    there = [spec for spec in (each.old, each.new) if spec]
    return ShownDifference(
        states[each.state],
        there[-1].name,
        tuple(dict.fromkeys(spec.id for spec in there)),
        wording.criterion_words(each.old) if each.old else "",
        wording.criterion_words(each.new) if each.new else "",
        tuple(_change(one, each) for one in each.changes),
    )


def _change(one: KeyChange, of: Difference) -> ShownChange:
    return ShownChange(key_words(one.key), _value(one.key, one.old, of.old), _value(one.key, one.new, of.new))


def key_words(key: str) -> str:
    """A key as people read it: "band 2, remedial level, absolute"."""
    told = []
    for part in key.split("."):
        band = BAND.fullmatch(part)
        if band:
            told.append(_("band %(n)d") % {"n": int(band[1]) + 1})
        elif part in KEYS:
            told.append(str(KEYS[part]))
        elif part not in ("applies_when", "grades", "criterion"):
            told.append(_("grade “%(grade)s”") % {"grade": part})
    if key.startswith(("standing.", "own_words.")):
        told.reverse()
    return ", ".join(told)


def band_words(band: Band, banded_by: str) -> str:
    """A band by its edges: "from 3 MHz to below 7 MHz"."""
    unit = banding_unit(banded_by)
    start = "" if band.start is None else amount(plain(band.start), unit)
    below = "" if band.below is None else amount(plain(band.below), unit)
    if start and below:
        return _("from %(start)s to below %(below)s") % {"start": start, "below": below}
    return _("from %(start)s") % {"start": start} if start else _("below %(below)s") % {"below": below}


def _value(key: str, value: Value, of: CriterionSpec | None) -> str:
    """What stands at a key, in words; empty where nothing does."""
    last = key.rpartition(".")[2]
    if value is None or of is None:
        return ""
    if isinstance(value, Decimal):
        return _number(last, value, of)
    if isinstance(value, tuple):
        return _several(key, value)
    if last in WORDS:
        known: Mapping[object, object] = WORDS[last]
        return str(known[value])
    return _text(key, str(value))


def _number(last: str, value: Decimal, of: CriterionSpec) -> str:
    if last in ("percent", "coverage", "confidence"):
        return amount(plain(value), "%")
    unit = banding_unit(of.criterion.banded_by) if last in ("from", "below") else of.unit
    return amount(plain(value), unit)


def _several(key: str, values: tuple[str, ...]) -> str:
    if key == "methods":
        return methods_words(values)
    if key == "not_for_array_kinds":
        return ", ".join(wording.array_word(each) for each in values)
    return ", ".join(each.replace("_", " ") for each in values)


def _text(key: str, value: str) -> str:
    if key.startswith("standing."):
        return wording.standing_word(value)
    if key.startswith("grades."):
        return wording.verdict_word(value)
    if key == "shape":
        return _("%(shape)s (shape %(letter)s)") % {"shape": SHAPES[value], "letter": value}
    words = {"medium": medium_word, "unit": wording.unit_symbol, "banded_by": banding_word}
    return words[key](value) if key in words else value
