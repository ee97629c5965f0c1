"""Stated uncertainties in words, with the arithmetic of those estimated from repeats."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy

from qa_tracker.records.queries import library
from qa_tracker.records.queries.uncertainties import UncertaintyRow
from qa_tracker.services.entries import NUMBERS
from qa_tracker.web.presenters.charts import amount_words

KINDS = {
    "expanded": gettext_lazy("an expanded uncertainty, with its coverage factor"),
    "standard": gettext_lazy("a standard uncertainty"),
    "repeats": gettext_lazy("estimated from repeats, with Student's t for 95 %"),
    "repeats_of_check": gettext_lazy("estimated in each check from its own repeats"),
}
RULES = {
    "": gettext_lazy("the default: guarded for electrical limits, simple for all others"),
    "simple": gettext_lazy("simple acceptance: the limit as it is published"),
    "guarded": gettext_lazy("guarded acceptance: the limit less the uncertainty"),
    "zones": gettext_lazy("zones: indeterminate where the uncertainty reaches the limit"),
}


@dataclass(frozen=True)
class ShownStatement:
    """One statement as the page says it."""

    row: UncertaintyRow
    name: str
    place: str
    words: str
    rule: str


def measurand_options() -> tuple[tuple[str, str], ...]:
    """Every measurand that is a number, by its newest edition's name, alphabetically."""
    found: dict[str, str] = {}
    for edition in library.list_editions():
        for spec in edition.spec.measurands:
            if spec.kind in NUMBERS:
                found.setdefault(spec.code, spec.name)
    return tuple(sorted(found.items(), key=lambda pair: pair[1]))


def shown_statement(
    row: UncertaintyRow, names: Mapping[str, str], sites: Mapping[int, str]
) -> ShownStatement:
    """Put a statement in words."""
    place = sites[row.site_id] if row.site_id else _("the whole group")
    return ShownStatement(
        row, names.get(row.measurand, row.measurand), place, _words(row), str(RULES[row.rule])
    )


def _words(row: UncertaintyRow) -> str:
    told = {
        "amount": amount_words(row.entered, row.unit) if row.entered else "",
        "k": row.coverage_factor,
        "count": str(len(row.repeats)),
        "repeats": ", ".join(row.repeats),
    }
    if row.kind == "standard":
        return _("standard uncertainty %(amount)s") % told
    if row.kind == "expanded":
        return _("expanded uncertainty %(amount)s (k = %(k)s)") % told
    if row.kind == "repeats":
        return (
            _("%(amount)s for one reading, by Student's t (95 %%) from %(count)s repeats: %(repeats)s") % told
        )
    return _("from each check's own repeats, by Student's t (95 %)")
