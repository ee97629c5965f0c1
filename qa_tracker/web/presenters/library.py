"""Procedures in words, and who adopted what, where and when."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from django.utils.translation import gettext as _
from django.utils.translation import gettext_lazy, ngettext

from qa_tracker.core.library_specs import MeasurandSpec, ProcedureSpec
from qa_tracker.records.queries.library import AdoptionRow, CriterionRow, EditionRow
from qa_tracker.records.queries.sites import SiteRow
from qa_tracker.services import wording
from qa_tracker.web.presenters.charts import amount_words

SIGNINGS = {
    "attestation": gettext_lazy("The person who does it attests to it; no countersignature."),
    "sampled": gettext_lazy("A sample is countersigned, and whatever does not conform."),
    "countersigned": gettext_lazy("Each one is countersigned."),
    "no_second_person": gettext_lazy("No second person is required."),
}
KINDS = {
    "number": gettext_lazy("number"),
    "count": gettext_lazy("count"),
    "grade": gettext_lazy("grade"),
    "yes_no": gettext_lazy("yes or no"),
    "text": gettext_lazy("text"),
    "derived": gettext_lazy("derived"),
    "image": gettext_lazy("from an image"),
}
DEVICE_KINDS = {
    "scanner": gettext_lazy("%(minutes)d min a scanner"),
    "probe": gettext_lazy("%(minutes)d min a probe"),
    "test_object": gettext_lazy("%(minutes)d min a test object"),
}


@dataclass(frozen=True)
class ShownAdoption:
    """Who adopted what, where and when."""

    row: AdoptionRow
    place: str


def adoptions_in_words(
    adoptions: Sequence[AdoptionRow], sites: Mapping[int, SiteRow]
) -> tuple[ShownAdoption, ...]:
    """Adoptions at the whole group or at a site in sight."""
    return tuple(
        ShownAdoption(each, _place(each, sites))
        for each in adoptions
        if each.site_id is None or each.site_id in sites
    )


def _place(adoption: AdoptionRow, sites: Mapping[int, SiteRow]) -> str:
    return sites[adoption.site_id].name if adoption.site_id else _("the whole group")


@dataclass(frozen=True)
class EditionLine:
    """An edition in the list: how it stands, who does it, how long it takes."""

    row: EditionRow
    adopted: tuple[ShownAdoption, ...]
    minutes: str
    who: str


def edition_lines(
    editions: Sequence[EditionRow], adoptions: Sequence[AdoptionRow], sites: Mapping[int, SiteRow]
) -> tuple[EditionLine, ...]:
    """Every edition with its adoptions in force."""
    in_force = [each for each in adoptions if each.ended_at is None]
    return tuple(
        EditionLine(
            row,
            adoptions_in_words([each for each in in_force if each.edition_id == row.id], sites),
            minutes_words(row.spec),
            who_words(row.spec),
        )
        for row in editions
    )


def minutes_words(spec: ProcedureSpec) -> str:
    """How long it takes, by kind of device."""
    return ", ".join(
        str(DEVICE_KINDS[kind]) % {"minutes": minutes} for kind, minutes in spec.minutes if minutes
    )


def who_words(spec: ProcedureSpec) -> str:
    """Whose it is."""
    return ", ".join(wording.role_word(role) for role in spec.performed_by)


@dataclass(frozen=True)
class ShownMeasurand:
    """A measurand of an edition, with the limit that would judge it here."""

    spec: MeasurandSpec
    kind: str
    unit: str
    resolution: str
    limit: str
    limit_code: str
    not_adopted: tuple[str, ...]
    per: str


def measurands_in_words(
    spec: ProcedureSpec, adopted: Mapping[str, CriterionRow]
) -> tuple[ShownMeasurand, ...]:
    """Each measurand in the edition's order."""
    return tuple(_measurand(each, adopted) for each in spec.measurands)


def _measurand(spec: MeasurandSpec, adopted: Mapping[str, CriterionRow]) -> ShownMeasurand:
    row = next((adopted[code] for code in spec.criteria if code in adopted), None)
    numeric = spec.kind not in ("grade", "yes_no", "text")
    return ShownMeasurand(
        spec,
        str(KINDS[spec.kind]),
        wording.unit_symbol(spec.unit) if numeric and spec.unit != "1" else "",
        _("in steps of %(step)s") % {"step": amount_words(spec.resolution, spec.unit)} if numeric else "",
        wording.criterion_words(row.spec) if row else "",
        row.code if row else "",
        () if row else spec.criteria,
        _per(spec),
    )


def _per(spec: MeasurandSpec) -> str:
    parts = [_("for each aperture") if spec.per == "aperture" else ""]
    parts.append(_("under each condition") if spec.by_condition else "")
    if spec.repeats > 1:
        parts.append(ngettext("%(count)d time", "%(count)d times", spec.repeats) % {"count": spec.repeats})
    return ", ".join(part for part in parts if part)


def recurrence_of(spec: ProcedureSpec) -> str:
    """How often the edition proposes it; what makes it due, where an event does."""
    return wording.recurrence_words(spec.recurrence.rule, "calendar") if spec.recurrence else spec.when
