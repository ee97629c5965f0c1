"""Setting baselines: a new epoch with its reason, signed; refused while an absolute limit fails."""

from __future__ import annotations

import datetime as dt
import uuid
from collections.abc import Sequence
from dataclasses import dataclass

from qa_tracker.core import conformity, decimals
from qa_tracker.core.decimals import Exact
from qa_tracker.core.errors import Conflict, Invalid
from qa_tracker.core.library_specs import MeasurandSpec
from qa_tracker.records import ledger
from qa_tracker.records.models import (
    Aperture,
    Baseline,
    Condition,
    Device,
    Measurand,
    Person,
    Reading,
    ScannerFacts,
    Submission,
    TestObject,
)
from qa_tracker.records.queries.library import adopted_criteria, adopted_procedures
from qa_tracker.services import states
from qa_tracker.services.finding import device as find_device
from qa_tracker.services.finding import test_object as find_test_object
from qa_tracker.services.guards import check_may, check_password, required, role_for

NO_UID = uuid.UUID(int=0)
DIGITS = ("number", "count")


@dataclass(frozen=True)
class Value:
    """A value to become a baseline, by measurand code, aperture and condition."""

    measurand: str
    text: str
    aperture: uuid.UUID | None = None
    condition: uuid.UUID | None = None
    qualifier: str = "="


@dataclass(frozen=True)
class Source:
    """Where a baseline's value came from and what it was measured with."""

    console_model: str = ""
    console_software: str = ""
    test_object: TestObject | None = None
    method: str = "eye"
    from_readings: str = ""


def set_values(
    *,
    device: uuid.UUID,
    values: list[Value],
    test_object: uuid.UUID | None,
    reason: str,
    password: str,
    actor: Person,
    at: dt.datetime,
) -> list[Baseline]:
    """Set baselines from values given, signed. Writes Baseline, Signature; leaf ``baseline.set``.

    Refused: role, wrong password, no reason, an unknown measurand, a value beyond an absolute limit.
    """
    row = find_device(actor, device, at)
    check_may(actor, "baseline.set", row.site_id or actor.duties_site_id, at)
    reason = required(reason, "baseline.reason_missing", "reason")
    if not values:
        raise Invalid("baseline.values_missing", field="values")
    specs = known_measurands(row.site_id)
    read = [(value, _read(row, value, specs)) for value in values]
    parts = {value: _part(row, value, specs[value.measurand]) for value in values}
    check_password(actor, password)
    source = _source(row, find_test_object(actor, test_object, at))
    role = role_for(actor, "baseline.set", row.site_id or actor.duties_site_id, at)
    with ledger.command("baseline.set", actor=actor, at=at, reason=reason) as act:
        found = [
            put(
                act,
                row,
                specs[value.measurand],
                parts[value],
                exact,
                value.qualifier,
                source,
                reason,
                actor,
            )
            for value, exact in read
        ]
        sign(act, row, found, actor, role, reason)
    return found


def adopt_submission(
    *, submission: uuid.UUID, reason: str, password: str, actor: Person, at: dt.datetime
) -> list[Baseline]:
    """Make the numbers of a submission the baselines of their series, signed; as at acceptance.

    Writes Baseline, Signature; leaf ``baseline.set``. Refused: as :func:`set_values`; nothing to take.
    """
    row = Submission.objects.filter(uid=submission).select_related("check_of__device").first()
    device = find_device(actor, row.check_of.device.uid if row else NO_UID, at)
    if row is None:
        raise Invalid("baseline.values_missing", field="submission")
    check_may(actor, "baseline.set", device.site_id or actor.duties_site_id, at)
    reason = required(reason, "baseline.reason_missing", "reason")
    specs = known_measurands(device.site_id)
    taken = [
        reading
        for reading in row.readings.select_related("measurand", "aperture", "condition")
        if reading.scaled is not None and wants_baseline(specs.get(reading.measurand.code), device.site_id)
    ]
    if not taken:
        raise Invalid("baseline.values_missing", field="submission")
    check_password(actor, password)
    source = Source(
        row.console.model if row.console else "",
        row.console_software,
        row.test_object,
        "eye",
        str(row.uid),
    )
    role = role_for(actor, "baseline.set", device.site_id or actor.duties_site_id, at)
    with ledger.command("baseline.set", actor=actor, at=at, reason=reason) as act:
        found = [_from_reading(act, device, specs, reading, source, reason, actor) for reading in taken]
        sign(act, device, found, actor, role, reason)
    return found


def _from_reading(
    act: ledger.Act,
    device: Device,
    specs: dict[str, MeasurandSpec],
    reading: Reading,
    source: Source,
    reason: str,
    actor: Person,
) -> Baseline:
    spec = specs[reading.measurand.code]
    exact = Exact(reading.entered, reading.scaled or 0, reading.places or 0)
    refuse_beyond_absolute(spec, exact, device.site_id)
    part = (reading.aperture, reading.condition)
    return put(act, device, spec, part, exact, reading.qualifier, source, reason, actor)


def known_measurands(site_id: int | None) -> dict[str, MeasurandSpec]:
    """Every measurand of the procedures adopted at a site, by code."""
    return {spec.code: spec for edition in adopted_procedures(site_id) for spec in edition.spec.measurands}


def wants_baseline(spec: MeasurandSpec | None, site_id: int | None) -> bool:
    """Whether readings of a measurand are compared with a baseline at a site."""
    if spec is None:
        return False
    adopted = adopted_criteria(site_id)
    bases = {adopted[code].spec.criterion.basis for code in spec.criteria if code in adopted}
    return spec.own_baseline or "baseline" in bases


def _read(device: Device, value: Value, specs: dict[str, MeasurandSpec]) -> Exact:
    spec = specs.get(value.measurand)
    if spec is None or spec.kind not in DIGITS:
        raise Invalid("baseline.measurand_unknown", field=value.measurand, measurand=value.measurand)
    exact = decimals.parse(value.text, spec.resolution, field=value.measurand)
    refuse_beyond_absolute(spec, exact, device.site_id)
    return exact


def refuse_beyond_absolute(spec: MeasurandSpec, exact: Exact, site_id: int | None) -> None:
    """Refuse a value that fails a limit on the value itself: no baseline hides a fault.

    Raises
    ------
    Conflict
        ``baseline.beyond_limit``
    """
    adopted = adopted_criteria(site_id)
    for code in spec.criteria:
        criterion = adopted[code].spec.criterion if code in adopted else None
        if criterion is None or criterion.basis != "none" or criterion.grades or criterion.bands:
            continue
        verdict = conformity.judge(criterion, value=exact.decimal, kind=spec.kind).verdict
        if verdict in ("remedial", "suspension"):
            raise Conflict(
                "baseline.beyond_limit", field=spec.code, value=exact.entered, criterion=code, level=verdict
            )


def _part(device: Device, value: Value, spec: MeasurandSpec) -> tuple[Aperture | None, Condition | None]:
    """Where a value belongs. One that names no part, where checks ask at each, would be compared with nothing."""
    aperture = Aperture.objects.filter(device=device, uid=value.aperture or NO_UID).first()
    condition = Condition.objects.filter(device=device, uid=value.condition or NO_UID).first()
    if (value.aperture and aperture is None) or (value.condition and condition is None):
        raise Invalid("baseline.part_unknown", field=value.measurand)
    asked = (
        spec.per == "aperture" and Aperture.objects.filter(device=device).exists(),
        spec.by_condition and Condition.objects.filter(device=device).exists(),
    )
    if asked != (aperture is not None, condition is not None):
        raise Invalid("baseline.part_wrong", field=value.measurand, measurand=spec.name)
    return aperture, condition


def _source(device: Device, test_object: TestObject | None) -> Source:
    console = device if device.kind == "scanner" else device.scanner
    facts = ScannerFacts.objects.filter(device=console).first() if console else None
    return Source(console.model if console else "", facts.software_version if facts else "", test_object)


def put(
    act: ledger.Act,
    device: Device,
    spec: MeasurandSpec,
    part: tuple[Aperture | None, Condition | None],
    exact: Exact,
    qualifier: str,
    source: Source,
    reason: str,
    set_by: Person,
) -> Baseline:
    """The rows of one baseline: the epoch before it ends."""
    measurand = Measurand.objects.get(code=spec.code)
    series = {"device": device, "measurand": measurand, "aperture": part[0], "condition": part[1]}
    standing = list(Baseline.objects.filter(**series, ended_at=None).order_by("-epoch"))
    last, others = (standing[0], standing[1:]) if standing else (None, [])
    return put_epoch(act, device, measurand, part, exact, qualifier, source, reason, set_by, last, others)


def put_epoch(
    act: ledger.Act,
    device: Device,
    measurand: Measurand,
    part: tuple[Aperture | None, Condition | None],
    exact: Exact,
    qualifier: str,
    source: Source,
    reason: str,
    set_by: Person,
    last: Baseline | None,
    others: Sequence[Baseline] = (),
) -> Baseline:
    """The rows of one baseline after the last one of its series; for commands and for history.

    Those in force on the same test object, or where either has none, end; one on another object stays in force.
    """
    for each in (last, *others):
        if each is not None and each.ended_at is None and _replaced(each, source.test_object):
            act.change(each, ended_at=act.at, under_review=False)
    return act.insert(
        Baseline(
            device=device,
            aperture=part[0],
            condition=part[1],
            measurand=measurand,
            epoch=last.epoch + 1 if last else 1,
            qualifier=qualifier,
            entered=exact.entered,
            scaled=exact.scaled,
            places=exact.places,
            unit=measurand.unit,
            console_model=source.console_model,
            console_software=source.console_software,
            test_object=source.test_object,
            method=source.method,
            from_readings=source.from_readings,
            reason=reason,
            set_by=set_by,
            valid_from=act.at,
        )
    )


def _replaced(standing: Baseline, test_object: TestObject | None) -> bool:
    """Whether a new baseline on a test object ends one that stands."""
    return None in (standing.test_object_id, test_object) or standing.test_object == test_object


def sign(
    act: ledger.Act, device: Device, found: list[Baseline], actor: Person, role: str, reason: str
) -> None:
    """Sign baselines and say them in the leaf; for commands and for history."""
    shown = {
        "device": str(device.uid),
        "baselines": [
            [each.measurand.code, each.qualifier, each.entered, each.unit, each.epoch] for each in found
        ],
    }
    states.sign(
        act, person=actor, role=role, meaning="baseline set", subject=device, shown=shown, remark=reason
    )
    act.about(device, device=device, site=device.site)
    act.tell(
        {
            "baselines": [
                {
                    "measurand": each.measurand.code,
                    "aperture": each.aperture.name if each.aperture else None,
                    "condition": each.condition.name if each.condition else None,
                    "epoch": each.epoch,
                    "entered": each.entered,
                    "unit": each.unit,
                }
                for each in found
            ],
            "reason": reason,
        }
    )
