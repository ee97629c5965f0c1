"""The few readings that are shown of a what-if: what was said of each, and what would have been, as sentences."""

from __future__ import annotations

import datetime as dt
import json
import uuid
from collections.abc import Sequence
from dataclasses import dataclass
from typing import NamedTuple

from qa_tracker.core.judgement import Judgement
from qa_tracker.core.library_specs import MeasurandSpec
from qa_tracker.records.models import FurtherVerdict, Verdict
from qa_tracker.records.queries.library import CriterionRow, criteria_by_id
from qa_tracker.services.rechecking import Known, judged_by

OF_VERDICT = (
    "reading", "measurand", "aperture", "condition", "submission__test_object", "submission__check_of__site",
    "submission__check_of__device",
)  # fmt: skip
OF_BASELINE = ("mismatch_console", "mismatch_software", "mismatch_object", "baseline_under_review")
OF_READING = ("arithmetic",)
"""What a verdict says of its reading or its baseline's key, whatever limit is applied."""


class Place(NamedTuple):
    """Where one changed verdict is kept, and the limit that would have given another; the newest are largest."""

    measured_at: dt.datetime
    verdict_id: int
    is_further: bool
    criterion_id: int


@dataclass(frozen=True)
class Said:
    """A verdict with what its sentence needs."""

    verdict: str
    level: str
    code: str
    parameters: dict[str, str]
    criterion: CriterionRow | None


@dataclass(frozen=True)
class SaidAgain:
    """One reading with what was said of it, and what would have been."""

    check_uid: uuid.UUID
    device_uid: uuid.UUID
    device: str
    site_code: str
    zone: str
    measured_at: dt.datetime
    measurand: MeasurandSpec
    aperture: str
    condition: str
    repeat: int
    qualifier: str
    entered: str
    unit: str
    then: Said
    now: Said


def said_again(places: Sequence[Place], criteria: Sequence[CriterionRow]) -> tuple[SaidAgain, ...]:
    """Put each place in full, in the order given."""
    decided = _by_id([place.verdict_id for place in places if not place.is_further])
    beside = _further_by_id([place.verdict_id for place in places if place.is_further])
    found: list[tuple[Verdict | FurtherVerdict, Verdict, int]] = []
    for place in places:
        if place.is_further:
            further = beside[place.verdict_id]
            found.append((further, further.verdict_of, place.criterion_id))
        else:
            found.append((decided[place.verdict_id], decided[place.verdict_id], place.criterion_id))
    judged = criteria_by_id({said.criterion_id for said, _, _ in found if said.criterion_id is not None})
    news = {each.id: each for each in criteria}
    known = Known()
    rows = (
        _row(said, verdict, judged.get(said.criterion_id or 0), news[key], known)
        for said, verdict, key in found
    )
    return tuple(row for row in rows if row is not None)


def _by_id(ids: Sequence[int]) -> dict[int, Verdict]:
    return Verdict.objects.select_related(*OF_VERDICT, "baseline__test_object").in_bulk(ids)


def _further_by_id(ids: Sequence[int]) -> dict[int, FurtherVerdict]:
    joins = [f"verdict_of__{name}" for name in OF_VERDICT]
    return FurtherVerdict.objects.select_related(*joins, "baseline__test_object").in_bulk(ids)


def _row(
    said: Verdict | FurtherVerdict,
    verdict: Verdict,
    judged: CriterionRow | None,
    new: CriterionRow,
    known: Known,
) -> SaidAgain | None:
    reading, check = verdict.reading, verdict.submission.check_of
    measurand = known.measurand(verdict.submission.edition_id, verdict.measurand.code)
    if reading is None or measurand is None:
        return None
    kept = json.loads(said.parameters)
    least = known.least_reference(verdict.submission.edition_id, measurand)
    now = _now(judged_by(new.spec, said, verdict, measurand, known, least), new, kept)
    device, site = check.device, check.site
    return SaidAgain(
        check.uid,
        device.uid,
        f"{device.maker} {device.model} {device.serial}",
        site.code if site else "",
        site.time_zone if site else "UTC",
        verdict.submission.measured_at,
        measurand,
        verdict.aperture.name if verdict.aperture else "",
        verdict.condition.name if verdict.condition else "",
        verdict.repeat,
        reading.qualifier,
        reading.entered,
        reading.unit,
        Said(said.verdict, said.level, said.code, kept, judged),
        now,
    )


def _now(judgement: Judgement, criterion: CriterionRow, kept: dict[str, str]) -> Said:
    """What would have been said, with what holds for the reading under any limit."""
    names = OF_READING + (OF_BASELINE if criterion.spec.criterion.basis == "baseline" else ())
    carried = {name: kept[name] for name in names if name in kept}
    parameters = judgement.parameters | carried
    return Said(judgement.verdict, judgement.level or "", str(judgement.code), parameters, criterion)
