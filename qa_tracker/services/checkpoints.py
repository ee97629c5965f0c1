"""Checkpoints: signed statements of the ledger's size and root, copied outside the database."""

from __future__ import annotations

import datetime as dt
import hashlib
import os
from pathlib import Path

from django.conf import settings

from qa_tracker.core import merkle
from qa_tracker.core.errors import Conflict
from qa_tracker.records import ledger
from qa_tracker.records.queries.ledger import CheckpointRow, leaf_hashes, list_checkpoints
from qa_tracker.seals.notes import Checkpoint, open_checkpoint, sign_checkpoint
from qa_tracker.services.keys import ledger_key


def make(*, at: dt.datetime) -> CheckpointRow:
    """Sign a checkpoint of the ledger as it is, unless the newest one already says so. Writes Checkpoint.

    Refused: a ledger that does not continue the newest checkpoint (``ledger.checkpoint_contradicted``).
    """
    size, root = ledger.state()
    newest = next(iter(list_checkpoints(1)), None)
    if newest is not None and newest.size == size and newest.root == root:
        return newest
    check_continues(newest, size)
    note = sign_checkpoint(Checkpoint(settings.LEDGER_ORIGIN, size, root), ledger_key())
    ledger.keep_checkpoint(size=size, root=root, at=at, note=note)
    copy_out(size, note)
    return CheckpointRow(size, root, at, note)


def check_continues(newest: CheckpointRow | None, size: int) -> None:
    """Refuse when the first leaves no longer hash to the newest checkpoint's root."""
    if newest is None:
        return
    if newest.size > size or merkle.root(leaf_hashes(newest.size)) != newest.root:
        raise Conflict("ledger.checkpoint_contradicted", size=newest.size)


def copy_out(size: int, note: str) -> Path:
    """Copy a checkpoint to the folder outside the database, durably.

    Another one of that size, as after an old backup was put back, is the only witness of what was there: it is
    left as it is and the new one laid beside it.
    """
    folder = Path(settings.DATA_DIR) / "checkpoints"
    folder.mkdir(parents=True, exist_ok=True)
    path = folder / f"{size:012d}.checkpoint"
    if path.exists() and path.read_text(encoding="utf-8") != note:
        path = folder / f"{size:012d}-{hashlib.sha256(note.encode()).hexdigest()[:16]}.checkpoint"
    fresh = path.with_suffix(f".{os.getpid()}")
    with fresh.open("w", encoding="utf-8") as file:
        file.write(note)
        file.flush()
        os.fsync(file.fileno())
    fresh.replace(path)
    return path


def outside() -> list[Checkpoint]:
    """The checkpoints kept outside the database, verified, by size."""
    folder, verifier = Path(settings.DATA_DIR) / "checkpoints", ledger_key().verifier
    notes = (path.read_text(encoding="utf-8") for path in sorted(folder.glob("*.checkpoint")))
    return [open_checkpoint(note, verifier) for note in notes]
