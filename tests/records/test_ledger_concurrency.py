"""Writers at once, as threads and as processes: leaves stay gapless and the root is theirs."""

from __future__ import annotations

import os
import subprocess
import sys
from concurrent.futures import ThreadPoolExecutor
from pathlib import Path

from django.apps import apps
from django.db import connection
from row_maker import AT, make

from qa_tracker.core import merkle
from qa_tracker.core.errors import Conflict
from qa_tracker.records import ledger
from qa_tracker.records.models import Site

Leaf = apps.get_model("leadline", "Leaf")
ROOT = Path(__file__).parents[2]
WRITERS, COMMANDS = 4, 10
WRITE = f"""
import datetime as dt, django
django.setup()
from qa_tracker.records import ledger
for number in range({COMMANDS}):
    with ledger.command("written.elsewhere", actor=None, at=dt.datetime(2026, 3, 2, tzinfo=dt.UTC)):
        pass
"""


def write_many(_):
    try:
        for _ in range(COMMANDS):
            make(Site)
    finally:
        connection.close()


def rename(site):
    try:
        with ledger.command("site.renamed", actor=None, at=AT) as act:
            act.change(site, name="mine")
    except Conflict:
        return "refused"
    finally:
        connection.close()
    return "renamed"


def assert_ledger_is_whole(size):
    leaves = list(Leaf.objects.order_by("seq"))
    assert [leaf.seq for leaf in leaves] == list(range(size))
    assert ledger.state() == (size, merkle.root([bytes(leaf.leaf_hash) for leaf in leaves]))


def test_leaves_have_no_gap_when_threads_write_at_once(committed_db):
    with ThreadPoolExecutor(WRITERS) as threads:
        list(threads.map(write_many, range(WRITERS)))
    assert_ledger_is_whole(WRITERS * COMMANDS)


def test_one_wins_when_threads_change_the_same_row_at_once(committed_db):
    pk = make(Site).pk
    copies = [Site.objects.get(pk=pk) for _ in range(WRITERS)]
    with ThreadPoolExecutor(WRITERS) as threads:
        outcomes = sorted(threads.map(rename, copies))
    assert outcomes == ["refused"] * (WRITERS - 1) + ["renamed"]
    assert_ledger_is_whole(2)


def test_leaves_have_no_gap_when_processes_write_at_once(committed_db, tmp_path):
    places = {"DATABASE_URL": committed_db.url, "DATA_DIR": str(tmp_path), "PYTHONPATH": str(ROOT)}
    environment = os.environ | places | {"DJANGO_SETTINGS_MODULE": "config.settings"}
    writers = [subprocess.Popen([sys.executable, "-c", WRITE], env=environment) for _ in range(2)]
    write_many(None)
    assert [writer.wait(timeout=60) for writer in writers] == [0, 0]
    assert_ledger_is_whole(3 * COMMANDS)
