"""Checkpoints: made once for a size, kept in the database and outside, never against an earlier one."""

from __future__ import annotations

import pytest
from django.conf import settings
from django.utils.timezone import now

from qa_tracker.core.errors import Conflict
from qa_tracker.records import ledger
from qa_tracker.records.models.ledger import Checkpoint
from qa_tracker.records.queries.ledger import list_checkpoints
from qa_tracker.seals.notes import open_checkpoint, sign_checkpoint
from qa_tracker.services import checkpoints, keys, upkeep
from tests import builders


def written(ward):
    builders.room(ward.admin, ward.site, name=f"Room {ledger.state()[0]}")


def test_checkpoint_says_size_and_root_and_is_signed(shared_ward):
    made = checkpoints.make(at=now())
    said = open_checkpoint(made.note, keys.ledger_key().verifier)
    assert (said.origin, said.size, said.root) == (settings.LEDGER_ORIGIN, *ledger.state())
    assert [each.note for each in list_checkpoints()] == [made.note]


def test_second_checkpoint_is_the_first_when_nothing_was_written(shared_ward):
    assert checkpoints.make(at=now()) == checkpoints.make(at=now())
    assert Checkpoint.objects.count() == 1


def test_every_checkpoint_lies_outside_the_database(shared_ward):
    for _each in range(3):
        written(shared_ward)
        checkpoints.make(at=now())
    outside = [(each.size, each.root) for each in checkpoints.outside()]
    assert outside == [(each.size, each.root) for each in reversed(list_checkpoints())]
    assert len(outside) == 3


@pytest.mark.parametrize(
    ("longer_by", "root"), [(0, bytes(32)), (5, bytes(32))], ids=["other root", "longer"]
)
def test_checkpoint_is_refused_when_the_newest_one_is_not_continued(shared_ward, longer_by, root):
    Checkpoint.objects.create(size=ledger.state()[0] + longer_by, root=root, at=now(), note="")
    written(shared_ward)
    with pytest.raises(Conflict) as refused:
        checkpoints.make(at=now())
    assert refused.value.code == "ledger.checkpoint_contradicted"


def test_copy_outside_is_not_written_over_when_an_old_backup_was_put_back(shared_ward):
    size, _root = ledger.state()
    other = checkpoints.Checkpoint(settings.LEDGER_ORIGIN, size, bytes(32))
    path = checkpoints.copy_out(size, sign_checkpoint(other, keys.ledger_key()))
    before = path.read_bytes()
    for _again in range(2):
        made = checkpoints.make(at=now())
        checkpoints.copy_out(size, made.note)
    assert path.read_bytes() == before
    assert {each.root for each in checkpoints.outside()} == {bytes(32), made.root}
    assert [each.what for each in upkeep.verify_ledger().problems] == ["checkpoint_outside_differs"]
