"""Sets of criteria in words: their editions, where each is in force, and every limit with its source and standing."""

from __future__ import annotations

import uuid
from collections import Counter
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from itertools import groupby

from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy, ngettext

from qa_tracker.core.library_specs import CriterionSpec
from qa_tracker.records.queries.library import AdoptionRow, CriteriaSetRow, CriterionRow
from qa_tracker.records.queries.sites import SiteRow
from qa_tracker.services import wording
from qa_tracker.web.presenters.library import ShownAdoption, adoptions_in_words

MEDIA = {
    "phantom": gettext_lazy("on a phantom"),
    "air": gettext_lazy("in air"),
    "electrical": gettext_lazy("electrical"),
    "any": gettext_lazy("in any medium"),
}
METHODS = {
    "eye": gettext_lazy("by eye"),
    "image": gettext_lazy("from an image"),
    "probe_tester": gettext_lazy("with a probe tester"),
    "display": gettext_lazy("read from the display"),
    "hydrophone": gettext_lazy("with a hydrophone"),
    "thermometer": gettext_lazy("with a thermometer"),
    "earth": gettext_lazy("earth resistance"),
    "direct": gettext_lazy("direct method"),
    "differential": gettext_lazy("differential method"),
    "alternative": gettext_lazy("alternative method"),
    "mains_on_applied_part": gettext_lazy("mains on the applied part"),
    "soak": gettext_lazy("after soaking"),
}
SHAPES = {
    "A": gettext_lazy("deviation from the nominal value"),
    "B": gettext_lazy("change from the baseline"),
    "C": gettext_lazy("change from the baseline, by a number or by a percentage"),
    "D": gettext_lazy("worsening against the baseline, one way only"),
    "E": gettext_lazy("the value itself"),
    "F": gettext_lazy("the limit depends on another quantity, in bands"),
    "G": gettext_lazy("a share of another reading of the same check"),
    "H": gettext_lazy("an ordered grade"),
    "I": gettext_lazy("a count"),
    "J": gettext_lazy("the spread of the device's own baseline readings"),
}
CLASSES = {
    "part": gettext_lazy("part: %(value)s"),
    "protection_class": gettext_lazy("protection class %(value)s"),
    "applied_part_type": gettext_lazy("applied part of type %(value)s"),
}
STANDINGS = ("confirmed", "memory", "practice", "local")


@dataclass(frozen=True)
class ShownLevel:
    """One level with how well its number is known, and the source's own word for it."""

    name: str
    standing: str
    own_word: str


@dataclass(frozen=True)
class ShownCriterion:
    """A limit in words, with all that a physicist compares before adopting it."""

    spec: CriterionSpec
    words: str
    judges: str
    holds_for: str
    levels: tuple[ShownLevel, ...]
    source: str
    from_memory: bool


def criterion_in_words(row: CriterionRow) -> ShownCriterion:
    """A criterion for reading before it is adopted."""
    spec = row.spec
    return ShownCriterion(
        spec,
        wording.criterion_words(spec),
        _judges(spec),
        _holds_for(spec),
        tuple(_level(spec, level) for level in ("remedial", "suspension") if getattr(spec.standing, level)),
        spec.source or row.set_source,
        "memory" in (spec.standing.remedial, spec.standing.suspension),
    )


def _level(spec: CriterionSpec, level: str) -> ShownLevel:
    return ShownLevel(
        wording.level_word(level),
        wording.standing_word(getattr(spec.standing, level)),
        getattr(spec.own_words, level) or "",
    )


def _judges(spec: CriterionSpec) -> str:
    """What is judged, where and how: "change from the baseline (shape B), in mm, on a phantom, by eye"."""
    unit = wording.unit_symbol(spec.unit)
    parts = [
        _("%(shape)s (shape %(letter)s)") % {"shape": SHAPES[spec.shape], "letter": spec.shape},
        _("in %(unit)s") % {"unit": unit} if unit else "",
        medium_word(spec.medium),
        methods_words(spec.methods),
    ]
    return ", ".join(part for part in parts if part)


def _holds_for(spec: CriterionSpec) -> str:
    """To what it is confined; empty where it holds for all."""
    parts = [str(CLASSES[name]) % {"value": value.replace("_", " ")} for name, value in spec.applies_when]
    if spec.not_for_array_kinds:
        arrays = ", ".join(wording.array_word(kind) for kind in spec.not_for_array_kinds)
        parts.append(_("not for these arrays: %(arrays)s") % {"arrays": arrays})
    return "; ".join(parts)


def medium_word(medium: str) -> str:
    """The word for where a reading is taken."""
    return str(MEDIA.get(medium, medium))


def methods_words(methods: Sequence[str]) -> str:
    """The words for how a reading may be taken: "by eye or from an image"."""
    *first, last = [str(METHODS.get(method, method.replace("_", " "))) for method in methods] or [""]
    return _("%(first)s or %(last)s") % {"first": ", ".join(first), "last": last} if first else last


@dataclass(frozen=True)
class EditionOfSet:
    """One edition in the list: where it is in force, how its numbers stand, and the edition before it."""

    row: CriteriaSetRow
    in_force: tuple[ShownAdoption, ...]
    standing: str
    from_memory: bool
    before: uuid.UUID | None


@dataclass(frozen=True)
class SetGroup:
    """All editions of one set, the newest first."""

    code: str
    title: str
    source: str
    editions: tuple[EditionOfSet, ...]

    @property
    def in_force(self) -> bool:
        """Whether any edition is in force somewhere in sight."""
        return any(each.in_force for each in self.editions)


def set_groups(
    sets: Sequence[CriteriaSetRow], adoptions: Sequence[AdoptionRow], sites: Mapping[int, SiteRow]
) -> tuple[SetGroup, ...]:
    """Sets by code, as they come, with the adoptions in force at the group and at sites in sight."""
    standing = [each for each in adoptions if each.ended_at is None]
    groups = []
    for code, found in groupby(sets, key=lambda row: row.code):
        rows = list(found)
        befores = [*(row.uid for row in rows[1:]), None]
        lines = tuple(
            _edition(row, before, standing, sites) for row, before in zip(rows, befores, strict=True)
        )
        groups.append(SetGroup(code, rows[0].title, rows[0].source, lines))
    return tuple(groups)


def _edition(
    row: CriteriaSetRow,
    before: uuid.UUID | None,
    adoptions: Sequence[AdoptionRow],
    sites: Mapping[int, SiteRow],
) -> EditionOfSet:
    own = [each for each in adoptions if each.criteria_set_id == row.id]
    counts = _standings(row)
    return EditionOfSet(
        row, adoptions_in_words(own, sites), standing_counts(row), counts["memory"] > 0, before
    )


def _standings(row: CriteriaSetRow) -> Counter[str]:
    """How many levels there are of each standing."""
    levels = [
        level
        for each in row.criteria
        for level in (each.spec.standing.remedial, each.spec.standing.suspension)
    ]
    return Counter(level for level in levels if level)


def standing_counts(row: CriteriaSetRow) -> str:
    """How the numbers of an edition stand: "3 confirmed, 6 from memory"."""
    counts = _standings(row)
    words = {
        "confirmed": ngettext("%(n)d level confirmed", "%(n)d levels confirmed", counts["confirmed"]),
        "memory": ngettext("%(n)d level from memory", "%(n)d levels from memory", counts["memory"]),
        "practice": ngettext(
            "%(n)d level by common practice, no source",
            "%(n)d levels by common practice, no source",
            counts["practice"],
        ),
        "local": ngettext("%(n)d level by local decision", "%(n)d levels by local decision", counts["local"]),
    }
    return ", ".join(words[each] % {"n": counts[each]} for each in STANDINGS if counts[each])


def edition_name(row: CriteriaSetRow) -> str:
    """A set's code and edition, as they are told apart: "tg1, edition 1998"."""
    return _("%(code)s, edition %(edition)s") % {"code": row.code, "edition": row.edition}
