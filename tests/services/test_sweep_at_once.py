"""Sweeps at once, and beside people's commands: every notice once, nobody waits for ever, no key is taken twice."""

from __future__ import annotations

import datetime as dt
from collections import Counter
from concurrent.futures import ThreadPoolExecutor

from django.db import connection
from django.utils.timezone import now

from qa_tracker.records import ledger
from qa_tracker.records.models import Check, CheckClock, Notice
from qa_tracker.services import clocks, owed, sweep
from qa_tracker.services.devices import Place
from tests import builders

SWEEPS = 4


def in_thread(action):
    try:
        return action()
    finally:
        connection.close()


def sweep_as_if(moment):
    return in_thread(lambda: sweep.sweep(at=now(), as_if=moment))


def test_every_notice_is_owed_once_when_sweeps_run_at_once(committed_db):
    ward = builders.ward()
    for number in range(3):
        probe = builders.probe(ward.physicist, Place(site=ward.site), serial=f"C5-{number}")
        builders.plan(probe, builders.MONTHLY, ward.technician, ward.physicist)
    moment = ward.check.overdue_at
    with ThreadPoolExecutor(SWEEPS) as threads:
        swept = list(threads.map(sweep_as_if, [moment] * SWEEPS))
    assert sum(each.notices for each in swept) == Notice.objects.count() == 8
    assert set(Counter(Notice.objects.values_list("check_of", "channel")).values()) == {1}


def test_sweep_leaves_for_later_what_somebody_is_changing(committed_db):
    ward = builders.ward()
    check = Check.objects.get(pk=ward.check.pk)
    with (
        ThreadPoolExecutor(1) as beside,
        ledger.command("check.excused", actor=ward.physicist, at=now()) as act,
    ):
        act.change(check, state="excused", excuse="In theatre")
        clocks.stop(check)
        sweeping = beside.submit(sweep_as_if, check.overdue_at)
        if connection.vendor == "postgresql":  # on SQLite it waits: one writer at a time
            assert sweeping.result(timeout=20).checks == 0
        act.about(check)
    sweeping.result(timeout=20)
    assert (sweep.sweep(at=now(), as_if=check.overdue_at).checks, Notice.objects.count()) == (0, 0)
    assert not CheckClock.objects.exists()


def test_keys_of_a_sweep_are_its_own_when_a_command_writes_the_same_table(committed_db):
    ward = builders.ward()
    with ThreadPoolExecutor(1) as beside, ledger.command("notices.told", actor=None, at=now()) as act:
        owed.owe_suspension(act, ward.check, performed_by=ward.technician)
        sweeping = beside.submit(sweep_as_if, ward.check.due_at + dt.timedelta(hours=1))
        act.about(ward.check)
    sweeping.result(timeout=20)
    assert sorted(Notice.objects.values_list("level", flat=True)) == [
        "due",
        "due",
        "suspension",
        "suspension",
    ]
