"""One reading against one published limit: may it judge at all, by which rule, and what does it say."""

from __future__ import annotations

import datetime as dt
import uuid
from collections.abc import Sequence
from dataclasses import dataclass, replace
from decimal import Decimal
from functools import lru_cache, partial

from qa_tracker.core import conformity, decimals
from qa_tracker.core.applicability import METHOD_OF_ORIGIN, Standing, unfit
from qa_tracker.core.combined_uncertainty import Departing, combined_at_levels, told
from qa_tracker.core.criteria import Criterion, Level
from qa_tracker.core.decimals import Exact
from qa_tracker.core.judgement import Judgement
from qa_tracker.core.own_spread import OwnSpread
from qa_tracker.core.stated_uncertainty import expanded
from qa_tracker.core.verdict_kernel import Rule
from qa_tracker.records.models import Device, TestObject
from qa_tracker.records.queries.baselines import BaselineRow
from qa_tracker.records.queries.library import CriterionRow
from qa_tracker.records.queries.uncertainties import UncertaintyRow
from qa_tracker.services.entries import NUMBERS, Entry
from qa_tracker.services.items import Item


@dataclass(frozen=True)
class MeasuredWith:
    """The part of a baseline's key that belongs to the whole check, and its local day."""

    console_model: str = ""
    console_software: str = ""
    test_object_id: int | None = None
    test_object: str = ""
    measured_on: dt.date | None = None


def measured_with(
    console: Device | None, software: str, test_object: TestObject | None, on: dt.date | None
) -> MeasuredWith:
    """What a check was measured with, from its rows."""
    return MeasuredWith(
        console.model if console else "",
        software,
        test_object.id if test_object else None,
        f"{test_object.name} {test_object.serial}" if test_object else "",
        on,
    )


@dataclass(frozen=True)
class Reference:
    """What a reading is compared with beside its baseline: a nominal value, or another reading of the check.

    Parameters
    ----------
    value
        As text; empty where there is none.
    is_reading
        Whether it was read. A nominal value is exact: what its certificate says is part of what is stated.
    uncertainty
        The expanded uncertainty (k = 2) stated for the other reading; empty where none is.
    least
        Below this a ratio to the other reading is not assessable; empty where there is none.
    """

    value: str = ""
    is_reading: bool = False
    uncertainty: str = ""
    least: str = ""


@dataclass(frozen=True)
class Weighed:
    """What one limit says of a reading, with all it was judged by."""

    criterion: CriterionRow
    judgement: Judgement
    reference: str
    uncertainty: str
    rule: Rule

    @property
    def basis(self) -> str:
        """What the limit stands on."""
        return self.criterion.spec.criterion.basis


def weigh(
    item: Item,
    criterion: CriterionRow,
    entry: Entry,
    value: Exact | None,
    reference: Reference,
    repeats: Sequence[Decimal],
    under: MeasuredWith,
) -> Weighed:
    """Judge one reading by one limit.

    Parameters
    ----------
    repeats
        The readings of this measurand in this check, at the same aperture and condition.
    """
    stated = stated_for(item, repeats)
    rule = rule_for(criterion, item.uncertainty, stated)
    judgement = _refusal(item, criterion, entry, under)
    if judgement is None:
        judgement = _judged(item, criterion, entry, value, reference, stated, rule)
    flags = baseline_flags(item.baseline, criterion, under) | unguarded(criterion, rule, judgement)
    if flags:
        judgement = replace(judgement, parameters=judgement.parameters | flags)
    used = judgement.parameters.get("uncertainty", "")
    return Weighed(criterion, judgement, reference.value, used, rule)


def _judged(
    item: Item,
    criterion: CriterionRow,
    entry: Entry,
    value: Exact | None,
    reference: Reference,
    stated: str,
    rule: Rule,
) -> Judgement:
    """Ask the kernel with the uncertainty of the departure, which may differ from level to level.

    The highest level is asked first, with its own. Where it is not the one that decides, it is clear of the reading by
    that, and the next is asked with its own, unless the higher would then decide after all. So one number is kept that
    gives the verdict again.
    """
    numeric = item.spec.kind in NUMBERS
    ask = partial(
        _verdict_on,
        criterion.uid,
        criterion.spec.criterion,
        value=decimals.plain(value.decimal) if value else (entry.text or None),
        kind=item.spec.kind,
        qualifier=entry.qualifier,
        nominal=reference.value or None,
        baseline=decimals.plain(item.baseline.value) if item.baseline else None,
        baseline_qualifier=item.baseline.qualifier if item.baseline else "=",
        reference=reference.value or None,
        quantity=item.quantity or None,
        rule=rule,
        unit=item.spec.unit if numeric else None,
        criterion_unit=criterion.spec.unit if numeric else None,
        spread=spread_of(item.baseline, item.spec.resolution),
        never_below_zero=item.spec.never_below_zero,
        least_reference=reference.least or None,
    )
    own = reference.is_reading and bool(reference.uncertainty) and not _on_baseline(criterion)
    of_reference = reference.uncertainty if own else stated
    judgement = None
    for level, weight, size in _combined(item, criterion, value, reference, (stated, of_reference)):
        found = ask(uncertainty=decimals.plain(size))
        if judgement is not None and found.level not in (None, level):
            break
        judgement = found
        if "uncertainty" in found.parameters:
            combined = told(stated, of_reference, weight, own=own)
            judgement = replace(found, parameters=found.parameters | combined)
        if judgement.level == level:
            break
    return judgement or ask(uncertainty=stated or None)


def _combined(
    item: Item,
    criterion: CriterionRow,
    value: Exact | None,
    reference: Reference,
    uncertainties: tuple[str, str],
) -> tuple[tuple[Level, Decimal, Decimal], ...]:
    """What is combined at each level; nothing where nothing is stated or what it is compared with is exact.

    A baseline is as uncertain as one reading, also where it is the mean of several: a statement does not say which
    part of it repeats would average out.
    """
    given = criterion.spec.criterion
    flat = given.at(Decimal(item.quantity)) if given.bands and item.quantity else given
    if _on_baseline(criterion):
        other = item.baseline.value if item.baseline else None
    else:
        other = Decimal(reference.value) if reference.is_reading and reference.value else None
    if not uncertainties[0] or flat is None or value is None or other is None:
        return ()
    return combined_at_levels(flat, Departing(value.decimal, other, *map(Decimal, uncertainties)))


def _on_baseline(criterion: CriterionRow) -> bool:
    return criterion.spec.criterion.basis == "baseline"


def stated_for(item: Item, repeats: Sequence[Decimal]) -> str:
    """The expanded uncertainty of a reading itself as text; empty where none is stated."""
    row = item.uncertainty
    if row is None or item.spec.kind not in NUMBERS:
        return ""
    return expanded(row.kind, row.entered, row.coverage_factor, repeats, item.spec.resolution)


def rule_for(criterion: CriterionRow, uncertainty: UncertaintyRow | None, stated: str) -> Rule:
    """The decision rule: the one a physicist chose for the measurand, else guarded for electrical tests only.

    Where nothing is stated the default is simple, and the verdict says that no guard band was kept.
    """
    if uncertainty is not None and uncertainty.rule:
        return uncertainty.rule
    return "guarded" if criterion.spec.electrical and stated else "simple"


def unguarded(criterion: CriterionRow, rule: Rule, judgement: Judgement) -> dict[str, str]:
    """The flag of an electrical reading that was judged without the guard band it should have."""
    bare = criterion.spec.electrical and rule == "simple" and "uncertainty" not in judgement.parameters
    return {"no_guard": "yes"} if bare and judgement.departure is not None else {}


def spread_of(baseline: BaselineRow | None, resolution: str) -> OwnSpread | None:
    """What a limit of the device's own spread needs to know of its baseline."""
    if baseline is None or not baseline.count:
        return None
    deviation = Decimal(baseline.standard_deviation) if baseline.standard_deviation else None
    return OwnSpread(baseline.count, deviation, Decimal(resolution))


def standing_of(baseline: BaselineRow | None) -> Standing | None:
    """The part of a baseline that decides whether it still serves."""
    if baseline is None:
        return None
    return Standing(baseline.test_object_id, baseline.test_object, baseline.expires_on)


def _refusal(item: Item, criterion: CriterionRow, entry: Entry, under: MeasuredWith) -> Judgement | None:
    met = replace(
        item.met,
        method=METHOD_OF_ORIGIN.get(entry.origin, item.met.method),
        measured_on=under.measured_on,
        test_object_id=under.test_object_id,
        test_object=under.test_object,
        qualifier=entry.qualifier,
    )
    return unfit(criterion.spec, met, standing_of(item.baseline))


@lru_cache(maxsize=8192)
def _verdict_on(
    criterion_uid: uuid.UUID, criterion: Criterion, **question: str | bool | OwnSpread | None
) -> Judgement:
    """The same question has the same answer, and most readings of a fleet ask one that was asked before.

    Numbers are asked as texts, since 146 and 146.0 are equal and yet not the same sentence.
    """
    return conformity.judge(criterion, **question)  # type: ignore[arg-type]  # each key is a parameter of it


def baseline_flags(base: BaselineRow | None, criterion: CriterionRow, under: MeasuredWith) -> dict[str, str]:
    """How the baseline's key differs from this check: flagged on the verdict, never passed over."""
    if base is None or criterion.spec.criterion.basis != "baseline":
        return {}
    flags = {}
    for name, was, now in (
        ("mismatch_console", base.console_model, under.console_model),
        ("mismatch_software", base.console_software, under.console_software),
    ):
        if was and now and was != now:
            flags[name] = f"{was} / {now}"
    if base.test_object_id and under.test_object_id not in (None, base.test_object_id):
        flags["mismatch_object"] = " / ".join(filter(None, (base.test_object, under.test_object)))
    if base.under_review:
        flags["baseline_under_review"] = "yes"
    return flags
