"""A check that reads all another one asks for satisfies it: an annual survey closes the monthly it covers."""

from __future__ import annotations

import datetime as dt
from collections import Counter
from collections.abc import Collection, Mapping, Sequence

from qa_tracker.core.library import satisfied
from qa_tracker.core.workflow import CHECK, target
from qa_tracker.records import ledger
from qa_tracker.records.models import Check, Person
from qa_tracker.records.queries.library import EditionRow, adopted_edition
from qa_tracker.records.queries.scope import grants_of
from qa_tracker.services import clocks, plans
from qa_tracker.services.finding import CHECK_JOINS
from qa_tracker.services.guards import Grants, may
from qa_tracker.services.items import Item, measured
from qa_tracker.services.judging import Judged, worst_of
from qa_tracker.services.recording import Facts, local_day
from qa_tracker.services.sheets import Sheet

SATISFIABLE = ("scheduled", "started")


def satisfy(act: ledger.Act, laid: Sheet, judged: Judged, facts: Facts, *, actor: Person) -> None:
    """Satisfy every other awaited check of the device that this submission covers, in the submission's own leaf.

    Its window has to be open on the day of measuring, and the actor has to be someone who may enter it. What was
    satisfied by an earlier submission of the same check takes its verdict from this one, where this one reads it.
    """
    check, measured_at = laid.check, facts.measured_at or act.at
    before = list(Check.objects.filter(satisfied_by=check).select_related(*CHECK_JOINS).order_by("id"))
    taken = {each.plan_id for each in (check, *before)}
    times_read, grants = _times_read((*laid.items, *laid.derived), judged), grants_of(actor.pk)
    told = []
    for other in (*before, *_awaited(check, measured_at, taken)):
        edition = adopted_edition(other.procedure_id, other.site_id)
        if edition is None or not _is_covered(laid, edition, times_read, facts):
            continue
        if other.state not in SATISFIABLE:
            _judge_anew(act, other, _own_part(judged, edition))
        elif _may_enter(other, edition, actor, act.at, grants):
            _close(act, other, check, _own_part(judged, edition), measured_at)
        else:
            continue
        told.append(_told(other, edition))
    if told:
        act.tell({**act.new, "satisfied": told})


def _awaited(check: Check, measured_at: dt.datetime, taken: Collection[int | None]) -> list[Check]:
    """Planned checks of the same device that may be done on the day of measuring; late and overdue ones too."""
    found = Check.objects.filter(
        device_id=check.device_id, state__in=SATISFIABLE, plan__isnull=False, opens_at__lte=measured_at
    )
    joined = found.select_related(*CHECK_JOINS, "plan__device__site", "plan__procedure").order_by("id")
    return [each for each in joined if each.pk != check.pk and each.plan_id not in taken]


def _may_enter(check: Check, edition: EditionRow, actor: Person, at: dt.datetime, grants: Grants) -> bool:
    verb = "check.enter_user" if "user" in edition.spec.performed_by else "check.enter"
    return may(actor, verb, check.site_id or check.device.site_id or actor.duties_site_id, at, grants)


def _times_read(items: Sequence[Item], judged: Judged) -> dict[str, int]:
    """How often each measurand was read at the part of the device where it was read least.

    Of measurands that share a group one answer at a part is enough, so the others may be left out there.
    """
    read = {one.item.key for one in judged.items if one.is_read}
    at_part = Counter({item.series: 0 for item in items})
    at_part.update(item.series for item in items if item.key in read)
    answered = {
        (item.spec.one_of, item.series[1:]) for item in items if item.spec.one_of and item.key in read
    }
    found: dict[str, int] = {}
    for item in items:
        count = at_part[item.series]
        if count or (item.spec.one_of, item.series[1:]) not in answered:
            found[item.spec.code] = min(found.get(item.spec.code, count), count)
    return found


def _is_covered(laid: Sheet, edition: EditionRow, times_read: Mapping[str, int], facts: Facts) -> bool:
    """Whether all that an edition requires was read, with what it has to be read with."""
    spec, device = edition.spec, measured(laid.check.device)
    if spec.needs_test_object and facts.test_object is None:
        return False
    if spec.needs_instrument and (facts.instrument is None or facts.instrument.kind != spec.needs_instrument):
        return False
    if spec.decontamination_gate and not facts.cleaned_before:
        return False
    array_kind = device.array_kind or None
    return satisfied(spec, laid.edition.spec, times_read, device_kind=device.kind, array_kind=array_kind)


def _own_part(judged: Judged, edition: EditionRow) -> Judged:
    """What was judged of the items an edition asks; the worst of them makes its verdict."""
    codes = {one.code for one in edition.spec.measurands}
    items = tuple(one for one in judged.items if one.item.spec.code in codes)
    return Judged(items, worst_of(items))


def _close(act: ledger.Act, other: Check, by: Check, own: Judged, measured_at: dt.datetime) -> None:
    act.change(
        other,
        state=target(CHECK, other.state, "satisfy"),
        verdict=own.verdict,
        verdict_level=own.level,
        submitted_at=act.at,
        satisfied_by=by,
    )
    clocks.stop(other)
    if other.plan is not None and other.plan.ended_at is None:
        done_on = local_day(other, measured_at)
        plans.open_next(act, other.plan, after_on=other.slot_on or other.due_on, done_on=done_on)
    other.drafts.all().delete()


def _judge_anew(act: ledger.Act, other: Check, own: Judged) -> None:
    if (other.verdict, other.verdict_level) != (own.verdict, own.level):
        act.change(other, verdict=own.verdict, verdict_level=own.level)


def _told(other: Check, edition: EditionRow) -> dict[str, object]:
    return {
        "check": str(other.uid),
        "procedure": edition.code,
        "due_on": other.due_on.isoformat() if other.due_on else None,
        "verdict": other.verdict,
        "level": other.verdict_level,
    }
