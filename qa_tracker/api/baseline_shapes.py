"""Shapes of baselines: set, proposed, kept, and under review."""

from __future__ import annotations

import datetime as dt
import uuid
from collections.abc import Sequence
from decimal import Decimal
from itertools import groupby
from typing import Any

from ninja import Schema

from qa_tracker.api.schemas import Given, Mark, Moment, Secret, Sha256, Short, Words
from qa_tracker.core.decimals import from_scaled, places_of, plain, round_half_even
from qa_tracker.core.epochs import changes
from qa_tracker.records.queries.baselines import BaselineRow
from qa_tracker.services.baseline_proposals import Proposal, Proposed
from qa_tracker.services.baseline_rows import epoch_of
from qa_tracker.services.baseline_setups import Chosen, Figures
from qa_tracker.services.baselines import Terms, Value


class SeriesIn(Given):
    """One series of a device: a measurand, at an aperture and condition where it has them."""

    measurand: Mark
    aperture: uuid.UUID | None = None
    condition: uuid.UUID | None = None


class OverlapIn(SeriesIn):
    """What was read on the test object before, as text in the measurand's unit."""

    text: Mark


class ValueIn(OverlapIn):
    """A value as text in the measurand's unit, at an aperture and condition where it has them."""

    qualifier: Mark = "="


class TermsIn(Given):
    """Why baselines are set, how long they serve, and what ties them to the test object before."""

    reason: Words
    expires_on: dt.date | None = None
    overlaps: list[OverlapIn] = []
    no_overlap: Short = ""

    def terms(self) -> Terms:
        """As the commands take them."""
        overlaps = [Value(**vars(each)) for each in self.overlaps]
        return Terms(self.expires_on, overlaps, self.no_overlap)


class SignedIn(TermsIn):
    """With the signature; a hash of what was shown binds it to exactly that."""

    password: Secret
    shown_sha256: Sha256 | None = None


class ProposedValuesIn(TermsIn):
    """Values that would become baselines."""

    values: list[ValueIn]
    test_object: uuid.UUID | None = None


class BaselinesIn(ProposedValuesIn, SignedIn):
    """Values that become baselines, signed."""


class FromSubmissionIn(SignedIn):
    """The reason for taking a submission's numbers as baselines, signed."""


class SetUpIn(Given):
    """One set-up: the submission it was part of, or a value as text with its day."""

    text: Mark = ""
    measured_on: dt.date | None = None
    submission: uuid.UUID | None = None


class ProposedSetUpsIn(TermsIn):
    """Set-ups whose mean would become a baseline."""

    series: SeriesIn
    set_ups: list[SetUpIn]
    test_object: uuid.UUID | None = None

    def chosen(self) -> list[Chosen]:
        """As the command takes them."""
        return [Chosen(**vars(each)) for each in self.set_ups]

    def where(self) -> Value:
        """The series, as the command takes it."""
        return Value(self.series.measurand, "", self.series.aperture, self.series.condition)


class SetUpsIn(ProposedSetUpsIn, SignedIn):
    """Set-ups whose mean becomes a baseline, signed."""


class KeepIn(Given):
    """Baselines under review that still hold, signed."""

    baselines: list[uuid.UUID]
    reason: Words
    password: Secret


class BaselineOut(Schema):
    """One epoch of a baseline, as entered, with what it was measured with and its change from the first."""

    uid: uuid.UUID
    measurand: str
    aperture: str
    condition: str
    epoch: int
    qualifier: str
    entered: str
    unit: str
    console_model: str
    console_software: str
    test_object: str
    method: str
    reason: str
    set_by: str
    valid_from: Moment
    ended_at: Moment | None
    under_review: bool
    expires_on: dt.date | None
    set_ups: int
    standard_deviation: str
    overlap_of: uuid.UUID | None
    overlap: str
    step: str
    from_first: str
    object_step: str | None
    untold: bool


def baselines_out(rows: Sequence[BaselineRow]) -> list[dict[str, Any]]:
    """Every epoch of a device's baselines, by series and epoch, with what each changed."""
    uids = {row.id: row.uid for row in rows}
    found = []
    for _key, group in groupby(rows, key=lambda row: row.key):
        epochs = list(group)
        changed = changes([epoch_of(row) for row in epochs])
        for row in epochs:
            change = changed[row.id]
            told = {
                "set_ups": row.count,
                "standard_deviation": _rounded(row),
                "overlap_of": uids.get(row.overlap_of_id or 0),
                "overlap": row.overlap_entered,
                "step": plain(change.step),
                "from_first": plain(change.cumulative),
                "object_step": None if change.object_step is None else plain(change.object_step),
                "untold": change.untold,
            }
            found.append(vars(row) | told)
    return found


def _rounded(row: BaselineRow) -> str:
    if not row.standard_deviation:
        return ""
    step = from_scaled(1, places_of(row.value) + 1)
    return plain(round_half_even(Decimal(row.standard_deviation), step))


class ProposalOut(Schema):
    """What setting one baseline would change; the share is of the first level's allowance at acceptance."""

    measurand: str
    aperture: str
    condition: str
    epoch: int
    entered: str
    unit: str
    step: str
    from_first: str
    object_step: str | None
    untold: bool
    used_percent: str
    level: str


class ProposedOut(Schema):
    """What would be recorded, and the hash a signature can be bound to."""

    shown_sha256: str
    baselines: list[ProposalOut]


def proposed_out(proposed: Proposed) -> dict[str, Any]:
    """What was proposed, as it would be recorded."""
    return {
        "shown_sha256": proposed.shown_sha256,
        "baselines": [_proposal_out(each) for each in proposed.proposals],
    }


def _proposal_out(each: Proposal) -> dict[str, Any]:
    setting, change = each.setting, each.moved.change
    return {
        "measurand": setting.measurand.code,
        "aperture": setting.aperture.name if setting.aperture else "",
        "condition": setting.condition.name if setting.condition else "",
        "epoch": each.epoch,
        "entered": setting.exact.entered,
        "unit": setting.measurand.unit,
        "step": plain(change.step),
        "from_first": plain(change.cumulative),
        "object_step": None if change.object_step is None else plain(change.object_step),
        "untold": change.untold,
        "used_percent": each.moved.used,
        "level": each.moved.level,
    }


class FiguresOut(Schema):
    """What set-ups give; an interval only from ten on, suspects (by position) only from fifteen, never applied."""

    count: int
    mean: str
    standard_deviation: str | None
    floor: str
    factor: float | None
    half_width: str | None
    coverage: str
    confidence: str
    missing: int
    outliers_tested: bool
    suspects: list[int]


class ProposedSetUpsOut(ProposedOut):
    """What the mean of set-ups would change, with its figures."""

    figures: FiguresOut


def figures_out(found: Figures) -> dict[str, Any]:
    """The figures of set-ups, as text."""
    step = from_scaled(1, places_of(found.mean) + 1)
    deviation = found.standard_deviation
    return {
        "count": found.count,
        "mean": plain(found.mean),
        "standard_deviation": None if deviation is None else plain(round_half_even(deviation, step)),
        "floor": plain(round_half_even(found.floor, step)),
        "factor": found.factor,
        "half_width": None if found.allowance is None else plain(found.allowance),
        "coverage": plain(found.coverage),
        "confidence": plain(found.confidence),
        "missing": found.missing,
        "outliers_tested": found.tested,
        "suspects": list(found.suspects),
    }


class UnderReviewOut(Schema):
    """A device with baselines under review."""

    device: uuid.UUID
    label: str
    baselines: list[BaselineOut]


class SoftwareIn(Given):
    """A software version of a scanner, with its options and the day it was installed."""

    version: Mark
    options: Words = ""
    since_on: dt.date
