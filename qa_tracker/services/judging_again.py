"""Stored readings by the thousand under a limit that need not be theirs: may it judge them, and how."""

from __future__ import annotations

from collections.abc import Sequence
from decimal import Decimal
from functools import lru_cache

from numpy import uint8
from numpy.typing import NDArray

from qa_tracker.core.applicability import METHOD_OF_ORIGIN, Circumstances, Standing, unfit
from qa_tracker.core.criteria import Criterion
from qa_tracker.core.judged_again import Kept, verdict_ranks, whole
from qa_tracker.core.library_specs import CriterionSpec, MeasurandSpec
from qa_tracker.core.own_spread import OwnSpread
from qa_tracker.core.schedule import local_day
from qa_tracker.records.models import Measurand, Site
from qa_tracker.records.queries import baselines
from qa_tracker.records.queries.device_facts import facts_at
from qa_tracker.records.queries.what_if import SaidRow
from qa_tracker.services.entries import NUMBERS
from qa_tracker.services.rechecking import Known

NOT_JUDGED = Kept("text")
"""What stands for a reading that the limit may not judge: a text has no verdict."""

quantity = lru_cache(maxsize=1024)(Decimal)


class Again:
    """Judges stored readings, remembering what many of them share."""

    def __init__(self) -> None:
        self.known = Known()
        self.codes = dict(Measurand.objects.values_list("id", "code"))
        self.zones = dict(Site.objects.values_list("id", "time_zone"))
        self._fits: dict[tuple[object, ...], bool] = {}
        self._spreads: dict[tuple[int, str], OwnSpread | None] = {}

    def ranks(self, spec: CriterionSpec, rows: Sequence[SaidRow]) -> NDArray[uint8]:
        """The rank of each verdict by this limit, in order."""
        own = _of_own_spread(spec.criterion)
        if own:
            self._fetch_spreads(rows)
        return verdict_ranks(spec.criterion, [self._kept(spec, row, own) for row in rows])

    def _kept(self, spec: CriterionSpec, row: SaidRow, own: bool) -> Kept:
        measurand = self._measurand(row)
        if measurand is None or not self._may_judge(spec, row, measurand):
            return NOT_JUDGED
        if measurand.kind in NUMBERS and row.qualifier != "not_seen" and spec.unit != measurand.unit:
            return NOT_JUDGED
        based = row.baseline_scaled is not None
        return Kept(
            measurand.kind,
            row.qualifier,
            row.entered,
            None if row.scaled is None else (row.scaled, row.places or 0),
            (row.baseline_scaled or 0, row.baseline_places or 0) if based else None,
            row.baseline_qualifier or "=",
            whole(row.reference),
            quantity(row.quantity) if row.quantity else None,
            whole(row.uncertainty),
            row.rule,  # type: ignore[arg-type]  # a word of the kernel's; another is refused there
            self._spreads.get((row.baseline_id or 0, measurand.resolution)) if own else None,
            measurand.never_below_zero,
            whole(self.known.least_reference(row.edition_id, measurand)),
        )

    def _measurand(self, row: SaidRow) -> MeasurandSpec | None:
        return self.known.measurand(row.edition_id, self.codes[row.measurand_id])

    def _may_judge(self, spec: CriterionSpec, row: SaidRow, measurand: MeasurandSpec) -> bool:
        """Whether medium, method, device and baseline let the limit judge; asked once for all that are alike."""
        facts = facts_at(self.known.facts.get(row.device_id, []), row.recorded_at)
        method = METHOD_OF_ORIGIN.get(row.origin, measurand.method)
        device = (facts.array_kind, facts.protection_class, facts.applied_part)
        expires_on = row.baseline_expires_on
        if expires_on is not None and local_day(row.measured_at, self._zone(row)) < expires_on:
            expires_on = None
        objects = row.baseline_id is not None, row.baseline_object_id, row.test_object_id
        seen = "not_seen" if row.qualifier == "not_seen" else "="
        key = (spec.id, device, measurand.medium, method, expires_on, objects, seen)
        if key not in self._fits:
            on = expires_on, row.test_object_id, ""
            met = Circumstances(*device, measurand.medium, method, *on, seen)
            standing = Standing(row.baseline_object_id, "", expires_on) if row.baseline_id else None
            self._fits[key] = unfit(spec, met, standing) is None
        return self._fits[key]

    def _zone(self, row: SaidRow) -> str:
        return self.zones.get(row.site_id or 0, "UTC")

    def _fetch_spreads(self, rows: Sequence[SaidRow]) -> None:
        """Fetch the set-ups of the baselines that were not asked about yet."""
        wanted = {
            (row.baseline_id, measurand.resolution)
            for row in rows
            if row.baseline_id is not None and (measurand := self._measurand(row)) is not None
        } - self._spreads.keys()
        setups = baselines.setups_of({key for key, _ in wanted})
        for key, resolution in wanted:
            found = baselines.spread_of([one.value for one in setups.get(key, [])])
            deviation = Decimal(found.standard_deviation) if found.standard_deviation else None
            own = OwnSpread(found.count, deviation, Decimal(resolution)) if found.count else None
            self._spreads[key, resolution] = own


def _of_own_spread(criterion: Criterion) -> bool:
    limits = [criterion.remedial, *(band.remedial for band in criterion.bands)]
    return any(limit is not None and limit.of_own_spread for limit in limits)
