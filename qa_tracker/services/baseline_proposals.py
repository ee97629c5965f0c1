"""Baselines about to be set: everything refused that has to be, and what each would change, before it is signed."""

from __future__ import annotations

import datetime as dt
import hashlib
import uuid
from collections.abc import Callable, Iterable, Mapping, Sequence
from dataclasses import dataclass
from typing import TypeVar

from qa_tracker.core.applicability import Circumstances
from qa_tracker.core.canonical import canonical
from qa_tracker.core.decimals import Exact
from qa_tracker.core.errors import DomainError, Invalid, SeveralInvalid
from qa_tracker.core.library_specs import MeasurandSpec
from qa_tracker.core.schedule import local_day
from qa_tracker.records.models import (
    Aperture,
    Baseline,
    Condition,
    Device,
    Measurand,
    Person,
    ProbeFacts,
    Reading,
    ScannerFacts,
)
from qa_tracker.records.queries.baselines import BaselineRow, SeriesKey, baselines_of
from qa_tracker.records.queries.library import CriterionRow, adopted_criteria, adopted_procedures
from qa_tracker.records.queries.sites import site_by_id
from qa_tracker.services.baseline_limits import Asked, moved_to, refuse_failing
from qa_tracker.services.baseline_overlaps import tie_for
from qa_tracker.services.baseline_rows import Moved, Setting, SetUp, Source, change_of, shown_of, told_of
from qa_tracker.services.guards import check_may, required, role_for

R = TypeVar("R")
G = TypeVar("G")
Part = tuple[Aperture | None, Condition | None]


@dataclass(frozen=True)
class Value:
    """A value to become a baseline, or read on another object, by measurand code, aperture and condition."""

    measurand: str
    text: str
    aperture: uuid.UUID | None = None
    condition: uuid.UUID | None = None
    qualifier: str = "="

    @property
    def series(self) -> tuple[str, uuid.UUID | None, uuid.UUID | None]:
        """Which series it belongs to."""
        return self.measurand, self.aperture, self.condition


@dataclass(frozen=True)
class Terms:
    """How long baselines serve, and what ties them to the test object before.

    Parameters
    ----------
    expires_on
        The first local day on which they no longer serve.
    overlaps
        What was read on the object before, where it is not among the stored readings.
    no_overlap
        Why nothing could be read on it.
    """

    expires_on: dt.date | None = None
    overlaps: Sequence[Value] = ()
    no_overlap: str = ""


FOR_GOOD = Terms()


@dataclass(frozen=True)
class Wanted:
    """One value, read, with what it was measured with and when."""

    spec: MeasurandSpec
    part: Part
    exact: Exact
    qualifier: str
    source: Source
    taken_at: dt.datetime
    reading: Reading | None = None
    setups: tuple[SetUp, ...] = ()


@dataclass(frozen=True)
class Proposal:
    """One baseline with the ones that stand and the earlier ones of its series."""

    asked: Asked
    setting: Setting
    standing: tuple[Baseline, ...]
    earlier: tuple[BaselineRow, ...]
    moved: Moved

    @property
    def epoch(self) -> int:
        """The epoch it would be."""
        return 1 + max((each.epoch for each in self.earlier), default=0)


@dataclass(frozen=True)
class Proposed:
    """Baselines of one device, ready to be signed."""

    device: Device
    reason: str
    role: str
    proposals: tuple[Proposal, ...]

    def told(self) -> list[dict[str, object]]:
        """The baselines as leaf and signature say them."""
        return [told_of(each.setting, each.epoch, each.moved) for each in self.proposals]

    @property
    def shown_sha256(self) -> str:
        """The hash of exactly what a signer is shown."""
        shown = shown_of(self.device, self.told(), self.reason)
        return hashlib.sha256(canonical(shown)).hexdigest()


@dataclass(frozen=True)
class Around:
    """A device with all that setting baselines on it asks about; fetched once."""

    device: Device
    actor: Person
    reason: str
    role: str
    terms: Terms
    adopted: Mapping[str, CriterionRow]
    specs: Mapping[str, MeasurandSpec]
    measurands: Mapping[str, Measurand]
    met: Circumstances
    standing: Mapping[SeriesKey, tuple[Baseline, ...]]
    earlier: Mapping[SeriesKey, tuple[BaselineRow, ...]]

    def asked(self, spec: MeasurandSpec, part: Part) -> Asked:
        """A measurand at a part of the device."""
        met = Circumstances(
            self.met.array_kind, self.met.protection_class, self.met.applied_part, spec.medium, spec.method
        )
        return Asked(self.device, spec, part[0], part[1], met, self.adopted)


def around(device: Device, reason: str, terms: Terms, actor: Person, at: dt.datetime) -> Around:
    """Fetch what is asked about; the number of queries doesn't grow with the history.

    Refused: role, no reason, a last day that has come.
    """
    site_id = device.site_id or actor.duties_site_id
    check_may(actor, "baseline.set", site_id, at)
    reason = required(reason, "baseline.reason_missing", "reason")
    if terms.expires_on is not None and terms.expires_on <= day_of(device, at):
        raise Invalid("baseline.expires_early", field="expires_on", day=terms.expires_on)
    specs = known_measurands(device.site_id)
    found = Baseline.objects.filter(device=device, ended_at=None).select_related("measurand", "test_object")
    standing = _by_series([((one.measurand.code, one.aperture_id, one.condition_id), one) for one in found])
    return Around(
        device,
        actor,
        reason,
        role_for(actor, "baseline.set", site_id, at),
        terms,
        adopted_criteria(device.site_id),
        specs,
        {row.code: row for row in Measurand.objects.filter(code__in=specs)},
        _circumstances(device),
        standing,
        _by_series([(row.key, row) for row in baselines_of(device.pk)]),
    )


def _by_series(pairs: Iterable[tuple[SeriesKey, R]]) -> dict[SeriesKey, tuple[R, ...]]:
    rows: dict[SeriesKey, list[R]] = {}
    for key, row in pairs:
        rows.setdefault(key, []).append(row)
    return {key: tuple(each) for key, each in rows.items()}


def day_of(device: Device, at: dt.datetime) -> dt.date:
    """The local day of a device's site."""
    site = site_by_id(device.site_id) if device.site_id else None
    return local_day(at, site.time_zone if site else "UTC")


def _circumstances(device: Device) -> Circumstances:
    probe = ProbeFacts.objects.filter(device=device).first()
    scanner = ScannerFacts.objects.filter(device=device).first()
    return Circumstances(
        probe.array_kind if probe else "",
        scanner.protection_class if scanner else "",
        probe.applied_part if probe else "",
    )


def known_measurands(site_id: int | None) -> dict[str, MeasurandSpec]:
    """Every measurand of the procedures adopted at a site, by code."""
    return {spec.code: spec for edition in adopted_procedures(site_id) for spec in edition.spec.measurands}


def propose(around: Around, wanted: Sequence[Wanted]) -> Proposed:
    """What setting these would write and change, or every refusal at once."""
    series = [(each.spec.code, *each.part) for each in wanted]
    if twice := next((key for key in series if series.count(key) > 1), None):
        raise Invalid("baseline.series_twice", field=twice[0], measurand=around.specs[twice[0]].name)
    found = all_or_refused(wanted, lambda each: _proposal(around, each))
    return Proposed(around.device, around.reason, around.role, tuple(found))


def all_or_refused(given: Iterable[G], make: Callable[[G], R]) -> list[R]:
    """Make something of each; where some are refused, every refusal at once."""
    found: list[R] = []
    errors: list[DomainError] = []
    for each in given:
        try:
            found.append(make(each))
        except DomainError as error:
            errors.append(error)
    if len(errors) == 1:
        raise errors[0]
    if errors:
        raise SeveralInvalid(tuple(errors))
    return found


def _proposal(around: Around, wanted: Wanted) -> Proposal:
    asked = around.asked(wanted.spec, wanted.part)
    on = wanted.source.test_object
    refuse_failing(asked, wanted.exact, wanted.qualifier, on, wanted.reading)
    aperture, condition = wanted.part
    key = (wanted.spec.code, aperture.pk if aperture else None, condition.pk if condition else None)
    standing, earlier = around.standing.get(key, ()), around.earlier.get(key, ())
    tie = tie_for(
        asked,
        standing,
        on,
        taken_at=wanted.taken_at,
        typed=_typed_overlap(around.terms, wanted),
        why_none=around.terms.no_overlap,
    )
    setting = Setting(
        around.device,
        around.measurands[wanted.spec.code],
        *wanted.part,
        wanted.exact,
        wanted.qualifier,
        wanted.source,
        around.reason,
        around.actor,
        around.terms.expires_on,
        tie,
        wanted.setups,
    )
    change = change_of(setting, earlier)
    newest = earlier[-1] if earlier else None
    moved = moved_to(asked, change, earlier[0].value if earlier else None, newest)
    return Proposal(asked, setting, standing, earlier, moved)


def _typed_overlap(terms: Terms, wanted: Wanted) -> str:
    aperture, condition = wanted.part
    series = (
        wanted.spec.code,
        aperture.uid if aperture else None,
        condition.uid if condition else None,
    )
    return next((each.text for each in terms.overlaps if each.series == series), "")
