"""What is asked when baselines are set: the series of a device, how long they serve, and overlap readings."""

from __future__ import annotations

import datetime as dt
from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property

from django.http import HttpRequest
from django.utils.translation import gettext as _
from django.utils.translation import ngettext

from qa_tracker.core.library import asked_of
from qa_tracker.core.library_specs import MeasurandSpec
from qa_tracker.records.queries import baselines as rows
from qa_tracker.records.queries import devices, library, objects
from qa_tracker.records.queries.baselines import BaselineRow, SeriesKey
from qa_tracker.records.queries.devices import ApertureRow, ConditionRow, DeviceRow
from qa_tracker.services import baselines, guards
from qa_tracker.services.baseline_overlaps import WITHIN_DAYS
from qa_tracker.services.baseline_proposals import Proposed
from qa_tracker.services.baselines import DIGITS, Terms, Value
from qa_tracker.web.forms.asking_twice import Ready, Signing
from qa_tracker.web.forms.fields import Field
from qa_tracker.web.forms.typed import Typed
from qa_tracker.web.presenters.baseline_signing import about_to_be_signed
from qa_tracker.web.presenters.baselines import place_of, value_words
from qa_tracker.web.presenters.charts import amount_words
from qa_tracker.web.refused import Refused

OVERLAP = "overlap."
NO_OVERLAP = "no_overlap"


@dataclass(frozen=True)
class Series:
    """One series of a device that can have a baseline; ``name`` is its field's."""

    spec: MeasurandSpec
    aperture: ApertureRow | None
    condition: ConditionRow | None

    @property
    def key(self) -> SeriesKey:
        """Measurand, aperture and condition."""
        aperture, condition = self.aperture, self.condition
        return self.spec.code, aperture.id if aperture else None, condition.id if condition else None

    @property
    def name(self) -> str:
        """As refusals name it."""
        parts = [str(part or 0) for part in self.key[1:]]
        return self.spec.code if parts == ["0", "0"] else ".".join((self.spec.code, *parts))

    @property
    def label(self) -> str:
        """What is read, where, in which unit."""
        aperture, condition = self.aperture, self.condition
        where = place_of(aperture.name if aperture else "", condition.name if condition else "")
        unit = amount_words("", self.spec.unit).strip()
        return ", ".join(part for part in (self.spec.name, where, unit) if part)

    def value(self, text: str = "") -> Value:
        """A value of it."""
        aperture, condition = self.aperture, self.condition
        return Value(
            self.spec.code, text, aperture.uid if aperture else None, condition.uid if condition else None
        )


class Known:
    """A device's series and baselines, fetched as far as they are asked for."""

    def __init__(self, row: DeviceRow) -> None:
        self.row = row

    @cached_property
    def series(self) -> tuple[Series, ...]:
        """Every series of the adopted procedures that can have a baseline on this device."""
        row = self.row
        adopted = library.adopted_criteria(row.site_id)
        apertures = devices.apertures_of(row.id)
        conditions = devices.conditions_of(row.id)
        return tuple(
            Series(spec, aperture, condition)
            for spec in baselines.known_measurands(row.site_id).values()
            if spec.kind in DIGITS and baselines.compared(spec, adopted)
            if asked_of(spec, device_kind=row.kind, array_kind=row.array_kind or None)
            for aperture in (apertures if spec.per == "aperture" and apertures else [None])
            for condition in (conditions if spec.by_condition and conditions else [None])
        )

    @cached_property
    def in_force(self) -> dict[SeriesKey, BaselineRow]:
        """The newest baseline in force of each series."""
        return rows.in_force(self.row.id)

    def with_overlaps(self, fields: Sequence[Field], names: set[str]) -> tuple[Field, ...]:
        """The fields, with what is asked of the test object before, and why nothing could be read on it.

        Each comes after the field of its series, or at the end.
        """
        asked = {each.name: self._overlap_field(each) for each in self._tied(names)}
        if not asked:
            return tuple(fields)
        found: list[Field] = []
        for field in fields:
            found += [field, *filter(None, [asked.pop(field.name, None)])]
        return (*found, *asked.values(), _no_overlap_field())

    def _tied(self, names: set[str]) -> list[Series]:
        return [each for each in self.series if each.name in names and each.key in self.in_force]

    def _overlap_field(self, each: Series) -> Field:
        told = {"series": each.label, "object": self.in_force[each.key].test_object}
        return Field(
            OVERLAP + each.name,
            _("%(series)s, read on %(object)s") % told,
            "decimal",
            _("Within %(days)d days of the reading on the other object.") % {"days": WITHIN_DAYS},
            required=False,
        )

    def overlaps_refused(self, answer: Refused, fields: Sequence[Field]) -> tuple[Field, ...]:
        """The fields, with those that a refusal for want of an overlap asks for."""
        names = {each.field for each in answer.refusals if each.code == "baseline.no_overlap"}
        missing = names - {field.name.removeprefix(OVERLAP) for field in fields if OVERLAP in field.name}
        if not missing:
            return tuple(fields)
        return self.with_overlaps([each for each in fields if each.name != NO_OVERLAP], missing)


def overlaps_typed(request: HttpRequest, known: Known, fields: Sequence[Field]) -> tuple[Field, ...]:
    """The fields, with the overlap fields that the form has shown already."""
    names = {name.removeprefix(OVERLAP) for name in request.POST if name.startswith(OVERLAP)}
    return known.with_overlaps(fields, names) if names else tuple(fields)


def _no_overlap_field() -> Field:
    return Field(
        NO_OVERLAP,
        _("Why nothing could be read on the object before"),
        "area",
        _("Such as broken or lost. It is said in the ledger, and shown with the baseline ever after."),
        required=False,
    )


def terms_fields() -> tuple[Field, ...]:
    """How long they serve, and why they are set."""
    return (
        Field(
            "expires_on",
            _("Runs out on"),
            "date",
            _("From that day on it judges nothing. Empty: it serves until it is replaced."),
            required=False,
        ),
        Field("reason", _("Why"), "area", _("What changed, and why the value before no longer serves.")),
    )


def terms(typed: Typed, known: Known) -> Terms:
    """How long they serve, and what was read on the test object before."""
    overlaps = [
        each.value(typed.text(OVERLAP + each.name))
        for each in known.series
        if typed.text(OVERLAP + each.name)
    ]
    return Terms(typed.day_or_none("expires_on"), overlaps, typed.text(NO_OVERLAP, 1000))


def signature(typed: Typed) -> dict[str, str]:
    """The password, and the hash of what was shown."""
    return {"password": typed.raw("password"), "shown_sha256": typed.text("shown_sha256")}


def signing() -> Signing:
    """The words of the page on which baselines are signed."""
    return Signing(
        _("Look them over and sign"),
        _("Set and sign"),
        _("You state that later readings of these series are to be compared with these values."),
        "baseline_sign.html",
    )


def ready_to_sign(proposed: Proposed) -> Ready:
    """Everything proposed, as the page of signing shows it."""
    shown = tuple(about_to_be_signed(each) for each in proposed.proposals)
    return Ready(proposed.shown_sha256, {"proposals": shown, "reason": proposed.reason})


def show_button() -> str:
    """What leads to the page of signing."""
    return _("Show what it changes")


def done_words(count: int) -> str:
    """What was recorded."""
    said = ngettext("A baseline is set.", "Baselines are set for %(count)d series.", count)
    return said % {"count": count}


def amount(row: BaselineRow) -> str:
    """The value of a baseline in force."""
    return value_words(row.qualifier, row.entered, row.unit)


def object_field(request: HttpRequest, at: dt.datetime) -> Field:
    """The test object that values typed were measured on."""
    known = objects.list_test_objects(guards.scope(request.user, at))
    options = [("", _("none")), *((str(each.uid), f"{each.name} {each.serial}") for each in known)]
    return Field("test_object", _("Test object"), "select", options=options, required=False)
