"""What the environment decides: where things are written, which database, broker and mail server are used.

Everything the program writes lies under ``DATA_DIR``: database, files, keys, logs, mailbox.
"""

from __future__ import annotations

import os
import secrets
from pathlib import Path

BASE_DIR = Path(__file__).resolve().parent.parent


def text(name: str, default: str = "") -> str:
    """The variable's value without surrounding blanks; empty counts as not set."""
    return os.environ.get(name, "").strip() or default


def data_dir(*, made: bool = True) -> Path:
    """``DATA_DIR``, made on first use and readable by its owner only."""
    path = Path(text("DATA_DIR", str(BASE_DIR / ".data"))).expanduser().resolve()
    if made:
        path.mkdir(parents=True, exist_ok=True, mode=0o700)
    return path


def passing_secret() -> str:
    """A secret for a process that keeps nothing, and so has nothing to sign for later."""
    return secrets.token_urlsafe(48)


def kept_secret(path: Path) -> str:
    """Return the secret kept in a file, made there once; two processes starting together get the same."""
    path.parent.mkdir(parents=True, exist_ok=True, mode=0o700)
    try:
        handle = os.open(path, os.O_WRONLY | os.O_CREAT | os.O_EXCL, 0o600)
    except FileExistsError:
        return path.read_text(encoding="ascii").strip()
    with os.fdopen(handle, "w", encoding="ascii") as file:
        file.write(secrets.token_urlsafe(48))
        file.flush()
        os.fsync(file.fileno())
    return path.read_text(encoding="ascii").strip()
