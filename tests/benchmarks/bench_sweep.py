"""How long one sweep takes over 40,000 plans, beside the bare statements that write the same rows, in one run.

Not collected by the ordinary run: ``pytest tests/benchmarks/bench_sweep.py --benchmark-enable -p no:randomly -s``.
Timings are reported and decide nothing.
"""

from __future__ import annotations

import datetime as dt
import time
import uuid
from contextlib import suppress

import pytest
from django.db import connection, transaction

from qa_tracker.core.ladder import Instants
from qa_tracker.records import ledger
from qa_tracker.records.ids import uuid7
from qa_tracker.records.models import Check, CheckClock, CheckPlan, Device, Notice, NoticeMail
from qa_tracker.records.writers import new_row
from qa_tracker.services import clocks, sweep
from tests import builders

pytestmark = [pytest.mark.both_engines, pytest.mark.filterwarnings("ignore")]

PLANS, CROSSING, SITES, PAST = 40_000, 2_000, 4, 200_000
T = dt.datetime(2026, 6, 1, tzinfo=dt.UTC)
DAY = dt.timedelta(days=1)


class Undone(Exception):
    """Takes back what a round did, so that each round does the same."""


def fleet():
    """Plans by the thousand at a few sites, each with its next check; the first of them fall due at T."""
    ward = builders.ward()
    sites = [ward.site, *(builders.site(ward.admin, f"S{n}", f"Site {n}") for n in range(1, SITES))]
    for site in sites:
        builders.person(ward.admin, f"lead-{site.code.lower()}", "lead", site)
    with ledger.history("demo") as batch:
        act = batch.act("plan.made", actor=None, at=T - 400 * DAY)
        devices = [act.insert(device(ward.probe, site, n)) for n, site in enumerate(sites * (PLANS // 40))]
        for number in range(PLANS):
            held = devices[number % len(devices)]
            plan = act.insert(planned(ward, held))
            due_at = T if number < CROSSING else T + 90 * DAY
            act.insert(occurrence(plan, held, "scheduled", due_at))
    clocks.start_missing()
    CheckClock.objects.filter(check_of__due_at=T).update(at=T, level="due")
    return ward


def device(like: Device, site, number: int) -> Device:
    return Device(
        kind="probe",
        maker=like.maker,
        model=like.model,
        serial=f"many-{number}",
        state="in_use",
        site=site,
        state_since=T,
    )


def planned(ward, held: Device) -> CheckPlan:
    return new_row(
        CheckPlan, uid=uuid7(), device_id=held.pk, procedure_id=ward.check.procedure_id, rule="FREQ=MONTHLY",
        basis="calendar", anchor_on=T.date(), before_days=7, grace_days=7, responsible_id=ward.technician.pk,
    )  # fmt: skip


def occurrence(plan: CheckPlan, held: Device, state: str, due_at: dt.datetime) -> Check:
    at = Instants(due_at - 7 * DAY, due_at, due_at + DAY, due_at + 8 * DAY)
    return new_row(
        Check, uid=uuid7(), plan_id=plan.pk, device_id=held.pk, procedure_id=plan.procedure_id, site_id=held.site_id,
        state=state, due_on=due_at.date(), **at._asdict(),
    )  # fmt: skip


def history(ward) -> None:
    """Years of checks that were done, each with a notice."""
    plans = list(CheckPlan.objects.exclude(pk=ward.check.plan_id).select_related("device")[: PAST // 10])
    with ledger.history("demo") as batch:
        act = batch.act("check.submitted", actor=None, at=T - 300 * DAY)
        for month in range(10):
            for plan in plans:
                done = act.insert(occurrence(plan, plan.device, "submitted", T - (40 + 30 * month) * DAY))
                act.insert(notice(done, ward.technician.pk, act.at))


def notice(check: Check, person_id: int, at: dt.datetime) -> Notice:
    return new_row(
        Notice, uid=uuid7(), check_of_id=check.pk, person_id=person_id, recipient="responsible", level="due",
        channel="in_app", at=at,
    )  # fmt: skip


def taken_back(action) -> float:
    """Seconds of an action whose rows are taken back."""
    with suppress(Undone), transaction.atomic():
        began = time.perf_counter()
        action()
        taken = time.perf_counter() - began
        raise Undone
    return taken


INSERT = (
    "INSERT INTO leadline_notice (leaf_id, uid, check_id, about, recipient, person_id, level, channel, at, skipped) "
    "SELECT %s, {uid}, c.id, '', 'responsible', p.responsible_id, 'due', w.channel, %s, '' FROM leadline_checkclock k "
    "JOIN leadline_check c ON c.id = k.check_id JOIN leadline_checkplan p ON p.id = c.plan_id, "
    "(SELECT 'in_app' AS channel UNION ALL SELECT 'mail') w WHERE k.at <= %s"
)
MAILS = (
    "INSERT INTO leadline_noticemail (notice_id) SELECT id FROM leadline_notice "
    "WHERE leaf_id = %s AND channel = 'mail'"
)
UPDATE = (
    "UPDATE leadline_checkclock SET level = 'late', at = "
    "(SELECT late_at FROM leadline_check WHERE id = check_id) WHERE at <= %s"
)


def bare() -> None:
    """The same rows by the statements alone."""
    by_engine = {"sqlite": "lower(hex(randomblob(16)))", "postgresql": "gen_random_uuid()"}
    sqlite = connection.vendor == "sqlite"
    moment, leaf = ("2026-06-01 00:00:00", uuid.uuid4().hex) if sqlite else (T, uuid.uuid4())
    with connection.cursor() as cursor:
        cursor.execute(INSERT.format(uid=by_engine[connection.vendor]), [leaf, moment, moment])
        assert cursor.rowcount == 2 * CROSSING
        cursor.execute(MAILS, [leaf])
        assert cursor.rowcount == CROSSING
        cursor.execute(UPDATE, [moment])
        assert cursor.rowcount == CROSSING


def swept() -> None:
    assert sweep.sweep(at=T, as_if=None).notices == 2 * CROSSING


def told(name: str, seconds: float, against: float) -> None:
    print(f"  {name:<34}{seconds * 1e3:8.0f} ms {seconds / against:6.1f} times the bare statements")


def test_one_sweep_over_forty_thousand_plans(committed_db, capsys, benchmark):
    ward = fleet()
    CheckClock.objects.filter(check_of=ward.check).delete()
    if connection.vendor == "postgresql":  # which does it by itself in time
        connection.cursor().execute("ANALYZE")
    plain, sweeps = min(taken_back(bare) for _ in range(3)), [taken_back(swept) for _ in range(3)]
    nothing = min(taken_back(lambda: sweep.sweep(at=T - DAY)) for _ in range(5))
    history(ward)
    plain_after = min(taken_back(bare) for _ in range(3))
    after = [taken_back(swept) for _ in range(3)]
    nothing_after = min(taken_back(lambda: sweep.sweep(at=T - DAY)) for _ in range(5))
    began = time.perf_counter()
    benchmark.pedantic(swept, rounds=1)
    committed = time.perf_counter() - began
    with capsys.disabled():
        print(f"\n{committed_db.engine}: {PLANS:,} plans at {SITES} sites, {CROSSING:,} cross a level")
        told("bare statements", plain, plain)
        told("sweep, first", sweeps[0], plain)
        told("sweep, quickest of three", min(sweeps), plain)
        told(f"bare, {PAST:,} past checks", plain_after, plain_after)
        told(f"sweep, {PAST:,} past checks", min(after), plain_after)
        told("the same, committed", committed, plain_after)
        print(f"  nothing due: {nothing * 1e3:.1f} ms, with the past {nothing_after * 1e3:.1f} ms")
    assert NoticeMail.objects.count() == CROSSING
