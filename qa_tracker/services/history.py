"""The bulk door: the past of devices, written through the same judging and the same rows as live commands.

One transaction holds many commands; their leaves are appended together, marked ``demo`` or ``imported``. What
live commands read from the database (baselines in force, earlier attempts, open faults) is kept in memory here,
since rows are written only when the transaction ends. Nobody is asked again about a value that looks odd.
"""

from __future__ import annotations

import datetime as dt
import gc
import itertools
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from dataclasses import dataclass, field
from typing import TypeVar

from django.db import models, transaction

from qa_tracker.core.schedule import SiteDays, local_day
from qa_tracker.core.workflow import CHECK, target
from qa_tracker.records import ledger
from qa_tracker.records.ids import uuid7
from qa_tracker.records.models import (
    Aperture,
    Baseline,
    Check,
    CheckPlan,
    Condition,
    Device,
    Fault,
    Measurand,
    NotTested,
    Person,
    Placement,
    ProbeFacts,
    Procedure,
    ScannerFacts,
    Site,
    Submission,
    TestObject,
)
from qa_tracker.records.models.base import Audited
from qa_tracker.records.queries import library, uncertainties
from qa_tracker.records.queries.baselines import SeriesKey
from qa_tracker.records.queries.devices import ApertureRow, ConditionRow
from qa_tracker.records.queries.library import CriterionRow, EditionRow
from qa_tracker.records.queries.uncertainties import UncertaintyRow
from qa_tracker.records.writers import gather_statistics
from qa_tracker.services import clocks, judging, plans, recording
from qa_tracker.services.baseline_rows import SetUp, setups_of
from qa_tracker.services.deriving import attributes_of
from qa_tracker.services.entries import Entry
from qa_tracker.services.history_rows import in_force_rows
from qa_tracker.services.items import Item, Measured, Surroundings, items_of
from qa_tracker.services.judging import Asked, Instructions, Judged
from qa_tracker.services.recording import Facts
from qa_tracker.services.sheets import nominals_of
from qa_tracker.services.weighing import measured_with

M = TypeVar("M", bound=models.Model)
A = TypeVar("A", bound=Audited)
Answer = Callable[[Item], Entry]


@dataclass
class Kept:
    """One device and what is known of it while its past is written."""

    device: Device
    placement: Placement
    scanner_facts: ScannerFacts | None = None
    apertures: dict[int, Aperture] = field(default_factory=dict)
    conditions: dict[int, Condition] = field(default_factory=dict)
    array_kind: str = ""
    applied_part: str = ""
    baselines: dict[SeriesKey, list[Baseline]] = field(default_factory=dict)
    setups: dict[int, tuple[SetUp, ...]] = field(default_factory=dict)
    attempts: int = 0
    items: dict[tuple[int, int], tuple[Item, ...]] = field(default_factory=dict)

    @property
    def measured(self) -> Measured:
        """What judging needs to know of it."""
        protection = self.scanner_facts.protection_class if self.scanner_facts else ""
        return Measured(self.device.pk, self.device.kind, self.array_kind, self.applied_part, protection)


@dataclass(frozen=True)
class Done:
    """A check that was done: what was written, and the occurrence it opened."""

    check: Check
    submission: Submission
    judged: Judged
    following: Check | None


@dataclass
class Past:
    """A stretch of the past being written, with the library it is judged by."""

    batch: ledger.History
    editions: dict[str, EditionRow]
    procedures: dict[str, Procedure]
    measurands: dict[str, Measurand]
    criteria: dict[str, CriterionRow]
    uncertainties: dict[str, UncertaintyRow]
    days: dict[int | None, SiteDays] = field(default_factory=dict)
    nominals: dict[int, dict[str, str]] = field(default_factory=dict)

    def act(
        self,
        kind: str,
        actor: Person | None,
        at: dt.datetime,
        reason: str = "",
        measured_at: dt.datetime | None = None,
    ) -> ledger.Act:
        """Begin the next command of the past."""
        return self.batch.act(kind, actor=actor, at=at, reason=reason, measured_at=measured_at)

    def newest(self, model: type[M]) -> M:
        """The row of a table written last."""
        return next(reversed(self._rows(model)))

    def rows_of(self, model: type[A], act: ledger.Act) -> list[A]:
        """Rows of a table written by a command just before."""
        return list(itertools.takewhile(lambda row: row.leaf_id == act.uid, reversed(self._rows(model))))[
            ::-1
        ]

    def open_faults(self, device: Device) -> list[Fault]:
        """Faults of a device that are not closed: those known before, and those of this stretch."""
        meanwhile = self.batch.writer.changed.get(Fault, {})
        known = [each for each in Fault.objects.filter(device=device) if each.pk not in meanwhile]
        found = [*known, *self._rows(Fault), *meanwhile.values()]
        return [
            each
            for each in found
            if isinstance(each, Fault) and each.device_id == device.pk and each.state != "closed"
        ]

    def _rows(self, model: type[M]) -> list[M]:
        rows: dict[int, M] = self.batch.writer.new.get(model, {})  # type: ignore[assignment]  # by its own model
        return list(rows.values())

    def days_of(self, site: Site | None) -> SiteDays:
        """When a site works; read once."""
        key = site.id if site else None
        if key not in self.days:
            self.days[key] = plans.site_days(site)
        return self.days[key]


@contextmanager
def past(origin: str) -> Iterator[Past]:
    """Open the bulk door: one transaction, its leaves marked with the origin.

    The library and the adoptions have to be there, adopted by the group; a site's own adoptions are not asked.
    """
    with _without_collecting(), transaction.atomic():
        with ledger.history(origin) as batch:
            yield Past(
                batch,
                {row.code: row for row in library.adopted_procedures(None)},
                {row.code: row for row in Procedure.objects.all()},
                {row.code: row for row in Measurand.objects.all()},
                library.adopted_criteria(None),
                uncertainties.in_force(None),
            )
        clocks.start_missing()
        gather_statistics()


@contextmanager
def _without_collecting() -> Iterator[None]:
    """Leave the garbage alone meanwhile: hundreds of thousands of rows live on, and are looked at in vain."""
    collecting = gc.isenabled()
    gc.disable()
    try:
        yield
    finally:
        if collecting:
            gc.enable()


def keep(device: Device) -> Kept:
    """What is known of a device that is there already."""
    epochs: dict[SeriesKey, list[Baseline]] = {}
    known = Baseline.objects.filter(device=device).select_related("measurand", "test_object")
    for row in known.order_by("epoch"):
        epochs.setdefault((row.measurand.code, row.aperture_id, row.condition_id), []).append(row)
    probe = ProbeFacts.objects.filter(device=device).first()
    attempts = NotTested.objects.filter(check_of__device=device, submission=None, reason="not_found")
    return Kept(
        device,
        Placement.objects.get(device=device, ended_at=None),
        ScannerFacts.objects.filter(device=device).first(),
        {row.pk: row for row in Aperture.objects.filter(device=device).order_by("id")},
        {row.pk: row for row in Condition.objects.filter(device=device).order_by("id")},
        probe.array_kind if probe else "",
        probe.applied_part if probe else "",
        epochs,
        setups_of([row.pk for row in known]),
        attempts.count(),
    )


def plan(
    past: Past,
    kept: Kept,
    procedure: str,
    recurrence: plans.Recurrence,
    responsible: Person,
    *,
    actor: Person,
    at: dt.datetime,
) -> tuple[CheckPlan, Check]:
    """Plan a procedure for a device; the first occurrence is opened."""
    act = past.act("plan.made", actor, at)
    days = past.days_of(kept.device.site)
    return plans.add_plan(act, kept.device, past.procedures[procedure], recurrence, responsible, days)


def open_unplanned(past: Past, kept: Kept, procedure: str, *, actor: Person, at: dt.datetime) -> Check:
    """Begin a check that no plan asked for."""
    act = past.act("check.opened", actor, at)
    device = kept.device
    row = Check(device=device, procedure=past.procedures[procedure], site=device.site, state="started")
    check = act.insert(row)
    act.about(check, device=device, site=device.site)
    act.tell({"procedure": procedure})
    return check


def perform(
    past: Past,
    kept: Kept,
    check: Check,
    answer: Answer,
    *,
    by: Person,
    role: str,
    at: dt.datetime,
    facts: Facts | None = None,
) -> Done:
    """Do a check: ask for an entry for each item, judge, record and sign; the plan's next occurrence is opened.

    A finding for which the procedure says so takes the device out of use at once.

    Refused as :func:`qa_tracker.services.judging.judge_all` refuses.
    """
    facts = facts or Facts()
    edition = past.editions[check.procedure.code]
    asked = _asked(past, kept, check, edition, facts, at)
    entries = {item.key: answer(item) for item in asked.items}
    judged = judging.judge_all(asked, entries, whole=True)
    shown = judging.shown_sha256(str(check.uid), edition.content_sha256, facts.as_text(at), judged)
    act = past.act("check.submitted", by, at, measured_at=facts.measured_at or at)
    submission = recording.record(
        act,
        check,
        edition,
        judged,
        facts,
        form_uid=uuid7(),
        performed_by=by,
        role=role,
        shown_sha256=shown,
        number=1,
        codes={code: row.id for code, row in past.measurands.items()},
    )
    following = _open_following(past, act, check, at)
    recording.open_faults(act, check, submission, judged, by, quarantine=judged.suggests_quarantine())
    return Done(check, submission, judged, following)


def items_for(
    past: Past, kept: Kept, edition: EditionRow, test_object: TestObject | None
) -> tuple[Item, ...]:
    """What an edition asks of a device; built once and again after a baseline changes."""
    key = (edition.id, test_object.id if test_object else 0)
    if key not in kept.items:
        around = Surroundings(
            kept.measured,
            edition,
            [ApertureRow(a.id, a.uid, a.name, a.elements, a.pitch_um) for a in kept.apertures.values()],
            [
                ConditionRow(c.id, c.uid, c.name, c.test_frequency_mhz, c.sound_speed_m_s, c.settings)
                for c in kept.conditions.values()
            ],
            past.criteria,
            {key: in_force_rows(key, rows, kept.setups) for key, rows in kept.baselines.items()},
            {},
            nominals_of(test_object),
            past.uncertainties,
            test_object.id if test_object else None,
        )
        kept.items[key] = items_of(around)
    return kept.items[key]


def _open_following(past: Past, act: ledger.Act, check: Check, at: dt.datetime) -> Check | None:
    if check.plan is None or check.plan.ended_at is not None:
        return None
    days = past.days_of(check.plan.device.site)
    done_on = local_day(at, days.zone)
    return plans.open_next(act, check.plan, after_on=check.due_on, done_on=done_on, days=days)


def give_up(past: Past, check: Check, verb: str, reason: str, at: dt.datetime) -> Check | None:
    """Miss or excuse an occurrence when the next one opens, as the sweep does."""
    act = past.act("notices.owed", None, at)
    columns: dict[str, object] = {"excuse": reason} if verb == "excuse" else {}
    act.change(check, state=target(CHECK, check.state, verb), **columns)
    following = _open_following(past, act, check, at)
    act.about(check.site, site=check.site)
    done = "missed" if verb == "miss" else "excused"
    told: dict[str, object] = {"notices": [], "missed": [], "excused": []}
    opened = [str(following.uid)] if following else []
    act.tell({**told, done: [str(check.uid)], "opened": opened})
    return following


def countersign(past: Past, done: Done, *, by: Person, at: dt.datetime, remark: str = "") -> None:
    """Countersign a submission."""
    act = past.act("check.countersigned", by, at, remark)
    state = target(CHECK, done.check.state, "countersign")
    recording.second_signature(
        act, done.check, done.submission, by, "physicist", "countersigned", remark, state
    )


def not_tested(past: Past, kept: Kept, check: Check, reason: str, *, by: Person, at: dt.datetime) -> None:
    """Record an attempt that could not be made; the second "not found" opens a fault."""
    act = past.act("check.not_tested", by, at, reason)
    recording.not_tested(act, check, reason, "", by, kept.attempts)
    kept.attempts += reason == "not_found"


def _instructions(site: Site | None) -> Instructions:
    return Instructions(site.remedial_instruction, site.suspension_instruction) if site else Instructions()


def _asked(past: Past, kept: Kept, check: Check, edition: EditionRow, facts: Facts, at: dt.datetime) -> Asked:
    items = items_for(past, kept, edition, facts.test_object)
    day = local_day(facts.measured_at or at, past.days_of(check.site).zone)
    return Asked(
        tuple(item for item in items if item.spec.kind != "derived"),
        tuple(item for item in items if item.spec.kind == "derived"),
        attributes_of(kept.device, facts.test_object),
        _instructions(check.site),
        measured_with(facts.console, facts.console_software, facts.test_object, day),
    )
