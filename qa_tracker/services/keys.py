"""The institution's keys: one that seals dossiers, one that signs checkpoints of the ledger.

Both are made on first use where none is configured. A seal made so is a demonstration key and says so on
every page.
"""

from __future__ import annotations

import datetime as dt
import os
from functools import lru_cache
from pathlib import Path

from django.conf import settings

from qa_tracker.seals.keys import SealKey, load_key, make_demo_key
from qa_tracker.seals.notes import NoteKey, load_note_key, make_note_key

DEMO_PASSWORD = "leadline"  # protects nothing: the demonstration key proves nothing either
SEAL_FILE, LEDGER_FILE = "seal.p12", "ledger.key"


def _folder() -> Path:
    folder = Path(settings.DATA_DIR) / "keys"
    folder.mkdir(parents=True, exist_ok=True, mode=0o700)
    return folder


def _kept_once(path: Path, data: bytes) -> bytes:
    """Write a secret file unless another process was quicker, and return what is in it."""
    fresh = path.with_suffix(f".{os.getpid()}")
    handle = os.open(fresh, os.O_WRONLY | os.O_CREAT | os.O_EXCL, 0o600)
    with os.fdopen(handle, "wb") as file:
        file.write(data)
        file.flush()
        os.fsync(file.fileno())
    try:
        os.link(fresh, path)
    except FileExistsError:
        pass
    finally:
        fresh.unlink()
    return path.read_bytes()


@lru_cache(maxsize=4)
def _loaded_seal(data: bytes, password: str) -> SealKey:
    return load_key(data, password)


def seal_key(*, at: dt.datetime) -> SealKey:
    """The key dossiers are sealed with: the configured one, else the demonstration key, made on first use."""
    if settings.SEAL_KEY_FILE:
        return _loaded_seal(Path(settings.SEAL_KEY_FILE).read_bytes(), settings.SEAL_KEY_PASSWORD)
    path = _folder() / SEAL_FILE
    data = (
        path.read_bytes()
        if path.exists()
        else _kept_once(path, make_demo_key("Leadline demonstration", DEMO_PASSWORD, at))
    )
    return _loaded_seal(data, DEMO_PASSWORD)


def ledger_key() -> NoteKey:
    """The Ed25519 key checkpoints are signed with, made on first use."""
    path = _folder() / LEDGER_FILE
    if not path.exists():
        name = settings.LEDGER_ORIGIN.replace(" ", "-").replace("+", "-")
        return load_note_key(_kept_once(path, make_note_key(name).encoded().encode()).decode())
    return load_note_key(path.read_text(encoding="ascii"))
