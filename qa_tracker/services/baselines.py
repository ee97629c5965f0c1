"""Setting baselines: a new epoch with its reason, signed; refused while an absolute limit fails."""

from __future__ import annotations

import datetime as dt
import uuid
from collections.abc import Mapping, Sequence

from django.db import IntegrityError

from qa_tracker.core import decimals
from qa_tracker.core.errors import Conflict, Invalid
from qa_tracker.core.library_specs import MeasurandSpec
from qa_tracker.records import ledger
from qa_tracker.records.models import (
    Aperture,
    Baseline,
    Condition,
    Device,
    Person,
    Reading,
    ScannerFacts,
    Submission,
    TestObject,
)
from qa_tracker.records.queries.library import CriterionRow, adopted_criteria
from qa_tracker.services.baseline_proposals import (
    FOR_GOOD,
    Around,
    Part,
    Proposed,
    Terms,
    Value,
    Wanted,
    all_or_refused,
    around,
    known_measurands,
    propose,
)
from qa_tracker.services.baseline_rows import Source, exact_mean, put_epoch, sign
from qa_tracker.services.finding import device as find_device
from qa_tracker.services.finding import test_object as find_test_object
from qa_tracker.services.guards import check_password, check_shown

__all__ = ["DIGITS", "FOR_GOOD", "Source", "Terms", "Value", "known_measurands", "wants_baseline"]

NO_UID = uuid.UUID(int=0)
DIGITS = ("number", "count")


def set_values(
    *,
    device: uuid.UUID,
    values: Sequence[Value],
    test_object: uuid.UUID | None,
    reason: str,
    password: str,
    actor: Person,
    at: dt.datetime,
    terms: Terms = FOR_GOOD,
    shown_sha256: str | None = None,
) -> list[Baseline]:
    """Set baselines from values given, signed. Writes Baseline, Signature; leaf ``baseline.set``.

    Refused: as :func:`propose_values`; a wrong password; where ``shown_sha256`` is given, something else than
    what was shown.
    """
    proposed = propose_values(
        device=device, values=values, test_object=test_object, reason=reason, actor=actor, at=at, terms=terms
    )
    return put_signed(proposed=proposed, password=password, shown_sha256=shown_sha256, actor=actor, at=at)


def propose_values(
    *,
    device: uuid.UUID,
    values: Sequence[Value],
    test_object: uuid.UUID | None,
    reason: str,
    actor: Person,
    at: dt.datetime,
    terms: Terms = FOR_GOOD,
) -> Proposed:
    """What setting these values would write and change; reads only.

    Refused: role, no reason, an unknown measurand or part, a value that fails a limit standing on no baseline or
    whose series' last reading does, another test object without an overlap, a last day that has come.
    """
    row = find_device(actor, device, at)
    known = around(row, reason, terms, actor, at)
    if not values:
        raise Invalid("baseline.values_missing", field="values")
    source = source_of(row, find_test_object(actor, test_object, at))
    return propose(known, all_or_refused(values, lambda value: _wanted(known, value, source, at)))


def _wanted(known: Around, value: Value, source: Source, at: dt.datetime) -> Wanted:
    spec = number_asked(known, value.measurand)
    part = part_of(known.device, value, spec)
    name = known.asked(spec, part).name
    if value.qualifier not in spec.qualifiers or value.qualifier == "not_seen":
        allowed = ", ".join(each for each in spec.qualifiers if each != "not_seen")
        raise Invalid("reading.qualifier_not_allowed", field=name, qualifier=value.qualifier, allowed=allowed)
    exact = decimals.parse(value.text, spec.resolution, field=name)
    return Wanted(spec, part, exact, value.qualifier, source, at)


def adopt_submission(
    *,
    submission: uuid.UUID,
    reason: str,
    password: str,
    actor: Person,
    at: dt.datetime,
    terms: Terms = FOR_GOOD,
    shown_sha256: str | None = None,
) -> list[Baseline]:
    """Make the numbers of a submission the baselines of their series, signed; as at acceptance.

    Writes Baseline, Signature; leaf ``baseline.set``. Refused: as :func:`set_values`; nothing to take.
    """
    proposed = propose_submission(submission=submission, reason=reason, actor=actor, at=at, terms=terms)
    return put_signed(proposed=proposed, password=password, shown_sha256=shown_sha256, actor=actor, at=at)


def propose_submission(
    *, submission: uuid.UUID, reason: str, actor: Person, at: dt.datetime, terms: Terms = FOR_GOOD
) -> Proposed:
    """What taking a submission's numbers would write and change; reads only. Refused as the command is."""
    row = Submission.objects.filter(uid=submission).select_related("check_of__device").first()
    device = find_device(actor, row.check_of.device.uid if row else NO_UID, at)
    if row is None:
        raise Invalid("baseline.values_missing", field="submission")
    known = around(device, reason, terms, actor, at)
    readings = row.readings.select_related("measurand", "aperture", "condition", "submission__test_object")
    taken: dict[tuple[int, int | None, int | None], list[Reading]] = {}
    for reading in readings.order_by("id"):
        if reading.scaled is not None and _compared(known, reading):
            series = (reading.measurand_id, reading.aperture_id, reading.condition_id)
            taken.setdefault(series, []).append(reading)
    if not taken:
        raise Invalid("baseline.values_missing", field="submission")
    source = source_of_submissions([row])
    return propose(known, [_taken(known, repeats, source) for repeats in taken.values()])


def _compared(known: Around, reading: Reading) -> bool:
    spec = known.specs.get(reading.measurand.code)
    return spec is not None and compared(spec, known.adopted)


def _taken(known: Around, repeats: Sequence[Reading], source: Source) -> Wanted:
    """The reading of a series, or the mean of its repeats where each is a number and no bound."""
    first = repeats[0]
    spec = known.specs[first.measurand.code]
    found = [decimals.Exact(each.entered, each.scaled or 0, each.places or 0) for each in repeats]
    exact = found[0]
    if len(found) > 1 and all(each.qualifier == "=" for each in repeats):
        exact = exact_mean([each.decimal for each in found], spec.resolution)
    part = (first.aperture, first.condition)
    return Wanted(spec, part, exact, first.qualifier, source, first.measured_at, first)


def put_signed(
    *, proposed: Proposed, password: str, shown_sha256: str | None, actor: Person, at: dt.datetime
) -> list[Baseline]:
    """Write and sign what was proposed; the end of every command that sets baselines.

    Writes Baseline, BaselineSetup, Signature; leaf ``baseline.set``. Refused: a wrong password, something else
    than what was shown.
    """
    check_password(actor, password)
    if shown_sha256 is not None:
        check_shown(shown_sha256, proposed.shown_sha256)
    try:
        with ledger.command("baseline.set", actor=actor, at=at, reason=proposed.reason) as act:
            found = [put_epoch(act, each.setting, each.standing) for each in proposed.proposals]
            sign(act, proposed.device, proposed.told(), actor, proposed.role, proposed.reason)
    except IntegrityError as error:
        # The epoch was taken by somebody else meanwhile.
        raise Conflict("record.changed_meanwhile") from error
    return found


def wants_baseline(spec: MeasurandSpec, site_id: int | None) -> bool:
    """Whether readings of a measurand are compared with a baseline at a site."""
    return compared(spec, adopted_criteria(site_id))


def compared(spec: MeasurandSpec, adopted: Mapping[str, CriterionRow]) -> bool:
    """Whether readings of a measurand are compared with a baseline by the limits adopted."""
    bases = {
        row.spec.criterion.basis
        for row in adopted.values()
        if row.code in spec.criteria or spec.code in row.spec.measurands
    }
    return spec.own_baseline or "baseline" in bases


def number_asked(known: Around, code: str) -> MeasurandSpec:
    """A measurand that is a number and that a procedure adopted here asks for (``baseline.measurand_unknown``)."""
    spec = known.specs.get(code)
    if spec is None or spec.kind not in DIGITS:
        raise Invalid("baseline.measurand_unknown", field=code, measurand=code)
    return spec


def part_of(device: Device, value: Value, spec: MeasurandSpec) -> Part:
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


def source_of(device: Device, test_object: TestObject | None) -> Source:
    """What a value typed now was measured with: the console the device is at, with its software."""
    console = device if device.kind == "scanner" else device.scanner
    facts = ScannerFacts.objects.filter(device=console).first() if console else None
    return Source(console.model if console else "", facts.software_version if facts else "", test_object)


def source_of_submissions(rows: Sequence[Submission]) -> Source:
    """What submissions that agree in it were measured with."""
    row = rows[-1]
    return Source(
        row.console.model if row.console else "",
        row.console_software,
        row.test_object,
        "eye",
        ",".join(str(each.uid) for each in rows),
    )
