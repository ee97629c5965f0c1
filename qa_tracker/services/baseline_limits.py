"""What limits say of a baseline about to be set: refused while one fails that stands on no baseline.

Also how much of the allowance against acceptance the device's change uses by then.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from decimal import Decimal

from qa_tracker.core import conformity
from qa_tracker.core.applicability import Circumstances, unfit
from qa_tracker.core.decimals import Exact, from_scaled, plain, subtract
from qa_tracker.core.epochs import Change, changes
from qa_tracker.core.errors import Conflict, Invalid
from qa_tracker.core.library_specs import MeasurandSpec
from qa_tracker.records.models import (
    Aperture,
    Condition,
    Device,
    FurtherVerdict,
    Reading,
    TestObject,
    Verdict,
)
from qa_tracker.records.queries.baselines import BaselineRow
from qa_tracker.records.queries.library import CriterionRow, criterion_spec
from qa_tracker.services.baseline_rows import Moved, epoch_of
from qa_tracker.services.items import criteria_for
from qa_tracker.services.recording import read_json
from qa_tracker.services.weighing import spread_of

FAILING = ("remedial", "suspension")
ABSOLUTE = ("none", "nominal")
"""What a limit stands on that moves with no baseline; a ratio's verdict is taken as it was given."""


@dataclass(frozen=True)
class Asked:
    """A measurand as it is read at one part of a device, with the limits that judge it there."""

    device: Device
    spec: MeasurandSpec
    aperture: Aperture | None
    condition: Condition | None
    met: Circumstances
    adopted: Mapping[str, CriterionRow]

    @property
    def name(self) -> str:
        """The field that refusals belong to: the measurand, with its part where it has one."""
        parts = [part.pk if part else 0 for part in (self.aperture, self.condition)]
        return ".".join([self.spec.code, *map(str, parts)]) if any(parts) else self.spec.code

    @property
    def quantity(self) -> str:
        """What limits are banded by: the test frequency of the condition."""
        return self.condition.test_frequency_mhz if self.condition else ""

    def criteria(self, baseline: BaselineRow | None = None) -> tuple[CriterionRow, ...]:
        """The limits that judge it."""
        return criteria_for(self.spec, dict(self.adopted), baseline)


def refuse_failing(
    asked: Asked, exact: Exact, qualifier: str, test_object: TestObject | None, source: Reading | None = None
) -> None:
    """Refuse a value, or a series whose last reading, fails a limit that stands on no baseline.

    Parameters
    ----------
    source
        The reading that the value is, if it is one.

    Raises
    ------
    Conflict
        ``baseline.beyond_limit``, ``baseline.last_fails``
    """
    refuse_beyond(asked, exact, qualifier, test_object)
    for reading in {each.pk: each for each in (source, last_reading(asked)) if each}.values():
        found = _failing(asked, _text(reading), reading.qualifier, reading.submission.test_object)
        criterion, level = found or _given(reading) or ("", "")
        if level:
            raise Conflict(
                "baseline.last_fails",
                field=asked.name,
                measurand=asked.spec.name,
                value=f"{'' if reading.qualifier == '=' else reading.qualifier} {reading.entered}".strip(),
                moment=reading.measured_at,
                criterion=criterion,
                level=level,
            )


def _text(reading: Reading) -> str | None:
    return None if reading.scaled is None else plain(from_scaled(reading.scaled, reading.places or 0))


def refuse_beyond(asked: Asked, exact: Exact, qualifier: str, test_object: TestObject | None) -> None:
    """Refuse a value that fails a limit on the value itself or against a nominal (``baseline.beyond_limit``).

    Refused too is one below zero of what never is (``baseline.below_zero``): no reading could be judged against it.
    """
    if exact.scaled < 0 and asked.spec.never_below_zero:
        raise Invalid("baseline.below_zero", field=asked.name, value=exact.entered)
    found = _failing(asked, plain(exact.decimal), qualifier, test_object)
    if found:
        raise Conflict(
            "baseline.beyond_limit",
            field=asked.name,
            value=exact.entered,
            criterion=found[0],
            level=found[1],
        )


def _failing(
    asked: Asked, value: str | None, qualifier: str, test_object: TestObject | None
) -> tuple[str, str] | None:
    """The first limit on the value itself, or against a nominal value, that it is beyond, and the level."""
    spec = asked.spec
    nominal = spec.nominal
    if spec.nominal_from == "test_object":
        nominal = read_json(test_object.nominals).get(spec.code) if test_object else None
    for row in asked.criteria():
        criterion = row.spec.criterion
        if criterion.basis not in ABSOLUTE or criterion.grades or unfit(row.spec, asked.met, None):
            continue
        judgement = conformity.judge(
            criterion,
            value=value,
            kind=spec.kind,
            qualifier=qualifier,
            nominal=nominal,
            quantity=asked.quantity or None,
        )
        for level in (judgement.verdict, judgement.parameters.get("proven")):
            if level in FAILING:
                return row.code, level
    return None


def _given(reading: Reading) -> tuple[str, str] | None:
    """The ratio limit that a stored reading was found beyond: the other reading is in its own check."""
    own = Verdict.objects.filter(reading=reading, verdict__in=FAILING).select_related("criterion")
    further = FurtherVerdict.objects.filter(verdict_of__reading=reading, verdict__in=FAILING)
    said = [(each.criterion, each.verdict) for each in own]
    said += [(each.criterion, each.verdict) for each in further.select_related("criterion")]
    for criterion, verdict in said:
        if criterion and criterion_spec(criterion.content).criterion.basis == "ratio":
            return criterion.code, verdict
    return None


def last_reading(asked: Asked) -> Reading | None:
    """The newest reading of a series; of amended ones the last."""
    found = Reading.objects.filter(
        device=asked.device,
        measurand__code=asked.spec.code,
        aperture=asked.aperture,
        condition=asked.condition,
    ).exclude(submission__check_of__state="void")
    return found.select_related("submission__test_object").order_by("-measured_at", "-id").first()


def moved_to(
    asked: Asked, change: Change, first: Decimal | None, baseline: BaselineRow | None = None
) -> Moved:
    """A change with the share it uses of the first level's allowance at acceptance.

    Parameters
    ----------
    first
        Value of the first epoch; None where this is the first.
    baseline
        The one in force, for a limit of its own spread.
    """
    if first is None:
        return Moved(change)
    return share_used(asked.spec, asked.criteria(baseline), asked.quantity, change, first, baseline)


def share_used(
    spec: MeasurandSpec,
    criteria: Sequence[CriterionRow],
    quantity: str,
    change: Change,
    first: Decimal,
    baseline: BaselineRow | None,
) -> Moved:
    """A change from the first epoch, judged by the first limit that stands on a baseline."""
    limits = [row for row in criteria if row.spec.criterion.basis == "baseline"]
    if not limits:
        return Moved(change)
    found = conformity.judge(
        limits[0].spec.criterion,
        value=subtract(first, change.cumulative.copy_negate()),
        kind=spec.kind,
        baseline=first,
        quantity=quantity or None,
        spread=spread_of(baseline, spec.resolution),
    )
    used = "" if found.used is None else plain(found.used)
    return Moved(change, used, found.lower_name or "", found.verdict)


def moves_of(
    epochs: Sequence[BaselineRow],
    spec: MeasurandSpec | None,
    adopted: Mapping[str, CriterionRow],
    quantity: str,
) -> dict[int, Moved]:
    """What each epoch of one series changed, oldest first, by key; with the share used where a limit is adopted."""
    found = changes([epoch_of(row) for row in epochs])
    if spec is None:
        return {key: Moved(change) for key, change in found.items()}
    first = epochs[0].value
    return {
        row.id: share_used(spec, criteria_for(spec, dict(adopted), row), quantity, found[row.id], first, row)
        for row in epochs
    }
