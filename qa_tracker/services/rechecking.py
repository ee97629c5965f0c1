"""Deriving every stored verdict again from its stored parts: reading, limit, baseline, uncertainty, rule."""

from __future__ import annotations

import json
from collections.abc import Iterator
from dataclasses import dataclass, field
from decimal import Decimal

from qa_tracker.core import conformity, decimals
from qa_tracker.core.allowances import least_reference
from qa_tracker.core.applicability import METHOD_OF_ORIGIN, Circumstances, Standing, unfit
from qa_tracker.core.judgement import Judgement
from qa_tracker.core.library_specs import CriterionSpec, MeasurandSpec
from qa_tracker.core.own_spread import OwnSpread
from qa_tracker.core.schedule import local_day
from qa_tracker.core.sentence_codes import SentenceCode
from qa_tracker.records.models import Baseline, Criterion, FurtherVerdict, Reading, Verdict
from qa_tracker.records.queries import baselines, library
from qa_tracker.records.queries.device_facts import FactsThen, facts_at, facts_over_time
from qa_tracker.records.queries.library import criterion_spec
from qa_tracker.services.entries import NUMBERS

WORKED_OUT = {
    SentenceCode.NO_INPUT,
    SentenceCode.OPEN_INPUT,
    SentenceCode.LAYOUT_COMPENSATED,
    SentenceCode.NOT_FINITE,
}
"""What a derived quantity says that could not be worked out; there is no reading to derive it from again."""
JOINS = (
    "reading", "measurand", "baseline__test_object", "submission__test_object", "submission__check_of__site",
)  # fmt: skip
BATCH = 2000


@dataclass(frozen=True)
class VerdictProblem:
    """A verdict that is not what its parts give: which row, and by which limit."""

    what: str
    where: str


@dataclass(frozen=True)
class VerdictFinding:
    """The answer of re-deriving every verdict."""

    verdicts: int
    problems: tuple[VerdictProblem, ...]


@dataclass(frozen=True)
class Known:
    """What is fetched once for all verdicts: facts of devices by time, measurands by edition."""

    facts: dict[int, list[FactsThen]] = field(default_factory=facts_over_time)
    measurands: dict[int, dict[str, MeasurandSpec]] = field(default_factory=dict)

    def measurand(self, edition_id: int, code: str) -> MeasurandSpec | None:
        """A measurand as an edition has it; each edition is read once."""
        if edition_id not in self.measurands:
            spec = library.edition_by_id(edition_id).spec
            self.measurands[edition_id] = {one.code: one for one in spec.measurands}
        return self.measurands[edition_id].get(code)

    def least_reference(self, edition_id: int, measurand: MeasurandSpec) -> str:
        """Below what another reading is too small for a ratio to it; empty where there is no other."""
        named = measurand.reference_from
        other = self.measurand(edition_id, named) if named else None
        return decimals.plain(least_reference(other.resolution)) if other else ""


def recheck_verdicts() -> VerdictFinding:
    """Re-derive every stored verdict, and what further limits said. Reads only."""
    criteria = {row.id: (row.code, criterion_spec(row.content)) for row in Criterion.objects.all()}
    known = Known()
    problems, count = [], 0
    for verdict in _verdicts():
        count += 1
        said_so: list[Verdict | FurtherVerdict] = [verdict, *verdict.further.all()]
        for said in said_so:
            code, spec = criteria.get(said.criterion_id or 0, ("", None))
            if spec is None or not _agrees(said, verdict, spec, known):
                name = str(said._meta.model_name)
                problems.append(VerdictProblem("verdict_differs", f"{name} {said.pk} {code}"))
    return VerdictFinding(count, tuple(problems))


def _verdicts() -> Iterator[Verdict]:
    found = Verdict.objects.select_related(*JOINS).prefetch_related("further__baseline__test_object")
    yield from found.order_by("id").iterator(chunk_size=BATCH)


def _agrees(said: Verdict | FurtherVerdict, verdict: Verdict, spec: CriterionSpec, known: Known) -> bool:
    if said.code in WORKED_OUT and verdict.measurand.kind == "derived" and verdict.reading is None:
        return said.verdict == "not_assessable"
    measurand = known.measurand(verdict.submission.edition_id, verdict.measurand.code)
    if measurand is None:
        return False
    kept = json.loads(said.parameters)
    found = judged_by(spec, said, verdict, measurand, known, kept.get("least_reference", ""))
    same = all(kept.get(name) == value for name, value in found.parameters.items())
    return same and (found.verdict, found.level or "", str(found.code)) == (
        said.verdict,
        said.level,
        said.code,
    )


def judged_by(
    spec: CriterionSpec,
    said: Verdict | FurtherVerdict,
    verdict: Verdict,
    measurand: MeasurandSpec,
    known: Known,
    least: str,
) -> Judgement:
    """What a limit says of a stored reading, by what was kept beside it; it need not be the limit that judged it.

    ``least`` is the least other reading of a ratio, as kept or as it is now; empty for a verdict from before that rule.
    """
    met = _circumstances(verdict, measurand, known)
    return unfit(spec, met, _standing(said.baseline)) or _judged(
        said, verdict.reading, measurand, spec, least
    )


def _circumstances(verdict: Verdict, measurand: MeasurandSpec, known: Known) -> Circumstances:
    submission, origin = verdict.submission, verdict.reading.origin if verdict.reading else ""
    facts = facts_at(known.facts.get(submission.check_of.device_id, []), submission.recorded_at)
    site, on = submission.check_of.site, submission.test_object
    return Circumstances(
        facts.array_kind,
        facts.protection_class,
        facts.applied_part,
        measurand.medium,
        METHOD_OF_ORIGIN.get(origin, measurand.method),
        local_day(submission.measured_at, site.time_zone if site else "UTC"),
        on.id if on else None,
        f"{on.name} {on.serial}" if on else "",
        verdict.reading.qualifier if verdict.reading else "=",
    )


def _standing(baseline: Baseline | None) -> Standing | None:
    if baseline is None:
        return None
    on = baseline.test_object
    return Standing(on.id if on else None, f"{on.name} {on.serial}" if on else "", baseline.expires_on)


def _judged(
    said: Verdict | FurtherVerdict,
    reading: Reading | None,
    measurand: MeasurandSpec,
    spec: CriterionSpec,
    least: str,
) -> Judgement:
    numeric, baseline = measurand.kind in NUMBERS, said.baseline
    return conformity.judge(
        spec.criterion,
        value=_value(reading),
        kind=measurand.kind,
        qualifier=reading.qualifier if reading else "=",
        nominal=said.reference or None,
        reference=said.reference or None,
        baseline=decimals.from_scaled(baseline.scaled, baseline.places) if baseline else None,
        baseline_qualifier=baseline.qualifier if baseline else "=",
        quantity=said.quantity or None,
        uncertainty=said.uncertainty or None,
        rule=said.rule,  # type: ignore[arg-type]  # a word of the kernel's; another is refused there
        unit=measurand.unit if numeric else None,
        criterion_unit=spec.unit if numeric else None,
        spread=_spread(baseline, measurand) if spec.criterion.of_own_spread else None,
        never_below_zero=measurand.never_below_zero,
        least_reference=least or None,
    )


def _value(reading: Reading | None) -> Decimal | str | None:
    if reading is None:
        return None
    if reading.scaled is None:
        return reading.entered or None
    return decimals.from_scaled(reading.scaled, reading.places or 0)


def _spread(baseline: Baseline | None, measurand: MeasurandSpec) -> OwnSpread | None:
    if baseline is None:
        return None
    values = [one.value for one in baselines.setups_of([baseline.id]).get(baseline.id, [])]
    found = baselines.spread_of(values)
    deviation = Decimal(found.standard_deviation) if found.standard_deviation else None
    return OwnSpread(found.count, deviation, Decimal(measurand.resolution)) if found.count else None
