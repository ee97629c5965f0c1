"""Files by their SHA-256: written durably before the row that names them, never overwritten."""

from __future__ import annotations

import hashlib
import os

from django.core.files.base import ContentFile
from django.core.files.storage import default_storage

from qa_tracker.core.errors import NotFound


def _name(digest: str) -> str:
    return f"{digest[:2]}/{digest}"


def keep(data: bytes) -> str:
    """Keep bytes and return their SHA-256 in hexadecimal; the same bytes are kept once."""
    digest = hashlib.sha256(data).hexdigest()
    if not default_storage.exists(_name(digest)):
        kept = default_storage.save(_name(digest), ContentFile(data))
        with open(default_storage.path(kept), "rb") as file:
            os.fsync(file.fileno())
    return digest


def read(digest: str) -> bytes:
    """Read kept bytes, and refuse what no longer has its hash.

    Raises
    ------
    NotFound
        ``file.missing`` or ``file.changed``
    """
    if not digest or not default_storage.exists(_name(digest)):
        raise NotFound("file.missing", sha256=digest)
    with default_storage.open(_name(digest), "rb") as file:
        data: bytes = file.read()
    if hashlib.sha256(data).hexdigest() != digest:
        raise NotFound("file.changed", sha256=digest)
    return data
