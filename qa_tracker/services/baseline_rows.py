"""The rows of a baseline: a new epoch with its set-ups and its tie to another test object, signed and said."""

from __future__ import annotations

import datetime as dt
from collections.abc import Collection, Mapping, Sequence
from dataclasses import dataclass
from decimal import Decimal
from fractions import Fraction

from qa_tracker.core.baselines import summary
from qa_tracker.core.decimals import (
    Exact,
    from_scaled,
    parse,
    places_of,
    plain,
    round_half_even,
    scaled_at,
)
from qa_tracker.core.epochs import Change, Epoch, changes
from qa_tracker.records import ledger
from qa_tracker.records.models import (
    Aperture,
    Baseline,
    BaselineSetup,
    Condition,
    Device,
    Measurand,
    Person,
    Submission,
    TestObject,
)
from qa_tracker.records.queries.baselines import BaselineRow, SeriesKey
from qa_tracker.services import states

SIGNED_AS = "baseline set"
NEW = 0
"""Key of an epoch that is not written yet."""


@dataclass(frozen=True)
class Source:
    """Where a baseline's value came from and what it was measured with."""

    console_model: str = ""
    console_software: str = ""
    test_object: TestObject | None = None
    method: str = "eye"
    from_readings: str = ""


@dataclass(frozen=True)
class SetUp:
    """One independent set-up: what it read, on which local day, and the submission it was part of."""

    exact: Exact
    measured_on: dt.date
    submission: Submission | None = None


@dataclass(frozen=True)
class Tie:
    """What ties a baseline to the one on another test object: a reading on that, or why there is none."""

    to: Baseline
    exact: Exact | None = None
    why_none: str = ""


@dataclass(frozen=True)
class Setting:
    """One baseline about to be set."""

    device: Device
    measurand: Measurand
    aperture: Aperture | None
    condition: Condition | None
    exact: Exact
    qualifier: str
    source: Source
    reason: str
    set_by: Person
    expires_on: dt.date | None = None
    tie: Tie | None = None
    setups: tuple[SetUp, ...] = ()

    @property
    def series(self) -> SeriesKey:
        """The series it belongs to."""
        return (
            self.measurand.code,
            self.aperture.pk if self.aperture else None,
            self.condition.pk if self.condition else None,
        )

    def as_epoch(self) -> Epoch:
        """The epoch it would be."""
        tie = self.tie
        return Epoch(
            NEW,
            self.exact.decimal,
            self.qualifier != "=",
            self.source.test_object.pk if self.source.test_object else None,
            tie.to.pk if tie else None,
            tie.exact.decimal if tie and tie.exact else None,
        )


@dataclass(frozen=True)
class Moved:
    """What a baseline about to be set changes, and how much of the lower level's allowance is used by then."""

    change: Change
    used: str = ""
    level: str = ""
    verdict: str = ""


def exact_mean(values: Sequence[Decimal], resolution: str) -> Exact:
    """The mean, rounded once, half-even, to one more place than the measurand's resolution."""
    places = places_of(Decimal(resolution)) + 1
    total = sum((Fraction(value) for value in values), Fraction(0))
    mean = round_half_even(total / len(values), from_scaled(1, places))
    return Exact(plain(mean), scaled_at(mean, places), places)


def setups_of(baseline_ids: Collection[int]) -> dict[int, tuple[SetUp, ...]]:
    """The set-ups of baselines as they were set, to be set again."""
    found: dict[int, tuple[SetUp, ...]] = {}
    rows = BaselineSetup.objects.filter(baseline_id__in=baseline_ids).select_related("submission")
    for each in rows.order_by("baseline_id", "position"):
        one = SetUp(Exact(each.entered, each.scaled, each.places), each.measured_on, each.submission)
        found[each.baseline_id] = (*found.get(each.baseline_id, ()), one)
    return found


def epoch_of(row: BaselineRow | Baseline) -> Epoch:
    """A baseline that was set, as its change is worked out from it."""
    value = row.value if isinstance(row, BaselineRow) else from_scaled(row.scaled, row.places)
    overlap = parse(row.overlap_entered).decimal if row.overlap_entered else None
    return Epoch(row.id, value, row.qualifier != "=", row.test_object_id, row.overlap_of_id, overlap)


def change_of(setting: Setting, earlier: Sequence[BaselineRow | Baseline]) -> Change:
    """What a baseline about to be set changes against the earlier epochs of its series."""
    return changes([*(epoch_of(each) for each in earlier), setting.as_epoch()])[NEW]


def put_epoch(act: ledger.Act, setting: Setting, standing: Sequence[Baseline]) -> Baseline:
    """The rows of one baseline beside those of its series that stand; for commands and for history.

    Those in force on the same test object, or where either has none, end; one on another object stays in force.
    """
    for each in standing:
        if each.ended_at is None and _replaced(each, setting.source.test_object):
            act.change(each, ended_at=act.at, under_review=False)
    row = act.insert(_row(setting, act.at, 1 + max((each.epoch for each in standing), default=0)))
    for position, one in enumerate(setting.setups, start=1):
        act.insert(
            BaselineSetup(
                baseline=row,
                position=position,
                entered=one.exact.entered,
                scaled=one.exact.scaled,
                places=one.exact.places,
                measured_on=one.measured_on,
                submission=one.submission,
            )
        )
    return row


def _row(setting: Setting, at: dt.datetime, epoch: int) -> Baseline:
    source, tie = setting.source, setting.tie
    return Baseline(
        device=setting.device,
        aperture=setting.aperture,
        condition=setting.condition,
        measurand=setting.measurand,
        epoch=epoch,
        qualifier=setting.qualifier,
        entered=setting.exact.entered,
        scaled=setting.exact.scaled,
        places=setting.exact.places,
        unit=setting.measurand.unit,
        console_model=source.console_model,
        console_software=source.console_software,
        test_object=source.test_object,
        method=source.method,
        from_readings=source.from_readings,
        reason="\n".join(filter(None, (setting.reason, tie.why_none if tie else ""))),
        set_by=setting.set_by,
        valid_from=at,
        expires_on=setting.expires_on,
        overlap_of=tie.to if tie else None,
        overlap_entered=tie.exact.entered if tie and tie.exact else "",
    )


def _replaced(standing: Baseline, test_object: TestObject | None) -> bool:
    """Whether a new baseline on a test object ends one that stands."""
    return None in (standing.test_object_id, test_object) or standing.test_object == test_object


def told_of(setting: Setting, epoch: int, moved: Moved) -> dict[str, object]:
    """A baseline as its leaf and its signature say it; what it has not is left out."""
    source = setting.source
    told: dict[str, object] = {
        "measurand": setting.measurand.code,
        "aperture": setting.aperture.name if setting.aperture else None,
        "condition": setting.condition.name if setting.condition else None,
        "epoch": epoch,
        "entered": setting.exact.entered,
        "unit": setting.measurand.unit,
    }
    more = {
        "qualifier": "" if setting.qualifier == "=" else setting.qualifier,
        "console": " ".join(filter(None, (source.console_model, source.console_software))),
        "test_object": named(source.test_object),
        "expires_on": setting.expires_on.isoformat() if setting.expires_on else "",
        "change": _told_change(moved) if epoch > 1 else None,
        "overlap": _told_tie(setting.tie, moved.change) if setting.tie else None,
        "set_ups": _told_setups(setting.setups) if setting.setups else None,
    }
    return told | {name: value for name, value in more.items() if value}


def named(test_object: TestObject | None) -> str:
    """A test object by name and serial number."""
    return f"{test_object.name} {test_object.serial}" if test_object else ""


def _told_change(moved: Moved) -> dict[str, object]:
    change = moved.change
    told: dict[str, object] = {"step": plain(change.step), "from_first": plain(change.cumulative)}
    if moved.used:
        told |= {"used_percent": moved.used, "of_level": moved.level}
    return told | ({"untold": True} if change.untold else {})


def _told_tie(tie: Tie, change: Change) -> dict[str, object]:
    told: dict[str, object] = {"of_epoch": tie.to.epoch, "on": named(tie.to.test_object)}
    if tie.exact is None:
        return told | {"none_because": tie.why_none}
    between = plain(change.object_step) if change.object_step is not None else ""
    return told | {"entered": tie.exact.entered, "object_step": between}


def _told_setups(setups: Sequence[SetUp]) -> dict[str, object]:
    found = summary([one.exact.decimal for one in setups])
    finest = max(one.exact.places for one in setups) + 2
    deviation = found.standard_deviation
    return {
        "count": found.count,
        "standard_deviation": plain(round_half_even(deviation, from_scaled(1, finest))) if deviation else "0",
        "readings": [
            [
                one.exact.entered,
                one.measured_on.isoformat(),
                str(one.submission.uid) if one.submission else None,
            ]
            for one in setups
        ],
    }


def sign(
    act: ledger.Act,
    device: Device,
    told: Sequence[Mapping[str, object]],
    actor: Person,
    role: str,
    reason: str,
) -> None:
    """Sign baselines as they are told and say them in the leaf; for commands and for history."""
    shown = shown_of(device, told, reason)
    states.sign(act, person=actor, role=role, meaning=SIGNED_AS, subject=device, shown=shown, remark=reason)
    act.about(device, device=device, site=device.site)
    act.tell({"baselines": list(told), "reason": reason})


def shown_of(device: Device, told: Sequence[Mapping[str, object]], reason: str) -> dict[str, object]:
    """Exactly what a signer is shown."""
    return {"device": str(device.uid), "baselines": list(told), "reason": reason}
