"""Verifying what is stored: whoever owns the database can change it, and each change is named."""

from __future__ import annotations

import json
import uuid

import pytest
from django.conf import settings
from django.db import connection
from django.utils.timezone import now

from qa_tracker.core.canonical import canonical
from qa_tracker.core.merkle import Frontier, leaf_hash
from qa_tracker.records import guards, guards_postgresql, guards_sqlite, ledger
from qa_tracker.records.models import (
    Device,
    Fault,
    FurtherVerdict,
    Reading,
    Signature,
    Submission,
    Verdict,
    Version,
)
from qa_tracker.records.models.ledger import Checkpoint, Leaf, LedgerHead
from qa_tracker.seals.notes import make_note_key, sign_checkpoint
from qa_tracker.services import checkpoints, keys, rechecking, states, upkeep
from qa_tracker.services.wording_findings import PROBLEMS
from tests import builders


@pytest.fixture(scope="module")
def unguarded(ward_of_the_module):
    """The file's database without its guards."""
    connection.check_constraints()
    maker = {"sqlite": guards_sqlite, "postgresql": guards_postgresql}[connection.vendor]
    with connection.cursor() as cursor:
        for name in guards.statements(connection):
            cursor.execute(maker.drop(name))


@pytest.fixture
def ward(unguarded, shared_ward):
    """The ward after a check, a checkpoint and a quarantine."""
    builders.submitted(shared_ward.check, shared_ward.technician, lens_grade="amber")
    checkpoints.make(at=now())
    states.quarantine(device=shared_ward.scanner.uid, seen="Fan loud", actor=shared_ward.user, at=now())
    return shared_ward


def change(model, pk, **columns):
    assert model._base_manager.filter(pk=pk).update(**columns) == 1


def last(model):
    return model._base_manager.order_by("-pk").first()


def copied(row, **columns):
    """Insert a row like another."""
    row.pk = None
    for name, value in columns.items():
        setattr(row, name, value)
    row.save(force_insert=True)


def remove(model, pk):
    with connection.cursor() as cursor:
        cursor.execute(f'DELETE FROM "{model._meta.db_table}" WHERE "{model._meta.pk.column}" = %s', [pk])


def reading(ward):
    row = Reading.objects.exclude(scaled=None).first()
    change(Reading, row.pk, scaled=row.scaled + 1)


def device_and_its_version(ward):
    version = Version.objects.filter(noun="device", subject_id=ward.probe.pk).latest("number")
    columns = json.loads(version.columns) | {"serial": "other"}
    change(Version, version.pk, columns=canonical(columns).decode())
    change(Device, ward.probe.pk, serial="other")


def swapped(ward):
    first, second = Signature.objects.order_by("pk")[:2]
    change(Signature, first.pk, leaf_id=second.leaf_id)
    change(Signature, second.pk, leaf_id=first.leaf_id)


def rebuilt_head():
    """What a careful forger does last: a head that fits the leaves."""
    hashes = [bytes(each) for each in Leaf.objects.order_by("seq").values_list("leaf_hash", flat=True)]
    frontier = Frontier(0, ()).extend(hashes)
    change(LedgerHead, 1, size=frontier.size, frontier=frontier.to_bytes())


def cut_tail(ward):
    """The quarantine and the check are taken away with their rows, and the head made to fit."""
    size = Leaf.objects.count() - 2
    for model in (Fault, Verdict, Reading, Signature, Submission, Version):
        for pk in model.objects.filter(leaf__seq__gte=size).values_list("pk", flat=True):
            remove(model, pk)
    for seq in Leaf.objects.filter(seq__gte=size).values_list("seq", flat=True):
        remove(Leaf, seq)
    rebuilt_head()


def leaf_content(ward, *, with_hash=False):
    leaf = last(Leaf)
    content = canonical(leaf_told(leaf) | {"reason": "Fan quiet"})
    change(
        Leaf, leaf.pk, content=content.decode(), **({"leaf_hash": leaf_hash(content)} if with_hash else {})
    )


def leaf_told(leaf):
    return json.loads(leaf.content)


def leaf_and_head_before_the_checkpoint(ward):
    leaf = Leaf.objects.get(seq=3)
    content = canonical(leaf_told(leaf) | {"reason": "nothing"})
    change(Leaf, leaf.pk, content=content.decode(), leaf_hash=leaf_hash(content))
    rebuilt_head()


def forged_checkpoint(ward):
    size, root = ledger.state()
    said = checkpoints.Checkpoint(settings.LEDGER_ORIGIN, size, root)
    note = sign_checkpoint(said, make_note_key(keys.ledger_key().name))
    Checkpoint.objects.create(size=size, root=root, at=now(), note=note)


def longer_history_outside(ward):
    """A copy outside tells of more than there is: an old backup was put back."""
    said = checkpoints.Checkpoint(settings.LEDGER_ORIGIN, ledger.state()[0] + 40, bytes(32))
    checkpoints.copy_out(said.size, sign_checkpoint(said, keys.ledger_key()))


TAMPERINGS = {
    "reading": (reading, "rows_differ"),
    "verdict": (lambda w: change(Verdict, last(Verdict).pk, verdict="remedial"), "rows_differ"),
    "signature": (lambda w: change(Signature, last(Signature).pk, person=w.user), "rows_differ"),
    "moment of a submission": (
        lambda w: change(Submission, last(Submission).pk, measured_at=w.check.opens_at),
        "rows_differ",
    ),
    "version": (lambda w: change(Version, last(Version).pk, recorded_at=w.check.opens_at), "rows_differ"),
    "current row": (lambda w: change(Device, w.probe.pk, state="disposed"), "current_row_differs"),
    "current row moved to another leaf": (
        lambda w: change(Device, w.probe.pk, leaf_id=last(Leaf).uid),
        "current_row_differs",
    ),
    "current row with its version": (device_and_its_version, "rows_differ"),
    "deleted reading": (lambda w: remove(Reading, last(Reading).pk), "rows_differ"),
    "deleted fault": (lambda w: remove(Fault, last(Fault).pk), "current_row_missing"),
    "fact without a leaf": (
        lambda w: copied(last(Signature), uid=uuid.uuid4(), leaf_id=uuid.uuid4()),
        "row_without_leaf",
    ),
    "noun without a leaf": (
        lambda w: copied(last(Fault), uid=uuid.uuid4(), leaf_id=uuid.uuid4()),
        "row_without_leaf",
    ),
    "fact under a leaf already written": (
        lambda w: copied(last(Signature), uid=uuid.uuid4()),
        "rows_differ",
    ),
    "fact under a leaf that has none of its kind": (
        lambda w: copied(last(Signature), uid=uuid.uuid4(), leaf_id=last(Leaf).uid),
        "row_added",
    ),
    "noun under a leaf already written": (
        lambda w: copied(last(Fault), uid=uuid.uuid4()),
        "current_row_differs",
    ),
    "rows swapped between leaves": (swapped, "rows_differ"),
    "tail cut off": (cut_tail, "checkpoint_beyond"),
    "leaf deleted": (lambda w: remove(Leaf, 3), "leaf_missing"),
    "leaf's content": (leaf_content, "leaf_changed"),
    "leaf's content with its hash": (lambda w: leaf_content(w, with_hash=True), "head_differs"),
    "leaf, its hash and the head": (leaf_and_head_before_the_checkpoint, "checkpoint_differs"),
    "leaf's hash": (lambda w: change(Leaf, 3, leaf_hash=bytes(32)), "leaf_changed"),
    "leaf's kind": (lambda w: change(Leaf, 3, kind="site.created"), "leaf_columns_differ"),
    "leaf's moment": (lambda w: change(Leaf, 3, at=w.check.opens_at), "leaf_columns_differ"),
    "leaf's actor": (lambda w: change(Leaf, 3, actor_uid=w.user.uid), "leaf_columns_differ"),
    "leaf's device": (lambda w: change(Leaf, last(Leaf).pk, device_uid=w.probe.uid), "leaf_columns_differ"),
    "leaf's site": (lambda w: change(Leaf, last(Leaf).pk, site_uid=None), "leaf_columns_differ"),
    "leaf's subject": (lambda w: change(Leaf, last(Leaf).pk, subject_uid=None), "leaf_columns_differ"),
    "head": (lambda w: change(LedgerHead, 1, size=4000), "head_differs"),
    "checkpoint of another key": (forged_checkpoint, "checkpoint_unsigned"),
    "checkpoint's root": (
        lambda w: change(Checkpoint, last(Checkpoint).pk, root=bytes(32)),
        "checkpoint_differs",
    ),
    "checkpoint deleted": (
        lambda w: remove(Checkpoint, last(Checkpoint).pk),
        "checkpoint_outside_differs",
    ),
    "old backup put back": (longer_history_outside, "checkpoint_outside_differs"),
}


def test_nothing_is_named_when_nothing_was_changed(ward):
    assert upkeep.verify_ledger().problems == ()
    assert rechecking.recheck_verdicts().problems == ()


@pytest.mark.parametrize("name", TAMPERINGS)
def test_tampering_is_named_when_the_ledger_is_verified(ward, name):
    tamper, what = TAMPERINGS[name]
    tamper(ward)
    named = {problem.what for problem in upkeep.verify_ledger().problems}
    assert what in named
    assert named <= set(PROBLEMS)


@pytest.mark.parametrize(
    "columns",
    [
        {"verdict": "conforming", "level": ""},
        {"level": "suspension"},
        {"code": "conforms"},
        {"criterion_id": None},
    ],
)
def test_changed_verdict_is_named_when_verdicts_are_rechecked(ward, columns):
    row = Verdict.objects.get(verdict="remedial")
    change(Verdict, row.pk, **columns)
    (problem,) = rechecking.recheck_verdicts().problems
    assert (problem.what, problem.where.split()[:2]) == ("verdict_differs", ["verdict", str(row.pk)])


def test_reading_changed_to_another_grade_is_named_when_verdicts_are_rechecked(ward):
    row = Reading.objects.get(verdict__verdict="remedial")
    change(Reading, row.pk, entered="red")
    assert [problem.what for problem in rechecking.recheck_verdicts().problems] == ["verdict_differs"]


def test_changed_further_verdict_is_named_when_verdicts_are_rechecked(ward):
    row = Verdict.objects.get(verdict="remedial")
    columns = {
        field.attname: getattr(row, field.attname)
        for field in FurtherVerdict._meta.concrete_fields
        if field.attname not in ("id", "verdict_of_id", "position")
    }
    FurtherVerdict(verdict_of=row, position=1, **columns | {"verdict": "conforming", "level": ""}).save(
        force_insert=True
    )
    (problem,) = rechecking.recheck_verdicts().problems
    assert (problem.what, problem.where.split()[0]) == ("verdict_differs", "furtherverdict")
