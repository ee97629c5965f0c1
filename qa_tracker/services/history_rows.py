"""Rows of the past as judging meets them, made from what is in memory."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from decimal import Decimal

from qa_tracker.core.decimals import from_scaled
from qa_tracker.records.models import Baseline
from qa_tracker.records.queries.baselines import BaselineRow, SeriesKey, spread_of
from qa_tracker.services.baseline_rows import SetUp


def baseline_row(key: SeriesKey, row: Baseline, setups: Sequence[Decimal] = ()) -> BaselineRow:
    """A baseline that is not yet in the database, as judging meets it, with the set-ups it is the mean of."""
    spread = spread_of(setups)
    return BaselineRow(
        id=row.id, uid=row.uid, device_id=row.device_id, measurand=key[0], aperture_id=key[1], aperture="",
        condition_id=key[2], condition="", epoch=row.epoch, qualifier=row.qualifier, entered=row.entered,
        value=from_scaled(row.scaled, row.places), unit=row.unit, console_model=row.console_model,
        console_software=row.console_software, test_object_id=row.test_object_id,
        test_object_uid=row.test_object.uid if row.test_object else None,
        test_object=f"{row.test_object.name} {row.test_object.serial}" if row.test_object else "",
        method=row.method, reason=row.reason, set_by="", valid_from=row.valid_from, ended_at=row.ended_at,
        under_review=row.under_review, expires_on=row.expires_on, overlap_of_id=row.overlap_of_id,
        overlap_entered=row.overlap_entered, count=spread.count,
        standard_deviation=spread.standard_deviation,
    )  # fmt: skip


def in_force_rows(
    key: SeriesKey, epochs: Sequence[Baseline], setups: Mapping[int, Sequence[SetUp]]
) -> tuple[BaselineRow, ...]:
    """The baselines in force of one series, newest first."""
    standing = [row for row in reversed(epochs) if row.ended_at is None]
    return tuple(
        baseline_row(key, row, [one.exact.decimal for one in setups.get(row.pk, ())]) for row in standing
    )
