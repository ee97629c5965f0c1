"""Baselines from independent set-ups: their mean, with the spread that a limit of the device's own is built from."""

from __future__ import annotations

import datetime as dt
import uuid
from collections.abc import Sequence
from dataclasses import dataclass, replace
from decimal import Decimal

from qa_tracker.core.baselines import (
    LEAST_FOR_OUTLIERS,
    LEAST_SETUPS,
    outliers,
    own_allowance,
    spread_floor,
    summary,
)
from qa_tracker.core.decimals import Exact, parse, plain
from qa_tracker.core.errors import Conflict, Invalid
from qa_tracker.core.library_specs import MeasurandSpec
from qa_tracker.core.schedule import local_day
from qa_tracker.core.workflow import CHECK_DONE
from qa_tracker.records.models import Baseline, Person, Reading, Submission, TestObject
from qa_tracker.services.baseline_limits import Asked
from qa_tracker.services.baseline_proposals import (
    FOR_GOOD,
    Proposal,
    Proposed,
    Terms,
    Value,
    Wanted,
    around,
    propose,
)
from qa_tracker.services.baseline_rows import SetUp, Source, exact_mean
from qa_tracker.services.baselines import (
    number_asked,
    part_of,
    put_signed,
    source_of,
    source_of_submissions,
)
from qa_tracker.services.finding import device as find_device
from qa_tracker.services.finding import test_object as find_test_object

SHARE = Decimal(95)
"""Coverage and confidence in percent where no adopted limit says others."""
LEAST_DAYS = 2


@dataclass(frozen=True)
class Chosen:
    """One set-up as chosen: the submission it was part of, or a value typed with its local day."""

    text: str = ""
    measured_on: dt.date | None = None
    submission: uuid.UUID | None = None


@dataclass(frozen=True)
class Figures:
    """What set-ups give.

    Parameters
    ----------
    mean
        Rounded once, half-even, to one more place than the resolution.
    floor
        Standard deviation that the resolution alone gives.
    factor, allowance
        Of the two-sided tolerance interval; None where set-ups are ``missing``.
    suspects
        Positions the outlier test suspects, shown and not applied; it is ``tested`` from 15 on.
    """

    count: int
    mean: Decimal
    standard_deviation: Decimal | None
    floor: Decimal
    coverage: Decimal
    confidence: Decimal
    factor: float | None = None
    allowance: Decimal | None = None
    missing: int = 0
    tested: bool = False
    suspects: tuple[int, ...] = ()

    @property
    def floored(self) -> bool:
        """Whether the resolution gives more spread than the set-ups do."""
        return self.standard_deviation is not None and self.standard_deviation < self.floor


def set_from_setups(
    *,
    device: uuid.UUID,
    series: Value,
    setups: Sequence[Chosen],
    test_object: uuid.UUID | None,
    reason: str,
    password: str,
    actor: Person,
    at: dt.datetime,
    terms: Terms = FOR_GOOD,
    shown_sha256: str | None = None,
) -> Baseline:
    """Set a baseline as the mean of independent set-ups, signed. Writes Baseline, BaselineSetup, Signature.

    Leaf ``baseline.set``. The set-ups are kept. Refused: as :func:`propose_setups`; a wrong password; something
    else than what was shown.
    """
    proposed = propose_setups(
        device=device,
        series=series,
        setups=setups,
        test_object=test_object,
        reason=reason,
        actor=actor,
        at=at,
        terms=terms,
    )
    (made,) = put_signed(proposed=proposed, password=password, shown_sha256=shown_sha256, actor=actor, at=at)
    return made


def propose_setups(
    *,
    device: uuid.UUID,
    series: Value,
    setups: Sequence[Chosen],
    test_object: uuid.UUID | None,
    reason: str,
    actor: Person,
    at: dt.datetime,
    terms: Terms = FOR_GOOD,
) -> Proposed:
    """What the mean of set-ups would write and change; reads only. ``series`` names where, its text is ignored.

    Refused: as setting by value; fewer than two set-ups or all of one day, a submission twice or without such a
    reading, a reading that is only a bound, a value without its day, set-ups measured with different things.
    """
    row = find_device(actor, device, at)
    known = around(row, reason, terms, actor, at)
    spec = number_asked(known, series.measurand)
    part = part_of(row, series, spec)
    on = find_test_object(actor, test_object, at)
    asked = known.asked(spec, part)
    readings = _readings(asked, [one.submission for one in setups if one.submission])
    made = (_set_up(spec, one, readings, day=local_day(at, "UTC")) for one in setups)
    found = tuple(sorted(made, key=lambda one: one.measured_on))
    _check_independent(found)
    source = _source(asked, [one.submission for one in found if one.submission], on)
    mean = exact_mean([one.exact.decimal for one in found], spec.resolution)
    taken_at = max(
        [each.measured_at for each in readings.values()]
        or [dt.datetime.combine(max(one.measured_on for one in found), dt.time(12), dt.UTC)]
    )
    return propose(known, [Wanted(spec, part, mean, "=", source, taken_at, None, found)])


def _readings(asked: Asked, submissions: Sequence[uuid.UUID]) -> dict[uuid.UUID, Reading]:
    """The reading of the series in each submission, the newest of its check."""
    if len(set(submissions)) < len(submissions):
        raise Invalid("baseline.setup_twice", field="setups")
    found = Reading.objects.filter(
        device=asked.device,
        measurand__code=asked.spec.code,
        aperture=asked.aperture,
        condition=asked.condition,
        submission__uid__in=submissions,
        submission__check_of__state__in=CHECK_DONE,
    ).select_related("submission__check_of__site", "submission__test_object", "submission__console")
    readings = {each.submission.uid: each for each in found.order_by("-repeat")}
    checks = {each.submission.check_of_id: each.submission.number for each in readings.values()}
    later = Submission.objects.filter(check_of__in=checks)
    if any(each.number > checks[each.check_of_id] for each in later):
        raise Invalid("baseline.setup_unknown", field="setups")
    return readings


def _set_up(spec: MeasurandSpec, one: Chosen, readings: dict[uuid.UUID, Reading], day: dt.date) -> SetUp:
    if one.submission is None:
        if one.measured_on is None or one.measured_on > day + dt.timedelta(days=1):
            raise Invalid("baseline.setup_day", field="setups", value=one.text)
        return SetUp(parse(one.text, spec.resolution, field="setups"), one.measured_on)
    reading = readings.get(one.submission)
    if reading is None:
        raise Invalid("baseline.setup_unknown", field="setups")
    if reading.qualifier != "=" or reading.scaled is None:
        raise Invalid("baseline.setup_bound", field="setups", value=f"{reading.qualifier} {reading.entered}")
    site = reading.submission.check_of.site
    measured_on = local_day(reading.measured_at, site.time_zone if site else "UTC")
    return SetUp(Exact(reading.entered, reading.scaled, reading.places or 0), measured_on, reading.submission)


def _check_independent(found: Sequence[SetUp]) -> None:
    """Set-ups of one day share whatever that day was; a mean of them tells nothing of other days."""
    if len(found) < LEAST_DAYS:
        raise Invalid("baseline.setups_few", field="setups", count=len(found))
    if len({one.measured_on for one in found}) < LEAST_DAYS:
        raise Conflict("baseline.setups_one_day", field="setups", day=found[0].measured_on)


def _source(asked: Asked, rows: Sequence[Submission], on: TestObject | None) -> Source:
    """The key the set-ups share; a mean over two of them would belong to neither."""
    if not rows:
        return source_of(asked.device, on)
    keys = {
        (row.console.model if row.console else "", row.console_software, row.test_object_id) for row in rows
    }
    objects = {row.test_object_id for row in rows} | ({on.pk} if on else set())
    if len(keys) > 1 or len(objects) > 1:
        raise Conflict("baseline.setups_mixed", field="setups")
    return source_of_submissions(rows)


def figures_of(proposal: Proposal) -> Figures:
    """What the set-ups of a proposed baseline give, by the adopted limit of the device's own spread."""
    asked, values = proposal.asked, [one.exact.decimal for one in proposal.setting.setups]
    return figures(values, Decimal(asked.spec.resolution), *_shares(asked))


def figures(
    values: Sequence[Decimal], resolution: Decimal, coverage: Decimal, confidence: Decimal
) -> Figures:
    """What at least one set-up gives."""
    found, floor = summary(values), spread_floor(resolution)
    missing = max(0, LEAST_SETUPS - found.count)
    plainly = Figures(
        count=found.count,
        mean=exact_mean(values, plain(resolution)).decimal,
        standard_deviation=found.standard_deviation,
        floor=floor,
        coverage=coverage,
        confidence=confidence,
        missing=missing,
        tested=found.count >= LEAST_FOR_OUTLIERS,
        suspects=outliers(values),
    )
    if missing or found.standard_deviation is None:
        return plainly
    own = own_allowance(found.count, found.standard_deviation, resolution, coverage, confidence)
    return replace(plainly, factor=own.factor, allowance=own.size)


def _shares(asked: Asked) -> tuple[Decimal, Decimal]:
    """Coverage and confidence of the adopted limit of own spread that judges the measurand."""
    for row in asked.adopted.values():
        limit = row.spec.criterion.remedial
        if (
            limit
            and limit.of_own_spread
            and asked.spec.code in (*row.spec.measurands, *_named(asked, row.code))
        ):
            return limit.coverage or SHARE, limit.confidence or SHARE
    return SHARE, SHARE


def _named(asked: Asked, code: str) -> tuple[str, ...]:
    return (asked.spec.code,) if code in asked.spec.criteria else ()
